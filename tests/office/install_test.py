"""The package installs, its functions are stored under their own names, it can be removed, and offices end."""

import os
import pathlib
import subprocess
import sys
import time
import unittest

from office import Office, OfficeCrashed, OfficeTest, Profile

DATA = [["Width", "Depth"], [1, 2], [2, 1], [3, 4], [4, 4], [5, 4.5]]


class Installed(OfficeTest):
    def test_a_function_answers_in_a_cell(self):
        self.document.put("A1", DATA)
        answer = self.document.ask("UNPLY.VIF($Sheet1.A1:B6)")
        self.assertGreater(len(answer), 1)
        self.assertGreater(len(answer[0]), 1)
        self.assertIsInstance(answer[0][0], str)

    def test_the_formula_is_stored_as_it_is_read(self):
        self.document.put("A1", DATA)
        self.document.formula("D1", "UNPLY.VIF(A1:B6)")
        self.assertEqual(self.document.range("D1").Formula, "=UNPLY.VIF(A1:B6)")
        stored = self.document.store(self.folder / "stored.fods").read_text()
        self.assertIn('"of:=UNPLY.VIF([.A1:.B6])"', stored)


class Removed(unittest.TestCase):
    def test_it_is_gone_after_its_removal_and_its_documents_still_open(self):
        profile = Profile()
        try:
            with Office(profile=profile) as office:
                document = office.new_document()
                document.put("A1", DATA)
                heading = document.formula("D1", "UNPLY.VIF(A1:B6)")
                self.assertIsInstance(heading, str)
                path = document.store(profile.folder / "kept.ods")
            listed = profile.unopkg("list")
            self.assertIn("unply.extension", listed)
            profile.unopkg("remove", "unply.extension")
            self.assertNotIn("unply.extension", profile.unopkg("list"))
            with Office(profile=profile) as office:
                document = office.open(path)
                self.assertEqual(document.value("D1"), heading)
                document.recalculate()
                self.assertEqual(document.error("D1"), 525)  # the office's #NAME?
                self.assertEqual(document.value("A2"), 1)
        finally:
            profile.remove()


class Ended(unittest.TestCase):
    def test_an_office_that_dies_is_noticed(self):
        office = Office(packages=())
        try:
            office.new_document()
            office.process.kill()
            office.process.wait()
            with self.assertRaises(OfficeCrashed):
                office.stop()
        finally:
            office.kill()

    def test_an_office_ends_with_the_program_that_started_it(self):
        starter = subprocess.Popen([sys.executable, "-c", "import office, time\no = office.Office(packages=())\n"
                                    "print(o.process.pid, o.profile.folder, flush=True)\ntime.sleep(60)"],
                                   cwd=pathlib.Path(__file__).parent, stdout=subprocess.PIPE, text=True)
        pid, folder = starter.stdout.readline().split()
        starter.kill()
        starter.wait()
        starter.stdout.close()
        end = time.monotonic() + 20
        while pathlib.Path(f"/proc/{pid}").exists() and time.monotonic() < end:
            state = pathlib.Path(f"/proc/{pid}/stat").read_text().rsplit(")")[1].split()[0]
            if state == "Z":  # ended; nobody has collected it yet
                break
            time.sleep(0.05)
        else:
            self.assertFalse(pathlib.Path(f"/proc/{pid}").exists(), "the office outlived its starter")
        subprocess.run(["rm", "-rf", folder], check=True)


if __name__ == "__main__":
    unittest.main()
