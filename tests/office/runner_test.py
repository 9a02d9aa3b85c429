"""The headless runner: what it writes, what it prints, how it ends, and that it leaves nothing behind."""

import hashlib
import os
import pathlib
import re
import subprocess
import sys
import tempfile
import time
import unittest

from office import PACKAGE, PROGRAM, Office

TOP = pathlib.Path(__file__).resolve().parents[2]
RUNNER = TOP / "extension/runner/unply_run.py"
KILN = TOP / "sample-sheets/kiln.fods"
WRITTEN, FAILED, REFUSED = 0, 1, 2


class RunnerTest(unittest.TestCase):
    def setUp(self):
        self.kept = tempfile.TemporaryDirectory(prefix="unply-runner-test-")
        self.addCleanup(self.kept.cleanup)
        self.folder = pathlib.Path(self.kept.name)
        self.temporary = self.folder / "temporary"
        self.temporary.mkdir()
        self.output, self.pdf = self.folder / "report.ods", self.folder / "report.pdf"

    def run_it(self, *arguments, extension=PACKAGE):
        environment = {k: v for k, v in os.environ.items() if k != "URE_MORE_TYPES"}
        environment["TMPDIR"] = str(self.temporary)
        done = subprocess.run([sys.executable, RUNNER, "--extension", extension, "--office", PROGRAM / "soffice",
                               *map(str, arguments)], capture_output=True, text=True, env=environment, timeout=400)
        self.assert_nothing_left()
        return done

    def assert_nothing_left(self):
        """No file of its own, and no office, not even a moment later."""
        self.assertEqual(list(self.temporary.iterdir()), [])
        for process in pathlib.Path("/proc").glob("[0-9]*"):
            try:
                command = (process / "cmdline").read_bytes().decode(errors="replace")
                state = (process / "stat").read_text().rsplit(")")[1].split()[0]
            except OSError:
                continue
            self.assertFalse(str(self.temporary) in command and state != "Z", command)

    def assert_refused(self, done, *words):
        self.assertEqual((done.returncode, done.stdout), (REFUSED, ""), done.stderr)
        for word in words:
            self.assertIn(word, done.stderr)
        self.assertTrue(done.stderr.strip().endswith((".", "?")), done.stderr)
        self.assertNotIn("Traceback", done.stderr)


class Written(RunnerTest):
    def test_report_pdf_and_verdicts_of_the_kiln_sheet(self):
        before = hashlib.sha256(KILN.read_bytes()).hexdigest()
        done = self.run_it(KILN, "--output", self.output, "--pdf", self.pdf)
        self.assertEqual((done.returncode, done.stderr), (WRITTEN, ""))
        self.assertEqual(hashlib.sha256(KILN.read_bytes()).hexdigest(), before)
        lines = [line.split("\t") for line in done.stdout.splitlines()]
        self.assertEqual([len(line) for line in lines], [5] * len(lines))
        terms = [line[0] for line in lines]
        self.assertEqual(terms[:5], ["Zone_1_C", "Zone_2_C", "Zone_3_C", "Firing_time_h", "Moisture_pct"])
        self.assertEqual(len(terms), len(set(terms)))
        verdict = {line[0]: line[1] for line in lines}
        self.assertTrue(verdict["Firing_time_h"].startswith("clear"), verdict)
        self.assertTrue(verdict["Zone_2_C"].startswith("undecided"), verdict)
        for _, _, estimate, lower, upper in lines:
            self.assertTrue(float(lower) < float(estimate) < float(upper))

        information = subprocess.run(["pdfinfo", self.pdf], capture_output=True, text=True, check=True).stdout
        pages = int(re.search(r"Pages:\s+(\d+)", information).group(1))
        self.assertTrue(4 <= pages <= 12, pages)
        text = subprocess.run(["pdftotext", "-layout", self.pdf, "-"], capture_output=True, text=True, check=True).stdout
        for words in ("At a glance", "Strength_MPa", "Firing_time_h", "Precision ledger", "Limitations"):
            self.assertIn(words, text)
        self.assertNotIn("Planned", text)  # nothing of the user's own sheets

        with Office(packages=()) as office:  # without the extension
            document = office.open(self.output)
            names = document.sheets.ElementNames
            self.assertEqual(names[-3:], ("Unply findings", "Unply tables", "Unply write-up"))
            original = office.open(KILN)
            self.assertEqual(names[:-3], original.sheets.ElementNames)
            self.assertEqual(document.sheet("Firings").getCellRangeByName("A1:I241").getDataArray(),
                             original.sheet("Firings").getCellRangeByName("A1:I241").getDataArray())
            self.assertEqual(document.component.CurrentController.ActiveSheet.Name, "Unply findings")
            self.assertGreater(document.sheet("Unply findings").Charts.Count, 0)

    def test_the_command_line_wins_over_the_model_block(self):
        done = self.run_it(KILN, "--output", self.output, "--range", "Firings.A1:I241", "--response", "Strength_MPa",
                           "--set", "terms=Firing_time_h; Moisture_pct", "--set", "level = 0.5")
        self.assertEqual(done.returncode, REFUSED, done.stdout)  # the block's effect of a term that is now none
        done = self.run_it(KILN, "--output", self.output, "--set", "Level=0.5")
        self.assertEqual(done.returncode, WRITTEN, done.stderr)
        narrow = {line.split("\t")[0]: line.split("\t")[2:] for line in done.stdout.splitlines()}
        done = self.run_it(KILN, "--output", self.output, "--replace")
        wide = {line.split("\t")[0]: line.split("\t")[2:] for line in done.stdout.splitlines()}
        for term, (estimate, lower, _) in narrow.items():
            self.assertEqual(estimate, wide[term][0])
            self.assertGreater(float(lower), float(wide[term][1]))

    def test_a_plain_table_with_everything_on_the_command_line(self):
        table = self.folder / "plain.csv"
        table.write_text("Width,Depth,Load\n" + "".join(
            f"{k},{(k * 7) % 5},{2 * k + (k * 7) % 5 + (k * k) % 3}\n" for k in range(1, 25)))
        for output in ("plain.xlsx", "plain.fods"):
            done = self.run_it(table, "--output", self.folder / output, "--range", "A1:C25", "--response", "Load")
            self.assertEqual(done.returncode, WRITTEN, done.stderr)
            self.assertEqual([line.split("\t")[0] for line in done.stdout.splitlines()], ["Width", "Depth"])
            self.assertGreater((self.folder / output).stat().st_size, 1000)


class Refused(RunnerTest):
    def test_files_that_cannot_be_used(self):
        self.output.write_text("here first")
        cases = [
            ((self.folder / "none.ods", "--output", self.output), ("none.ods",)),
            ((KILN, "--output", self.output), ("report.ods", "--replace")),
            ((KILN, "--output", self.folder / "report.txt"), (".ods",)),
            ((KILN, "--output", self.folder / "nowhere/report.ods"), ("nowhere",)),
            ((KILN, "--output", self.folder / "a.ods", "--pdf", self.folder / "a.ods"), ("same file",)),
            ((KILN, "--output", self.folder / "a.ods", "--set", "level"), ("name=value",)),
            ((KILN, "--output", KILN), ("input",)),
            ((KILN, "--output", KILN, "--replace"), ("input",)),
        ]
        for arguments, words in cases:
            with self.subTest(arguments=arguments[1:]):
                self.assert_refused(self.run_it(*arguments), *words)
        link = self.folder / "link.fods"
        link.symlink_to(KILN)
        self.assert_refused(self.run_it(KILN, "--output", link, "--replace"), "input")
        self.assertEqual(self.output.read_text(), "here first")

    def test_questions_that_cannot_be_answered(self):
        table = self.folder / "plain.csv"
        table.write_text("Width,Depth\n1,2\n2,3\n3,5\n4,4\n")
        cases = [
            ((table, "--output", self.output), ("Unply_model",)),
            ((table, "--output", self.output, "--range", "A1:B5"), ("response",)),
            ((table, "--output", self.output, "--range", "A1:B5", "--response", "Height"), ("Height",)),
            ((table, "--output", self.output, "--range", "Elsewhere.A1:B5", "--response", "Depth"), ("Elsewhere",)),
            ((KILN, "--output", self.output, "--set", "purpse=test"), ("purpse",)),
        ]
        for arguments, words in cases:
            with self.subTest(arguments=arguments[3:]):
                self.assert_refused(self.run_it(*arguments), *words)
                self.assertFalse(self.output.exists())


class Failed(RunnerTest):
    def test_a_package_that_is_none(self):
        package = self.folder / "unply.oxt"
        package.write_text("no package")
        done = self.run_it(KILN, "--output", self.output, extension=package)
        self.assertEqual((done.returncode, done.stdout), (FAILED, ""), done.stderr)
        self.assertIn("unply.oxt", done.stderr)
        self.assertFalse(self.output.exists())

    def test_time_that_runs_out_ends_the_office(self):
        start = time.monotonic()
        done = self.run_it(KILN, "--output", self.output, "--timeout", "1.5")
        self.assertEqual((done.returncode, done.stdout), (FAILED, ""), done.stderr)
        self.assertIn("1.5 seconds", done.stderr)
        self.assertLess(time.monotonic() - start, 60)
        self.assertFalse(self.output.exists())

    def test_being_ended_ends_the_office(self):
        environment = dict({k: v for k, v in os.environ.items() if k != "URE_MORE_TYPES"}, TMPDIR=str(self.temporary))
        runner = subprocess.Popen([sys.executable, RUNNER, "--extension", PACKAGE, KILN, "--output", self.output],
                                  env=environment, stderr=subprocess.DEVNULL)
        time.sleep(3)
        runner.terminate()
        self.assertNotEqual(runner.wait(60), WRITTEN)
        self.assert_nothing_left()


if __name__ == "__main__":
    unittest.main()
