"""The sheet functions in cells: certified figures, shared computation, every way to give the data."""

import random
import time
import unittest
from fractions import Fraction

from office import OfficeTest
from reference import column_of, figures, matching_digits, read_csv

SEED = 20260101


def kiln(rows=24, seed=SEED):
    """Three temperatures that move together, a clay, and what they make: an invented kiln."""
    draw = random.Random(seed)
    table = [["Strength", "Zone_1", "Zone_2", "Moisture", "Clay"]]
    for row in range(rows):
        zone_1 = draw.gauss(900, 12)
        zone_2 = zone_1 + draw.gauss(15, 3)
        moisture = draw.gauss(6, 1)
        clay = ("red", "white", "grey")[row % 3]
        strength = 0.05 * zone_1 + 0.02 * zone_2 - 0.8 * moisture + (clay == "red") + draw.gauss(0, 0.5)
        table.append([round(number, 3) for number in (strength, zone_1, zone_2, moisture)] + [clay])
    return table


def inverse(matrix):
    """Of fractions, by elimination."""
    size = len(matrix)
    rows = [row + [Fraction(i == j) for j in range(size)] for i, row in enumerate(matrix)]
    for at in range(size):
        rows[at] = [cell / rows[at][at] for cell in rows[at]]
        for i in range(size):
            if i != at:
                rows[i] = [cell - rows[i][at] * other for cell, other in zip(rows[i], rows[at])]
    return [row[size:] for row in rows]


class Functions(OfficeTest):
    def ask(self, text):
        """An answer without notes, which are the rows with a sentence alone."""
        answer = self.document.ask("UNPLY." + text)
        self.assertGreater(len(answer), 1, f"{text} was refused: {answer[0][0]}")
        return [answer[0]] + [row for row in answer[1:] if any(cell != "" for cell in row[1:])]

    def notes(self, text):
        return [row[0] for row in self.document.ask("UNPLY." + text)[1:] if all(cell == "" for cell in row[1:])]


class CertifiedFigures(Functions):
    # Source: NIST StRD linear regression, certified values, as printed in tests/reference. 13 digits is the goal of the
    # project; the values are printed to 15.
    def check(self, name, answer):
        certified = figures(name)
        for heading, key in (("Estimate", "estimates"), ("Standard error", "standard_deviations")):
            values = column_of(answer, heading)
            expected = {path.rsplit(" | ", 1)[1]: figure for path, figure in certified.items()
                        if path.startswith(f"published | {key} | ")}
            self.assertEqual(len(values), len(expected))
            for term, figure in expected.items():
                value = values["Intercept" if term == "1" else term]
                self.assertGreaterEqual(matching_digits(value, figure), 13, f"{name}, {key} of {term}: {value}")

    def test_longley_through_cells(self):
        self.document.put("A1", read_csv("nist_longley"))
        self.check("nist_longley", self.ask("ESTIMATES($Sheet1.A1:A17;$Sheet1.B1:G17)"))

    def test_filip_through_cells_from_x_alone(self):
        data = read_csv("nist_filip")
        self.document.put("A1", data)
        self.document.put("D1", [["terms", "; ".join(["x"] + [f"x^{power}" for power in range(2, 11)])]])
        self.check("nist_filip", self.ask(f"ESTIMATES($Sheet1.A1:A{len(data)};$Sheet1.B1:B{len(data)};$Sheet1.D1:E1)"))

    def test_vif_of_longley_through_cells(self):
        # Source: tests/reference/longley_collinearity.txt, computed there from the data in exact arithmetic.
        self.document.put("A1", read_csv("nist_longley"))
        values = column_of(self.ask("VIF($Sheet1.B1:G17)"), "VIF")
        expected = {path.rsplit(" | ", 1)[1]: figure for path, figure in figures("longley_collinearity").items()
                    if path.startswith("recomputed | collinearity | vif | ")}
        self.assertEqual(sorted(values), sorted(expected))
        for term, figure in expected.items():
            self.assertGreaterEqual(matching_digits(values[term], figure), 13, term)


class SharedComputation(Functions):
    def begun_by(self, work):
        before = self.office.activity()[1]
        work()
        return self.office.activity()[1] - before

    def test_forty_cells_on_one_model_are_one_analysis(self):
        self.document.put("A1", kiln())
        self.document.put("H1", [["level", 0.9]])

        def fill():
            for row in range(1, 11):
                for column, (kind, index) in zip("JKLM", (("ESTIMATES", 3), ("ESTIMATES", 6), ("LEDGER", 2),
                                                          ("FITQUALITY", 2))):
                    self.document.formula(f"{column}{row}",
                                          f"INDEX(UNPLY.{kind}(A1:A25;B1:E25;H1:I1);{1 + row % 4};{index})")
        self.assertEqual(self.begun_by(fill), 1)
        self.assertEqual(self.begun_by(self.document.recalculate), 0)

        def edit(address, value):
            self.document.put(address, [[value]])
            self.document.block("J1:M10")
        self.assertEqual(self.begun_by(lambda: edit("B3", 901.5)), 1)
        self.assertEqual(self.begun_by(lambda: edit("I1", 0.99)), 1)
        self.assertEqual(self.begun_by(lambda: edit("G1", 1)), 0)  # nothing of theirs

    def test_an_edit_and_its_undoing_give_the_first_result_again(self):
        self.document.put("A1", kiln())
        self.document.formula("J1", "INDEX(UNPLY.ESTIMATES(A1:A25;B1:E25);2;3)")
        first, cell = self.document.value("J1"), self.document.value("B3")
        self.document.put("B3", [[cell + 7]])
        self.assertNotEqual(self.document.value("J1"), first)
        self.document.put("B3", [[cell]])
        self.assertEqual(self.document.value("J1"), first)


class WaysToGiveTheData(Functions):
    EXACT = "ESTIMATES($Sheet1.A1:A25;$Sheet1.B1:E25)"

    def setUp(self):
        super().setUp()
        self.document.put("A1", kiln())

    def test_every_function_answers_with_a_block_of_numbers_and_words(self):
        self.document.put("H1", [["smallest effect", 0.01]])
        for text in ("VIF($Sheet1.B1:E25)", "CONDITION($Sheet1.B1:E25)", "DEPENDENCIES($Sheet1.B1:E25)", self.EXACT,
                     "FITQUALITY($Sheet1.A1:A25;$Sheet1.B1:E25)", "LEDGER($Sheet1.A1:A25;$Sheet1.B1:E25;$Sheet1.H1:I1)",
                     "GROUPS($Sheet1.A1:A25;$Sheet1.B1:E25)", "ROWSNEEDED($Sheet1.A1:A25;$Sheet1.B1:E25;$Sheet1.H1:I1)",
                     "PREDICT($Sheet1.A1:A25;$Sheet1.B1:E25;$Sheet1.B1:E25)"):
            with self.subTest(text):
                answer = self.document.ask("UNPLY." + text)
                self.assertGreater(len(answer), 1, answer[0][0])
                self.assertTrue(all(isinstance(cell, str) for cell in answer[0]))
                for row in answer:
                    self.assertNotIn(None, row)  # no error of the office anywhere
                    self.assertEqual(len(row), len(answer[0]))

    def test_whole_columns_are_cut_to_their_content(self):
        exact = self.ask(self.EXACT)
        self.assertEqual(self.ask("ESTIMATES($Sheet1.A:A;$Sheet1.B:E)"), exact)
        self.assertEqual(self.ask("ESTIMATES($Sheet1.A:A;$Sheet1.B1:E25)"), exact)
        self.assertEqual(self.ask("ESTIMATES($Sheet1.A1:A25;$Sheet1.B:E)"), exact)
        self.assertEqual(self.ask("ESTIMATES($Sheet1.A1:A400;$Sheet1.B1:E400)"), exact)
        # Something far below in another column does not make them longer.
        self.document.put("M900000", [[1]])
        begin = time.monotonic()
        self.assertEqual(self.ask("ESTIMATES($Sheet1.A:A;$Sheet1.B:E)"), exact)
        self.assertLess(time.monotonic() - begin, 20)

    def test_a_table_may_begin_further_down(self):
        exact = self.ask(self.EXACT)
        self.document.range("A1:E25").clearContents(1 | 2 | 4 | 16)
        self.document.put("A2001", kiln())
        self.assertEqual(self.ask("ESTIMATES($Sheet1.A:A;$Sheet1.B:E)"), exact)

    def test_rows_below_a_long_gap_count(self):
        self.document.put("A5000", kiln(8, SEED + 1)[1:])
        answer = self.ask("FITQUALITY($Sheet1.A:A;$Sheet1.B:E)")
        quality = column_of(answer, answer[0][1])
        self.assertEqual(quality["Rows used"], 24 + 8)
        self.assertEqual(quality["Rows left out"], 4999 - 25)

    def test_a_response_within_the_predictors_is_left_out_of_them_and_said_so(self):
        self.assertEqual(self.ask("ESTIMATES($Sheet1.A1:A25;$Sheet1.A1:E25)"), self.ask(self.EXACT))
        notes = self.notes("ESTIMATES($Sheet1.A1:A25;$Sheet1.A1:E25)")
        self.assertTrue(any("Strength" in note and "left out" in note for note in notes), notes)
        self.assertFalse(any("Strength" in note for note in self.notes(self.EXACT)))

    def test_a_setting_names_the_response_and_the_terms_within_a_whole_table(self):
        self.document.put("H1", [["response", "Strength"], ["terms", "Zone_1; Moisture; Clay"]])
        named = self.ask("ESTIMATES(;$Sheet1.A1:E25;$Sheet1.H1:I2)")
        self.document.put("O1", [[row[0], row[1], row[3], row[4]] for row in kiln()])
        self.assertEqual(named, self.ask("ESTIMATES($Sheet1.O1:O25;$Sheet1.P1:R25)"))
        # Terms in cells side by side, and as an inline array.
        self.document.put("H2", [["Terms ", "zone_1", "Moisture", "CLAY"]])
        self.assertEqual(self.ask("ESTIMATES(;$Sheet1.A1:E25;$Sheet1.H1:K2)"), named)
        self.assertEqual(
            self.ask('ESTIMATES($Sheet1.A1:A25;$Sheet1.A1:E25;{"terms";"Zone_1; Moisture; Clay"})'), named)

    def test_response_and_predictors_may_stand_on_different_sheets_and_rows(self):
        self.document.add_sheet("Other sheet")
        self.document.put("'Other sheet'.C4", [[row[0]] for row in kiln()])
        self.assertEqual(self.ask("ESTIMATES($'Other sheet'.C4:C28;$Sheet1.B1:E25)"), self.ask(self.EXACT))

    def test_columns_without_headings_are_named_by_their_letters(self):
        self.document.put("H1", [["headings", "no"], ["terms", "B; D; E"]])
        answer = self.ask("ESTIMATES($Sheet1.A2:A25;$Sheet1.B2:E25;$Sheet1.H1:I2)")
        self.document.put("H1", [["headings", "yes"], ["terms", "Zone_1; Moisture; Clay"]])
        named = self.ask("ESTIMATES($Sheet1.A1:A25;$Sheet1.B1:E25;$Sheet1.H1:I2)")
        self.assertEqual([row[2:] for row in answer[1:]], [row[2:] for row in named[1:]])
        self.assertEqual([row[0] for row in answer[1:]][:2], ["B", "D"])

    def test_headings_that_are_numbers_are_taken_as_names_when_asked(self):
        self.document.put("A1", [["Strength", 2021, 2022, "Moisture", "Clay"]])
        answer = self.ask('ESTIMATES($Sheet1.A1:A25;$Sheet1.B1:E25;{"headings";"yes"})')
        self.assertEqual([row[0] for row in answer[1:3]], ["2021", "2022"])

    def test_hidden_and_filtered_rows_are_left_out_only_when_asked(self):
        everything = self.ask(self.EXACT)
        self.document.sheet().Rows.getByIndex(3).IsVisible = False
        self.document.sheet().Rows.getByIndex(24).IsVisible = False
        self.document.sheet().Columns.getByIndex(1).IsVisible = False
        self.assertEqual(self.ask(self.EXACT), everything)
        visible = self.ask('ESTIMATES($Sheet1.A1:A25;$Sheet1.B1:E25;{"rows";"visible"})')
        seen = [row for index, row in enumerate(kiln()) if index not in (3, 24)]
        self.document.put("O1", seen)
        self.assertEqual(visible, self.ask("ESTIMATES($Sheet1.O1:O23;$Sheet1.P1:S23)"))
        notes = self.notes('ESTIMATES($Sheet1.A1:A25;$Sheet1.B1:E25;{"rows";"visible"})')
        self.assertTrue(any("2 hidden" in note for note in notes), notes)

    def test_empty_cells_leave_their_rows_out_and_are_counted(self):
        self.document.put("C5", [[None]])
        self.document.put("A9", [[None]])
        self.document.formula("D12", '""')
        shorter = [row for index, row in enumerate(kiln()) if index + 1 not in (5, 9, 12)]
        self.document.put("O1", shorter)
        self.assertEqual(self.ask(self.EXACT), self.ask("ESTIMATES($Sheet1.O1:O22;$Sheet1.P1:S22)"))
        answer = self.ask("FITQUALITY($Sheet1.A1:A25;$Sheet1.B1:E25)")
        self.assertEqual(column_of(answer, answer[0][1])["Rows left out"], 3)

    def test_wholly_empty_columns_are_skipped(self):
        rows = [[row[0], row[1], None, row[2], row[3], row[4], None] for row in kiln()]
        self.document.put("O1", rows)
        self.assertEqual(self.ask("ESTIMATES($Sheet1.O1:O25;$Sheet1.P1:U25)"), self.ask(self.EXACT))

    def test_named_ranges_and_computed_ranges_work(self):
        names = self.document.component.NamedRanges
        origin = self.document.range("A1").getCellByPosition(0, 0).CellAddress
        names.addNewByName("kiln", "$Sheet1.$B$1:$E$25", origin, 0)
        self.assertEqual(self.ask("ESTIMATES($Sheet1.A1:A25;kiln)"), self.ask(self.EXACT))
        self.assertEqual(self.ask("ESTIMATES($Sheet1.A1:A25;OFFSET($Sheet1.A1;0;1;25;4))"), self.ask(self.EXACT))
        self.assertEqual(self.ask('ESTIMATES($Sheet1.A1:A25;INDIRECT("Sheet1.B1:E25"))'), self.ask(self.EXACT))

    def test_predictions_find_their_columns_by_heading(self):
        table = kiln()
        self.document.put("O1", [["Clay", "Moisture", "Zone_2", "Zone_1"]] +
                          [[row[4], row[3], row[2], row[1]] for row in table[1:6]])
        self.document.put("T1", [row[1:] for row in table[:6]])
        one = self.ask("PREDICT($Sheet1.A1:A25;$Sheet1.B1:E25;$Sheet1.O1:R6)")
        other = self.ask("PREDICT($Sheet1.A1:A25;$Sheet1.B1:E25;$Sheet1.T1:W6)")
        self.assertEqual(one, other)
        self.assertEqual(len(one), 6)
        at = one[0].index("Prediction")
        for row, observed in zip(one[1:], table[1:6]):
            self.assertLess(abs(row[at] - observed[0]), 2.5)  # five times the scatter that the kiln was made with

    def test_predictors_at_the_end_of_a_long_chain_of_formulas_are_up_to_date(self):
        # The office may call a function with ranges before it has computed a chain of more than about 400 formulas,
        # and then again: what counts is the last result.
        self.document.put("H1", [[0]])
        self.document.range("H2").setFormula("=H1")
        chain = self.document.range("H2:H700")
        chain.fillAuto(0, 1)  # com.sun.star.sheet.FillDirection.TO_BOTTOM
        for row, values in enumerate(kiln()[1:], 2):
            self.document.range(f"B{row}").setFormula(f"={values[1]}+H700")
        self.document.formula("J1", "INDEX(UNPLY.ESTIMATES(A1:A25;B1:E25);2;3)")
        for step in (1, 5):
            self.document.put("H1", [[step * 3]])
            self.document.put("D3", [[6 + step]])
            found = self.document.value("J1")
            self.document.recalculate()
            self.assertEqual(self.document.value("J1"), found)
            values = self.document.block("B1:E25")
            self.document.put("O1", [[row[0]] for row in self.document.block("A1:A25")])
            self.document.put("P1", values)
            self.assertEqual(found, self.ask("ESTIMATES($Sheet1.O1:O25;$Sheet1.P1:S25)")[1][2])

    def test_edits_sorting_and_new_rows_recompute(self):
        self.document.formula("J1", "INDEX(UNPLY.ESTIMATES(A1:A25;B1:E25);2;3)")
        before = self.document.value("J1")
        self.document.sheet().Rows.insertByIndex(10, 1)  # moves J1 too where it lies below: it is in row 1
        self.assertEqual(self.document.range("J1").Formula, "=INDEX(UNPLY.ESTIMATES(A1:A26;B1:E26);2;3)")
        self.assertEqual(self.document.value("J1"), before)  # an empty row takes no part
        self.document.put("A11", [[46, 910, 925, 5.5, "red"]])
        self.assertNotEqual(self.document.value("J1"), before)

    def test_a_macro_can_call_the_functions(self):
        # By the service; com.sun.star.sheet.FunctionAccess cannot hand ranges to functions of extensions.
        functions = self.office.service("UNPLY")
        ranges = self.document.range("A1:A25"), self.document.range("B1:E25")
        block = [list(row) for row in functions.ESTIMATES(*ranges, None)]
        self.assertEqual(block, self.document.ask("UNPLY." + self.EXACT))
        self.document.put("H1", [["level", 0.9]])
        narrower = self.document.ask("UNPLY." + self.EXACT.replace("E25)", "E25;$Sheet1.H1:I1)"))
        self.assertNotEqual(narrower, block)
        for settings in ((("level", 0.9),), ("level", 0.9), self.document.range("H1:I1")):
            self.assertEqual([list(row) for row in functions.ESTIMATES(*ranges, settings)], narrower)
        self.assertIn("two columns", functions.ESTIMATES(*ranges, self.document.component)[0][0])

    def test_a_heading_that_looks_like_a_formula_stays_text(self):
        self.document.put("A1", [["=1+1", "+a", "@b", "-c", "=clay"]])
        answer = self.ask(self.EXACT)
        self.assertEqual([row[0] for row in answer[1:4]], ["+a", "@b", "-c"])
        place = self.document.range("O1:X9")
        place.setArrayFormula("=UNPLY." + self.EXACT.replace("$Sheet1.", ""))
        self.assertEqual(place.getCellByPosition(0, 1).getString(), "+a")
        self.assertEqual(self.document.error("O2"), 0)


class FromCorrelations(Functions):
    def test_correlations_means_and_deviations_give_the_estimates_of_the_rows(self):
        data = read_csv("hald_cement")
        names, last = data[0], len(data)
        self.document.put("A1", data)
        width = len(names)
        letters = "ABCDEFGH"[:width]
        self.document.put("K1", [[""] + names])
        for i, row in enumerate(letters):
            self.document.put(f"K{i + 2}", [[names[i]]])
            for j, column in enumerate(letters[:i + 1]):
                self.document.formula(f"{'LMNOPQ'[j]}{i + 2}",
                                      f"CORREL({row}2:{row}{last};{column}2:{column}{last})")
        self.document.put("K20", [["response", "y"], ["means"], ["standard deviations"]])
        for j, column in enumerate(letters):
            self.document.formula(f"{'LMNOPQ'[j]}21", f"AVERAGE({column}2:{column}{last})")
            self.document.formula(f"{'LMNOPQ'[j]}22", f"STDEV({column}2:{column}{last})")
        end = "LMNOPQ"[width - 1]
        summary = self.ask(f"FROMCORRELATIONS($Sheet1.K1:{end}{width + 1};{last - 1};$Sheet1.K20:{end}22)")
        y = letters[names.index("y")]
        predictors = [letters[i] for i, name in enumerate(names) if name != "y"]
        rows = self.ask(f"ESTIMATES($Sheet1.{y}1:{y}{last};$Sheet1.{predictors[0]}1:{predictors[-1]}{last})")
        # CORREL hands over about 15 digits, and the largest VIF of these data is 283: three digits are lost.
        for heading in ("Estimate", "Standard error", "t", "VIF"):
            expected, found = column_of(rows, heading), column_of(summary, heading)
            for term in ("x1", "x2", "x3", "x4"):
                self.assertGreaterEqual(matching_digits(found[term], expected[term]), 9, f"{heading} of {term}")

    def test_vif_of_a_published_table(self):
        # Source: tests/reference/ridge_from_correlation.txt. The printed VIFs come from correlations with more places
        # than are printed, so they agree to a thousandth; the exact inverse of what is printed agrees to 13 digits.
        certified = figures("ridge_from_correlation")
        size = range(1, 5)
        printed = [[certified[f"other | correlation_matrix | {i} | {j}"] for j in size] for i in size]
        self.document.put("A1", [[f"v{j}" for j in size]] + [[float(cell) for cell in row] for row in printed])
        values = column_of(self.ask("FROMCORRELATIONS($Sheet1.A1:D5;16)"), "VIF")
        exact = inverse([[Fraction(cell) for cell in row] for row in printed])
        for j in size:
            self.assertGreaterEqual(matching_digits(values[f"v{j}"], exact[j - 1][j - 1]), 13)
            self.assertLess(abs(values[f"v{j}"] / float(certified[f"published | vif[{j}]"]) - 1), 1e-3)


if __name__ == "__main__":
    unittest.main()
