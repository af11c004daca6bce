"""`rigidsheet recalc --cases`: one row of inputs in, one row of results out."""

from __future__ import annotations

import csv
import io
import math
from pathlib import Path

import pytest
from click.testing import Result
from command_line import refused, run
from gate_book import GRAVITY, inertia, write

from rigidsheet.workbooks import case_workers, recalculate

HEADER = ["case", "I_B [kg*m^2]", "torque [N*m]", "weight [N]", "looked_up", "Pin load", "error"]


@pytest.fixture
def book(tmp_path: Path) -> Path:
    return write(tmp_path / "gate.xlsx")


def table(folder: Path, text: str, encoding: str = "utf-8") -> Path:
    path = folder / "cases.csv"
    path.write_bytes(text.encode(encoding))
    return path


def rows(result: Result) -> list[dict[str, str]]:
    return list(csv.DictReader(io.StringIO(result.stdout)))


def test_values_from_first_principles(book: Path, tmp_path: Path) -> None:
    cases = table(tmp_path, "case,arm [mm],m,alpha\nslow,300,150 kg,10 deg/s^2\nfast,16 in,400 lb,1.5\n")
    before = book.read_bytes()
    result = run("recalc", book, "--cases", cases)
    assert result.exit_code == 2  # a bare acceleration where the workbook holds one with its unit
    assert next(csv.reader(io.StringIO(result.stdout))) == HEADER
    slow, fast = rows(result)
    # Steiner's theorem and T = I alpha, worked out here
    assert float(slow["I_B [kg*m^2]"]) == pytest.approx(inertia(150, 0.3), rel=1e-14)
    assert float(slow["torque [N*m]"]) == pytest.approx(inertia(150, 0.3) * math.radians(10), rel=1e-14)
    assert float(slow["weight [N]"]) == pytest.approx(150 * GRAVITY, rel=1e-14)
    assert (slow["case"], slow["Pin load"], slow["error"]) == ("slow", "OK", "")
    assert fast["torque [N*m]"] == ""
    assert fast["error"].startswith("`alpha` must be a number with its unit")
    assert book.read_bytes() == before


def test_a_verdict_decides_the_exit_code(book: Path, tmp_path: Path) -> None:
    fine = table(tmp_path, "m\n100\n200\n")
    result = run("recalc", book, "--cases", fine)
    assert result.exit_code == 0
    assert [row["case"] for row in rows(result)] == ["1", "2"]
    heavy = table(tmp_path, "case,m\nlight,100\nheavy,2000\n")
    result = run("recalc", book, "--cases", heavy)
    assert result.exit_code == 1
    assert [row["Pin load"] for row in rows(result)] == ["OK", "FAIL"]
    assert result.stderr == "rigidsheet: 1 of 2 cases with a failing check, first heavy: Pin load\n"


def test_an_error_cell_in_one_case(book: Path, tmp_path: Path) -> None:
    cases = table(tmp_path, "alpha,m\n40 deg/s,100\n40 deg/s^2,120\n40 deg/s,130\n")
    result = run("recalc", book, "--cases", cases)
    assert result.exit_code == 2
    first, second, third = rows(result)
    reason = "'Load cases'!B2 shows #VALUE!: `alpha` must be an angular acceleration"
    for row in (first, third):
        assert row["torque [N*m]"] == "#VALUE!"
        assert row["error"].startswith(reason)
    assert second["error"] == ""
    assert float(third["weight [N]"]) == pytest.approx(130 * GRAVITY, rel=1e-14)
    assert result.stderr.startswith("rigidsheet: 2 of 3 cases with an error, first 1: 'Load cases'!B2")


def test_a_reason_stays_with_a_cell_that_is_not_worked_out_again(book: Path, tmp_path: Path) -> None:
    cases = table(tmp_path, "alpha,m\n40 deg/s,100\n40 deg/s,120\n40 kg,120\n")
    first, second, third = rows(run("recalc", book, "--cases", cases))
    assert "angular velocity" in first["error"]
    assert second["error"] == first["error"]
    assert "mass" in third["error"]


def test_a_unit_cell_rules_the_number_beside_it(book: Path, tmp_path: Path) -> None:
    cases = table(tmp_path, "arm,Inputs!C3\n16,in\n0.4,m\n400 mm,in\n")
    found = [float(row["I_B [kg*m^2]"]) for row in rows(run("recalc", book, "--cases", cases))]
    # 16 in = 0.4064 m exactly
    assert found == pytest.approx([inertia(180, 0.4064), inertia(180, 0.4), inertia(180, 0.4)], rel=1e-13)


def test_every_case_equals_a_recalculation_of_its_own(tmp_path: Path) -> None:
    extra = {
        "E1": '=INDIRECT("Inputs!B"&row_number)',
        "E2": "=SUMPRODUCT(Inputs!B2:B3,Inputs!B2:B3)",
        "E3": '=IF(arm>400,RB_TORQUE(B1,Inputs!B4),"short")',
        "E4": '=VLOOKUP("Arm",Inputs!A2:B6,2,FALSE)+ROW()',
        "E5": "=COUNT(Inputs!B2:B7)",
    }
    path = write(tmp_path / "gate.xlsx", extra)
    lines = [(380.0 + 9 * i, 100.0 + 37 * i, 2.0 + i % 3) for i in range(9)]
    text = "arm,m,row_number\n" + "".join(f"{a!r},{m!r},{r!r}\n" for a, m, r in lines)
    from rigidsheet.workbooks import cases as load_cases

    with load_cases.opened(path, load_cases.read(table(tmp_path, text)), {}) as every:
        names = [sheet.name for sheet in every.run.prepared.sheets]
        for (arm, mass, row), _ in zip(lines, every, strict=True):
            alone = recalculate(path, inputs={"arm": arm, "m": mass, "row_number": row}, write=False)
            found = {(names[n], ref): value for (n, ref), value in every.run.results.items()}
            assert found == dict(alone.values)


def test_set_holds_in_every_case(book: Path, tmp_path: Path) -> None:
    cases = table(tmp_path, "arm [mm]\n300\n500\n")
    result = run("recalc", book, "--cases", cases, "--set", "m=100 kg")
    assert [float(row["I_B [kg*m^2]"]) for row in rows(result)] == pytest.approx(
        [inertia(100, 0.3), inertia(100, 0.5)], rel=1e-14
    )


@pytest.mark.parametrize(
    "text",
    [
        "case;arm [mm];m\na;300;150\n",
        "case\tarm [mm]\tm\na\t300\t150\n",
        '\ufeffcase,"arm [mm]",m\r\na,"300",150\r\n\r\n',
    ],
)
def test_the_ways_programs_write_a_csv(book: Path, tmp_path: Path, text: str) -> None:
    result = run("recalc", book, "--cases", table(tmp_path, text))
    assert result.exit_code == 0
    [row] = rows(result)
    assert float(row["I_B [kg*m^2]"]) == pytest.approx(inertia(150, 0.3), rel=1e-14)


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("", "at least one row"),
        ("arm\n", "at least one row"),
        ("case\na\n", "no input column"),
        ("arm,\n1,2\n", "column 2 of the load cases has no name"),
        ("arm,m\n1\n", "line 2 has 1 cells under 2 headers"),
        ("arm,m\n1,2\n0,4,100\n", "A decimal comma splits a number"),
        ("arn\n1\n", "Did you mean arm?"),
        ("torque\n1\n", "a formula stands there"),
        ("arm,Inputs!B3\n1,2\n", "another sets the same cell"),
        ("arm [kg]\n1\n", "`arm` must be a length"),
        ("arm [foo]\n1\n", "known unit in brackets"),
        ("row_number [mm]\n1\n", "no unit stands beside the cell"),
        ('arm\n"1\n', "the CSV cannot be read"),
        ("arm\n\0\n", "not a text"),
    ],
)
def test_tables_that_are_refused(book: Path, tmp_path: Path, text: str, words: str) -> None:
    line = refused("recalc", book, "--cases", table(tmp_path, text))
    assert words in line


def test_a_table_that_is_no_text(book: Path, tmp_path: Path) -> None:
    assert "not a text in UTF-8" in refused(
        "recalc", book, "--cases", table(tmp_path, "arm\n1 µm\n", "latin-1")
    )
    assert "no such file" in refused("recalc", book, "--cases", tmp_path / "none.csv")


def test_an_empty_cell_is_not_the_value_of_the_workbook(book: Path, tmp_path: Path) -> None:
    result = run("recalc", book, "--cases", table(tmp_path, "arm,m\n300,\n300,120\n"))
    assert result.exit_code == 2
    first, second = rows(result)
    assert first["error"].startswith("`m` must be given in every case")
    assert second["error"] == ""


def test_results_in_a_file(book: Path, tmp_path: Path) -> None:
    cases, out = table(tmp_path, "m\n100\n2000\n"), tmp_path / "out.csv"
    result = run("recalc", book, "--cases", cases, "--to", out)
    assert result.exit_code == 1
    assert result.stdout == f"2 cases written to {out}\n"
    with out.open(newline="") as file:
        assert [row["Pin load"] for row in csv.DictReader(file)] == ["OK", "FAIL"]
    assert "is read in this run" in refused("recalc", book, "--cases", cases, "--to", cases)
    assert "go to a .csv file" in refused("recalc", book, "--cases", cases, "--to", tmp_path / "out.xlsx")
    assert "go to a .csv file" in refused("recalc", book, "--cases", cases, "--to", tmp_path)


def test_what_does_not_go_with_cases(book: Path, tmp_path: Path) -> None:
    cases = table(tmp_path, "m\n100\n")
    assert "leave --json" in refused("recalc", book, "--cases", cases, "--json")
    assert "one workbook" in refused("recalc", book, book, "--cases", cases)
    unknown = write(tmp_path / "other.xlsx", {"F1": "=RB_TORQU(1)"})
    assert "there is no function RB_TORQU" in refused("recalc", unknown, "--cases", cases)


def test_shared_among_processes_the_answers_are_the_same(
    book: Path, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    text = "arm,m,alpha\n" + "".join(
        f"{300 + i},{100 + i},40 deg/s{'^2' if i % 7 else ''}\n" for i in range(90)
    )
    cases = table(tmp_path, text)
    alone = run("recalc", book, "--cases", cases)
    asked: list[int] = []

    def two() -> int:
        asked.append(2)
        return 2

    monkeypatch.setattr(case_workers, "TRIAL", 0.0)
    monkeypatch.setattr(case_workers, "WORTH", 0.0)
    monkeypatch.setattr(case_workers, "processors", two)
    shared = run("recalc", book, "--cases", cases)
    assert asked
    assert shared.exit_code == alone.exit_code == 2
    assert shared.stdout == alone.stdout
    assert shared.stderr == alone.stderr
