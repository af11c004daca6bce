"""The public call: inputs set, named results, checks, errors with reasons, warnings."""

from __future__ import annotations

import io
import os
import signal
import subprocess
import sys
import threading
from pathlib import Path
from typing import Any

import openpyxl
import pytest
import workbook_parts as parts

from rigidsheet.udf.cells import CellError
from rigidsheet.workbooks import recalculate
from rigidsheet.workbooks.errors import InputRefused

NAMES = {
    "arm": "Inputs!$C$2",
    "fruit_mass": "Inputs!$C$3",
    "drive": "Inputs!$C$4",
    "stroke": "Inputs!$C$5",
    "count": "Inputs!$C$6",
    "locked": "Inputs!$C$7",
    "spare": "Inputs!$C$8",
    "block": "Inputs!$A$1:$B$2",
    "tip_moment": "Working!$B$1",
    "_xlnm.Print_Area": "Inputs!$C$2",
    "hidden_formula": "Inputs!$C$2*2",
}
INPUTS = {
    "A1": "bin tipper of the packing line",
    "B2": "arm", "C2": 400.0, "D2": "mm",
    "B3": "fruit mass", "C3": 380.0, "D3": "kg",
    "B4": "drive", "C4": "cylinder",
    "B5": "stroke", "C5": "320 mm",
    "B6": "bins a cycle", "C6": 1.0,
    "B7": "locked", "C7": False,
    "D8": "N*m",
}  # fmt: skip
WORKING = {
    "A1": "tipping moment",
    "B1": "=fruit_mass*9.80665*arm/1000",
    "C1": "N*m",
    "A2": "drive is a gearbox",
    "B2": '=IF(drive="gearbox",1,0)+count*10+IF(locked,100,0)',
    "B3": "=Inputs!C5",
}


def tipper() -> bytes:
    inputs = parts.sheet(parts.rows({ref: parts.cell(ref, value) for ref, value in INPUTS.items()}))
    return parts.workbook({"Inputs": inputs, "Working": WORKING}, names=NAMES)


def moment(**inputs: object) -> float:
    value = recalculate(tipper(), inputs=inputs, functions={}).values["Working", "B1"]
    assert isinstance(value, float)
    return value


@pytest.mark.parametrize(
    ("given", "metres"),
    [
        (250, 0.25),
        (250.0, 0.25),
        ("250", 0.25),
        ("250 mm", 0.25),
        ("0.25 m", 0.25),
        ("10 in", 0.254),
        ("1 ft", 0.3048),
    ],
)
def test_a_length_is_converted_to_the_unit_beside_its_cell(given: object, metres: float) -> None:
    # inch and foot are exact by definition (0.0254 m, 0.3048 m)
    assert moment(arm=given) == pytest.approx(380 * 9.80665 * metres, rel=1e-14)


def test_inputs_are_written_into_the_file_too() -> None:
    inputs = {
        "arm": "0.5 m",
        "Inputs!C4": "gearbox",
        "stroke": "12 in",
        "COUNT": "3",
        "locked": "true",
        "spare": "2 N*m",
    }
    result = recalculate(tipper(), inputs=inputs, functions={})
    assert result.values["Working", "B2"] == 131.0
    assert result.values["Working", "B3"] == "12 in"
    sheet = openpyxl.load_workbook(io.BytesIO(result.package), data_only=True)["Inputs"]
    assert [sheet[f"C{i}"].value for i in range(2, 9)] == [500, 380, "gearbox", "12 in", 3, True, 2]
    assert sheet["A1"].value == "bin tipper of the packing line"
    before, after = parts.unpacked(tipper()), parts.unpacked(result.package)
    assert [name for name in before if before[name] != after[name]] == [
        "xl/worksheets/sheet1.xml",
        "xl/worksheets/sheet2.xml",
    ]
    assert not recalculate(result.package, inputs=inputs, functions={}).changed


@pytest.mark.parametrize(
    ("name", "given", "reason"),
    [
        ("arm", "4 kg", r"`arm` must be a length in a unit like 'mm', which stands beside the cell"),
        ("arm", "long", "`arm` must be"),
        ("arm", "0,4 m", "`arm` must be"),
        ("arm", "4 furlongz", "`arm` must be"),
        ("arm", float("nan"), "a finite number"),
        ("arm", None, "a number, a text or TRUE or FALSE; got 'NoneType'"),
        ("amr", 4, r"no cell named 'amr'. Did you mean arm\?"),
        ("tip_moment", 4, r"an input cell; a formula stands there; got '=fruit_mass.*\(Working!B1\)"),
        ("Working!B2", 4, "an input cell; a formula stands there"),
        ("block", 4, "the name of a single cell"),
        ("hidden_formula", 4, "the name of a single cell"),
        ("Input!C2", 4, r"no sheet called 'Input'. Sheets: Inputs, Working"),
        ("count", "3 kg", "a bare number, because no unit stands beside the cell"),
        ("count", "some", "a number, because the cell holds one"),
        ("stroke", 3.0, "a number with its unit, because the cell holds '320 mm'"),
        ("stroke", "320", "a number with its unit, because the cell holds '320 mm'"),
    ],
)
def test_an_input_that_does_not_fit_is_refused(name: str, given: object, reason: str, tmp_path: Path) -> None:
    path = tmp_path / "tipper.xlsx"
    path.write_bytes(tipper())
    with pytest.raises(InputRefused, match=reason) as caught:
        recalculate(path, inputs={"fruit_mass": 1.0, name: given}, functions={})
    assert len(str(caught.value)) < 255
    assert path.read_bytes() == tipper()


def test_two_inputs_for_one_cell_are_refused() -> None:
    with pytest.raises(InputRefused, match="given once"):
        recalculate(tipper(), inputs={"arm": 1.0, "Inputs!C2": 2.0}, functions={})


def test_a_cell_of_an_array_formula_is_no_input() -> None:
    book = parts.workbook({"S": {"A1": '<c r="A1"><f t="array" ref="A1:A3">{1;2;3}</f></c>'}})
    with pytest.raises(InputRefused, match="a formula stands there"):
        recalculate(book, inputs={"S!A2": 1.0}, functions={})


def test_named_results_carry_the_unit_beside_them() -> None:
    cells = {
        "A1": "symbol", "A2": "m", "B2": "=2+1", "A3": "kN", "B3": "=4+1", "B4": "=5+1", "C4": "kg*m^2",
        "B5": '="word"', "C5": "mm", "B6": "=1/0", "C6": "mm", "B7": "=1+1", "C7": "see note 3",
    }  # fmt: skip
    names = {f"r{i}": f"S!$B${i}" for i in range(2, 8)}
    found = recalculate(parts.workbook({"S": cells}, names=names), functions={}).results
    assert [(r.name, r.value, r.unit, r.cell) for r in found] == [
        ("r2", 3.0, "", "B2"),  # a single letter to the left is a symbol
        ("r3", 5.0, "kN", "B3"),
        ("r4", 6.0, "kg*m^2", "B4"),
        ("r5", "word", "", "B5"),
        ("r6", CellError("#DIV/0!"), "", "B6"),
        ("r7", 2.0, "", "B7"),
    ]


CHECKS = {
    "A1": "check", "B1": "Demand [N*m]", "C1": "Capacity [N*m]", "D1": "Margin", "E1": "Verdict",
    "A2": "motor torque", "B2": "=900+100", "C2": '<c r="C2"><v>1500</v></c>', "D2": "=C2/B2-1",
    "E2": "=RB_CHECK(B2,C2)",
    "A3": "pin load", "B3": "=9", "C3": '<c r="C3"><v>8</v></c>', "D3": "=C3/B3-1", "E3": "=RB_CHECK(B3,C3)",
    "A4": "typed rule", "E4": '=IF(1<2,"OK","FAIL")',
    "A5": "broken", "B5": "=1/0", "E5": "=RB_CHECK(B5,1)",
    "A6": "no check", "E6": '="maybe"',
}  # fmt: skip


def test_checks_are_found_with_the_numbers_of_their_row() -> None:
    book = parts.workbook({"Checks": CHECKS}, names={"pin_ok": "Checks!$E$3"})
    result = recalculate(book)
    assert [(c.name, c.verdict, c.cell, c.demand, c.capacity, c.margin) for c in result.checks] == [
        ("motor torque", "OK", "E2", 1000.0, 1500.0, 0.5),
        ("pin_ok", "FAIL", "E3", 9.0, 8.0, 8 / 9 - 1),
        ("typed rule", "OK", "E4", None, None, None),
        ("broken", "#DIV/0!", "E5", CellError("#DIV/0!"), None, None),
    ]
    assert not result.holds
    good = {ref: CHECKS[ref] for ref in ("A1", "B1", "A2", "B2", "C2", "E2")}
    assert recalculate(parts.workbook({"Checks": good})).holds


def test_an_error_names_the_cell_it_comes_from() -> None:
    cells = {
        "A1": '=RB_CONVERT("4 kg","m")',
        "A2": "=A1*2",
        "A3": "=SUM(A1:A2)+tilt",
        "A4": '<c r="A4" t="e"><v>#N/A</v></c>',
        "A5": "=A4+1",
        "A6": "=1/0",
    }
    result = recalculate(parts.workbook({"Load cases": cells}, names={"tilt": "'Load cases'!$B$1"}))
    assert [(e.cell, e.error, e.source) for e in result.errors] == [
        ("A1", "#VALUE!", None),
        ("A2", "#VALUE!", ("Load cases", "A1")),
        ("A3", "#VALUE!", ("Load cases", "A1")),
        ("A5", "#N/A", ("Load cases", "A4")),
        ("A6", "#DIV/0!", None),
    ]
    assert "mass" in result.errors[0].reason
    assert str(result.errors[1]) == "'Load cases'!A2 shows #VALUE!: the error comes from 'Load cases'!A1"
    assert str(result.errors[4]).endswith("something is divided by zero")


STYLES = (
    f'<styleSheet xmlns="{parts.MAIN}"><numFmts count="3"><numFmt numFmtId="164" formatCode="yyyy\\-mm\\-dd"/>'
    '<numFmt numFmtId="165" formatCode="0.00&quot; day&quot;"/><numFmt numFmtId="166" formatCode="[Red]#,##0.0"/>'
    '</numFmts><cellStyleXfs count="1"><xf numFmtId="14"/></cellStyleXfs><cellXfs count="5">'
    '<xf numFmtId="0"/><xf numFmtId="14"/><xf numFmtId="164"/><xf numFmtId="165"/><xf numFmtId="166"/>'
    "</cellXfs></styleSheet>"
)


NUMBER = '<c r="{0}"><v>{1}</v></c>'


def warnings(cells: dict[str, str], **more: Any) -> list[tuple[str, tuple[str, ...]]]:
    result = recalculate(parts.workbook({"S": cells}, **more))
    assert all(len(str(w)) < 255 for w in result.warnings)
    return [(w.kind, tuple(cell for _, cell in w.cells)) for w in result.warnings]


def test_a_number_in_another_unit_that_goes_on_as_a_bare_number_is_named() -> None:
    arm = '=RB_CONVERT("400 mm",{0})'
    take = "=RB_SHIFT({0},1,2)"
    cells = {
        "A1": arm.format('"mm"'),
        "A2": arm.format('"m"'),
        "A3": arm.format("B3"),
        "B3": "in",
        "C1": take.format("A1"),
        "C2": take.format("A2"),
        "C3": take.format("A3"),
        "C4": take.format('RB_CONVERT("1 ft","mm")'),
        "C5": take.format("length"),
        "C6": take.format("A1/1000"),
        "C7": "=RB_CHECK(A1,A1)",
        "C8": "=RB_CHECK(A1,A3)",
        "C9": take.format("A3:B3"),
    }
    assert warnings(cells, names={"length": "S!$A$1"}) == [
        ("unit", ("C1", "A1")),
        ("unit", ("C3", "A3")),
        ("unit", ("C4", "C4")),
        ("unit", ("C5", "A1")),
        ("unit", ("C8", "A1")),
        ("unit", ("C8", "A3")),
    ]


def test_a_bare_number_with_its_unit_beside_it_is_named() -> None:
    """The slip of a sheet with value and unit cells: the formula takes the value cell alone."""
    cells = {
        "A1": NUMBER.format("A1", 40), "B1": "deg/s^2", "C1": "=RB_TORQUE(85,A1)", "D1": "=RB_TORQUE(85,A1:B1)",
        "A2": NUMBER.format("A2", 5), "B2": "kg*m^2", "C2": "=RB_TORQUE(A2,1)",
        "A3": NUMBER.format("A3", 5), "B3": "Rod", "C3": "=RB_TORQUE(A3,1)",
        "A4": "5 mm", "B4": "mm", "C4": "=RB_CHECK(A4,A4)",
        "A5": NUMBER.format("A5", 6.2), "B5": "kN", "C5": "=RB_CHECK(A5,A6)",
        "A6": NUMBER.format("A6", 15000), "B6": "N", "C6": "=RB_CHECK(A5,A5)",
    }  # fmt: skip
    assert warnings(cells) == [("unit", ("C1", "A1")), ("unit", ("C5", "A5"))]
    [warning, _] = recalculate(parts.workbook({"S": cells})).warnings
    assert "a number in deg/s^2 from S!A1 to RB_TORQUE as if it were SI. Hand over the value" in str(warning)


def test_a_cell_that_shows_the_first_of_a_column_of_answers_is_named() -> None:
    """A check that passes in the first row says nothing of the others."""
    cells = {f"A{i}": NUMBER.format(f"A{i}", v) for i, v in enumerate((120, -180, 90), 1)}
    cells |= {
        "A4": "N", "B1": "=RB_CHECK(A1:A3,150)", "B2": "=RB_CHECK(A3:A4,\"150 N\")", "B3": "=RB_CHECK(A2,150)",
        "B4": "=MAX(RB_TORQUE(A1:A3,2))", "B5": "=RB_MARGIN(150,A1:A3)", "B6": "=RB_SHIFT(1,1,A1:A3)",
    }  # fmt: skip
    found = recalculate(parts.workbook({"S": cells})).warnings
    assert [(w.kind, w.cells) for w in found] == [
        ("column", (("S", "B1"), ("S", "A1"))),
        ("column", (("S", "B5"), ("S", "A1"))),
    ]
    assert str(found[0]).startswith("S!B1 shows RB_CHECK of S!A1 alone, the first of 3 numbers it is given.")


def test_a_vector_in_another_unit_that_goes_on_bare_is_named() -> None:
    arm = '<c r="A1"><f t="array" ref="A1:B1">RB_ARM("(0, 0) m","(0.4, 0.2) m","mm")</f></c>'
    take = '=RB_MOMENT("(1, 0) N",{0})'
    number = '<c r="{0}"><v>400</v></c>'
    cells = {
        "A1": arm,
        "C1": "mm",
        "A2": '=RB_CONVERT("400 mm","mm")',
        "B2": number.format("B2"),
        "A3": number.format("A3"),
        "B3": number.format("B3"),
        "C3": "mm",
        "E1": take.format("A1:B1"),
        "E2": take.format("A2:B2"),
        "E3": take.format("A3:B3"),
        "E4": take.format("A1:C1"),
        "E5": take.format("A3:C3"),
    }
    assert warnings(cells) == [("unit", ("E1", "A1")), ("unit", ("E2", "A2")), ("unit", ("E3", "B3"))]


def test_a_date_that_a_function_takes_as_a_number_is_named() -> None:
    cells = {f"A{i}": f'<c r="A{i}" s="{i - 1}"><v>45000</v></c>' for i in range(1, 6)}
    cells |= {f"B{i}": f"=RB_SHIFT(A{i},1,2)" for i in range(1, 6)} | {"C1": "=A2+1"}
    assert warnings(cells, parts={"xl/styles.xml": STYLES}) == [
        ("date", ("B2", "A2")),
        ("date", ("B3", "A3")),
    ]


def test_a_text_that_a_sum_skips_is_named_once() -> None:
    cells = {
        "A1": '<c r="A1"><v>1</v></c>', "A2": "12", "A3": "part", "A4": "4 kg", "A5": '="7"', "A6": "",
        "B1": "=SUM(A1:A6)", "B2": "=MAX(A1:A6)+1", "B3": "=SUMPRODUCT(A1:A1,A1:A1)", "B4": "=SUM(masses)",
    }  # fmt: skip
    found = warnings(cells, names={"masses": "S!$A$2:$A$3"})
    assert found == [("text", ("B1", f"A{i}")) for i in (2, 4, 5)]


def test_a_file_that_an_office_program_holds_open_is_named(tmp_path: Path) -> None:
    path = tmp_path / "book.xlsx"
    path.write_bytes(tipper())
    for mark in ("~$book.xlsx", ".~lock.book.xlsx#"):
        (tmp_path / mark).write_bytes(b"designer")
        [warning] = recalculate(path, functions={}).warnings
        assert warning.kind == "open"
        assert "book.xlsx seems to be open" in str(warning)
        (tmp_path / mark).unlink()
    assert not recalculate(path, functions={}).warnings


def test_warnings_look_into_shared_formulas() -> None:
    rows = "".join(
        f'<row r="{i}"><c r="A{i}"><f>RB_CONVERT("400 mm","{u}")</f></c><c r="B{i}"><f t="shared" si="4"{m}</c></row>'
        for i, (u, m) in enumerate(
            [("m", ' ref="B1:B3">RB_SHIFT($A1,1,2)</f>'), ("mm", "/>"), ("m", "/>")], 1
        )
    )
    result = recalculate(parts.workbook({"S": parts.sheet(rows)}))
    assert [w.cells for w in result.warnings] == [(("S", "B2"), ("S", "A2"))]


def test_a_book_without_slips_has_no_warnings() -> None:
    assert warnings({"A1": '=RB_CONVERT("400 mm","m")', "A2": "=RB_SHIFT(A1,1,2)", "A3": "=SUM(A1:A2)"}) == []


def test_results_and_values_cannot_be_changed() -> None:
    result = recalculate(tipper(), functions={})
    with pytest.raises(TypeError):
        result.values["S", "A1"] = 1.0  # type: ignore[index]
    with pytest.raises(AttributeError):
        result.package = b""  # type: ignore[misc]


def test_importing_workbooks_is_light() -> None:
    code = (
        "import sys, rigidsheet.workbooks\n"
        "heavy = {'openpyxl', 'formualizer', 'pint', 'numpy', 'xlwings', 'scipy'} & set(sys.modules)\n"
        "print(sorted(heavy))"
    )
    out = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert out.stdout.strip() == "[]"


def test_recalculation_needs_neither_pint_nor_openpyxl() -> None:
    code = (
        "import sys\nfrom rigidsheet.workbooks import recalculate\n"
        f"recalculate({tipper()!r}, inputs={{'arm': '0.5 m'}})\n"
        "print(sorted({'openpyxl', 'pint', 'xlwings', 'scipy'} & set(sys.modules)))"
    )
    out = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert out.stdout.strip() == "[]"


def test_ctrl_c_ends_the_run_wherever_it_arrives(tmp_path: Path) -> None:
    path = tmp_path / "book.xlsx"
    book = parts.workbook({"S": {f"A{i}": "=RB_X(1)" for i in range(1, 400)}})
    path.write_bytes(book)
    before = signal.getsignal(signal.SIGINT)
    calls = []

    def slow(x: float) -> float:
        calls.append(x)
        if len(calls) == 5:
            threading.Thread(target=os.kill, args=(os.getpid(), signal.SIGINT)).run()
        return x

    with pytest.raises(KeyboardInterrupt):
        recalculate(path, functions={"RB_X": slow})
    assert len(calls) < 20
    assert path.read_bytes() == book
    assert signal.getsignal(signal.SIGINT) is before


def test_it_runs_in_another_thread() -> None:
    found: list[Any] = []
    worker = threading.Thread(
        target=lambda: found.append(recalculate(tipper(), functions={}).values["Working", "B1"])
    )
    worker.start()
    worker.join()
    assert found == [pytest.approx(380 * 9.80665 * 0.4, rel=1e-14)]
