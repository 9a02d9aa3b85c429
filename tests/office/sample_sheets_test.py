"""The sample sheets in an office: every figure that they show agrees with the one worked out independently."""

import unittest

from office import TOP, OfficeTest

FOLDER = TOP / "sample-sheets"
SHEETS = sorted(FOLDER.glob("*.fods"))
FIRST_CHECK = 8  # row of the first line of the sheet Check, counted from 0


class SampleSheetsTest(OfficeTest):

    def open_recalculated(self, path):
        self.document.close()
        self.document = self.office.open(path)
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

    def test_expected_figures_are_constants_and_cover_the_tables(self):
        for path in SHEETS:
            with self.subTest(path.name):
                self.open_recalculated(path)
                lines = self.lines()
                self.assertGreater(len(lines), 60)
                sheet = self.document.sheet("Check")
                for row in range(FIRST_CHECK, FIRST_CHECK + len(lines)):
                    self.assertEqual(sheet.getCellByPosition(2, row).getFormula()[:1] == "=", False)
                    self.assertEqual(sheet.getCellByPosition(1, row).getFormula()[:1], "=")

    def test_one_wrong_expected_figure_makes_the_result_false(self):
        for path in SHEETS:
            with self.subTest(path.name):
                self.open_recalculated(path)
                self.assertEqual(self.result(), "TRUE")
                sheet = self.document.sheet("Check")
                cell = sheet.getCellByPosition(2, FIRST_CHECK + 3)
                cell.setValue(cell.getValue() * (1 + 1e-10))
                self.assertEqual(self.result(), "FALSE")

    def test_an_error_or_a_sentence_instead_of_a_figure_makes_the_result_false(self):
        for path in SHEETS:
            for formula in ('=1/0', '="Column Zone_1_C holds text"', '=NA()', '=""'):
                with self.subTest(path.name, formula=formula):
                    self.open_recalculated(path)
                    self.assertEqual(self.result(), "TRUE")
                    self.document.sheet("Check").getCellByPosition(1, FIRST_CHECK + 3).setFormula(formula)
                    self.assertEqual(self.result(), "FALSE")

    def test_a_changed_cell_of_the_data_makes_the_result_false(self):
        for path in SHEETS:
            with self.subTest(path.name):
                self.open_recalculated(path)
                self.assertEqual(self.result(), "TRUE")
                data = self.document.sheet(1)
                cell = data.getCellByPosition(2, 5)
                cell.setValue(cell.getValue() + 0.1)
                self.assertEqual(self.result(), "FALSE")

    def test_no_cell_of_the_answers_shows_an_error_and_every_table_is_shown_in_full(self):
        for path in SHEETS:
            with self.subTest(path.name):
                self.open_recalculated(path)
                sheet = self.document.sheet("Answers")
                cursor = sheet.createCursor()
                cursor.gotoEndOfUsedArea(False)
                last = cursor.RangeAddress
                errors = {}
                for row in range(last.EndRow + 1):
                    for column in range(last.EndColumn + 1):
                        cell = sheet.getCellByPosition(column, row)
                        if cell.getError():
                            errors[cell.AbsoluteName] = (cell.getError(), cell.getFormula())
                self.assertFalse(errors)
                for name, rows, columns in self.live_tables(sheet):
                    shown = self.named(name).RangeAddress
                    self.assertEqual((name, shown.EndRow - shown.StartRow + 1 + self.notes_below(sheet, shown),
                                      shown.EndColumn - shown.StartColumn + 1), (name, rows, columns))

    def live_tables(self, sheet):
        """(name, rows, columns) of the tables of sheet functions: what the function gives, whatever is shown of it."""
        names = self.document.component.NamedRanges
        for name in names.ElementNames:
            cells = names.getByName(name).getReferredCells()
            formula = cells.getArrayFormula()
            if cells.RangeAddress.Sheet == sheet.RangeAddress.Sheet and "UNPLY." in formula:
                whole = self.document.ask(formula.strip("{}=").replace(";", ";"))
                yield name, len(whole), len(whole[0])

    @staticmethod
    def notes_below(sheet, shown):
        """Cells below a table, each with one further row of it."""
        count = 0
        while sheet.getCellByPosition(0, shown.EndRow + 1 + count).getFormula().startswith("=INDEX(UNPLY."):
            count += 1
        return count


if __name__ == "__main__":
    unittest.main()
