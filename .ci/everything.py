"""usage: .ci/run [--checks] (which makes sure of python3 first)

Everything that a change must pass: the two commands of README.md as they stand there; with --checks also the core's
tests under the address and undefined-behaviour checks, and one minute of the fuzz target. Each part is run even if one
before it failed. Last line: "N passed, N failed", all parts added up; ends with 1 when any failed.
"""
import os
import re
import subprocess
import sys
import time

TOP = os.path.dirname(os.path.dirname(os.path.abspath(__file__)))
COMMANDS = ["sample-sheets/show.sh", "tests/run.sh"]
FUZZ_SECONDS = 60


def readme_commands():
    """The lines of README.md's code blocks that run the two commands, in their order; each must stand there once."""
    path = os.path.join(TOP, "README.md")
    if not os.path.exists(path):
        return COMMANDS
    with open(path, encoding="utf-8") as readme:
        blocks = re.findall(r"^ *```[^\n]*\n(.*?)^ *```", readme.read(), flags=re.MULTILINE | re.DOTALL)
    lines = [line.strip().removeprefix("$ ") for block in blocks for line in block.splitlines()]
    found = [[line for line in lines if line.split("#")[0].split()[-1:] in ([name], ["./" + name])]
             for name in COMMANDS]
    if any(len(lines) != 1 for lines in found):
        raise ValueError(f"README.md must show {' and '.join(COMMANDS)} once each, in code blocks; found: {found}")
    return [lines[0] for lines in found]


def run(title, command, minutes):
    """Runs a command with its output shown; returns (exit code, last line)."""
    print(f"\n== {title}: {command}", flush=True)
    started = time.monotonic()
    last = ""
    process = subprocess.Popen(["timeout", "--kill-after=30", f"{minutes}m", "bash", "-c", command], cwd=TOP,
                               stdout=subprocess.PIPE, stderr=subprocess.STDOUT, text=True, errors="replace")
    for line in process.stdout:
        print(line, end="", flush=True)
        last = line.strip() or last
    code = process.wait()
    print(f"== {title}: {'done' if code == 0 else f'FAILED with {code}'} after "
          f"{time.monotonic() - started:.0f} s", flush=True)
    return code, last


def counted(title, command, minutes):
    """(passed, failed) as told by the command's last line; without such a line, or if it contradicts the exit code,
    one failure."""
    code, last = run(title, command, minutes)
    match = re.fullmatch(r"(\d+) passed, (\d+) failed", last)
    if not match:
        return 0, 1
    passed, failed = int(match[1]), int(match[2])
    return passed, max(failed, 1) if code else failed


def single(title, command, minutes):
    return (1, 0) if run(title, command, minutes)[0] == 0 else (0, 1)


def main():
    try:
        show, tests = readme_commands()
        readme = (1, 0)
    except ValueError as error:
        print(error)
        show, tests = COMMANDS
        readme = (0, 1)
    sums = [readme,
            single("command one", show, 20),
            counted("command two", tests, 40)]
    built = "--checks" in sys.argv[1:] and single("build with checks", "cmake --preset sanitize && cmake --build --preset sanitize --parallel $(nproc)",
                   30)
    if built:
        sums.append(built)
    if built == (1, 0):
        sums.append(counted("core tests with checks", ".ci/run_tests sanitize -L core", 30))
        sums.append(single("fuzz", f"build/sanitize/tests/fuzz/fuzz_cells --seconds {FUZZ_SECONDS}", 5))
    passed = sum(part[0] for part in sums)
    failed = sum(part[1] for part in sums)
    print(f"{passed} passed, {failed} failed")
    return 0 if failed == 0 else 1


if __name__ == "__main__":
    sys.exit(main())
