#!/usr/bin/env python3
"""Analyses a table in a spreadsheet file and writes its report, without a window.

    unply_run.py kiln.ods --output kiln-report.ods --pdf kiln-report.pdf

The question is read from the model block of the document: a named range `Unply_model` of two columns,
`name | value`, with a line `data | Firings.A1:I241` and a line `response | Strength`, and any other setting of the
sheet functions.
Or it is given here; what is given here wins over the block:

    unply_run.py kiln.ods --output kiln-report.ods --range Firings.A1:I241 --response Strength --set purpose=test

On standard output: one line for each coefficient, parted by tabs: term, verdict, estimate, lower and upper end of
its interval. Ends with 0 when the report is written, with 2 when it was refused (a sentence on standard error says
why), with 1 when something failed. The input is never changed; an output that exists is replaced only with --replace.
"""

import argparse
import ctypes
import os
import pathlib
import secrets
import shutil
import signal
import subprocess
import sys
import tempfile
import threading
import time
import zipfile

WRITTEN, FAILED, REFUSED = 0, 1, 2
FILTERS = {".ods": "calc8", ".fods": "OpenDocument Spreadsheet Flat XML", ".xlsx": "Calc MS Excel 2007 XML"}


class Refused(Exception):
    """What was asked cannot be done; the text is a sentence."""


class Failed(Exception):
    """What should have worked did not."""


def arguments(given):
    parser = argparse.ArgumentParser(
        description="Analyse a table in a spreadsheet file and write its report, without a window.",
        epilog="Ends with 0: written, 2: refused (the sentence is on standard error), 1: failed.")
    parser.add_argument("input", metavar="INPUT", type=pathlib.Path, help="spreadsheet file; it is not changed")
    parser.add_argument("--output", required=True, type=pathlib.Path, metavar="FILE",
                        help="the document with its report sheets: .ods, .fods or .xlsx")
    parser.add_argument("--pdf", type=pathlib.Path, metavar="FILE", help="the report sheets alone, for reading")
    parser.add_argument("--range", metavar="RANGE", help="the data with their headings, e.g. Sheet1.A1:H240")
    parser.add_argument("--response", metavar="NAME", help="heading of the response")
    parser.add_argument("--set", action="append", default=[], metavar="NAME=VALUE", dest="settings",
                        help="a setting, as in a settings range; may be given several times")
    parser.add_argument("--extension", type=pathlib.Path, metavar="FILE.oxt",
                        default=pathlib.Path(__file__).resolve().with_name("unply.oxt"),
                        help="the extension's package (else unply.oxt beside this program)")
    parser.add_argument("--office", type=pathlib.Path, metavar="PROGRAM", help="the office's program soffice")
    parser.add_argument("--replace", action="store_true", help="replace outputs that exist")
    parser.add_argument("--timeout", type=float, default=600, metavar="SECONDS",
                        help="give up after this time (600)")
    return parser.parse_args(given)


def check_files(asked):
    if not asked.input.is_file():
        raise Refused(f"There is no file {asked.input}.")
    if not asked.extension.is_file():
        raise Refused(f"There is no package {asked.extension}. Say with --extension where unply.oxt is.")
    if asked.output.suffix.lower() not in FILTERS:
        raise Refused(f"{asked.output} ends in none of {', '.join(FILTERS)}: a report is written in one of these.")
    outputs = [file for file in (asked.output, asked.pdf) if file]
    if len({file.resolve() for file in outputs}) < len(outputs):
        raise Refused("The output and the PDF are the same file. Give them different names.")
    for file in outputs:
        if file.resolve() == asked.input.resolve() or file.exists() and file.samefile(asked.input):
            raise Refused(f"{file} is the input, and the input is never written to. Choose another name.")
        if file.exists() and not asked.replace:
            raise Refused(f"{file} exists. Choose another name, or let it be replaced with --replace.")
        if not file.resolve().parent.is_dir():
            raise Refused(f"There is no folder {file.resolve().parent} to write {file.name} to.")


def lines_given(asked):
    """Settings of the command line as lines of `name | value`."""
    lines = []
    for words in asked.settings:
        name, sign, value = words.partition("=")
        if not sign or not name.strip():
            raise Refused(f"--set {words} is no setting. Write it as name=value.")
        lines.append((name.strip(), value.strip()))
    if asked.range:
        lines.append(("data", asked.range))
    if asked.response:
        lines.append(("response", asked.response))
    return lines


def with_lines(block, given):
    """The lines of the model block, but for those that the command line gives."""
    wins = {name.casefold() for name, _ in given}
    return tuple(line for line in block if str(line[0]).strip().casefold() not in wins) + tuple(given)


FIRST_START = """<?xml version="1.0" encoding="UTF-8"?>
<oor:items xmlns:oor="http://openoffice.org/2001/registry">
{items}
</oor:items>
"""


def last_with_us():
    ctypes.CDLL(None).prctl(1, signal.SIGKILL)  # PR_SET_PDEATHSIG: the office dies with this process


class PrivateOffice:
    """A headless office in a folder of its own, with the extension installed, that ends when this ends."""

    def __init__(self, folder, extension, program, seconds):
        self.folder, self.extension, self.seconds = folder, extension, seconds
        found = program or shutil.which("soffice") or shutil.which("libreoffice")
        if not found:
            raise Failed("No office was found. Install LibreOffice Calc, or say with --office where soffice is.")
        self.program = pathlib.Path(found).resolve().parent
        self.process, self.late, self.died = None, False, False
        environment = {name: value for name, value in os.environ.items()
                       if name not in ("DISPLAY", "WAYLAND_DISPLAY", "URE_MORE_TYPES")}
        temporary = folder / "temporary"  # what the office leaves behind goes with the folder
        temporary.mkdir()
        self.environment = dict(environment, SAL_USE_VCLPLUGIN="svp", TMPDIR=str(temporary))
        self.profile = [f"-env:UserInstallation={(folder / 'profile').as_uri()}"]
        self.end = time.monotonic() + seconds
        self.watch = threading.Timer(seconds, self.too_late)
        self.watch.daemon = True

    def __enter__(self):
        self.watch.start()
        try:
            self.install()
            self.start()
            self.connect()
        except BaseException:
            self.kill()
            raise
        return self

    def __exit__(self, *_):
        self.died = self.process.poll() is not None
        self.kill()

    def too_late(self):
        self.late = True
        self.kill_process()

    def kill_process(self):
        if self.process and self.process.poll() is None:
            try:
                os.killpg(self.process.pid, signal.SIGKILL)
            except ProcessLookupError:
                pass

    def kill(self):
        self.watch.cancel()
        self.kill_process()
        if self.process:
            self.process.wait()
            pathlib.Path(f"/tmp/OSL_PIPE_{os.getuid()}_{self.pipe}").unlink(missing_ok=True)

    def version(self):
        for line in (self.program / "bootstraprc").read_text().splitlines():
            if line.startswith("ProductKey="):
                return line.split()[-1]
        return ""

    def install(self):
        user = self.folder / "profile/user"
        user.mkdir(parents=True)
        # Without this the first start of a profile takes seconds of self-tests.
        settings = {("/org.openoffice.Setup/Product", "ooSetupLastVersion"): self.version(),
                    ("/org.openoffice.Office.Common/Misc", "FirstRun"): "false",
                    ("/org.openoffice.Office.Recovery/RecoveryInfo", "Enabled"): "false"}
        items = (f'<item oor:path="{path}"><prop oor:name="{name}" oor:op="fuse"><value>{value}</value></prop></item>'
                 for (path, name), value in settings.items())
        (user / "registrymodifications.xcu").write_text(FIRST_START.format(items="\n".join(items)))
        command = [self.program / "unopkg", "add", "--suppress-license", "--force"]
        if os.geteuid() == 0:
            # The package tool refuses to work for root in a user's profile; "for all users" is redirected into ours.
            command.append("--shared")
            self.profile.append(f"-env:UNO_SHARED_PACKAGES_CACHE={(self.folder / 'shared').as_uri()}")
        done = subprocess.run([*command, *self.profile, self.extension], env=self.environment, text=True,
                              stdin=subprocess.DEVNULL, stdout=subprocess.PIPE, stderr=subprocess.STDOUT,
                              timeout=self.seconds)
        if done.returncode:
            raise Failed(f"The package {self.extension} could not be installed: {done.stdout.strip()}")

    def start(self):
        self.pipe = f"unply{os.getpid()}{secrets.token_hex(6)}"
        with open(self.folder / "office.log", "ab") as log:
            self.process = subprocess.Popen(
                [self.program / "soffice.bin", "--headless", "--norestore", "--nologo", "--nodefault",
                 "--nolockcheck", *self.profile, f"--accept=pipe,name={self.pipe};urp"],
                stdin=subprocess.DEVNULL, stdout=log, stderr=log, env=self.environment, start_new_session=True,
                preexec_fn=last_with_us)

    def connect(self):
        """Knows our interfaces from the package itself; the office learns them by installing it."""
        with zipfile.ZipFile(self.extension) as package:
            package.extract("unply.rdb", self.folder)
        os.environ["URE_MORE_TYPES"] = " ".join(
            path.as_uri() for path in (self.program / "types/offapi.rdb", self.folder / "unply.rdb"))
        try:
            import uno
        except ImportError:
            raise Failed("This Python has no module uno. Install python3-uno and use the Python it belongs to.")
        local = uno.getComponentContext()
        resolver = local.ServiceManager.createInstanceWithContext("com.sun.star.bridge.UnoUrlResolver", local)
        while True:
            try:
                self.context = resolver.resolve(f"uno:pipe,name={self.pipe};urp;StarOffice.ComponentContext")
                break
            except Exception:
                code = self.process.poll()
                if code == 81:  # a fresh profile asks to be started again
                    self.start()
                elif code is not None or time.monotonic() > self.end:
                    raise Failed("The office did not start: " + self.log())
                time.sleep(0.05)
        self.desktop = self.service("com.sun.star.frame.Desktop")

    def log(self):
        return (self.folder / "office.log").read_text(errors="replace").strip()[-2000:] or "it says nothing"

    def service(self, name):
        return self.context.ServiceManager.createInstanceWithContext(name, self.context)

    def open(self, file):
        document = self.desktop.loadComponentFromURL(file.as_uri(), "_blank", 0, properties(Hidden=True))
        if document is None:
            raise Refused(f"The office cannot open {file.name}.")
        return document


def properties(**values):
    from com.sun.star.beans import PropertyValue
    return tuple(PropertyValue(name, 0, value, 0) for name, value in values.items())


def analyse(office, asked, folder):
    """Writes the report into a copy of the input; gives what it came to and the files made, each for its place."""
    from unply import Refusal
    copy = folder / "input" / asked.input.name  # under its own name: the report tells it
    copy.parent.mkdir()
    shutil.copyfile(asked.input, copy)
    copy.chmod(0o600)
    document = office.open(copy)
    if not document.supportsService("com.sun.star.sheet.SpreadsheetDocument"):
        raise Refused(f"{asked.input} is no spreadsheet, so there are no cells to analyse.")
    workbench = office.service("unply.Workbench")
    given = lines_given(asked)
    try:
        try:
            block = workbench.readModel(document)
        except Refusal:
            if not given:
                raise
            block = ()
        report = workbench.writeReport(document, None, with_lines(block, given))
    except Refusal as refusal:
        raise Refused(refusal.Message)
    made = {}
    stored = folder / ("report" + asked.output.suffix.lower())
    document.storeToURL(stored.as_uri(), properties(FilterName=FILTERS[stored.suffix], Overwrite=True))
    made[stored] = asked.output
    document.close(True)
    if asked.pdf:
        made[pdf_of(office, stored, report.Sheets, folder)] = asked.pdf
    return report, made


def pdf_of(office, stored, sheets, folder):
    """The report sheets alone: they need no other sheet, for they hold values."""
    document = office.open(stored)
    for name in document.Sheets.ElementNames:
        if name not in sheets:
            document.Sheets.removeByName(name)
    pdf = folder / "report.pdf"
    document.storeToURL(pdf.as_uri(), properties(FilterName="calc_pdf_Export"))
    document.close(True)
    return pdf


def put(made):
    """Every file is complete before it gets its name."""
    for source, target in made.items():
        beside = target.with_name(f".{target.name}.{secrets.token_hex(4)}")
        try:
            shutil.copyfile(source, beside)
            os.replace(beside, target)
        except BaseException:
            beside.unlink(missing_ok=True)
            raise


def run(asked):
    check_files(asked)
    lines_given(asked)
    with tempfile.TemporaryDirectory(prefix="unply-run-", ignore_cleanup_errors=True) as name:
        folder = pathlib.Path(name)
        office = PrivateOffice(folder, asked.extension.resolve(), asked.office, asked.timeout)
        try:
            with office:
                report, made = analyse(office, asked, folder)
        except Refused:
            raise
        except Exception as exception:
            if office.late or isinstance(exception, subprocess.TimeoutExpired):
                raise Failed(f"It was not done within {asked.timeout:g} seconds, and was ended.")
            if isinstance(exception, Failed):
                raise
            if office.died:
                raise Failed(f"The office ended by itself: {office.log()}")
            raise Failed(getattr(exception, "Message", "") or repr(exception))
        put(made)
    for verdict in report.Verdicts:
        numbers = (f"{number:.15g}" for number in (verdict.Estimate, verdict.Lower, verdict.Upper))
        print(verdict.Term, verdict.Verdict, *numbers, sep="\t")


def main(given=None):
    asked = arguments(given)
    signal.signal(signal.SIGTERM, lambda *_: sys.exit(FAILED))  # so that the office is ended, too
    try:
        run(asked)
    except Refused as refusal:
        print(refusal, file=sys.stderr)
        return REFUSED
    except (Failed, OSError, subprocess.SubprocessError) as failure:
        print(failure, file=sys.stderr)
        return FAILED
    return WRITTEN


if __name__ == "__main__":
    sys.exit(main())
