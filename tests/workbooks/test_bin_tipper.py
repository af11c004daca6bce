"""The bin tipper against first principles, its inputs one by one, its unit cells, its blank form, its pages."""

from __future__ import annotations

import re
import shutil
import subprocess
from collections.abc import Iterator, Mapping
from functools import cache
from io import BytesIO
from pathlib import Path
from typing import Any

import numpy as np
import openpyxl
import pytest
import template_first_principles as first
from text_room import column_width, cut_off

from rigidsheet.workbooks import Recalculation, recalculate
from rigidsheet.workbooks.templates import TEMPLATES

# Exact or defined factors to SI (NIST SP 811, appendix B; from memory).
FOOT, POUND = 0.3048, 0.45359237
FACTORS: dict[str, float] = {
    "mm": 1e-3, "m": 1.0, "in": FOOT / 12, "ft": FOOT, "kg": 1.0, "lb": POUND, "deg": np.pi / 180, "rad": 1.0,
    "s": 1.0, "ms": 1e-3, "min": 60.0, "N": 1.0, "kN": 1e3, "lbf": POUND * first.G, "N*m": 1.0, "kN*m": 1e3,
    "lbf*ft": POUND * first.G * FOOT, "rpm": np.pi / 30, "rad/s": 1.0, "deg/s": np.pi / 180, "kg*m^2": 1.0,
    "lb*ft^2": POUND * FOOT**2, "kg/m^3": 1.0, "lb/in^3": POUND / (FOOT / 12) ** 3, "J": 1.0,
    "rad/s^2": 1.0, "deg/s^2": np.pi / 180, "m/s^2": 1.0, "ft/s^2": FOOT,
}  # fmt: skip
OTHER = {
    "mm": "in", "m": "ft", "kg": "lb", "deg": "rad", "s": "ms", "kN": "lbf", "N*m": "lbf*ft", "rpm": "rad/s",
    "kg*m^2": "lb*ft^2", "kg/m^3": "lb/in^3", "deg/s": "rad/s", "deg/s^2": "rad/s^2", "m/s^2": "ft/s^2",
}  # fmt: skip
CASES = [case[0] for case in first.CASES]
WHOLE = [case[0] for case in first.CASES if not case[2]]
DRIVES = ("cylinder", "gearbox")
ONLY = {
    "cylinder": (
        *("anchor_x", "anchor_y", "eye_x", "eye_y", "cylinder_z", "push_rating", "pull_rating"),
        *("closed_length", "open_length", "least_arm"),
    ),
    "gearbox": ("ratio", "efficiency", "gear_rating", "motor_rating", "motor_speed", "rotor"),
}


@cache
def written(blank: bool = False) -> bytes:
    import tempfile

    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "bin-tipper.xlsx"
        TEMPLATES["bin-tipper"].write(path, blank)
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
        self.rows = [r for r in range(self.head + 2, self.head + 30) if self.sheet.cell(r, 4).value in SHAPES]

    def value(self, name: str) -> Any:
        return self.sheet[self.named[name]].value

    def unit(self, name: str) -> str:
        return self.sheet[self.named[name]].offset(0, 1).value or ""

    @property
    def numbers(self) -> list[str]:
        return [name for name in self.named if isinstance(self.value(name), (int, float))]

    def part(self, row: int) -> dict[str, Any]:
        return {label: self.sheet.cell(row, 2 + k).value for k, label in enumerate(self.labels)}

    def cell(self, row: int, label: str) -> str:
        return str(self.sheet.cell(row, 2 + self.labels.index(label)).coordinate)


SHAPES = ("box", "hollow box", "closed hollow box", "tube")
FORM = Form()


def si_inputs(changes: Mapping[str, Any] | None = None) -> dict[str, Any]:
    """Return every named input in SI, words as they stand, with changes in the unit of the form."""
    out = {}
    for name in FORM.named:
        value = (changes or {}).get(name, FORM.value(name))
        out[name] = value if isinstance(value, str) else value * FACTORS.get(FORM.unit(name), 1.0)
    return out


def model(changes: Mapping[str, Any], parts: Mapping[str, float] | None = None) -> first.Expected:
    """Return first principles for changed inputs by name and changed parts by cell."""
    rows = []
    for row in FORM.rows:
        part = FORM.part(row)
        for label in FORM.labels:
            part[label] = (parts or {}).get(FORM.cell(row, label), part[label])
        rows.append(part)
    return first.expected(si_inputs(changes), rows[:-1], rows[-1])


def run(inputs: Mapping[str, object]) -> Recalculation:
    result = recalculate(written(), inputs=inputs)
    assert not result.errors, result.errors[:3]
    return result


def table(result: Recalculation, sheet: str, start: int, count: int = len(CASES)) -> np.ndarray[Any, Any]:
    """Return columns of a table over the tilt from a column on, one for each load case when not told."""
    rows = sorted(
        int(cell[1:])
        for where, cell in result.values
        if where == sheet and re.fullmatch(r"A\d+", cell) and isinstance(result.values[where, cell], float)
    )[: 2 * first.RAMP + first.STEADY + 3]
    letters = [openpyxl.utils.get_column_letter(start + k) for k in range(count)]
    return np.array([[result.values[sheet, f"{letter}{row}"] for letter in letters] for row in rows])


def named(result: Recalculation) -> dict[str, Any]:
    return {one.name: one for one in result.results}


def agrees(found: Any, wanted: Any, relative: float = 1e-9) -> bool:
    """Compare with the scale of the wanted numbers."""
    wanted = np.asarray(wanted)
    return bool(np.max(np.abs(np.asarray(found) - wanted)) <= relative * np.max(np.abs(wanted)))


def compare(result: Recalculation, wanted: first.Expected, drive: str) -> None:
    assert agrees(table(result, "Tilt", 10), wanted.torque)
    assert agrees(table(result, "Hinges", 2), wanted.effort)
    assert agrees(table(result, "Hinges", 8), wanted.hinge_1)
    assert agrees(table(result, "Hinges", 14), wanted.hinge_2)
    results = named(result)
    for name, demand in wanted.demands.items():
        one = results[f"demand_{name}"]
        assert agrees(one.value * FACTORS[one.unit], demand), name
    case = WHOLE.index(shown(result)["Inputs"][FORM.named["look_case"]].value)
    torque, effort, hinge_1, hinge_2 = wanted.look[case]
    looked = (torque, effort if drive == "cylinder" else torque, hinge_1, hinge_2)
    for name, value in zip(("torque", "drive", "hinge_1", "hinge_2"), looked, strict=True):
        assert agrees(results[f"look_{name}"].value, value), name


def shown(result: Recalculation) -> Any:
    """Return the workbook with the values that were written into it."""
    return openpyxl.load_workbook(BytesIO(result.package), data_only=True)


@pytest.mark.parametrize("drive", DRIVES)
@pytest.mark.parametrize("stop_by", ["angle", "time"])
def test_every_table_and_demand_is_that_of_first_principles(drive: str, stop_by: str) -> None:
    changes = {"drive": drive, "stop_by": stop_by}
    compare(run(changes), model(changes), drive)


@pytest.mark.parametrize("case", WHOLE)
def test_each_load_case_can_be_looked_at(case: str) -> None:
    changes = {"drive": "cylinder", "look_case": case, "look_tilt": 104.0}
    compare(run(changes), model(changes), "cylinder")


def drive_of(name: str) -> str:
    return "cylinder" if name in ONLY["cylinder"] else "gearbox"


@pytest.mark.parametrize("name", FORM.numbers)
def test_each_input_changed_by_a_tenth_still_gives_first_principles(name: str) -> None:
    drive = drive_of(name)
    changes = {"drive": drive, name: FORM.value(name) * 1.1}
    if name == "stop_time":
        changes["stop_by"] = "time"
    if name == "efficiency":
        changes[name] = FORM.value(name) * 0.9
    compare(run(changes), model(changes), drive)


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
    columns = [label for label in FORM.labels if label not in ("part", "qty", "shape")]
    return sets + [pytest.param(FORM.rows, [label], id=f"column {label}") for label in columns]


@pytest.mark.parametrize(("rows", "labels"), part_sets())
def test_parts_changed_by_a_tenth_still_give_first_principles(rows: list[int], labels: list[str]) -> None:
    parts = part_changes(rows, labels)
    assert parts
    inputs = {"drive": "cylinder", **{f"Inputs!{cell}": value for cell, value in parts.items()}}
    compare(run(inputs), model({"drive": "cylinder"}, parts), "cylinder")


@cache
def unswitched(drive: str) -> dict[str, tuple[Any, str]]:
    return {one.name: (one.value, one.unit) for one in run({"drive": drive}).results}


def same_physics(result: Recalculation, drive: str) -> None:
    """Every named result is the same quantity, and every verdict the same word, whatever unit it stands in."""
    for one in result.results:
        value, unit = unswitched(drive)[one.name]
        if isinstance(value, str):
            assert one.value == value, one.name
        elif one.unit in FACTORS and one.name != "demand_agreement":
            wanted = value * FACTORS[unit]
            scale = max(abs(wanted), 1e-6 if one.name == "demand_energy" else 0.0)
            assert abs(one.value * FACTORS[one.unit] - wanted) <= 1e-9 * scale, one.name


@pytest.mark.parametrize("name", [name for name in FORM.numbers if FORM.unit(name)])
def test_each_unit_cell_can_be_switched_without_changing_the_physics(name: str) -> None:
    drive, unit = drive_of(name), FORM.unit(name)
    place = FORM.sheet[FORM.named[name]]
    value = place.value * FACTORS[unit] / FACTORS[OTHER[unit]]
    switched = {f"Inputs!{place.offset(0, 1).coordinate}": OTHER[unit], name: value}
    same_physics(run({"drive": drive, **switched}), drive)


@pytest.mark.parametrize("label", FORM.labels[3:])
def test_each_unit_of_the_parts_list_can_be_switched(label: str) -> None:
    unit = FORM.sheet[FORM.cell(FORM.head + 1, label)].value
    inputs: dict[str, Any] = {f"Inputs!{FORM.cell(FORM.head + 1, label)}": OTHER[unit]}
    for row in FORM.rows:
        value = FORM.part(row)[label]
        if value is not None:
            inputs[f"Inputs!{FORM.cell(row, label)}"] = value * FACTORS[unit] / FACTORS[OTHER[unit]]
    same_physics(run({"drive": "gearbox", **inputs}), "gearbox")


def test_the_units_of_all_results_can_be_switched_at_once() -> None:
    sheet = FORM.book["Working"]
    boxed = [row[4] for row in sheet.iter_rows(max_col=5) if row[4].style == "RS unit"]
    assert len(boxed) > 15
    result = run({"drive": "gearbox", **{f"Working!{cell.coordinate}": OTHER[cell.value] for cell in boxed}})
    same_physics(result, "gearbox")
    switched = {one.name: one.unit for one in result.results}
    assert switched["mass_full"] == "lb"
    assert switched["steady_speed"] == "rad/s"


def test_the_roll_up_is_that_of_first_principles() -> None:
    parts = [FORM.part(row) for row in FORM.rows]
    results = named(run({}))
    for word, body in (("empty", first.total(parts[:-1])), ("full", first.total(parts))):
        center = body.first / body.mass
        about = np.trace(body.second) * np.eye(3) - body.second
        offset = body.mass * (center[0] ** 2 + center[1] ** 2)
        wanted = {
            "mass": body.mass, "x": center[0], "y": center[1], "z": center[2], "izz": about[2, 2] - offset,
            "izz_hinge": about[2, 2], "izx_hinge": about[2, 0], "iyz_hinge": about[1, 2],
        }  # fmt: skip
        for name, value in wanted.items():
            one = results[f"{name}_{word}"]
            assert one.value * FACTORS[one.unit] == pytest.approx(value, rel=1e-9, abs=1e-12), name


def test_the_largest_step_and_every_peak_are_within_the_table() -> None:
    """A table eight times as fine finds no torque and no hinge force above the sheet's by more than 0.2 %."""
    for drive in DRIVES:
        coarse = model({"drive": drive})
        before = first.RAMP, first.STEADY
        try:
            first.RAMP, first.STEADY = 8 * before[0], 8 * before[1]
            fine = model({"drive": drive})
        finally:
            first.RAMP, first.STEADY = before
        for name in ("torque", "effort", "hinge_1", "hinge_2"):
            a, b = (np.abs(getattr(one, name)).max(axis=0) for one in (coarse, fine))
            assert np.all(b <= 1.002 * a), (drive, name)


def test_the_work_of_the_drive_is_the_change_of_energy() -> None:
    """Exact energy of the turning body against the sheet's; its sum of trapezoids against the exact work."""
    result = run({})
    found = table(result, "Tilt", 16, 3)
    exact = model({}).energy
    assert agrees(found[:, 1], exact)
    assert np.abs(found[:, 0] - exact).max() <= 5e-4 * np.abs(exact).max()
    assert agrees(found[:, 2], found[:, 0] - found[:, 1])


def test_the_governing_case_is_named() -> None:
    result = run({"drive": "gearbox"})
    book = shown(result)["Checks"]
    wanted = model({"drive": "gearbox"})
    rows = {book.cell(r, 2).value: r for r in range(1, 60)}
    for label, grid in (
        ("Gearbox: torque at the hinge", wanted.torque),
        ("Motor: torque", wanted.effort),
        ("Hinge 1: bearing load, with allowance", wanted.hinge_1),
        ("Hinge 2: bearing load, with allowance", wanted.hinge_2),
    ):
        row, peak = rows[label], np.abs(grid).max(axis=0)
        case = CASES.index(book.cell(row, 3).value)
        assert peak[case] == pytest.approx(peak.max(), rel=1e-12)
        at = np.array([motion[0] for motion in first.rows(si_inputs())])[np.abs(grid[:, case]).argmax()]
        assert np.radians(book.cell(row, 4).value) == pytest.approx(at, abs=1e-9)


@pytest.mark.parametrize(
    ("changes", "check"),
    [
        ({"motor_rating": 12}, "motor_torque"),
        ({"gear_rating": "4 kN*m"}, "gearbox_torque"),
        ({"motor_speed": "1000 rpm"}, "motor_speed"),
        ({"pin_rating": "6 kN"}, "hinge_1"),
        ({"drive": "cylinder", "pull_rating": "22 kN"}, "pull"),
        ({"drive": "cylinder", "push_rating": "13 kN"}, "push"),
        ({"drive": "cylinder", "closed_length": "830 mm"}, "shortest"),
        ({"drive": "cylinder", "open_length": "1400 mm"}, "longest"),
        ({"drive": "cylinder", "least_arm": "170 mm"}, "arm"),
        ({"ramp_time": "2.9 s"}, "ramps"),
        ({"look_tilt": "111 deg"}, "look"),
        ({"ramp_time": "2.7 s"}, "step"),
    ],
)
def test_a_check_fails_when_its_capacity_does_not_suffice(changes: dict[str, Any], check: str) -> None:
    good = {one.name: one.verdict for one in run({"drive": changes.get("drive", "gearbox")}).checks}
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
                    assert isinstance(cell.value, str), cell.coordinate
                    bare = re.sub(r'"[^"]*"', "", cell.value)
                    used = set(re.findall(r"([A-Z][A-Z0-9_.]*)\(", bare))
                    assert {name for name in used if not name.startswith("RB_")} <= VERIFIED_FUNCTIONS
    assert not any(isinstance(value, bool) for value in run({}).values.values())


def test_inputs_results_and_checks_have_names() -> None:
    names = set(FORM.book.defined_names)
    assert {"sheet_drawing", "sheet_revision", "sheet_date", "sheet_by", "sheet_checked"} <= names
    for row in FORM.sheet.iter_rows(max_col=4):
        if row[3].style in ("RS input", "RS input text"):
            assert row[3].coordinate in FORM.named.values(), row[3].coordinate


def test_units_on_offer_are_read() -> None:
    from rigidsheet.udf.units.factors import factor
    from rigidsheet.udf.units.kinds import KINDS
    from rigidsheet.workbooks.templates.kit_cells import UNITS

    kinds = {kind.name: kind for kind in KINDS}
    for name, units in UNITS.items():
        for unit in units:
            assert factor(unit, kinds[name], "unit") > 0.0


def test_limits_of_the_functions_validate_the_inputs() -> None:
    rules = {}
    for rule in FORM.sheet.data_validations.dataValidation:
        for cell in str(rule.sqref).split():
            rules.setdefault(cell, rule)
    positive = rules[FORM.named["tilt_time"]]
    assert (positive.operator, positive.formula1) == ("greaterThan", "0")
    assert "greater than zero" in positive.error
    fraction = rules[FORM.named["efficiency"]]
    assert (fraction.operator, fraction.formula2) == ("between", "1")
    assert rules[FORM.named["drive"]].formula1 == '"cylinder,gearbox"'


# the blank form


def test_the_blank_form_refuses_input_by_input_and_nowhere_else() -> None:
    result = recalculate(written(True))
    assert all(failure.source is None for failure in result.errors)
    places = {(failure.sheet, failure.cell) for failure in result.errors}
    always = [
        n for n in FORM.named if n not in ("stop_angle", "stop_time", *ONLY["cylinder"], *ONLY["gearbox"])
    ]
    beside = {("Inputs", FORM.sheet[FORM.named[name]].offset(0, 2).coordinate) for name in always}
    assert beside <= places
    assert {sheet for sheet, _ in places - beside} == {"Working"}  # the two masses of the parts list
    assert len(places) == len(beside) + 2
    assert "missing" in str(named(result)["verdict"].value)
    assert not result.checks
    assert all(failure.reason for failure in result.errors)


def test_the_blank_form_filled_in_again_gives_the_same_sheet() -> None:
    inputs: dict[str, Any] = {f"Inputs!{cell}": FORM.value(name) for name, cell in FORM.named.items()}
    for row in FORM.rows:
        for label, value in FORM.part(row).items():
            if value is not None:
                inputs[f"Inputs!{FORM.cell(row, label)}"] = value
    result = recalculate(written(True), inputs=inputs)
    assert not result.errors
    assert dict(result.values) == dict(run({}).values)


def test_one_wrong_input_shows_its_reason_beside_it_and_no_wall_of_errors() -> None:
    place = FORM.sheet[FORM.named["tilt_end"]]
    result = recalculate(written(), inputs={f"Inputs!{place.offset(0, 1).coordinate}": "kg"})
    assert [failure.cell for failure in result.errors] == [place.offset(0, 2).coordinate]
    assert "kg" in result.errors[0].reason
    parts = recalculate(written(), inputs={f"Inputs!{FORM.cell(FORM.rows[0], 'shape')}": "bix"})
    assert {failure.sheet for failure in parts.errors} == {"Working"}
    assert len(parts.errors) == 2


# pages


@pytest.fixture(scope="module")
def office(tmp_path_factory: pytest.TempPathFactory) -> tuple[str, Path]:
    program = shutil.which("soffice") or shutil.which("libreoffice")
    if program is None or shutil.which("pdftotext") is None:
        pytest.skip("LibreOffice and pdftotext are not both on this machine")
    return program, tmp_path_factory.mktemp("office")


def pdf_pages(office: tuple[str, Path], package: bytes, name: str) -> list[str]:
    """Return the text of each page that LibreOffice prints."""
    program, folder = office
    book = folder / f"{name}.xlsx"
    book.write_bytes(package)
    profile = f"-env:UserInstallation={(folder / 'profile').as_uri()}"
    command = [program, profile, "--headless", "--convert-to", "pdf", "--outdir", str(folder), str(book)]
    for _ in range(2):  # a fresh profile may end its first start without work
        subprocess.run(command, capture_output=True, timeout=180, check=False)
        if book.with_suffix(".pdf").exists():
            break
    text = subprocess.run(
        ["pdftotext", "-layout", str(book.with_suffix(".pdf")), "-"],
        capture_output=True,
        check=True,
        timeout=60,
    ).stdout.decode()
    return text.split("\f")[:-1]


@pytest.mark.parametrize("paper", ["A4", "Letter"])
@pytest.mark.parametrize("drive", DRIVES)
def test_the_printed_pages_are_nine_and_nothing_is_cut_off(
    office: tuple[str, Path], paper: str, drive: str
) -> None:
    package = run({"drive": drive}).package
    if paper == "Letter":
        package = on_letter(package)
    pages = pdf_pages(office, package, f"{drive}-{paper}")
    assert len(pages) == 9
    whole = squeezed("\n".join(pages))
    assert "###" not in whole
    assert "#NAME" not in whole
    for i, page in enumerate(pages, 1):
        assert f"Page {i} of 9" in page
        assert "Bin tipper" in page
        assert "Drawing" in page
    for text in printed_texts(package):
        assert squeezed(text) in whole, text


@pytest.mark.parametrize("drive", [*DRIVES, "blank"])
def test_every_text_has_the_room_that_it_needs(drive: str) -> None:
    package = recalculate(written(True)).package if drive == "blank" else run({"drive": drive}).package
    assert list(cut_off(package)) == []


def test_what_is_printed_fits_both_papers() -> None:
    for sheet in FORM.book:
        setup, margins = sheet.page_setup, sheet.page_margins
        columns = openpyxl.utils.range_boundaries(sheet.print_area.split("!")[-1].replace("$", ""))[2]
        assert columns is not None
        wide = sum(column_width(sheet, c) for c in range(1, columns + 1)) * setup.scale / 100.0
        for short, long in ((210.0, 297.0), (215.9, 279.4)):
            paper = long if setup.orientation == "landscape" else short
            assert wide <= paper - 25.4 * (margins.left + margins.right), sheet.title
        assert sheet.print_title_rows
        assert "&P" in sheet.oddFooter.right.text


def on_letter(package: bytes) -> bytes:
    """Return the workbook with its sheets set to Letter, every other part as it is."""
    import zipfile

    out = BytesIO()
    with zipfile.ZipFile(BytesIO(package)) as source, zipfile.ZipFile(out, "w") as target:
        for item in source.infolist():
            data = source.read(item)
            if item.filename.startswith("xl/worksheets/sheet"):
                assert b'paperSize="9"' in data
                data = data.replace(b'paperSize="9"', b'paperSize="1"')
            target.writestr(item, data)
    return out.getvalue()


def squeezed(text: str) -> str:
    """Return a text without blanks, in which lines that wrap and columns that part do not matter."""
    return re.sub(r"\s+", "", text)


def printed_texts(package: bytes) -> Iterator[str]:
    """Yield every text that stands in one line in the printed part of a sheet."""
    for sheet in openpyxl.load_workbook(BytesIO(package), data_only=True):
        for row in sheet[sheet.print_area.split("!")[-1].replace("$", "")]:
            for cell in row:
                wraps = cell.alignment.wrap_text
                if (
                    isinstance(cell.value, str)
                    and cell.value.strip()
                    and not wraps
                    and cell.style != "RS symbol"
                ):
                    yield cell.value
