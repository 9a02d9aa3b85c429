"""Report sheets, from reports made up for the purpose: what is on them, what they are on paper, what they leave alone."""

import os
import pathlib
import re
import subprocess
import unittest
import zipfile

from office import Office, OfficeTest  # first: it tells uno where our interfaces are

import uno
from com.sun.star.beans import NamedValue
from com.sun.star.lang import IllegalArgumentException
from com.sun.star.table.CellContentType import TEXT

PROBE = pathlib.Path(os.environ["UNPLY_REPORT_PROBE"])
SHAPES = ["kiln", "two", "forty", "long names", "category", "formulas", "huge", "nothing"]
FORMULA_CELLS = 16  # com.sun.star.sheet.CellFlags.FORMULA
TEXT_FORMAT = 256   # com.sun.star.util.NumberFormat.TEXT
NAMES_LIKE_FORMULAS = ["=1+1", "+SUM(A1:A9)", "@home", "-3", "{=A1}", "'quoted", "1e5"]


def used(sheet):
    cursor = sheet.createCursor()
    cursor.gotoEndOfUsedArea(False)
    return cursor.RangeAddress.EndRow + 1, cursor.RangeAddress.EndColumn + 1


def snapshot(sheet):
    """Everything that a user can see in the cells of a sheet."""
    rows, columns = used(sheet)
    cells = []
    for r in range(rows):
        for c in range(columns):
            cell = sheet.getCellByPosition(c, r)
            cells.append((r, c, cell.Formula, cell.String, cell.CellStyle, cell.CellBackColor, cell.NumberFormat))
    widths = [sheet.Columns.getByIndex(c).Width for c in range(columns)]
    return cells, widths, sheet.PageStyle, sheet.IsVisible, sheet.Charts.ElementNames, sheet.PrintAreas


def cells_of(sheet):
    rows, columns = used(sheet)
    return sheet.getCellRangeByPosition(0, 0, columns - 1, rows - 1).getDataArray()


def chart_of(sheet, index):
    return sheet.Charts.getByIndex(index).EmbeddedObject


def series_of(chart):
    """(chart type, values, error bars from cells?) of each series."""
    found = []
    for system in chart.getFirstDiagram().getCoordinateSystems():
        for kind in system.getChartTypes():
            for series in kind.getDataSeries():
                values = [s.getValues().getData() for s in series.getDataSequences()
                          if s.getValues() and s.getValues().Role == "values-y"]
                bars = series.ErrorBarY
                found.append((kind.getChartType().rsplit(".")[-1], values[0], bars))
    return found


def page_breaks(sheet, automatic):
    return [entry.Position for entry in sheet.getRowPageBreaks()
            if entry.ManualBreak != automatic and entry.Position]


class ReportTest(OfficeTest):
    packages = (PROBE,)

    def write(self, shape, document=None):
        return self.office.service("unply.test.ReportProbe").execute(
            (NamedValue("document", (document or self.document).component), NamedValue("shape", shape)))

    def pdf_of(self, path, keep):
        """A PDF of the given sheets alone."""
        document = self.office.open(path)
        for name in document.sheets.ElementNames:
            if name not in keep:
                document.sheets.removeByName(name)
        pdf = document.store(path.with_suffix(".pdf"))
        document.close()
        return pdf


class Sheets(ReportTest):
    def test_sheets_of_the_user_stay_as_they_are(self):
        self.document.put("A1", [["Zone", "=text", 3.25], ["a", None, 1e9]])
        self.document.formula("D1", "C1*2")
        self.document.range("A1").CellBackColor = 0xFFCC00
        second = self.document.add_sheet("Kept")
        second.getCellRangeByName("B2").Value = 7
        second.IsVisible = False
        before = [snapshot(self.document.sheet(name)) for name in ("Sheet1", "Kept")]
        names = self.write("kiln")
        self.assertEqual(self.document.sheets.ElementNames, ("Sheet1", "Kept", *names))
        self.assertEqual([snapshot(self.document.sheet(name)) for name in ("Sheet1", "Kept")], before)

    def test_a_second_report_stands_beside_the_first(self):
        first = self.write("two")
        self.document.sheet(first[0]).getCellRangeByName("A1").String = "mine now"
        second = self.write("two")
        self.assertEqual(first, ("Unply findings", "Unply tables", "Unply write-up"))
        self.assertEqual(second, ("Unply findings 2", "Unply tables 2", "Unply write-up 2"))
        self.assertEqual(self.document.sheet(first[0]).getCellRangeByName("A1").String, "mine now")

    def test_a_name_taken_in_other_letters_is_taken(self):
        self.document.add_sheet("UNPLY TABLES")
        self.assertEqual(self.write("two"), ("Unply findings 2", "Unply tables 2", "Unply write-up 2"))

    def test_there_is_no_formula_on_report_sheets(self):
        for shape in SHAPES:
            for name in self.write(shape):
                with self.subTest(shape=shape, sheet=name):
                    self.assertEqual(self.document.sheet(name).queryContentCells(FORMULA_CELLS).Count, 0)

    def test_names_that_look_like_formulas_stay_text(self):
        tables = self.document.sheet(self.write("formulas")[1])
        rows, columns = used(tables)
        formats = self.document.component.NumberFormats
        found = set()
        for r in range(rows):
            for c in range(columns):
                cell = tables.getCellByPosition(c, r)
                if cell.String in NAMES_LIKE_FORMULAS:
                    self.assertEqual(cell.Type, TEXT)
                    found.add(cell.String)
                    # typed in again as it stands it is still text: cells with the format of text take it so
                    self.assertEqual(formats.getByKey(cell.NumberFormat).Type & TEXT_FORMAT, TEXT_FORMAT)
        self.assertEqual(found, set(NAMES_LIKE_FORMULAS))

    def test_cells_carry_named_styles_only(self):
        for name in self.write("kiln"):
            sheet = self.document.sheet(name)
            for r, row in enumerate(cells_of(sheet)):
                for c in [c for c, cell in enumerate(row) if cell != ""]:
                    style = sheet.getCellByPosition(c, r).CellStyle
                    self.assertTrue(style.startswith("Unply "), (style, row[c]))

    def test_a_restyled_report_style_is_kept_for_the_next_report(self):
        self.write("two")
        styles = self.document.component.StyleFamilies.getByName("CellStyles")
        styles.getByName("Unply title").CharHeight = 24
        findings = self.write("two")[0]
        title = self.document.sheet(findings).getCellRangeByName("A1").getCellByPosition(0, 0)
        self.assertEqual((title.CellStyle, title.CharHeight), ("Unply title", 24))

    def test_small_p_and_counts_are_shown_as_such(self):
        tables = self.document.sheet(self.write("kiln")[1])
        rows, columns = used(tables)
        shown = {tables.getCellByPosition(c, r).String for r in range(rows) for c in range(columns)}
        self.assertIn("<0.0001", shown)
        self.assertIn("2,211", shown)  # rows needed
        self.assertIn("0.873", shown)  # R2
        self.assertIn("0.9999987", shown)  # one so close to 1 keeps the digits that set it apart

    def test_numbers_are_written_as_in_the_documents_language(self):
        german = uno.createUnoStruct("com.sun.star.lang.Locale")
        german.Language, german.Country = "de", "DE"
        self.document.component.CharLocale = german
        tables = self.document.sheet(self.write("kiln")[1])
        rows, columns = used(tables)
        shown = {tables.getCellByPosition(c, r).String for r in range(rows) for c in range(columns)}
        for words in ("<0,0001", "2.211", "0,873"):
            self.assertIn(words, shown)

    def test_verdict_and_its_term_are_bold_in_a_finding(self):
        findings = self.document.sheet(self.write("kiln")[0])
        rows, _ = used(findings)
        bold = []
        for r in range(rows):
            portions = findings.getCellByPosition(1, r).getText().createEnumeration()
            if not findings.getCellByPosition(1, r).String.startswith("Zone_1: "):
                continue
            runs = portions.nextElement().createEnumeration()
            while runs.hasMoreElements():
                run = runs.nextElement()
                bold.append((run.String, run.CharWeight))
        self.assertEqual(bold[0], ("Zone_1: undecided", 150.0))
        self.assertEqual(bold[1][1], 100.0)


class Refusals(ReportTest):
    def test_a_document_open_for_reading_only_is_refused_and_unchanged(self):
        path = self.document.store(self.folder / "read.ods")
        document = self.office.open(path, ReadOnly=True)
        with self.assertRaises(IllegalArgumentException) as refused:
            self.write("two", document)
        self.assertIn("reading only", refused.exception.Message)
        self.assertEqual(document.sheets.ElementNames, ("Sheet1",))
        document.close()

    def test_a_protected_structure_is_refused_and_unchanged(self):
        self.document.component.protect("")
        with self.assertRaises(IllegalArgumentException) as refused:
            self.write("two")
        self.assertIn("structure", refused.exception.Message)
        self.assertEqual(self.document.sheets.ElementNames, ("Sheet1",))
        self.document.component.unprotect("")

    def test_protected_and_hidden_sheets_are_no_obstacle(self):
        """The office lets no style be made where a sheet is protected: the looks are there all the same."""
        self.document.sheet().protect("")
        self.document.add_sheet("Hidden").IsVisible = False
        names = self.write("kiln")
        styled = self.office.new_document()
        self.write("kiln", styled)
        looks = ("CharHeight", "CharWeight", "CharColor", "CellBackColor", "IsTextWrapped", "HoriJustify",
                 "String")
        for name in names:
            here, there = self.document.sheet(name), styled.sheet(name)
            for r, row in enumerate(cells_of(here)):
                self.assertEqual(here.Rows.getByIndex(r).Height, there.Rows.getByIndex(r).Height)
                for c in [c for c, cell in enumerate(row) if cell != ""][:3]:
                    for look in looks:
                        self.assertEqual(getattr(here.getCellByPosition(c, r), look),
                                         getattr(there.getCellByPosition(c, r), look), (name, r, c, look))
        styled.close()


class Charts(ReportTest):
    def test_effects_are_points_with_intervals_from_cells(self):
        findings = self.document.sheet(self.write("kiln")[0])
        self.assertEqual(findings.Charts.Count, 1)
        (kind, values, bars), = series_of(chart_of(findings, 0))
        self.assertEqual((kind, len(values)), ("LineChartType", 8))
        lengths = {s.getValues().Role: s.getValues().getData() for s in bars.getDataSequences()}
        self.assertEqual(set(lengths), {"error-bars-y-negative", "error-bars-y-positive"})
        for below, above in zip(*lengths.values()):
            self.assertAlmostEqual(below, above, places=9)  # these intervals are symmetric
            self.assertGreater(above, 0)

    def test_inflation_is_bars_with_a_line_for_each_mark(self):
        tables = self.document.sheet(self.write("kiln")[1])
        self.assertEqual(tables.Charts.Count, 1)
        series = series_of(chart_of(tables, 0))
        self.assertEqual([kind for kind, _, _ in series],
                         ["ColumnChartType", "LineChartType", "LineChartType", "LineChartType"])
        self.assertEqual([set(values) for _, values, _ in series[1:]], [{4.0}, {5.0}, {10.0}])

    def test_a_chart_follows_its_cells(self):
        names = self.write("kiln")
        tables, findings = self.document.sheet(names[1]), self.document.sheet(names[0])
        (_, values, _), = series_of(chart_of(findings, 0))
        rows, _ = used(tables)
        for r in range(rows - 1, 0, -1):  # the numbers behind the charts stand last
            cell = tables.getCellByPosition(1, r)
            if cell.Value == values[0] and tables.getCellByPosition(0, r).String == "Zone_1":
                cell.Value = values[0] + 1
                break
        (_, changed, _), = series_of(chart_of(findings, 0))
        self.assertAlmostEqual(changed[0], values[0] + 1)

    def test_many_names_fill_several_charts_and_none_is_left_out(self):
        names = self.write("forty")
        for sheet in (self.document.sheet(names[0]), self.document.sheet(names[1])):
            first_series = [series_of(chart_of(sheet, k))[0] for k in range(sheet.Charts.Count)]
            self.assertEqual(sum(len(values) for _, values, _ in first_series), 40)

    def test_nothing_to_draw_draws_nothing(self):
        names = self.write("nothing")
        self.assertEqual([self.document.sheet(name).Charts.Count for name in names], [0, 0, 0])


class Kept(ReportTest):
    def assert_same(self, values, before):
        for value, value_before in zip(values, before, strict=True):
            if isinstance(value, float):  # files keep 15 digits of a number, and 20 places
                self.assertAlmostEqual(value, value_before, delta=1e-14 * abs(value_before) + 1e-20)
            else:
                self.assertEqual(value, value_before)

    def test_everything_is_there_in_an_office_without_any_extension(self):
        names = self.write("kiln")
        before = {name: cells_of(self.document.sheet(name)) for name in names}
        charts = {name: [[(kind, values) for kind, values, _ in series_of(chart_of(self.document.sheet(name), k))]
                         for k in range(self.document.sheet(name).Charts.Count)] for name in names}
        path = self.document.store(self.folder / "kept.ods")
        with Office(packages=()) as bare:
            document = bare.open(path)
            for name in names:
                sheet = document.sheet(name)
                for row, row_before in zip(cells_of(sheet), before[name], strict=True):
                    self.assert_same(row, row_before)
                again = [[(kind, values) for kind, values, _ in series_of(chart_of(sheet, k))]
                         for k in range(sheet.Charts.Count)]
                for one, one_before in zip(sum(again, []), sum(charts[name], []), strict=True):
                    self.assertEqual(one[0], one_before[0])
                    self.assert_same(one[1], one_before[1])
            pdf = document.store(self.folder / "kept.pdf")
        text = subprocess.run(["pdftotext", "-layout", pdf, "-"], capture_output=True, text=True, check=True).stdout
        for words in ("Firing_time", "At a glance", "Precision ledger", "Limitations"):
            self.assertIn(words, text)

    def test_charts_are_stored_as_charts(self):
        self.write("kiln")
        path = self.document.store(self.folder / "charts.ods")
        with zipfile.ZipFile(path) as package:
            objects = [name for name in package.namelist() if re.fullmatch(r"[^/]+/content.xml", name)]
            self.assertEqual(len(objects), 2)
            for name in objects:
                self.assertIn(b"office:chart", package.read(name))


class Paper(ReportTest):
    def test_pages_end_where_they_were_planned_to_and_cut_no_chart(self):
        for shape in SHAPES:
            for name in self.write(shape):
                with self.subTest(shape=shape, sheet=name):
                    sheet = self.document.sheet(name)
                    printed = sheet.PrintAreas[0]
                    planned = page_breaks(sheet, automatic=False)
                    by_the_office = [row for row in page_breaks(sheet, automatic=True) if row <= printed.EndRow]
                    self.assertEqual(by_the_office, [])
                    for k in range(sheet.DrawPage.Count):
                        shape_on_it = sheet.DrawPage.getByIndex(k)
                        top, bottom = shape_on_it.Position.Y, shape_on_it.Position.Y + shape_on_it.Size.Height
                        width = sum(sheet.Columns.getByIndex(c).Width for c in range(printed.EndColumn + 1))
                        self.assertLessEqual(shape_on_it.Position.X + shape_on_it.Size.Width, width + 20)
                        for row in planned:
                            cut = sheet.getCellByPosition(0, row).Position.Y
                            self.assertFalse(top + 5 < cut < bottom - 5, f"chart {top}..{bottom} is cut at {cut}")

    def test_no_row_is_too_low_for_its_words(self):
        for shape in SHAPES:
            for name in self.write(shape):
                sheet = self.document.sheet(name)
                filled = [r for r, row in enumerate(cells_of(sheet)) if any(cell != "" for cell in row)]
                heights = [sheet.Rows.getByIndex(r).Height for r in filled]
                sheet.getCellRangeByPosition(0, 0, 0, filled[-1]).Rows.OptimalHeight = True
                for r, height in zip(filled, heights):
                    with self.subTest(shape=shape, sheet=name, row=r):
                        self.assertGreaterEqual(height, sheet.Rows.getByIndex(r).Height - 1)

    def test_no_number_is_wider_than_its_column(self):
        for shape in SHAPES:
            self.write(shape)
        path = self.document.store(self.folder / "all.ods")
        names = [name for name in self.document.sheets.ElementNames if name.startswith("Unply")]
        pdf_text = subprocess.run(["pdftotext", "-layout", self.pdf_of(path, names), "-"], capture_output=True,
                                  text=True, check=True).stdout
        self.assertNotIn("###", pdf_text)

    def test_the_paper_is_that_of_the_document(self):
        pages = self.document.component.StyleFamilies.getByName("PageStyles")
        pages.getByName("Default").Width, pages.getByName("Default").Height = 21590, 27940
        names = self.write("two")
        for name, size in ((names[0], (21590, 27940)), (names[1], (27940, 21590))):
            style = pages.getByName(self.document.sheet(name).PageStyle)
            self.assertEqual((style.Width, style.Height), size)

    def test_every_page_names_its_sheet_and_its_number(self):
        names = self.write("kiln")
        pdf = self.pdf_of(self.document.store(self.folder / "pages.ods"), names)
        information = subprocess.run(["pdfinfo", pdf], capture_output=True, text=True, check=True).stdout
        pages = int(re.search(r"Pages:\s+(\d+)", information).group(1))
        breaks = sum(len(page_breaks(self.document.sheet(name), automatic=False)) for name in names)
        self.assertEqual(pages, breaks + 3)
        self.assertLess(pages, 11)  # eight terms
        for page in range(1, pages + 1):
            text = subprocess.run(["pdftotext", "-layout", "-f", str(page), "-l", str(page), pdf, "-"],
                                  capture_output=True, text=True, check=True).stdout.strip().splitlines()
            self.assertTrue(text[0].strip().startswith("Unply"), text[0])
            # a chart of the next page may leave its words, cut off, in the same lines
            self.assertTrue(any(line.split() and line.split()[-1] == str(page) for line in text), text)

    def test_the_first_page_tells_what_was_found(self):
        for shape in ("kiln", "forty", "long names", "category"):
            names = self.write(shape)
            pdf = self.pdf_of(self.document.store(self.folder / "first.ods"), names)
            text = subprocess.run(["pdftotext", "-layout", "-f", "1", "-l", "1", pdf, "-"], capture_output=True,
                                  text=True, check=True).stdout
            with self.subTest(shape=shape):
                for words in ("Response", "Strength", "Rows used", "At a glance", "clear", "undecided"):
                    self.assertIn(words, text)
            self.document.close()
            self.document = self.office.new_document()


if __name__ == "__main__":
    unittest.main()
