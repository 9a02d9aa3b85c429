"""The scripting service: from a range to verdicts and to report sheets, refusals, and one step of Undo."""

import math
import random
import unittest

from office import OfficeTest  # first: it tells uno where our interfaces are

import uno
from unply import Refusal

MODEL = (("response", "Strength"), ("purpose", "explore"))


def made_rows(headings=("Zone_1", "Zone_2", "Time", "Clay", "Strength"), rows=80, seed=20260718):
    """Two temperatures that move together, a time, a category; the response follows them with noise."""
    draw = random.Random(seed)
    lines = [list(headings)]
    for _ in range(rows):
        first = draw.gauss(900, 20)
        second = first + draw.gauss(0, 3)
        time, clay = draw.gauss(10, 2), draw.choice(["red", "grey", "white"])
        strength = 5 + 0.02 * first + 0.03 * second + 0.8 * time + (1.5 if clay == "red" else 0) + draw.gauss(0, 1)
        lines.append([round(first, 1), round(second, 1), round(time, 2), clay, round(strength, 2)])
    return lines


class WorkbenchTest(OfficeTest):
    def setUp(self):
        super().setUp()
        self.document.put("A1", made_rows())
        self.workbench = self.office.service("unply.Workbench")

    def write(self, data="A1:E81", settings=MODEL):
        return self.workbench.writeReport(self.document.component, data, settings)

    def state(self):
        manager = self.document.component.UndoManager
        return (self.document.sheets.ElementNames, manager.AllUndoActionTitles,
                self.document.component.isModified(),
                [self.document.sheet(name).Charts.ElementNames for name in self.document.sheets.ElementNames],
                self.document.block("A1:H90"))


class Report(WorkbenchTest):
    def test_it_names_the_sheets_and_one_verdict_for_each_coefficient(self):
        report = self.write()
        self.assertEqual(report.Sheets, ("Unply findings", "Unply tables", "Unply write-up"))
        self.assertEqual(self.document.sheets.ElementNames, ("Sheet1", *report.Sheets))
        terms = [verdict.Term for verdict in report.Verdicts]
        self.assertEqual(terms[:3], ["Zone_1", "Zone_2", "Time"])
        self.assertEqual(len(terms), 5)  # three levels of Clay, one of them the baseline
        for verdict in report.Verdicts:
            self.assertTrue(verdict.Lower < verdict.Estimate < verdict.Upper)
            self.assertTrue(verdict.Finding.startswith(verdict.Term), verdict.Finding)
            clear = verdict.Lower > 0 or verdict.Upper < 0
            self.assertEqual(verdict.Verdict.startswith("clear"), clear, verdict)

    def test_estimates_are_those_of_the_sheet_function(self):
        report = self.write()
        rows = self.document.ask("UNPLY.ESTIMATES(Sheet1.E1:E81;Sheet1.A1:D81)")
        column = {heading: k for k, heading in enumerate(rows[0])}
        for verdict, row in zip(report.Verdicts, rows[1:]):
            self.assertEqual(row[column["Term"]], verdict.Term)
            self.assertEqual(row[column["Estimate"]], verdict.Estimate)  # one computation, the same bits
            self.assertEqual(row[column["Interval from"]], verdict.Lower)
            self.assertEqual(row[column["Interval to"]], verdict.Upper)

    def test_analysing_changes_nothing_and_says_the_same(self):
        before = self.state()
        verdicts = self.workbench.analyse(self.document.component, "A1:E81", MODEL)
        self.assertEqual(self.state(), before)
        for one, other in zip(verdicts, self.write().Verdicts, strict=True):
            self.assertEqual((one.Term, one.Verdict, one.Finding, one.Estimate),
                             (other.Term, other.Verdict, other.Finding, other.Estimate))

    def test_the_first_sheet_of_the_report_is_shown(self):
        report = self.write()
        self.assertEqual(self.document.component.CurrentController.ActiveSheet.Name, report.Sheets[0])

    def test_the_report_says_where_its_data_are_and_how_to_run_it_again(self):
        path = self.document.store(self.folder / "kiln log.ods")
        document = self.office.open(path)
        report = self.workbench.writeReport(document.component, "A1:E81", (*MODEL, ("seed", 77)))
        words = " ".join(str(cell) for name in report.Sheets for row in
                         document.sheet(name).getCellRangeByName("A1:M300").getDataArray() for cell in row)
        for part in ("Sheet1.A1:E81", "kiln log.ods", "purpose = explore", "77"):
            self.assertIn(part, words)
        document.close()

    def test_headings_like_formulas_are_terms_like_others(self):
        self.document.put("A1", made_rows(("=A2+1", "@Zone", "-3", "+Clay", "=Strength")))
        report = self.write(settings=(("response", "=Strength"),))
        self.assertEqual([verdict.Term for verdict in report.Verdicts][:3], ["=A2+1", "@Zone", "-3"])
        for name in report.Sheets:
            self.assertEqual(self.document.sheet(name).queryContentCells(16).Count, 0)  # no formula

    def test_a_term_that_cannot_be_estimated_has_no_number(self):
        rows = made_rows()
        self.document.put("F1", [["Twice"]] + [[2 * row[0]] for row in rows[1:]])
        self.document.put("G1", [["Answer"]] + [[row[4]] for row in rows[1:]])
        report = self.write("A1:G81", (("response", "Answer"), ("terms", "Zone_1; Twice; Time")))
        by_term = {verdict.Term: verdict for verdict in report.Verdicts}
        self.assertTrue(math.isnan(by_term["Zone_1"].Estimate) and math.isnan(by_term["Twice"].Estimate))
        self.assertFalse(math.isnan(by_term["Time"].Estimate))
        self.assertEqual(by_term["Zone_1"].Verdict, by_term["Twice"].Verdict)


class Arguments(WorkbenchTest):
    def estimates(self, data, settings):
        return [verdict.Estimate for verdict in self.workbench.analyse(self.document.component, data, settings)]

    def test_data_as_address_name_range_or_setting(self):
        expected = self.estimates("A1:E81", MODEL)
        document = self.document.component
        position = uno.createUnoStruct("com.sun.star.table.CellAddress")
        document.NamedRanges.addNewByName("Firings", "$Sheet1.$A$1:$E$81", position, 0)
        document.DatabaseRanges.addNewByName("Log", self.document.range("A1:E81").RangeAddress)
        for data in ("Sheet1.A1:E81", "$Sheet1.$A$1:$E$81", "Firings", "Log", " A1:E81 ", self.document.range("A1:E81")):
            with self.subTest(data=str(data)[:30]):
                self.assertEqual(self.estimates(data, MODEL), expected)
        self.assertEqual(self.estimates(None, (*MODEL, ("data", "Sheet1.A1:E81"))), expected)

    def test_settings_as_lines_or_range(self):
        expected = self.estimates("A1:E81", MODEL)
        self.document.put("J1", [list(line) for line in MODEL])
        for settings in (MODEL, tuple((name, value) for name, value in MODEL), self.document.range("J1:K2"),
                         self.document.range("J1:K2").getDataArray()):
            self.assertEqual(self.estimates("A1:E81", settings), expected)

    def test_the_model_block_is_the_range_of_that_name(self):
        with self.assertRaises(Refusal) as refused:
            self.workbench.readModel(self.document.component)
        self.assertIn("Unply_model", refused.exception.Message)
        self.document.put("J1", [["data", "Sheet1.A1:E81"], ["response", "Strength"], ["level", 0.9]])
        self.document.component.NamedRanges.addNewByName(
            "Unply_model", "$Sheet1.$J$1:$K$3", uno.createUnoStruct("com.sun.star.table.CellAddress"), 0)
        lines = self.workbench.readModel(self.document.component)
        self.assertEqual(lines, (("data", "Sheet1.A1:E81"), ("response", "Strength"), ("level", 0.9)))
        wide = self.workbench.analyse(self.document.component, None, (*lines[:2], ("level", 0.99)))
        narrow = self.workbench.analyse(self.document.component, None, lines)
        for one, other in zip(wide, narrow, strict=True):
            self.assertEqual(one.Estimate, other.Estimate)
            self.assertLess(one.Lower, other.Lower)


class Refusals(WorkbenchTest):
    def assert_refused(self, words, data="A1:E81", settings=MODEL):
        before = self.state()
        with self.assertRaises(Refusal) as refused:
            self.write(data, settings)
        for word in words:
            self.assertIn(word, refused.exception.Message)
        self.assertEqual(self.state(), before)

    def test_each_question_that_cannot_be_answered_gets_its_sentence(self):
        cases = [
            (("data",), None, MODEL),
            (("Nowhere.A1:B9",), "Nowhere.A1:B9", MODEL),
            (("no range here",), "no range here", MODEL),
            (("response",), "A1:E81", ()),
            (("Hardness",), "A1:E81", (("response", "Hardness"),)),
            (("purpse", "purpose"), "A1:E81", (*MODEL, ("purpse", "test"))),
            (("level",), "A1:E81", (*MODEL, ("level", 3))),
            (("Clay",), "A1:E81", (("response", "Clay"),)),
            (("two columns",), "A1:E81", (("response",),)),
            (("A1:E1",), "A1:E1", MODEL),
            (("G1:H20",), "G1:H20", MODEL),
        ]
        for words, data, settings in cases:
            with self.subTest(data=data, settings=settings):
                self.assert_refused(words, data, settings)

    def test_text_among_numbers_names_the_cell(self):
        self.document.put("B7", [["hot"]])
        self.document.put("B9", [["8"]])
        # a column with text is a category; Zone_2 as one has as many levels as rows
        self.assert_refused(("Zone_2",))

    def test_an_error_cell_names_the_cell(self):
        self.document.range("B7").getCellByPosition(0, 0).setFormula("=1/0")
        self.assert_refused(("B7", "#DIV/0!"))

    def test_no_rows_left(self):
        self.document.put("A2", [[None]] * 80)
        self.assert_refused(("Zone_1",))

    def test_a_document_open_for_reading_only(self):
        path = self.document.store(self.folder / "read.ods")
        document = self.office.open(path, ReadOnly=True)
        with self.assertRaises(Refusal) as refused:
            self.workbench.writeReport(document.component, "A1:E81", MODEL)
        self.assertIn("reading only", refused.exception.Message)
        self.assertEqual(document.sheets.ElementNames, ("Sheet1",))
        self.assertEqual(len(self.workbench.analyse(document.component, "A1:E81", MODEL)), 5)
        document.close()

    def test_a_protected_structure(self):
        self.document.component.protect("secret")
        self.assert_refused(("structure",))
        self.document.component.unprotect("secret")

    def test_no_document(self):
        with self.assertRaises(Refusal):
            self.workbench.writeReport(None, "A1:E81", MODEL)


class Undo(WorkbenchTest):
    def test_one_step_takes_everything_back_and_brings_it_again(self):
        manager = self.document.component.UndoManager
        self.document.range("G1").getCellByPosition(0, 0).Value = 3
        before = self.state()
        report = self.write()
        self.assertEqual(len(manager.AllUndoActionTitles), len(before[1]) + 1)
        self.assertIn("Unply", manager.CurrentUndoActionTitle)
        written = [self.document.sheet(name).getCellRangeByName("A1:M60").getDataArray() for name in report.Sheets]
        manager.undo()
        self.assertEqual(self.state(), before)
        manager.redo()
        self.assertEqual(self.document.sheets.ElementNames, ("Sheet1", *report.Sheets))
        self.assertEqual(
            [self.document.sheet(name).getCellRangeByName("A1:M60").getDataArray() for name in report.Sheets], written)

    def test_reports_one_after_the_other_are_taken_back_one_by_one(self):
        self.write()
        self.write(settings=(*MODEL, ("level", 0.9)))
        self.assertEqual(self.document.sheets.Count, 7)
        self.document.component.UndoManager.undo()
        self.assertEqual(self.document.sheets.Count, 4)
        self.document.component.UndoManager.undo()
        self.assertEqual(self.document.sheets.ElementNames, ("Sheet1",))


if __name__ == "__main__":
    unittest.main()
