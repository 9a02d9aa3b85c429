"""Documents keep the functions: saved and opened again, in both formats, with the extension and without."""

import unittest

from functions_test import kiln
from office import Office, OfficeTest, Profile
from reference import matching_digits


def fill(document):
    document.put("A1", kiln())
    document.put("H1", [["level", 0.9]])
    document.formula("K1", "INDEX(UNPLY.ESTIMATES(A1:A25;B1:E25;H1:I1);2;3)")
    document.array_formula("K3:T12", "UNPLY.ESTIMATES(A1:A25;B1:E25;H1:I1)")
    document.formula("K14", "UNPLY.VIF(B2:E25)")  # a sentence
    return document.value("K1"), document.block("K3:T12"), document.value("K14")


class KeptInFiles(OfficeTest):
    def check(self, ending):
        number, block, sentence = fill(self.document)
        self.assertIsInstance(number, float)
        path = self.document.store(self.folder / f"kept{ending}")
        again = self.office.open(path)
        try:
            for _ in range(2):  # as opened, and computed again
                self.assertEqual(again.range("K1").Formula, "=INDEX(UNPLY.ESTIMATES(A1:A25;B1:E25;H1:I1);2;3)")
                self.assertEqual(again.range("K3:T12").ArrayFormula, "{=UNPLY.ESTIMATES(A1:A25,B1:E25,H1:I1)}")
                # A file keeps 15 digits of a result; computed again it is the same to the last bit.
                self.assertGreaterEqual(matching_digits(again.value("K1"), number), 14)
                self.assertEqual(again.value("K14"), sentence)
                again.recalculate()
                self.assertEqual(again.value("K1"), number)
                self.assertEqual(again.block("K3:T12"), block)
            again.put("B3", [[950]])
            self.assertNotEqual(again.value("K1"), number)
        finally:
            again.close()

    def test_ods_keeps_formulas_and_results(self):
        self.check(".ods")

    def test_xlsx_keeps_formulas_and_results(self):
        self.check(".xlsx")


class WithoutTheExtension(unittest.TestCase):
    """A colleague opens the document, works in it, saves it, and gives it back."""

    def test_nothing_is_lost_and_nothing_crashes(self):
        with_it, without = Profile(), Profile(packages=())
        try:
            paths = {}
            with Office(profile=with_it) as office:
                document = office.new_document()
                number, block, sentence = fill(document)
                for ending in (".ods", ".xlsx"):
                    paths[ending] = document.store(with_it.folder / f"lent{ending}")
            with Office(profile=without) as office:
                for ending, path in paths.items():
                    document = office.open(path)
                    self.assertEqual(document.value("B2"), kiln()[1][1])
                    self.assertEqual(document.value("K14"), sentence)
                    document.recalculate()
                    self.assertEqual(document.error("K1"), 525)  # the office's #NAME?, not a number
                    document.put("V1", [["a remark"]])
                    document.store(path)
                    document.close()
            with Office(profile=with_it) as office:
                document = office.open(paths[".ods"])
                document.recalculate()
                self.assertEqual(document.value("K1"), number)
                self.assertEqual(document.block("K3:T12"), block)
                self.assertEqual(document.value("V1"), "a remark")
        finally:
            with_it.remove()
            without.remove()


if __name__ == "__main__":
    unittest.main()
