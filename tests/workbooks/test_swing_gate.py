"""The swing gate against first principles, its inputs one by one, its unit cells, its blank form, its pages."""

from __future__ import annotations

import os
import re
import shutil
import subprocess
import zipfile
from collections.abc import Mapping
from functools import cache
from io import BytesIO
from pathlib import Path
from typing import Any

import gate_first_principles as first
import numpy as np
import openpyxl
import pytest
from text_room import cut_off

from rigidsheet.workbooks import Recalculation, recalculate
from rigidsheet.workbooks.templates import TEMPLATES

# Exact or defined factors to SI (NIST SP 811, appendix B; from memory).
FOOT, POUND = 0.3048, 0.45359237
FACTORS: dict[str, float] = {
    "mm": 1e-3, "m": 1.0, "in": FOOT / 12, "ft": FOOT, "kg": 1.0, "lb": POUND, "deg": np.pi / 180, "rad": 1.0,
    "s": 1.0, "ms": 1e-3, "N": 1.0, "kN": 1e3, "lbf": POUND * first.G, "N*m": 1.0,
    "lbf*ft": POUND * first.G * FOOT, "rpm": np.pi / 30, "rad/s": 1.0, "deg/s": np.pi / 180, "kg*m^2": 1.0,
    "lb*ft^2": POUND * FOOT**2, "kg/m^3": 1.0, "lb/in^3": POUND / (FOOT / 12) ** 3, "J": 1.0,
    "ft*lbf": POUND * first.G * FOOT, "rad/s^2": 1.0, "deg/s^2": np.pi / 180, "m/s^2": 1.0, "ft/s^2": FOOT,
    "m/s": 1.0, "ft/s": FOOT, "Pa": 1.0, "psi": POUND * first.G / (FOOT / 12) ** 2,
}  # fmt: skip
OTHER = {
    "mm": "in", "m": "ft", "kg": "lb", "deg": "rad", "s": "ms", "kN": "lbf", "N": "lbf", "N*m": "lbf*ft",
    "rpm": "rad/s", "kg*m^2": "lb*ft^2", "kg/m^3": "lb/in^3", "deg/s": "rad/s", "deg/s^2": "rad/s^2",
    "m/s^2": "ft/s^2", "m/s": "ft/s", "Pa": "psi", "J": "ft*lbf",
}  # fmt: skip
NAMES = [case[0] for case in first.CASES]
HAND = ("hand_x", "hand_z", "hand_rating")
COLUMNS = {
    "x1": "F", "y1": "G", "x2": "H", "y2": "I", "axial": "J", "radial_1": "K", "radial_2": "L", "hold": "N",
    "gear": "P", "motor": "Q", "hand": "R", "brake": "S", "latch": "T",
}  # fmt: skip


@cache
def written(blank: bool = False) -> bytes:
    import tempfile

    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "swing-gate.xlsx"
        TEMPLATES["swing-gate"].write(path, blank)
        return path.read_bytes()


class Form:
    """The written form: where inputs, their unit cells and the parts stand."""

    def __init__(self) -> None:
        self.book = openpyxl.load_workbook(BytesIO(written()))
        self.sheet = self.book["Inputs"]
        self.named: dict[str, str] = {}
        for name, defined in self.book.defined_names.items():
            place, cell = defined.attr_text.split("!")
            if place == "Inputs" and not name.startswith("sheet_") and name != "inputs_complete":
                self.named[name] = cell.replace("$", "")
        self.head = next(r for r in range(1, 90) if self.sheet.cell(r, 2).value == "part")
        self.labels = [self.sheet.cell(self.head, c).value for c in range(2, 17)]
        filled = ("box", "hollow box", "tube")
        self.rows = [r for r in range(self.head + 2, self.head + 30) if self.sheet.cell(r, 4).value in filled]
        cases = self.book["Cases"]
        self.case_rows = [r for r in range(5, 20) if cases.cell(r, 2).value in NAMES]

    def value(self, name: str) -> Any:
        return self.sheet[self.named[name]].value

    def unit_cell(self, name: str) -> Any:
        return self.sheet[self.named[name]].offset(0, 1)

    def unit(self, name: str) -> str:
        return self.unit_cell(name).value or ""

    @property
    def numbers(self) -> list[str]:
        return [name for name in self.named if isinstance(self.value(name), (int, float))]

    def part(self, row: int) -> dict[str, Any]:
        return {label: self.sheet.cell(row, 2 + k).value for k, label in enumerate(self.labels)}

    def cell(self, row: int, label: str) -> str:
        return str(self.sheet.cell(row, 2 + self.labels.index(label)).coordinate)


FORM = Form()


def model(changes: Mapping[str, Any], parts: Mapping[str, float] | None = None) -> first.Expected:
    """Return first principles for changed inputs by name and changed parts by cell."""
    inputs = {}
    for name in FORM.named:
        value = changes.get(name, FORM.value(name))
        inputs[name] = value if isinstance(value, str) else value * FACTORS.get(FORM.unit(name), 1.0)
    rows = [
        {label: (parts or {}).get(FORM.cell(row, label), value) for label, value in FORM.part(row).items()}
        for row in FORM.rows
    ]
    return first.expected(inputs, rows)


def run(inputs: Mapping[str, object]) -> Recalculation:
    result = recalculate(written(), inputs=inputs)
    assert not result.errors, result.errors[:3]
    return result


def named(result: Recalculation) -> dict[str, Any]:
    return {one.name: one for one in result.results}


def shown(result: Recalculation) -> Any:
    """Return the workbook with the values that were written into it."""
    return openpyxl.load_workbook(BytesIO(result.package), data_only=True)


def compare(result: Recalculation, wanted: first.Expected, look: str = "person on the tip") -> None:
    """Every force of every case, every demand, the motion, and the case looked at, to 1e-9 of their scale."""
    for name, letter in COLUMNS.items():
        found = np.array([result.values["Cases", f"{letter}{row}"] for row in FORM.case_rows])
        values = np.array([case[name] for case in wanted.cases])
        scale = max(np.abs(values).max(), 1.0)
        assert np.abs(found - values).max() <= 1e-9 * scale, name
    results = named(result)
    for name, value in {**{f"demand_{k}": v for k, v in wanted.demands.items()}, **wanted.motion}.items():
        one = results[name]
        assert one.value * FACTORS[one.unit] == pytest.approx(value, rel=1e-9, abs=1e-9), name
    case = wanted.cases[NAMES.index(look)]
    for name, key in (
        ("1x", "x1"),
        ("1y", "y1"),
        ("2x", "x2"),
        ("2y", "y2"),
        ("1", "radial_1"),
        ("2", "radial_2"),
    ):
        value = results[f"look_{name}"].value
        assert value == pytest.approx(case[key], rel=1e-9, abs=1e-6), name


@pytest.mark.parametrize("moved_by", ["gearmotor", "hand"])
@pytest.mark.parametrize("axial_hinge", ["lower hinge", "upper hinge"])
@pytest.mark.parametrize("law", ["even ramps", "cycloidal"])
def test_every_case_and_demand_is_that_of_first_principles(moved_by: str, axial_hinge: str, law: str) -> None:
    changes = {"moved_by": moved_by, "axial_hinge": axial_hinge, "law": law}
    compare(run(changes), model(changes))


@pytest.mark.parametrize("case", NAMES)
def test_each_load_case_can_be_looked_at(case: str) -> None:
    changes = {"look_case": case, "moved_by": "hand" if case == "closing starts" else "gearmotor"}
    result = run(changes)
    compare(result, model(changes), case)
    steps = [value for (sheet, cell), value in result.values.items() if sheet == "Working" and cell[0] == "B"]
    assert any(str(step).startswith("Balance again about") for step in steps)


def test_the_person_on_the_tip_by_hand() -> None:
    """The free body worked out in the text of gate_first_principles, with the numbers of the form."""
    results, person = named(run({})), 90 * 1.5 * 9.80665
    weight = results["mass"].value * 9.80665
    pull = (results["center_x"].value / 1000 * weight + 3.68 * person) / 1.2
    assert results["look_2x"].value == pytest.approx(-pull, rel=1e-12)
    assert results["look_1x"].value == pytest.approx(pull, rel=1e-12)
    assert results["look_axial"].value == pytest.approx(weight + person, rel=1e-12)
    wind = 90 * 1.6 * 0.3 * 3.6 * 1.6
    assert results["look_torque"].value == pytest.approx(-1.88 * wind, rel=1e-12)
    across = results["center_y"].value / 1000 * weight + 0.2 * person + 0.9 * wind
    assert results["look_2y"].value == pytest.approx((-across + 0.3 * wind) / 1.2, rel=1e-9)


def test_the_cycloidal_law_peaks_as_stated() -> None:
    """phi = phi_1 (s - sin(2 pi s) / (2 pi)), s = t / T, by finite differences."""
    results = named(run({"law": "cycloidal"}))
    t = np.linspace(0.0, 14.0, 200_001)
    phi = 95.0 * (t / 14.0 - np.sin(2 * np.pi * t / 14.0) / (2 * np.pi))
    speed = np.gradient(phi, t)
    assert results["speed"].value == pytest.approx(speed.max(), rel=1e-8)
    assert results["alpha"].value == pytest.approx(np.gradient(speed, t)[5:-5].max(), rel=1e-6)


def moved_for(name: str) -> str:
    return "hand" if name in HAND else "gearmotor"


@pytest.mark.parametrize("name", FORM.numbers)
def test_each_input_changed_by_a_tenth_still_gives_first_principles(name: str) -> None:
    changes = {"moved_by": moved_for(name), name: FORM.value(name) * (0.9 if name == "efficiency" else 1.1)}
    compare(run(changes), model(changes))


def part_changes(rows: list[int], labels: list[str]) -> dict[str, float]:
    """Return the numbers of some rows and columns of the parts list, changed by a tenth; qty stays whole."""
    out = {}
    for row in rows:
        part = FORM.part(row)
        for label in labels:
            if label not in ("part", "qty", "shape") and part[label]:
                out[FORM.cell(row, label)] = part[label] * (0.9 if label in ("t", "ID") else 1.1)
    return out


def part_sets() -> list[Any]:
    """Return each row and each column of the parts list: every number of it is changed in two ways."""
    sets = [pytest.param([row], FORM.labels, id=f"row {row}") for row in FORM.rows]
    return sets + [pytest.param(FORM.rows, [label], id=f"column {label}") for label in FORM.labels[3:]]


@pytest.mark.parametrize(("rows", "labels"), part_sets())
def test_parts_changed_by_a_tenth_still_give_first_principles(rows: list[int], labels: list[str]) -> None:
    parts = part_changes(rows, labels)
    assert parts
    compare(run({f"Inputs!{cell}": value for cell, value in parts.items()}), model({}, parts))


@cache
def unswitched(moved_by: str) -> dict[str, tuple[Any, str]]:
    return {one.name: (one.value, one.unit) for one in run({"moved_by": moved_by}).results}


# Rounding itself, as a part of the weight, of the moments or of the energy: compared with what is allowed.
ROUNDING = {"demand_agreement": 1e-4, "demand_residual": 1e-5, "demand_energy": 1e-6}


def same_physics(result: Recalculation, moved_by: str = "gearmotor") -> None:
    """Every named result is the same quantity, and every verdict the same word, whatever unit it stands in."""
    weight = unswitched(moved_by)["look_weight"][0]
    for one in result.results:
        value, unit = unswitched(moved_by)[one.name]
        if isinstance(value, str):
            assert one.value == value, one.name
        elif one.name in ROUNDING:
            assert one.value <= ROUNDING[one.name]
        else:
            wanted = value * FACTORS.get(unit, 1.0)
            scale = max(abs(wanted), weight if one.name.startswith("look_") else 0.0)
            assert abs(one.value * FACTORS.get(one.unit, 1.0) - wanted) <= 1e-9 * scale, one.name


@pytest.mark.parametrize("name", [name for name in FORM.numbers if FORM.unit(name)])
def test_each_unit_cell_can_be_switched_without_changing_the_physics(name: str) -> None:
    unit, moved_by = FORM.unit(name), moved_for(name)
    value = FORM.value(name) * FACTORS[unit] / FACTORS[OTHER[unit]]
    switched = {f"Inputs!{FORM.unit_cell(name).coordinate}": OTHER[unit], name: value}
    same_physics(run({"moved_by": moved_by, **switched}), moved_by)


@pytest.mark.parametrize("label", FORM.labels[3:])
def test_each_unit_of_the_parts_list_can_be_switched(label: str) -> None:
    unit = FORM.sheet[FORM.cell(FORM.head + 1, label)].value
    inputs: dict[str, Any] = {f"Inputs!{FORM.cell(FORM.head + 1, label)}": OTHER[unit]}
    for row in FORM.rows:
        value = FORM.part(row)[label]
        if value is not None:
            inputs[f"Inputs!{FORM.cell(row, label)}"] = value * FACTORS[unit] / FACTORS[OTHER[unit]]
    same_physics(run(inputs))


def test_the_units_of_all_results_can_be_switched_at_once() -> None:
    sheet = FORM.book["Working"]
    boxed = [row[4] for row in sheet.iter_rows(max_col=5) if row[4].style == "RS unit"]
    assert len(boxed) > 30
    result = run({f"Working!{cell.coordinate}": OTHER[cell.value] for cell in boxed})
    same_physics(result)
    switched = {one.name: one.unit for one in result.results}
    assert switched["mass"] == "lb"
    assert switched["look_2x"] == "lbf"


def test_the_governing_case_is_named() -> None:
    """The case that governs each demand, and what holds the turn in it, as first principles find them."""
    checks = {
        "Lower hinge: radial load": "radial_1", "Upper hinge: radial load": "radial_2",
        "Thrust bearing: axial load": "axial", "Gearbox: torque at the hinge axis": "gear",
        "Motor: torque": "motor", "Brake: torque at the hinge axis": "brake", "Latch: force": "latch",
    }  # fmt: skip
    for changes in ({}, {"person": 0.1}):
        sheet = shown(run(changes))["Checks"]
        wanted = model(changes)
        rows = {sheet.cell(r, 2).value: r for r in range(1, 60)}
        for label, name in checks.items():
            sizes = [abs(case[name]) for case in wanted.cases]
            found = NAMES.index(sheet.cell(rows[label], 3).value)
            assert sizes[found] == pytest.approx(max(sizes), rel=1e-12), label
            held = first.CASES[found][1]
            assert sheet.cell(rows[label], 4).value == ("gearmotor" if held == "move" else held)
    assert sheet.cell(rows["Lower hinge: radial load"], 3).value == "storm on the back"


@pytest.mark.parametrize(
    ("changes", "check"),
    [
        ({"radial_1": "12 kN"}, "radial_1"),
        ({"radial_2": 12}, "radial_2"),
        ({"axial": "5.9 kN"}, "axial"),
        ({"gear_rating": "600 N*m"}, "gear_rating"),
        ({"motor_rating": "1.3 N*m"}, "motor_rating"),
        ({"motor_speed": "1200 rpm"}, "motor_speed"),
        ({"moved_by": "hand", "hand_rating": "180 N"}, "hand_rating"),
        ({"brake_rating": "960 N*m"}, "brake_rating"),
        ({"latch_rating": "1 kN"}, "latch_rating"),
        ({"tip_limit": "0.5 m/s"}, "tip_speed"),
        ({"stop_angle": "96 deg"}, "stop_fits"),
        ({"latch_x": "3690 mm"}, "on_leaf"),
    ],
)
def test_a_check_fails_when_its_capacity_does_not_suffice(changes: dict[str, Any], check: str) -> None:
    good = {one.name: one.verdict for one in run({"moved_by": changes.get("moved_by", "gearmotor")}).checks}
    bad = run(changes)
    assert good[f"check_{check}"] == "OK"
    assert {one.name: one.verdict for one in bad.checks}[f"check_{check}"] == "FAIL"
    assert re.search(r"\d+ of \d+ checks fail", str(named(bad)["verdict"].value))


def test_the_filled_form_has_no_warning_and_a_second_run_changes_no_byte() -> None:
    result = run({})
    assert result.warnings == ()
    assert result.holds
    again = recalculate(result.package)
    assert not again.changed
    assert again.package == result.package


def test_only_built_ins_with_check_values_and_no_array_formula_or_boolean() -> None:
    from rigidsheet.workbooks.evaluation.builtins import VERIFIED_FUNCTIONS

    for sheet in FORM.book:
        for row in sheet.iter_rows():
            for cell in row:
                assert not isinstance(cell.value, bool)
                assert cell.data_type != "a"
                if cell.data_type == "f":
                    bare = re.sub(r'"[^"]*"', "", cell.value)
                    used = set(re.findall(r"([A-Z][A-Z0-9_.]*)\(", bare))
                    assert {name for name in used if not name.startswith("RB_")} <= VERIFIED_FUNCTIONS
    assert not any(isinstance(value, bool) for value in run({}).values.values())


def test_every_input_has_a_name_and_choices_are_lists() -> None:
    for row in FORM.sheet.iter_rows(max_col=4):
        if row[3].style in ("RS input", "RS input text"):
            assert row[3].coordinate in FORM.named.values(), row[3].coordinate
    lists = [rule for rule in FORM.sheet.data_validations.dataValidation if rule.type == "list"]
    look = next(rule for rule in lists if FORM.named["look_case"] in str(rule.sqref))
    assert look.formula1.strip('"').split(",") == NAMES
    assert len(look.formula1) <= 255


# what a person may type


def test_the_blank_form_refuses_input_by_input_and_nowhere_else() -> None:
    result = recalculate(written(True))
    assert all(failure.reason for failure in result.errors)
    places = {(failure.sheet, failure.cell) for failure in result.errors}
    drive = ("ratio", "efficiency", "gear_rating", "motor_rating", "motor_speed", "rotor")
    always = [n for n in FORM.named if n not in ("ramp_time", *HAND, *drive)]
    beside = {("Inputs", FORM.sheet[FORM.named[name]].offset(0, 2).coordinate) for name in always}
    assert beside <= places
    assert {sheet for sheet, _ in places - beside} == {"Working"}  # the mass of the parts list
    assert len(places - beside) == 1
    assert "missing" in str(named(result)["verdict"].value)
    assert not result.checks


def test_the_blank_form_filled_in_again_gives_the_same_sheet() -> None:
    inputs: dict[str, Any] = {f"Inputs!{cell}": FORM.value(name) for name, cell in FORM.named.items()}
    for row in FORM.rows:
        for label, value in FORM.part(row).items():
            if value is not None:
                inputs[f"Inputs!{FORM.cell(row, label)}"] = value
    result = recalculate(written(True), inputs=inputs)
    assert not result.errors
    assert dict(result.values) == dict(run({}).values)


@pytest.mark.parametrize(
    ("inputs", "sheet", "reason"),
    [
        ({"unit of leaf_length": "kg"}, "Inputs", "kg"),
        ({"unit of wind": None}, "Inputs", "unit"),
        ({"leaf_length": None}, "Inputs", "blank"),
        ({"brake_rating": "strong"}, "Inputs", "strong"),
        ({"moved_by": "horse"}, "Inputs", ""),
        ({"mass of a part": -1}, "Working", "name board"),
        ({"shape of a part": "bix"}, "Working", "bix"),
        ({"hinge_2_z": 300}, "Inputs", ""),
        ({"ramp_time": 7}, "Inputs", ""),
    ],
)
def test_one_wrong_input_shows_its_reason_and_no_wall_of_errors(
    inputs: dict[str, Any], sheet: str, reason: str
) -> None:
    board = next(row for row in FORM.rows if FORM.part(row)["part"] == "name board")
    ((what, value),) = inputs.items()
    if what.startswith("unit of "):
        cell = FORM.unit_cell(what.removeprefix("unit of ")).coordinate
    elif what.endswith(" of a part"):
        cell = FORM.cell(board, what.removesuffix(" of a part"))
    else:
        cell = FORM.named[what]
    book = openpyxl.load_workbook(BytesIO(written()))
    book["Inputs"][cell] = value
    out = BytesIO()
    book.save(out)
    result = recalculate(out.getvalue())
    assert 1 <= len(result.errors) <= 2
    assert result.errors[0].sheet == sheet
    assert reason in result.errors[0].reason
    assert not result.checks
    texts = [str(text) for (where, _), text in result.values.items() if where == "Inputs"]
    assert any("missing or refused" in text for text in texts)
    if what == "hinge_2_z":
        assert any("upper hinge must stand above" in text for text in texts)
    if what == "ramp_time":
        assert any("take longer than the run" in text for text in texts)


# pages

PAGES = 8


def on_letter(package: bytes) -> bytes:
    """Return the workbook with its sheets set to Letter, every other part as it is."""
    out = BytesIO()
    with zipfile.ZipFile(BytesIO(package)) as source, zipfile.ZipFile(out, "w") as target:
        for item in source.infolist():
            data = source.read(item)
            if item.filename.startswith("xl/worksheets/sheet"):
                assert b'paperSize="9"' in data
                data = data.replace(b'paperSize="9"', b'paperSize="1"')
            target.writestr(item, data)
    return out.getvalue()


def test_every_printed_text_has_the_room_that_it_needs() -> None:
    assert list(cut_off(run({}).package)) == []
    assert list(cut_off(run({"moved_by": "hand", "look_case": "closing starts"}).package)) == []
    assert list(cut_off(recalculate(written(True)).package)) == []


@pytest.mark.parametrize("paper", ["A4", "Letter"])
def test_the_printed_pages_are_counted_and_show_their_texts(paper: str, tmp_path: Path) -> None:
    program = shutil.which("soffice") or shutil.which("libreoffice")
    if program is None or shutil.which("pdftotext") is None:
        assert not os.environ.get("CI"), "LibreOffice and pdftotext must be there"
        pytest.skip("LibreOffice and pdftotext are not both on this machine")
    package = run({}).package
    (tmp_path / "gate.xlsx").write_bytes(on_letter(package) if paper == "Letter" else package)
    profile = f"-env:UserInstallation={(tmp_path / 'profile').as_uri()}"
    command = [program, profile, "--headless", "--convert-to", "pdf", "--outdir", str(tmp_path)]
    for _ in range(2):  # a fresh profile may end its first start without work
        subprocess.run([*command, str(tmp_path / "gate.xlsx")], capture_output=True, timeout=180, check=False)
        if (tmp_path / "gate.pdf").exists():
            break
    read = ["pdftotext", "-layout", str(tmp_path / "gate.pdf"), "-"]
    pages = subprocess.run(read, capture_output=True, check=True, timeout=60).stdout.decode().split("\f")[:-1]
    assert len(pages) == PAGES
    whole = re.sub(r"\s+", "", "".join(pages))
    assert "###" not in whole
    assert "#NAME" not in whole
    for i, page in enumerate(pages, 1):
        assert f"Page {i} of {PAGES}" in page
        assert "Swing gate" in page
    for sheet in openpyxl.load_workbook(BytesIO(package), data_only=True):
        for row in sheet[sheet.print_area.split("!")[-1].replace("$", "")]:
            for cell in row:
                if isinstance(cell.value, str) and cell.style != "RS symbol" and not cell.alignment.wrap_text:
                    assert re.sub(r"\s+", "", cell.value) in whole, cell.value
