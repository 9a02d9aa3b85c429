"""A headless office of our own for tests: private profile, the extension installed in it, and a certain end.

    with Office() as office:
        document = office.new_document()
        document.put("A1", [["x", "y"], [1, 2], [2, 4.5], [3, 5]])
        rows = document.ask("UNPLY.ESTIMATES(B1:B4;A1:A4)")

Run with a Python that has the module `uno` (on Debian /usr/bin/python3). The environment names what to test:
UNPLY_PACKAGE (the .oxt), UNPLY_TYPES (its types, for calls beyond the sheet). Nothing outside the private profile
is touched, whether run as root or as an ordinary user. The office dies with this process, however that ends.
"""

import ctypes
import os
import pathlib
import secrets
import shutil
import signal
import subprocess
import tempfile
import time
import unittest

TOP = pathlib.Path(__file__).resolve().parents[2]
PACKAGE = pathlib.Path(os.environ.get("UNPLY_PACKAGE", TOP / "build/dev/unply.oxt")).resolve()
TYPES = pathlib.Path(os.environ.get("UNPLY_TYPES", TOP / "build/dev/idl/unply_types.rdb")).resolve()


def office_folder():
    """The office's folder with its programs."""
    soffice = os.environ.get("UNPLY_SOFFICE") or shutil.which("soffice") or shutil.which("libreoffice")
    if not soffice:
        raise RuntimeError("No office found: install libreoffice-calc, or set UNPLY_SOFFICE to its soffice")
    return pathlib.Path(soffice).resolve().parent


PROGRAM = office_folder()
# This process has to know our interfaces too; the office must not inherit the variable: it has them from the .oxt.
os.environ["URE_MORE_TYPES"] = f"{(PROGRAM / 'types/offapi.rdb').as_uri()} {TYPES.as_uri()}"

import uno  # noqa: E402  (reads the variable above)
from com.sun.star.beans import PropertyValue  # noqa: E402
from com.sun.star.connection import NoConnectException  # noqa: E402
from com.sun.star.lang import DisposedException  # noqa: E402
from com.sun.star.uno import Exception as UnoException  # noqa: E402


class OfficeCrashed(Exception):
    """The office ended by itself."""


def property_values(**values):
    return tuple(PropertyValue(name, 0, value, 0) for name, value in values.items())


def office_version():
    for line in (PROGRAM / "bootstraprc").read_text().splitlines():
        if line.startswith("ProductKey="):
            return line.split()[-1]
    return "7.4"


FIRST_START = """<?xml version="1.0" encoding="UTF-8"?>
<oor:items xmlns:oor="http://openoffice.org/2001/registry" xmlns:xs="http://www.w3.org/2001/XMLSchema"
           xmlns:xsi="http://www.w3.org/2001/XMLSchema-instance">
{items}
</oor:items>
"""


def first_start_settings():
    """Without these the first start of a profile takes seconds of self-tests and greets the user."""
    def item(path, name, value):
        return (f'<item oor:path="{path}"><prop oor:name="{name}" oor:op="fuse">'
                f'<value>{value}</value></prop></item>')
    common = "/org.openoffice.Office.Common"
    return FIRST_START.format(items="\n".join([
        item("/org.openoffice.Setup/Product", "ooSetupLastVersion", office_version()),
        item("/org.openoffice.Setup/Office", "ooSetupInstCompleted", "true"),
        item(f"{common}/Misc", "FirstRun", "false"),
        item(f"{common}/Misc", "ShowTipOfTheDay", "false"),
        item("/org.openoffice.Office.Recovery/RecoveryInfo", "Enabled", "false"),
        item("/org.openoffice.Office.Recovery/AutoSave", "Enabled", "false"),
    ]))


def clean_environment(**more):
    left_out = ("URE_MORE_TYPES", "DISPLAY", "WAYLAND_DISPLAY")
    environment = {name: value for name, value in os.environ.items() if name not in left_out}
    environment.update(LC_ALL="en_US.UTF-8", SAL_USE_VCLPLUGIN="svp", **more)
    return environment


def die_with_parent():
    PR_SET_PDEATHSIG = 1
    ctypes.CDLL(None).prctl(PR_SET_PDEATHSIG, signal.SIGKILL)


class Profile:
    """A user profile of its own, with the given packages installed."""

    def __init__(self, packages=(PACKAGE,)):
        self.folder = pathlib.Path(tempfile.mkdtemp(prefix="unply-office-"))
        user = self.folder / "user/user"
        user.mkdir(parents=True)
        (user / "registrymodifications.xcu").write_text(first_start_settings())
        self.arguments = [f"-env:UserInstallation={(self.folder / 'user').as_uri()}"]
        # The package tool refuses to work for root in a user's profile. "For all users", redirected into the
        # private folder, is the same thing without touching the installed office.
        self.for_all = os.geteuid() == 0
        if self.for_all:
            self.arguments.append(f"-env:UNO_SHARED_PACKAGES_CACHE={(self.folder / 'shared').as_uri()}")
        for package in packages:
            self.unopkg("add", "-s", "-f", str(package))

    def unopkg(self, command, *arguments):
        for_all = ["--shared"] if self.for_all else []
        done = subprocess.run([PROGRAM / "unopkg", command, *for_all, *self.arguments, *arguments], text=True,
                              stdin=subprocess.DEVNULL, stdout=subprocess.PIPE, stderr=subprocess.STDOUT,
                              env=clean_environment(), timeout=120)
        if done.returncode:
            raise RuntimeError(f"unopkg {command} {arguments} failed: {done.stdout}")
        return done.stdout

    def remove(self):
        shutil.rmtree(self.folder, ignore_errors=True)


class Office:
    """A running office. Ends with `stop()`, at the end of a `with`, or with this process."""

    def __init__(self, packages=(PACKAGE,), profile=None, environment=None):
        self.own_profile = profile is None
        self.profile = profile or Profile(packages)
        self.pipe = f"unply{os.getpid()}{secrets.token_hex(6)}"
        self.environment = environment or {}
        self.process = None
        self.log = open(self.profile.folder / "office.log", "ab+")
        try:
            self._start()
        except BaseException:
            self.kill()
            raise

    def _spawn(self):
        # soffice.bin itself, not its starter: a direct child can be made to die with us.
        return subprocess.Popen(
            [PROGRAM / "soffice.bin", "--headless", "--norestore", "--nologo", "--nodefault", "--nolockcheck",
             *self.profile.arguments, f"--accept=pipe,name={self.pipe};urp"],
            stdin=subprocess.DEVNULL, stdout=self.log, stderr=self.log, env=clean_environment(**self.environment),
            start_new_session=True, preexec_fn=die_with_parent)

    def _start(self, seconds=90):
        self.process = self._spawn()
        local = uno.getComponentContext()
        resolver = local.ServiceManager.createInstanceWithContext("com.sun.star.bridge.UnoUrlResolver", local)
        address = f"uno:pipe,name={self.pipe};urp;StarOffice.ComponentContext"
        end = time.monotonic() + seconds
        while True:
            try:
                self.context = resolver.resolve(address)
                break
            except (NoConnectException, DisposedException):
                code = self.process.poll()
                if code == 81:  # a fresh profile asks to be started again
                    self.process = self._spawn()
                elif code is not None:
                    raise OfficeCrashed(f"the office ended at its start with {code}\n{self.tail()}")
                if time.monotonic() > end:
                    raise TimeoutError(f"the office did not answer within {seconds} s\n{self.tail()}")
                time.sleep(0.03)
        self.desktop = self.service("com.sun.star.frame.Desktop")

    def service(self, name):
        return self.context.ServiceManager.createInstanceWithContext(name, self.context)

    def tail(self):
        self.log.seek(0)
        return self.log.read().decode(errors="replace")[-4000:]

    @property
    def alive(self):
        return self.process is not None and self.process.poll() is None

    def check_alive(self):
        """Raises OfficeCrashed where the office has ended by itself."""
        if not self.alive:
            raise OfficeCrashed(f"the office ended with {self.process.returncode}\n{self.tail()}")

    def explain(self, lost):
        """A lost connection is told as what it is: the end of the office."""
        try:
            self.process.wait(5)
        except subprocess.TimeoutExpired:
            raise OfficeCrashed(f"the office no longer answers: {lost.Message}\n{self.tail()}") from None
        raise OfficeCrashed(f"the office ended with {self.process.returncode}\n{self.tail()}") from None

    # -- documents
    def new_document(self):
        return Document(self, self.desktop.loadComponentFromURL("private:factory/scalc", "_blank", 0,
                                                                property_values(Hidden=True)))

    def open(self, path, **options):
        url = pathlib.Path(path).resolve().as_uri()
        component = self.desktop.loadComponentFromURL(url, "_blank", 0, property_values(Hidden=True, **options))
        if component is None:
            raise RuntimeError(f"the office could not open {path}")
        return Document(self, component)

    def activity(self):
        """(tables read, analyses begun) since the office started."""
        functions = self.service("UNPLY")
        return functions.TablesRead, functions.AnalysesBegun

    def memory(self, reset_peak=False):
        """Resident memory of the office in bytes: (now, peak since the last reset)."""
        if reset_peak:
            pathlib.Path(f"/proc/{self.process.pid}/clear_refs").write_text("5")
        lines = pathlib.Path(f"/proc/{self.process.pid}/status").read_text().splitlines()
        values = {line.split(":")[0]: int(line.split()[1]) * 1024 for line in lines if line.startswith("Vm")}
        return values["VmRSS"], values["VmHWM"]

    # -- the end
    def stop(self, seconds=30):
        """Closes everything. Raises OfficeCrashed where the office did not end by itself with 0."""
        try:
            self.check_alive()
            try:
                components = self.desktop.Components.createEnumeration()
                while components.hasMoreElements():
                    component = components.nextElement()
                    if hasattr(component, "setModified"):
                        component.setModified(False)
                    component.close(True)
                self.desktop.terminate()
            except DisposedException:
                pass  # the bridge may go before the answer comes
            try:
                code = self.process.wait(seconds)
            except subprocess.TimeoutExpired:
                raise OfficeCrashed(f"the office did not end within {seconds} s\n{self.tail()}")
            if code != 0:
                raise OfficeCrashed(f"the office ended with {code}\n{self.tail()}")
        finally:
            self.kill()

    def kill(self):
        if self.process is not None:
            try:
                os.killpg(self.process.pid, signal.SIGKILL)
            except ProcessLookupError:
                pass
            self.process.wait()
        pathlib.Path(f"/tmp/OSL_PIPE_{os.getuid()}_{self.pipe}").unlink(missing_ok=True)
        self.log.close()
        if self.own_profile:
            self.profile.remove()

    def __enter__(self):
        return self

    def __exit__(self, kind, *_):
        if kind is None:
            self.stop()
        else:
            self.kill()


class Document:
    """A spreadsheet document."""

    FILTERS = {".ods": "calc8", ".fods": "OpenDocument Spreadsheet Flat XML", ".xlsx": "Calc MS Excel 2007 XML",
               ".pdf": "calc_pdf_Export"}

    def __init__(self, office, component):
        self.office = office
        self.component = component
        self.answers = None

    @property
    def sheets(self):
        return self.component.Sheets

    def sheet(self, name=None):
        """By name or index; without either the first."""
        if isinstance(name, str):
            return self.sheets.getByName(name)
        return self.sheets.getByIndex(name or 0)

    def add_sheet(self, name):
        self.sheets.insertNewByName(name, self.sheets.Count)
        return self.sheet(name)

    def range(self, address):
        """"B2", "B2:C9" on the first sheet, or "Sheet2.B2:C9"."""
        if "." in address:
            name, address = address.rsplit(".", 1)
            return self.sheet(name.strip("$'")).getCellRangeByName(address)
        return self.sheet().getCellRangeByName(address)

    def put(self, address, rows):
        """Values from `address` on: numbers, texts (never read as formulas), None for an empty cell."""
        first = self.range(address).RangeAddress
        width = max(len(row) for row in rows)
        block = self.sheet(first.Sheet).getCellRangeByPosition(
            first.StartColumn, first.StartRow, first.StartColumn + width - 1, first.StartRow + len(rows) - 1)
        block.setDataArray(tuple(tuple("" if v is None else v if isinstance(v, str) else float(v)
                                       for v in list(row) + [None] * (width - len(row))) for row in rows))
        return block

    def formula(self, address, text):
        """One cell, text without its "=", function names in English, arguments separated by semicolons."""
        self.range(address).getCellByPosition(0, 0).setFormula("=" + text)
        return self.value(address)

    def array_formula(self, address, text):
        self.range(address).setArrayFormula("=" + text)
        return self.block(address)

    def block(self, address):
        """Rows of what the cells hold: numbers, texts, "" for empty, None for an error."""
        try:
            return self.range(address).getDataArray()
        except DisposedException as lost:
            self.office.explain(lost)

    def value(self, address):
        return self.block(address)[0][0]

    def error(self, address):
        """Number of a cell's error, e.g. 532 for a division by zero; 0 where there is none."""
        return self.range(address).getCellByPosition(0, 0).getError()

    def ask(self, text, rows=120, columns=30):
        """The whole block that a sheet function returns, through an array formula on a sheet of its own."""
        if self.answers is None:
            self.answers = self.add_sheet("Answers of the test")
        place = self.answers.getCellRangeByPosition(0, 0, columns - 1, rows - 1)
        place.setArrayFormula("=" + text)
        try:
            cells = [list(row) for row in place.getDataArray()]
            errors = place.getCellByPosition(0, 0).getError()
        except DisposedException as lost:
            self.office.explain(lost)
        place.setArrayFormula("")
        if errors:
            return [[f"error {errors}"]]
        if all(cell == cells[0][0] for row in cells for cell in row):
            return [[cells[0][0]]]  # a single cell fills the whole block
        cells = [row for row in cells if any(cell is not None for cell in row)]
        width = max(i + 1 for row in cells for i, cell in enumerate(row) if cell is not None)
        return [row[:width] for row in cells]

    def recalculate(self):
        """Every formula, whether something changed or not."""
        try:
            self.component.calculateAll()
        except DisposedException as lost:
            self.office.explain(lost)

    def store(self, path):
        """In the format of the file's ending: .ods, .fods, .xlsx, .pdf."""
        path = pathlib.Path(path).resolve()
        self.component.storeToURL(path.as_uri(),
                                  property_values(FilterName=self.FILTERS[path.suffix], Overwrite=True))
        return path

    def close(self):
        self.component.setModified(False)
        self.component.close(True)


class OfficeTest(unittest.TestCase):
    """One office for the tests of a file, one new document for each test. A crash fails the test it happens in."""

    packages = (PACKAGE,)
    office = None

    @classmethod
    def setUpClass(cls):
        cls.office = Office(cls.packages)

    @classmethod
    def tearDownClass(cls):
        office, cls.office = cls.office, None
        if office is not None and office.alive:
            office.stop()
        elif office is not None:
            office.kill()

    def _callTestMethod(self, method):
        # The test runner cannot print exceptions of the office, nor others that came of them: it gets new ones.
        failure = None
        try:
            method()
        except OfficeCrashed as crash:
            failure = OfficeCrashed(str(crash))
        except DisposedException as lost:
            failure = OfficeCrashed(f"the connection was lost: {lost.Message}\n{self.office.tail()}")
        except UnoException as exception:
            failure = AssertionError(f"{type(exception).__name__}: {exception.Message}")
        if failure is not None:
            raise failure

    def setUp(self):
        if not self.office.alive:  # a crash has been reported by the test before
            self.office.kill()
            type(self).office = Office(self.packages)
        self.document = self.office.new_document()
        self.folder = pathlib.Path(tempfile.mkdtemp(prefix="files-", dir=self.office.profile.folder))

    def tearDown(self):
        if self.office.alive:
            self.document.close()
        self.office.check_alive()
