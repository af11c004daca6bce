"""The command as a process: light start, exit codes, Ctrl-C, a closed pipe, terminals."""

from __future__ import annotations

import io
import os
import signal
import subprocess
import sys
import time
from collections.abc import Iterator
from importlib.metadata import entry_points, version
from pathlib import Path

import click
import pytest
from command_line import START, process, refused, run
from gate_book import write

from rigidsheet.workbooks import printing
from rigidsheet.workbooks.cli import main

ALLOWED = {"click", "rigidsheet", "colorama"}  # colorama: click's colors on Windows
LOADED = (
    "import sys; before = set(sys.modules)\n"
    "from rigidsheet.workbooks.cli import main\n"
    "try: main(sys.argv[1:], prog_name='rigidsheet')\n"
    "except SystemExit: pass\n"
    "new = {name.partition('.')[0] for name in set(sys.modules) - before}\n"
    "print(*sorted(new - sys.stdlib_module_names), file=sys.stderr)"
)


def walk(group: click.Group, path: tuple[str, ...] = ()) -> Iterator[tuple[str, ...]]:
    for name, command in group.commands.items():
        yield (*path, name)
        if isinstance(command, click.Group):
            yield from walk(command, (*path, name))


def test_the_entry_point_is_the_command() -> None:
    [found] = [one for one in entry_points(group="console_scripts") if one.name == "rigidsheet"]
    assert found.load() is main


@pytest.mark.parametrize("path", [(), *walk(main)])
def test_help_of_every_command(path: tuple[str, ...]) -> None:
    result = run(*path, "--help")
    assert result.exit_code == 0
    assert result.output.startswith(f"Usage: main {' '.join(path)}".strip())
    assert result.stderr == ""


def test_the_commands() -> None:
    names = {" ".join(path) for path in walk(main)}
    assert names == {
        *("demo", "templates", "new", "recalc", "functions", "try", "excel", "pdf"),
        *("calc", "calc build", "calc install", "calc uninstall"),
    }
    listed = run("--help").output
    assert all(f"\n  {name}" in listed for name in names if " " not in name)
    assert "..." not in listed.partition("Commands:")[2]


@pytest.mark.parametrize("arguments", [("--help",), ("recalc", "--help"), ("calc", "--help"), ("bogus",)])
def test_starting_loads_click_and_nothing_else(arguments: tuple[str, ...]) -> None:
    done = subprocess.run(
        [sys.executable, "-c", LOADED, *arguments], capture_output=True, text=True, timeout=60
    )
    loaded = set(done.stderr.splitlines()[-1].split())
    assert "click" in loaded
    assert loaded <= ALLOWED


def test_recalculating_loads_no_drawing_and_no_other_workbook_library(tmp_path: Path) -> None:
    path = write(tmp_path / "gate.xlsx")
    done = subprocess.run(
        [sys.executable, "-c", LOADED, "recalc", str(path)], capture_output=True, text=True, timeout=60
    )
    loaded = set(done.stderr.splitlines()[-1].split())
    assert {"formualizer", "numpy"} <= loaded
    assert not loaded & {"rich", "openpyxl", "xlwings", "pint", "scipy"}


def test_version_and_no_arguments() -> None:
    assert run("--version").output == f"rigidsheet {version('rigidsheet')}\n"
    assert run().output == run("--help").output


def test_exit_codes_of_the_process(tmp_path: Path) -> None:
    write(tmp_path / "my gate.xlsx")
    assert process("recalc", "my gate.xlsx", folder=tmp_path).returncode == 0
    assert process("recalc", "my gate.xlsx", "--set", "m=2000", folder=tmp_path).returncode == 1
    done = process("recalc", "none.xlsx", folder=tmp_path)
    assert (done.returncode, done.stdout) == (2, "")
    assert done.stderr == "rigidsheet: there is no such file. (none.xlsx)\n"


@pytest.mark.parametrize(
    "arguments",
    [("bogus",), ("--bogus",), ("recalc",), ("recalc", "--bogus", "a"), ("try",), ("calc", "bogus")],
)
def test_slips_on_the_command_line(arguments: tuple[str, ...]) -> None:
    refused(*arguments)


def test_output_that_cannot_show_a_letter(tmp_path: Path) -> None:
    environment = dict(os.environ, PYTHONIOENCODING="latin-1", PYTHONUTF8="0")
    done = process("try", '"2 \u2264 3"', env=environment)
    assert (done.returncode, done.stdout, done.stderr) == (0, "= 2 ? 3\n", "")


@pytest.mark.skipif(os.name == "nt", reason="signals of a console are another thing on Windows")
def test_ctrl_c(tmp_path: Path) -> None:
    book, cases = write(tmp_path / "gate.xlsx"), tmp_path / "cases.csv"
    os.mkfifo(cases)
    command = [sys.executable, "-c", START, "recalc", str(book), "--cases", str(cases)]
    running = subprocess.Popen(command, stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True)
    with cases.open("w"):  # opens when the command has begun to read
        time.sleep(0.2)
        running.send_signal(signal.SIGINT)
        out, problem = running.communicate(timeout=60)
    assert running.returncode == 130
    assert (out, problem) == ("", "rigidsheet: stopped; no file was left half written\n")


SHARED = (
    "import sys; from rigidsheet.workbooks import case_workers as w; w.TRIAL = w.WORTH = 0.0\n"
    "w.processors = lambda: 2; from rigidsheet.workbooks.cli import main; main(prog_name='rigidsheet')"
)


@pytest.mark.skipif(os.name == "nt", reason="signals of a console are another thing on Windows")
def test_ctrl_c_while_processes_share_the_cases(tmp_path: Path) -> None:
    book, cases = write(tmp_path / "gate.xlsx"), tmp_path / "cases.csv"
    os.mkfifo(cases)
    command = [sys.executable, "-c", SHARED, "recalc", str(book), "--cases", str(cases)]
    pipes = {"stdout": subprocess.PIPE, "stderr": subprocess.PIPE}
    running = subprocess.Popen(command, text=True, start_new_session=True, **pipes)
    cases.write_text("m\n" + "100\n" * 200_000)
    time.sleep(1.5)
    os.killpg(running.pid, signal.SIGINT)  # a terminal sends it to every process of the group
    out, problem = running.communicate(timeout=60)
    assert running.returncode == 130
    assert (out, problem) == ("", "rigidsheet: stopped; no file was left half written\n")


@pytest.mark.skipif(os.name == "nt", reason="a closed pipe is another error on Windows")
@pytest.mark.parametrize("arguments", [("functions",), ("--help",), ("functions", "RB_TORQUE")])
def test_a_reader_that_went_away(arguments: tuple[str, ...]) -> None:
    read, write_end = os.pipe()
    os.close(read)
    done = subprocess.run(
        [sys.executable, "-c", START, *arguments],
        stdout=write_end,
        stderr=subprocess.PIPE,
        text=True,
        timeout=60,
    )
    os.close(write_end)
    assert done.returncode == 141
    assert done.stderr == ""


class Terminal(io.StringIO):
    """Stands for a terminal that a person looks at."""

    def isatty(self) -> bool:
        return True


def drawn(monkeypatch: pytest.MonkeyPatch, patience: float) -> str:
    screen = Terminal()
    monkeypatch.setattr(sys, "stderr", screen)
    monkeypatch.setattr(printing, "PATIENCE", patience)
    assert list(printing.steps(range(5), 5, "Load cases")) == [0, 1, 2, 3, 4]
    return screen.getvalue()


def test_a_bar_only_on_a_terminal_and_for_long_work(monkeypatch: pytest.MonkeyPatch) -> None:
    assert "Load cases" in drawn(monkeypatch, 0.0)
    assert drawn(monkeypatch, 3600.0) == ""
    quiet = io.StringIO()
    monkeypatch.setattr(sys, "stderr", quiet)
    monkeypatch.setattr(printing, "PATIENCE", 0.0)
    assert list(printing.steps("ab", 2, "Load cases")) == ["a", "b"]
    assert quiet.getvalue() == ""


def test_waiting_draws_after_a_while(monkeypatch: pytest.MonkeyPatch) -> None:
    screen = Terminal()
    monkeypatch.setattr(sys, "stderr", screen)
    monkeypatch.setattr(printing, "PATIENCE", 0.05)
    with printing.waiting("Printing"):
        limit = time.monotonic() + 20
        while "Printing" not in screen.getvalue() and time.monotonic() < limit:
            time.sleep(0.02)
    assert "Printing" in screen.getvalue()
    monkeypatch.setattr(printing, "PATIENCE", 3600.0)
    short = Terminal()
    monkeypatch.setattr(sys, "stderr", short)
    with printing.waiting("Printing"):
        pass
    assert short.getvalue() == ""


def test_tables_are_drawn_on_a_terminal(monkeypatch: pytest.MonkeyPatch) -> None:
    screen = Terminal()
    monkeypatch.setattr(sys, "stdout", screen)
    printing.table(("check", "verdict", "empty"), [("Pin load", "FAIL", ""), ("[b]odd[/b]", "OK", "")])
    text = screen.getvalue()
    assert "Pin load" in text
    assert "[b]odd[/b]" in text
    assert "empty" not in text


def test_plain_tables_line_up(capsys: pytest.CaptureFixture[str]) -> None:
    printing.table(("name", "value"), [("a", "1"), ("bcd", "-20")], numbers=("value",))
    assert capsys.readouterr().out == "  name  value\n  a         1\n  bcd     -20\n"
