"""What nobody can analyse gets a sentence that says what was found, where, and what to do; what looks odd but can be
analysed gets its right numbers. Never a crash, a hang, an error of the office, or a silent wrong number."""

import random
import time
import unittest

from office import OfficeTest
from reference import column_of, matching_digits

SEED = 20260102
SECONDS = 120  # for any answer, in a build for finding errors; what is measured is that nothing hangs


def table(rows=12, more=(), seed=SEED):
    """y = 2 + a - b + noise, with b close to a; `more` are columns to be added: (heading, function of the row)."""
    draw = random.Random(seed)
    cells = [["y", "a", "b"] + [heading for heading, _ in more]]
    for row in range(rows):
        a = draw.gauss(0, 1)
        b = a + draw.gauss(0, 0.5)
        cells.append([2 + a - b + draw.gauss(0, 0.3), a, b] + [value(row) for _, value in more])
    return cells


def scaled(column, factor, shift=0.0, rows=12):
    cells = table(rows)
    for row in cells[1:]:
        row[column] = row[column] * factor + shift
    return cells


class Refusals(OfficeTest):
    FUNCTIONS = ("ESTIMATES", "FITQUALITY", "LEDGER", "GROUPS", "ROWSNEEDED")

    def answer(self, text):
        begin = time.monotonic()
        answer = self.document.ask("UNPLY." + text)
        self.assertLess(time.monotonic() - begin, SECONDS, text)
        for row in answer:
            self.assertNotIn(None, row)
        return answer

    def refused(self, text, *words):
        answer = self.answer(text)
        self.assertEqual((len(answer), len(answer[0])), (1, 1), f"{text} was not refused: {answer[:3]}")
        sentence = answer[0][0]
        self.assertIsInstance(sentence, str)
        self.assertTrue(sentence.endswith((".", "?")), sentence)
        for word in words:
            self.assertIn(word, sentence)

    def refused_by_all(self, response, predictors, *words):
        for name in self.FUNCTIONS:
            with self.subTest(name):
                self.refused(f"{name}({response};{predictors})", *words)

    def put(self, cells):
        self.document.put("A1", cells)
        return f"$Sheet1.A1:A{len(cells)}", f"$Sheet1.B1:{chr(ord('A') + len(cells[0]) - 1)}{len(cells)}"


class Cells(Refusals):
    def test_text_among_numbers(self):
        cells = table()
        cells[4][1] = "n/a"
        cells[9][1] = "n/a"
        self.refused_by_all(*self.put(cells), "Column a", "Sheet1.B5", "Sheet1.B10", '"n/a"')

    def test_text_in_the_response(self):
        cells = table()
        cells[4][0] = "high"
        self.refused_by_all(*self.put(cells), "y", "Sheet1.A5", "high")

    def test_error_cells(self):
        ranges = self.put(table())
        self.document.formula("B4", "1/0")
        self.document.formula("B7", "NA()")
        self.refused_by_all(*ranges, "Column a", "#DIV/0!", "Sheet1.B4", "Sheet1.B7")

    def test_error_in_a_column_that_the_model_does_not_use_is_no_concern(self):
        response, predictors = self.put(table(more=[("c", lambda row: row)]))
        self.document.formula("D4", "1/0")
        answer = self.answer(f'ESTIMATES({response};{predictors};{{"terms";"a; b"}})')
        self.document.range("D4").clearContents(16)
        self.assertEqual(answer, self.answer(f'ESTIMATES({response};{predictors};{{"terms";"a; b"}})'))
        self.assertGreater(len(answer), 3)

    def test_error_among_the_headings(self):
        ranges = self.put(table())
        self.document.formula("C1", "1/0")
        self.refused_by_all(*ranges, "#DIV/0!", "Sheet1.C1")

    def test_empty_range(self):
        self.refused("ESTIMATES($Sheet1.A1:A9;$Sheet1.B1:D9)", "Sheet1.B1:D9", "no data")
        self.refused("VIF($Sheet1.B:D)", "no data")
        self.put(table())
        self.refused("VIF($Sheet1.F1:H9)", "Sheet1.F1:H9", "no data")

    def test_headings_alone(self):
        response, predictors = self.put(table(0))
        self.refused(f"ESTIMATES({response};{predictors})", "headings", "nothing below")

    def test_response_alone_is_empty(self):
        cells = table()
        for row in cells:
            row[0] = None
        self.refused_by_all(*self.put(cells), "Sheet1.A1:A13")

    def test_one_row(self):
        self.refused_by_all(*self.put(table(1)), "1 row for 3 coefficients", "4 rows")

    def test_no_more_rows_than_coefficients(self):
        self.refused_by_all(*self.put(table(3)), "3 rows", "3 coefficients", "4 rows")

    def test_one_more_row_than_coefficients_is_enough(self):
        response, predictors = self.put(table(4))
        self.assertGreater(len(self.answer(f"ESTIMATES({response};{predictors})")), 3)

    def test_everything_constant(self):
        cells = table()
        for row in cells[1:]:
            row[1], row[2] = 5, 7
        self.refused_by_all(*self.put(cells), "a and b", "same value")

    def test_constant_response(self):
        cells = table()
        for row in cells[1:]:
            row[0] = 5
        self.refused_by_all(*self.put(cells), "y", "value 5", "every row")

    def test_one_constant_predictor_is_said_and_the_rest_estimated(self):
        cells = table()
        for row in cells[1:]:
            row[1] = 5
        response, predictors = self.put(cells)
        answer = self.answer(f"ESTIMATES({response};{predictors})")
        self.assertIn("cannot be estimated", answer[1])
        self.assertIsInstance(column_of(answer, "Estimate")["b"], float)
        self.assertTrue(any("a is constant" in row[0] for row in answer))

    def test_all_rows_incomplete(self):
        cells = table()
        for index, row in enumerate(cells[1:]):
            row[1 + index % 2] = None
        self.refused_by_all(*self.put(cells), "None of the 12 rows", "in 6")


class Headings(Refusals):
    def test_duplicate_headings(self):
        cells = table()
        cells[0][2] = "a"
        self.refused_by_all(*self.put(cells), "heading a", "Sheet1.B1", "Sheet1.C1")

    def test_a_predictor_named_like_the_response(self):
        cells = table()
        cells[0][2] = "y"
        self.refused_by_all(*self.put(cells), "heading y", "Sheet1.A1", "Sheet1.C1")

    def test_missing_heading(self):
        cells = table()
        cells[0][2] = ""
        self.refused_by_all(*self.put(cells), "Sheet1.C1", "no name")

    def test_missing_heading_of_the_response(self):
        cells = table()
        cells[0][0] = ""
        self.refused_by_all(*self.put(cells), "Sheet1.A1", "no name")

    def test_no_row_of_headings(self):
        self.refused_by_all(*self.put(table()[1:]), "first row", "Sheet1.B1:C1", "headings to no")

    def test_headings_that_begin_like_formulas_are_names(self):
        cells = table()
        cells[0] = ["=y", "+a", "@b"]
        response, predictors = self.put(cells)
        self.assertEqual([row[0] for row in self.answer(f"ESTIMATES({response};{predictors})")[1:3]], ["+a", "@b"])


class Categories(Refusals):
    def test_one_level_only(self):
        ranges = self.put(table(more=[("clay", lambda row: "red")]))
        self.refused_by_all(*ranges, "clay", '"red"', "one level")

    def test_500_levels_with_rows_enough_are_computed(self):
        response, predictors = self.put(table(1200, [("batch", lambda row: f"batch {row % 500}")]))
        answer = self.answer(f"FITQUALITY({response};{predictors})")
        self.assertEqual(column_of(answer, answer[0][1])["Coefficients"], 1 + 2 + 499)

    def test_500_levels_in_500_rows_are_refused(self):
        ranges = self.put(table(500, [("batch", lambda row: f"batch {row}")]))
        self.refused_by_all(*ranges, "batch", "500 levels", "500 rows")


class Numbers(Refusals):
    """Units of any size: the answer is that of the plain table, with the units taken back. Eleven digits: the largest
    shift costs nine decimal places of the shifted cells, so there the shifted cells themselves are taken back."""

    def check(self, cells, column, factor, digits):
        response, predictors = self.put(cells)
        odd = self.answer(f"ESTIMATES({response};{predictors})")
        plain = [[row[i] / factor if i == column and index else row[i] for i in range(3)]
                 for index, row in enumerate(cells)]
        self.put(plain)
        expected = self.answer(f"ESTIMATES({response};{predictors})")
        name = cells[0][column]
        for heading in ("Estimate", "Standard error", "t", "VIF"):
            for term, value in column_of(expected, heading).items():
                if term == "Intercept" and column:
                    continue
                found = column_of(odd, heading)[term]
                if heading in ("Estimate", "Standard error"):
                    found = found / factor if column == 0 else found * factor if term == name else found
                self.assertGreaterEqual(matching_digits(found, value), digits, f"{heading} of {term}")

    def test_values_of_1e300(self):
        self.check(scaled(1, 1e300), 1, 1e300, 12)  # factors that are no powers of 2 round every cell

    def test_values_of_1e_minus_300(self):
        self.check(scaled(1, 1e-300), 1, 1e-300, 12)

    def test_a_response_of_1e300(self):
        self.check(scaled(0, 1e300), 0, 1e300, 12)

    def test_both_extremes_in_one_table(self):
        cells = scaled(1, 1e300)
        for row, other in zip(cells[1:], scaled(2, 1e-300)[1:]):
            row[2] = other[2]
        response, predictors = self.put(cells)
        answer = column_of(self.answer(f"ESTIMATES({response};{predictors})"), "t")
        self.put(table())
        expected = column_of(self.answer(f"ESTIMATES({response};{predictors})"), "t")
        for term in ("a", "b"):
            self.assertGreaterEqual(matching_digits(answer[term], expected[term]), 12)

    def test_values_too_small_for_full_precision_are_refused_by_name(self):
        self.refused_by_all(*self.put(scaled(1, 1e-310)), "Column a", "so small")

    def test_a_mean_of_1e9_standard_deviations(self):
        cells = scaled(1, 1, 1e9)
        response, predictors = self.put(cells)
        shifted = self.answer(f"ESTIMATES({response};{predictors})")
        self.put([[row[0], row[1] - 1e9 if index else row[1], row[2]] for index, row in enumerate(cells)])
        expected = self.answer(f"ESTIMATES({response};{predictors})")
        for heading in ("Estimate", "Standard error", "t", "VIF"):
            for term in ("a", "b"):
                self.assertGreaterEqual(
                    matching_digits(column_of(shifted, heading)[term], column_of(expected, heading)[term]), 13)

    def test_infinite_results_are_errors_of_the_office_and_named_as_such(self):
        ranges = self.put(table())
        self.document.formula("B4", "1E308*10")
        self.refused_by_all(*ranges, "Column a", "Sheet1.B4")

    def test_300_predictors(self):
        draw = random.Random(SEED)
        names = [f"x{j}" for j in range(300)]
        self.document.put("A1", [["y"] + names] + [[draw.gauss(0, 1) for _ in range(301)] for _ in range(400)])
        answer = self.answer("FITQUALITY($Sheet1.A1:A401;$Sheet1.B1:KO401)")
        self.assertEqual(column_of(answer, answer[0][1])["Coefficients"], 301)

    def test_300_predictors_of_100_rows_are_refused(self):
        draw = random.Random(SEED)
        self.document.put("A1", [["y"] + [f"x{j}" for j in range(300)]] +
                          [[draw.gauss(0, 1) for _ in range(301)] for _ in range(100)])
        self.refused("ESTIMATES($Sheet1.A1:A101;$Sheet1.B1:KO101)", "100 rows", "301 coefficients", "302 rows")


class Shapes(Refusals):
    def setUp(self):
        super().setUp()
        self.put(table())

    def test_a_formula_inside_its_own_data(self):
        for address in ("B20", "D5"):  # below the data, beside the data
            with self.subTest(address):
                self.document.formula(address, "UNPLY.VIF(B1:D30)")
                for _ in range(2):
                    self.assertIn(f"contains the cell of this formula, Sheet1.{address}", self.document.value(address))
                    self.document.recalculate()
                self.document.range(address).clearContents(16)

    def test_a_block_inside_its_own_data(self):
        block = self.document.array_formula("B20:E25", "UNPLY.ESTIMATES(A1:A30;B1:C30)")
        self.assertIn("contains the cell of this formula, Sheet1.B20", block[0][0])

    def test_two_formulas_that_need_each_other_end_in_an_error(self):
        self.document.formula("C14", "SUM(F1:F3)")
        self.document.formula("F2", "INDEX(UNPLY.VIF(B1:C14);2;2)")
        self.document.recalculate()
        self.assertTrue(self.document.error("F2") or isinstance(self.document.value("F2"), str))

    def test_a_range_over_several_sheets(self):
        self.document.add_sheet("Second")
        self.refused("VIF($Sheet1.B1:$Second.C13)", "several sheets")
        self.refused("ESTIMATES($Sheet1.A1:A13;$Sheet1.B1:$Second.C13)", "several sheets")

    def test_sheets_with_odd_names_are_one_sheet(self):
        for name in ("a.b; c", "O'Hara $1"):
            self.document.add_sheet(name).getCellRangeByName("A1:C13").setDataArray(
                tuple(tuple(row) for row in table()))
            quoted = name.replace("'", "''")
            self.assertGreater(len(self.answer(f"VIF($'{quoted}'.B1:C13)")), 2)
            self.refused(f"VIF($'{quoted}'.B2:C13)", f"'{quoted}'.B2:C2")

    def test_different_row_counts(self):
        self.refused("ESTIMATES($Sheet1.A1:A10;$Sheet1.B1:C13)", "9 rows", "12", "Sheet1.B1:C13")
        self.refused("ESTIMATES($Sheet1.A1:A13;$Sheet1.B1:C10)", "12 rows", "9")

    def test_the_same_number_of_rows_one_row_apart(self):
        self.refused("ESTIMATES($Sheet1.A1:A13;$Sheet1.B2:C14)", "first row", "Sheet1.B2:C2")

    def test_a_response_of_two_columns(self):
        self.refused("ESTIMATES($Sheet1.A1:B13;$Sheet1.B1:C13)", "2 columns", "one column")

    def test_a_range_left_out(self):
        self.refused("ESTIMATES($Sheet1.A1:A13;)", "predictors", "not a range")
        self.refused("ESTIMATES(;$Sheet1.B1:C13)", "No response is named")
        self.refused("PREDICT($Sheet1.A1:A13;$Sheet1.B1:C13;)", "new rows", "not a range")

    def test_new_rows_without_a_column(self):
        self.document.put("F1", [["a"], [1], [2]])
        self.refused("PREDICT($Sheet1.A1:A13;$Sheet1.B1:C13;$Sheet1.F1:F3)", "b")

    def test_new_rows_with_a_level_never_seen(self):
        response, predictors = self.put(table(more=[("clay", lambda row: ("red", "white")[row % 2])]))
        self.document.put("H1", [["a", "b", "clay"], [1, 1, "green"]])
        self.refused(f"PREDICT({response};{predictors};$Sheet1.H1:J2)", "clay", "green")


class Settings(Refusals):
    def setUp(self):
        super().setUp()
        self.ranges = ";".join(self.put(table()))

    def test_misspelt_names_and_values(self):
        for name, value, words in (("leval", 0.9, ("leval", "level")), ("terms ", "a; bb", ("bb",)),
                                   ("purpose", "prove", ("prove", "test, explore")), ("level", 2, ("level", "0.95")),
                                   ("smallest effect", -1, ("above 0",)), ("smallest effect of q", 1, ("q",)),
                                   ("baseline of a", "red", ("a",)), ("rows", "some", ("all", "visible")),
                                   ("intercept", "perhaps", ("yes", "no")), ("response", "b", ("response", "y"))):
            with self.subTest(name):
                self.document.put("H1", [[name, value]])
                self.refused(f"ESTIMATES({self.ranges};$Sheet1.H1:I1)", *words)

    def test_doubled_names(self):
        self.document.put("H1", [["level", 0.9], ["Level", 0.95]])
        self.refused(f"ESTIMATES({self.ranges};$Sheet1.H1:I2)", "level", "twice")

    def test_shapes_that_are_no_settings(self):
        self.document.put("H1", [["level", 0.9]])
        self.refused(f"ESTIMATES({self.ranges};$Sheet1.H1:H1)", "two columns")
        self.refused(f"ESTIMATES({self.ranges};0.9)", "two columns")
        self.refused(f'ESTIMATES({self.ranges};"level")', "two columns")

    def test_an_empty_settings_range_changes_nothing(self):
        self.assertEqual(self.answer(f"ESTIMATES({self.ranges};$Sheet1.H1:I20)"), self.answer(f"ESTIMATES({self.ranges})"))
        self.assertEqual(self.answer(f"ESTIMATES({self.ranges};)"), self.answer(f"ESTIMATES({self.ranges})"))


class Correlations(Refusals):
    def ask(self, cells, n=20, settings=""):
        self.document.put("A1", cells)
        last = f"{chr(ord('A') + len(cells[0]) - 1)}{len(cells)}"
        return f"FROMCORRELATIONS($Sheet1.A1:{last};{n}{settings})"

    def test_tables_that_are_no_correlations(self):
        names = ["x", "y"]
        self.refused(self.ask([names, [1, 0.5], [0.5, 1], [0.1, 0.2]]), "square")
        self.refused(self.ask([names, [1, 0.5], [0.4, 1]]), "x", "y", "0.5", "0.4")
        self.document.range("A1:D9").clearContents(7)
        self.refused(self.ask([names, [0.9, 0.5], [0.5, 1]]), "x", "0.9", "must be 1")
        self.refused(self.ask([names, [1, 1.5], [1.5, 1]]), "1.5", "outside")
        self.refused(self.ask([["x", "y", "z"], [1, 0.9, -0.9], [0.9, 1, 0.9], [-0.9, 0.9, 1]]), "cannot come from one")
        self.refused(self.ask([[1, 0.5], [0.5, 1]]), "numbers")

    def test_numbers_of_rows_that_cannot_be(self):
        cells = [["x", "y"], [1, 0.5], [0.5, 1]]
        for n in (0, -3, 2.5):
            self.refused(self.ask(cells, n), "n", "whole number")
        self.refused(self.ask(cells, 2, ';{"response";"y"}'), "2 rows")

    def test_settings_that_need_rows_are_unknown_here(self):
        self.refused(self.ask([["x", "y"], [1, 0.5], [0.5, 1]], 20, ';{"rows";"all"}'), "rows", "terms")


if __name__ == "__main__":
    unittest.main()
