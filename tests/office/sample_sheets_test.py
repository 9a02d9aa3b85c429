"""The sample sheets in an office: every figure that they show agrees with the one worked out independently."""

import shutil
import unittest

from office import TOP, OfficeTest

FOLDER = TOP / "sample-sheets"
SHEETS = sorted(FOLDER.glob("*.fods"))
FIRST_CHECK = 8  # row of the first line of the sheet Check, counted from 0


class SampleSheetsTest(OfficeTest):

    def open_recalculated(self, path):
        """Opens a copy: an office leaves a lock beside the file that it opens."""
        self.document.close()
        self.document = self.office.open(shutil.copy(path, self.folder))
        self.document.recalculate()

    def named(self, name):
        return self.document.component.NamedRanges.getByName(name).getReferredCells()

    def result(self):
        """What the Result cell shows: TRUE or FALSE, or an error."""
        return self.named("Result").getCellByPosition(0, 0).String

    def lines(self):
        """The checks: (what, found, expected, correct); found is None where the cell holds an error."""
        sheet = self.document.sheet("Check")
        cursor = sheet.createCursor()
        cursor.gotoEndOfUsedArea(False)
        return sheet.getCellRangeByPosition(0, FIRST_CHECK, 3, cursor.RangeAddress.EndRow).getDataArray()

    def test_every_figure_is_the_expected_one(self):
        self.assertGreaterEqual(len(SHEETS), 3)
        for path in SHEETS:
            with self.subTest(path.name):
                self.open_recalculated(path)
                lines = self.lines()
                wrong = [line for line in lines if line[3] != 1.0]
                self.assertFalse(wrong, "\n".join(map(str, [f"{len(wrong)} of {len(lines)}", *wrong[:40]])))
                self.assertEqual(self.result(), "TRUE")

    def test_expected_figures_are_constants_and_found_ones_are_formulas(self):
        for path in SHEETS:
            with self.subTest(path.name):
                self.open_recalculated(path)
                lines = len(self.lines())
                self.assertGreater(lines, 100)
                sheet = self.document.sheet("Check")
                formulas = sheet.getCellRangeByPosition(1, FIRST_CHECK, 3, FIRST_CHECK + lines - 1).getFormulaArray()
                for found, expected, correct in formulas:
                    self.assertEqual((found[:1], expected[:1] == "=", correct[:4]), ("=", False, "=IF("))

    def test_one_wrong_expected_figure_makes_the_result_false(self):
        for path in SHEETS:
            with self.subTest(path.name):
                self.open_recalculated(path)
                self.assertEqual(self.result(), "TRUE")
                sheet = self.document.sheet("Check")
                numbers = [row for row, line in enumerate(self.lines(), FIRST_CHECK) if isinstance(line[2], float)]
                for row in (numbers[0], numbers[len(numbers) // 2], numbers[-1]):
                    cell = sheet.getCellByPosition(2, row)
                    right = cell.getValue()
                    cell.setValue(right + 1e-10 * max(abs(right), 1))
                    self.assertEqual((row, self.result()), (row, "FALSE"))
                    cell.setValue(right)
                    self.assertEqual((row, self.result()), (row, "TRUE"))

    def test_an_error_or_a_sentence_instead_of_a_figure_makes_the_result_false(self):
        for path in SHEETS:
            self.open_recalculated(path)
            cell = self.document.sheet("Check").getCellByPosition(1, FIRST_CHECK + 3)
            formula = cell.getFormula()
            for other in ("=1/0", '="Column Zone_1_C holds text"', "=NA()", '=""', ""):
                with self.subTest(path.name, formula=other):
                    cell.setFormula(other)
                    self.assertEqual(self.result(), "FALSE")
                    cell.setFormula(formula)
                    self.assertEqual(self.result(), "TRUE")

    def test_a_changed_cell_of_the_data_makes_the_result_false(self):
        for path in SHEETS:
            with self.subTest(path.name):
                self.open_recalculated(path)
                self.assertEqual(self.result(), "TRUE")
                cell = self.document.sheet(1).getCellByPosition(2, 5)
                before = cell.getValue()
                cell.setValue(before + 0.1)
                self.assertEqual(self.result(), "FALSE")
                cell.setValue(before)
                self.assertEqual(self.result(), "TRUE")

    def test_the_answers_show_no_error_and_every_table_in_full(self):
        for path in SHEETS:
            with self.subTest(path.name):
                self.open_recalculated(path)
                sheet = self.document.sheet("Answers")
                cursor = sheet.createCursor()
                cursor.gotoEndOfUsedArea(False)
                used = sheet.getCellRangeByPosition(0, 0, cursor.RangeAddress.EndColumn, cursor.RangeAddress.EndRow)
                shown = used.getDataArray()
                wrong = [(row + 1, column + 1, used.getCellByPosition(column, row).getFormula())
                         for row, line in enumerate(shown) for column, value in enumerate(line) if value is None]
                self.assertFalse(wrong)
                sentences = {line[0] for line in shown}
                for name, formula, rows in self.live_tables(sheet):
                    whole = self.document.ask(formula)
                    for row, line in enumerate(whole[rows:], rows):  # what follows the table: sentences, all of them shown
                        self.assertEqual((name, row, line[0] in sentences, [v for v in line[1:] if v not in ("", 0.0)]),
                                         (name, row, True, []))

    def live_tables(self, sheet):
        """(name, formula, rows shown) of the tables on a sheet that our functions fill."""
        names = self.document.component.NamedRanges
        for name in names.ElementNames:
            cells = names.getByName(name).getReferredCells()
            place = cells.RangeAddress
            formula = cells.getCellByPosition(0, 0).getFormula()
            if place.Sheet == sheet.RangeAddress.Sheet and formula.startswith("{=UNPLY."):
                yield name, formula[2:-1], place.EndRow - place.StartRow + 1


if __name__ == "__main__":
    unittest.main()
