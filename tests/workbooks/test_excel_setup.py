"""The folder for Excel: what is written, that nothing of the user's is overwritten, and that the steps hold."""

from __future__ import annotations

import csv
import re
import sys
from pathlib import Path

import pytest

from rigidsheet.core.errors import InputError
from rigidsheet.udf import vba
from rigidsheet.udf.calling import call
from rigidsheet.udf.cells import Refusal
from rigidsheet.workbooks import excel_setup
from rigidsheet.workbooks.excel_setup import configuration, write_setup

WINDOWS_PYTHON = r"C:\Users\Ines Example\sheets\Scripts\python.exe"


def test_three_files_are_written_into_a_new_folder(tmp_path: Path) -> None:
    folder = tmp_path / "for excel" / "setup"
    written = write_setup(folder)
    assert [p.name for p in written] == ["RigidsheetFunctions.bas", "xlwings.conf", "STEPS.txt"]
    assert sorted(folder.iterdir()) == sorted(written)
    module = written[0].read_bytes()
    assert module.isascii()
    assert module.startswith(f'Attribute VB_Name = "{vba.MODULE}"\r\nOption Explicit\r\n'.encode())
    for path in written:
        assert path.read_bytes().count(b"\n") == path.read_bytes().count(b"\r\n")


def test_a_second_run_changes_and_adds_nothing(tmp_path: Path) -> None:
    first = write_setup(tmp_path)
    before = {p: (p.read_bytes(), p.stat().st_mtime_ns) for p in tmp_path.iterdir()}
    assert write_setup(tmp_path) == first
    assert {p: (p.read_bytes(), p.stat().st_mtime_ns) for p in tmp_path.iterdir()} == before


def test_files_of_the_user_are_kept_and_the_new_ones_named_beside(tmp_path: Path) -> None:
    own = {
        "xlwings.conf": b'"INTERPRETER_WIN","D:\\mine\\python.exe"\n',
        "RigidsheetFunctions.bas": b"' changed by hand\r\n",
        "STEPS.txt": b"notes",
    }
    for name, content in own.items():
        (tmp_path / name).write_bytes(content)
    written = write_setup(tmp_path)
    assert [p.name for p in written] == ["RigidsheetFunctions-2.bas", "xlwings-2.conf", "STEPS-2.txt"]
    assert {name: (tmp_path / name).read_bytes() for name in own} == own
    steps = written[2].read_text()
    assert "choose RigidsheetFunctions-2.bas" in steps
    assert "lines of xlwings-2.conf" in steps


def test_a_folder_under_the_name_of_a_file_is_left_alone(tmp_path: Path) -> None:
    (tmp_path / "xlwings.conf").mkdir()
    assert write_setup(tmp_path)[1].name == "xlwings-2.conf"


def test_a_file_in_place_of_the_folder_is_refused(tmp_path: Path) -> None:
    path = tmp_path / "notes.txt"
    path.write_text("mine")
    with pytest.raises(InputError, match=r"is a file\. Name a folder"):
        write_setup(path)
    assert path.read_text() == "mine"


def test_the_configuration_of_the_user_is_never_touched(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    home = tmp_path / "home"
    own = home / ".xlwings" / "xlwings.conf"
    own.parent.mkdir(parents=True)
    own.write_text('"INTERPRETER_WIN","D:\\mine\\python.exe"\n')
    for name in ("HOME", "USERPROFILE"):
        monkeypatch.setenv(name, str(home))
    write_setup(tmp_path / "setup")
    assert [p for p in home.rglob("*") if p.is_file()] == [own]
    assert own.read_text() == '"INTERPRETER_WIN","D:\\mine\\python.exe"\n'


# the lines, read the way VBA's Input # reads them: pairs of quoted values


def pairs(lines: str) -> dict[str, str]:
    rows = list(csv.reader(lines.splitlines()))
    assert all(len(row) == 2 for row in rows)
    return dict(rows)


def test_the_lines_name_the_python_that_runs_now() -> None:
    lines = pairs(configuration({}, WINDOWS_PYTHON, r"C:\Users\Ines Example\sheets", windows=True))
    assert lines == {"INTERPRETER_WIN": WINDOWS_PYTHON, "ADD_WORKBOOK_TO_PYTHONPATH": "False"}


def test_the_lines_activate_an_environment_that_needs_it() -> None:
    prefix = r"C:\conda\envs\machines"
    environment = {"CONDA_EXE": r"C:\conda\Scripts\conda.exe", "CONDA_PREFIX": prefix}
    lines = pairs(configuration(environment, prefix + r"\python.exe", prefix, windows=True))
    assert lines == {
        "CONDA PATH": r"C:\conda",
        "CONDA ENV": prefix,
        "ADD_WORKBOOK_TO_PYTHONPATH": "False",
    }
    # an environment made inside another one is named by its own interpreter
    other = pairs(configuration(environment, WINDOWS_PYTHON, r"C:\Users\Ines Example\sheets", windows=True))
    assert other["INTERPRETER_WIN"] == WINDOWS_PYTHON
    assert "CONDA ENV" not in other


def test_elsewhere_the_lines_hold_a_place_to_fill_in_and_the_steps_say_so(tmp_path: Path) -> None:
    if sys.platform.startswith("win"):
        pytest.skip("this Windows names its own Python")
    written = write_setup(tmp_path)
    assert pairs(written[1].read_text())["INTERPRETER_WIN"] == excel_setup.EXAMPLE_PYTHON
    assert "put the path of\n    python.exe of your own environment" in written[2].read_text()


def test_a_path_that_macros_cannot_read_is_refused(monkeypatch: pytest.MonkeyPatch) -> None:
    def narrow(text: str, errors: str = "replace") -> bytes:
        return text.encode("cp1252", errors=errors)

    monkeypatch.setattr(excel_setup, "windows_text", narrow)
    with pytest.raises(InputError, match="letters that Excel's macros cannot read"):
        excel_setup.configuration_bytes('"INTERPRETER_WIN","C:\\κήπος\\python.exe"\n')


# the steps


@pytest.fixture
def steps(tmp_path: Path) -> str:
    return write_setup(tmp_path)[2].read_text()


def test_the_steps_are_numbered_in_order_and_fit_a_window(steps: str) -> None:
    numbers = [int(n) for n in re.findall(r"^ ?(\d+)\. ", steps, flags=re.MULTILINE)]
    assert numbers == list(range(1, len(numbers) + 1))
    assert max(map(len, steps.splitlines())) <= 80
    assert steps.isascii()
    assert "{" not in steps


def test_the_steps_name_the_macros_and_the_module_of_the_file(steps: str) -> None:
    module = vba.module_text("1")
    for macro in (vba.DESCRIBE, vba.TEST):
        assert macro in steps
        assert f"Public Sub {macro}()" in module
    assert f"remove its {vba.MODULE}," in steps


def test_the_trial_in_the_steps_shows_what_it_says(steps: str) -> None:
    trials = re.findall(r"=(\w+)\((.*)\)\s+(shows \S+|says why)", steps)
    assert len(trials) == 3
    for name, arguments, promise in trials:
        answer = call(name, re.findall(r'"([^"]*)"', arguments))
        shown = answer.error if isinstance(answer, Refusal) else answer
        if promise == "says why":
            assert "mass" in str(shown)
        else:
            assert promise == f"shows {shown}"
