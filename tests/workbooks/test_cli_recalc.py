"""`rigidsheet recalc`: exit codes, inputs, targets, JSON, refusals in one line."""

from __future__ import annotations

import json
import math
import re
from pathlib import Path

import openpyxl
import pytest
from command_line import refused, run
from gate_book import GRAVITY, inertia, write

from rigidsheet.udf import calling
from rigidsheet.workbooks.commands.recalculating import settings_read

ALPHA = math.radians(40.0)


@pytest.fixture
def book(tmp_path: Path) -> Path:
    return write(tmp_path / "gate.xlsx")


def cached(path: Path, sheet: str, cell: str) -> object:
    return openpyxl.load_workbook(path, data_only=True)[sheet][cell].value


def test_all_checks_hold(book: Path) -> None:
    result = run("recalc", book)
    assert result.exit_code == 0
    assert result.stderr == ""
    assert "The one check holds." in result.output
    for word in (
        "torque",
        "39.6539",
        "N*m",
        "'Load cases'!B2",
        "Pin load",
        "OK",
        "1765.2",
        "15000",
        "3.24882",
    ):
        assert word in result.output
    # Steiner's theorem and T = I alpha, worked out here
    assert cached(book, "Load cases", "B2") == pytest.approx(inertia(180, 0.4) * ALPHA, rel=1e-12)


def test_a_failing_check_is_named_with_its_numbers(book: Path) -> None:
    result = run("recalc", book, "--set", "m=2000")
    assert result.exit_code == 1
    margin = 15000 / (2 * 2000 * GRAVITY) - 1
    assert result.stderr == (
        f"rigidsheet: gate.xlsx: Checks!E2 says FAIL: Pin load (demand 19613.3, capacity 15000, "
        f"margin {margin:.6g})\n"
    )
    assert "The one check fails." in result.output


def test_an_error_cell_is_named_with_its_reason(book: Path) -> None:
    line = refused("recalc", book, "--set", "alpha=40 deg/s")
    assert line.startswith(
        "gate.xlsx: 'Load cases'!B2 shows #VALUE!: `alpha` must be an angular acceleration"
    )


def test_errors_that_follow_are_counted(tmp_path: Path) -> None:
    path = write(tmp_path / "gate.xlsx", {"F1": "=B2*2", "F2": "=F1+1"})
    line = refused("recalc", path, "--set", "alpha=40 deg/s")
    assert line.endswith("(and 2 more cells)")
    assert "the error comes from 'Load cases'!B2" in run("recalc", path, "--no-write").output


def test_unknown_function_changes_nothing(tmp_path: Path) -> None:
    path = write(tmp_path / "gate.xlsx", {"F1": "=IFERROR(RB_TORQU(1,2),0)"})
    before = path.read_bytes()
    line = refused("recalc", path)
    assert "'Load cases'!F1" in line
    assert "there is no function RB_TORQU. Did you mean RB_TORQUE?" in line
    assert "gate.xlsx" in line
    assert path.read_bytes() == before


def test_files_that_cannot_be_read(tmp_path: Path) -> None:
    (tmp_path / "torn.xlsx").write_bytes(b"PK\x03\x04 not a zip")
    (tmp_path / "note.xlsx").write_text("no workbook")
    assert "there is no such file" in refused("recalc", tmp_path / "none.xlsx")
    assert "folder" in refused("recalc", tmp_path)
    for name in ("torn.xlsx", "note.xlsx"):
        assert name in refused("recalc", tmp_path / name)


@pytest.mark.parametrize(
    ("setting", "words"),
    [
        ("arm=3 kg", "`arm` must be a length in a unit like 'mm'"),
        ("arm=0,4", "`arm` must be a number"),
        ("arn=400 mm", "There is no cell named 'arn'. Did you mean arm?"),
        ("torque=5", "a formula stands there"),
        ("Inputs!Z=5", "There is no cell named 'Inputs!Z'"),
        ("Nowhere!B2=5", "There is no sheet called 'Nowhere'"),
        ("arm", "write NAME=VALUE"),
        ("=5", "write NAME=VALUE"),
        ("arm=", "write NAME=VALUE"),
    ],
)
def test_settings_that_are_refused(book: Path, setting: str, words: str) -> None:
    before = book.read_bytes()
    assert words in refused("recalc", book, "--set", setting)
    assert book.read_bytes() == before


def test_a_length_is_converted_to_the_unit_beside_the_cell(book: Path, tmp_path: Path) -> None:
    out = tmp_path / "out.xlsx"
    result = run("recalc", book, "--set", "arm=16 in", "--set", "Inputs!B2=250 lb", "--to", out)
    assert result.exit_code == 0
    assert f"written to {out}" in result.output
    assert cached(out, "Inputs", "B3") == pytest.approx(406.4, rel=1e-14)  # 1 in = 25.4 mm exactly
    mass = 250 * 0.45359237  # 1 lb = 0.45359237 kg exactly
    assert cached(out, "Load cases", "B1") == pytest.approx(inertia(mass, 0.4064), rel=1e-12)
    assert cached(book, "Inputs", "B3") == 400
    assert cached(book, "Load cases", "B1") is None


def test_a_unit_cell_rules_the_number_beside_it(book: Path) -> None:
    result = run("recalc", book, "--set", "arm=400 mm", "--set", "Inputs!C3=in")
    assert result.exit_code == 0
    assert cached(book, "Inputs", "B3") == pytest.approx(400 / 25.4, rel=1e-14)
    assert cached(book, "Load cases", "B1") == pytest.approx(inertia(180, 0.4), rel=1e-12)


def test_settings_once_each(book: Path) -> None:
    assert "set twice" in refused("recalc", book, "--set", "arm=1", "--set", "ARM=2")
    assert "same cell" in refused("recalc", book, "--set", "arm=1", "--set", "Inputs!B3=2")


def test_a_sheet_name_with_an_equals_sign() -> None:
    assert settings_read(("'a=b'!B3=4 mm", "x=y=z")) == {"'a=b'!B3": "4 mm", "x": "y=z"}


def test_a_sheet_name_with_a_blank(tmp_path: Path) -> None:
    path = write(tmp_path / "gate.xlsx", {"E9": "=D9*2"})
    result = run("recalc", path, "--set", "'Load cases'!D9=21")
    assert result.exit_code == 0
    assert cached(path, "Load cases", "E9") == 42


def test_no_write(book: Path) -> None:
    before = book.read_bytes()
    result = run("recalc", book, "--no-write")
    assert result.exit_code == 0
    assert "not written" in result.output
    assert book.read_bytes() == before
    assert "exclude each other" in refused("recalc", book, "--no-write", "--to", book.with_name("b.xlsx"))


def test_a_second_run_changes_no_byte(book: Path) -> None:
    run("recalc", book)
    before = book.read_bytes()
    assert "nothing to change" in run("recalc", book).output
    assert book.read_bytes() == before


def test_several_files(book: Path, tmp_path: Path) -> None:
    other = write(tmp_path / "other gate.xlsx")
    folder = tmp_path / "out"
    assert "several files need a folder" in refused("recalc", book, other, "--to", folder)
    folder.mkdir()
    result = run("recalc", book, other, "--to", folder)
    assert result.exit_code == 0
    assert {path.name for path in folder.iterdir()} == {"gate.xlsx", "other gate.xlsx"}
    twin = folder / "gate.xlsx"
    assert "two files called gate.xlsx" in refused("recalc", book, twin, "--to", tmp_path)


def test_the_worst_file_decides_and_the_others_are_done(book: Path, tmp_path: Path) -> None:
    fails = write(tmp_path / "fails.xlsx")
    run("recalc", fails, "--set", "m=2000")
    result = run("recalc", tmp_path / "none.xlsx", fails, book)
    assert result.exit_code == 2
    assert [line.split(": ")[1] for line in result.stderr.splitlines()] == [
        "there is no such file. (none.xlsx)",
        "fails.xlsx",
    ]
    assert cached(book, "Checks", "E2") == "OK"
    assert run("recalc", fails, book).exit_code == 1


def test_the_ending_of_the_new_file(book: Path, tmp_path: Path) -> None:
    assert "must end in .xlsx" in refused("recalc", book, "--to", tmp_path / "out.xlsm")
    assert "folder" in refused("recalc", book, "--to", tmp_path / "none" / "out.xlsx")


def test_json_is_one_document(book: Path, tmp_path: Path) -> None:
    result = run("recalc", book, "--set", "alpha=40 deg/s", "--json")
    assert result.exit_code == 2
    [entry] = json.loads(result.stdout)["files"]
    assert entry["exit_code"] == 2
    assert entry["holds"] is False
    assert entry["written"] == str(book)
    assert entry["values"]["'Load cases'!B2"] == {"error": "#VALUE!"}
    assert entry["values"]["'Load cases'!B3"] == pytest.approx(180 * GRAVITY, rel=1e-14)
    assert {"name": "weight", "value": 180 * GRAVITY, "unit": "N", "cell": "'Load cases'!B3"} in entry[
        "results"
    ]
    [check] = entry["checks"]
    assert (check["name"], check["verdict"], check["cell"]) == ("Pin load", "OK", "Checks!E2")
    [error] = entry["errors"]
    assert error["formula"] == "=RB_TORQUE(B1,Inputs!B4)"
    assert error["reason"].startswith("`alpha` must be")
    assert entry["warnings"] == []
    both = run("recalc", book, tmp_path / "none.xlsx", "--json")
    first, second = json.loads(both.stdout)["files"]
    assert first["file"] == str(book)
    assert second["exit_code"] == 2
    assert "no such file" in second["refused"]


def test_warnings_are_shown(tmp_path: Path) -> None:
    path = write(
        tmp_path / "gate.xlsx",
        {"F1": '=RB_TORQUE(B1,Inputs!B4,"lbf*ft")', "F2": "=RB_ANGULAR_ACCELERATION(F1,B1)"},
    )
    result = run("recalc", path)
    assert result.exit_code == 0
    words = r"'Load cases'!F2 hands a number in '?lbf\*ft'? from 'Load cases'!F1 to RB_ANGULAR_ACCELERATION"
    assert re.search(words, result.output)
    [entry] = json.loads(run("recalc", path, "--json").stdout)["files"]
    assert entry["warnings"][0]["kind"] == "unit"
    assert entry["warnings"][0]["cells"] == ["'Load cases'!F2", "'Load cases'!F1"]


def test_a_verdict_inside_another_formula_is_no_check(tmp_path: Path) -> None:
    path = write(tmp_path / "gate.xlsx", {"F1": '=IF(RB_CHECK(1,2)="OK","carry on","stop")'})
    result = run("recalc", path)
    assert result.exit_code == 0
    assert "carry on" not in result.output


def test_ctrl_c_inside_the_engine_leaves_the_file(book: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    before = book.read_bytes()

    def interrupted(name: str, cells: object) -> object:
        raise KeyboardInterrupt

    monkeypatch.setattr(calling, "call", interrupted)
    assert refused("recalc", book, code=130) == "stopped; no file was left half written"
    assert book.read_bytes() == before


def test_a_fault_of_our_own_is_one_line_too(book: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    import rigidsheet.workbooks.recalc

    def broken(*_: object, **__: object) -> object:
        raise ZeroDivisionError("deep\ninside")

    monkeypatch.setattr(rigidsheet.workbooks.recalc, "recalculate", broken)
    line = refused("recalc", book)
    assert "ZeroDivisionError: deep inside" in line
