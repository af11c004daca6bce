"""The bin tipper against first principles, its inputs one by one, its unit cells, its blank form, its pages."""

from __future__ import annotations

from collections.abc import Mapping
from pathlib import Path
from typing import Any

import numpy as np
import openpyxl
import pytest
import template_checks as checks
import template_first_principles as first
from template_checks import agrees, in_si, named, shown
from text_room import column_width, cut_off

from rigidsheet.workbooks import Recalculation, recalculate

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


FORM = checks.FormWithParts("bin-tipper")
run = FORM.run


def model(changes: Mapping[str, Any], parts: Mapping[str, float] | None = None) -> first.Expected:
    """Return first principles for changed inputs by name and changed parts by cell."""
    rows = FORM.parts(parts)
    return first.expected(FORM.si_inputs(changes), rows[:-1], rows[-1])


def table(result: Recalculation, sheet: str, start: int, count: int = len(CASES)) -> checks.Grid:
    """Return columns of a table over the tilt from a column on, one for each load case when not told."""
    return checks.table(result, sheet, start, count, 2 * first.RAMP + first.STEADY + 3)


def compare(result: Recalculation, wanted: first.Expected, drive: str) -> None:
    assert agrees(table(result, "Tilt", 10), wanted.torque)
    assert agrees(table(result, "Hinges", 2), wanted.effort)
    assert agrees(table(result, "Hinges", 8), wanted.hinge_1)
    assert agrees(table(result, "Hinges", 14), wanted.hinge_2)
    results = named(result)
    for name, demand in wanted.demands.items():
        assert agrees(in_si(result, f"demand_{name}"), demand), name
    case = WHOLE.index(shown(result)["Inputs"][FORM.named["look_case"]].value)
    torque, effort, hinge_1, hinge_2 = wanted.look[case]
    looked = (torque, effort if drive == "cylinder" else torque, hinge_1, hinge_2)
    for name, value in zip(("torque", "drive", "hinge_1", "hinge_2"), looked, strict=True):
        assert agrees(results[f"look_{name}"].value, value), name


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


@pytest.mark.parametrize(("rows", "labels"), FORM.part_sets())
def test_parts_changed_by_a_tenth_still_give_first_principles(rows: list[int], labels: list[str]) -> None:
    parts = FORM.part_changes(rows, labels)
    assert parts
    inputs = {"drive": "cylinder", **{f"Inputs!{cell}": value for cell, value in parts.items()}}
    compare(run(inputs), model({"drive": "cylinder"}, parts), "cylinder")


def check_same_physics(result: Recalculation, drive: str) -> None:
    usual = checks.quantities(run({"drive": drive}))
    checks.check_same_physics(
        result, usual, ("demand_agreement",), lambda name: 1e-6 if name == "demand_energy" else 0.0
    )


@pytest.mark.parametrize("name", FORM.with_unit)
def test_each_unit_cell_can_be_switched_without_changing_the_physics(name: str) -> None:
    drive = drive_of(name)
    check_same_physics(run({"drive": drive, **FORM.in_other_unit(name)}), drive)


@pytest.mark.parametrize("label", FORM.labels[3:])
def test_each_unit_of_the_parts_list_can_be_switched(label: str) -> None:
    check_same_physics(run({"drive": "gearbox", **FORM.column_in_other_unit(label)}), "gearbox")


def test_the_units_of_all_results_can_be_switched_at_once() -> None:
    switched = FORM.results_in_other_units()
    assert len(switched) > 15
    result = run({"drive": "gearbox", **switched})
    check_same_physics(result, "gearbox")
    units = {one.name: one.unit for one in result.results}
    assert units["mass_full"] == "lb"
    assert units["steady_speed"] == "rad/s"


def test_the_roll_up_is_that_of_first_principles() -> None:
    parts, result = FORM.parts(), run({})
    for word, body in (("empty", first.total(parts[:-1])), ("full", first.total(parts))):
        center = body.first / body.mass
        about = np.trace(body.second) * np.eye(3) - body.second
        offset = body.mass * (center[0] ** 2 + center[1] ** 2)
        wanted = {
            "mass": body.mass, "x": center[0], "y": center[1], "z": center[2], "izz": about[2, 2] - offset,
            "izz_hinge": about[2, 2], "izx_hinge": about[2, 0], "iyz_hinge": about[1, 2],
        }  # fmt: skip
        for name, value in wanted.items():
            assert in_si(result, f"{name}_{word}") == pytest.approx(value, rel=1e-9, abs=1e-12), name


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
        tilts = np.array([motion[0] for motion in first.rows(FORM.si_inputs({}))])
        at = tilts[np.abs(grid[:, case]).argmax()]
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
    checks.check_verdict(run({"drive": changes.get("drive", "gearbox")}), run(changes), check)


def test_the_filled_form_has_no_warning_and_a_second_run_changes_no_byte() -> None:
    checks.check_second_run(FORM)


def test_only_built_ins_with_check_values_and_no_array_formula_or_boolean() -> None:
    checks.check_built_ins(FORM)


def test_inputs_results_and_checks_have_names() -> None:
    names = set(FORM.book.defined_names)
    assert {"sheet_drawing", "sheet_revision", "sheet_date", "sheet_by", "sheet_checked"} <= names
    checks.check_inputs_named(FORM)


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
    drives = (*ONLY["cylinder"], *ONLY["gearbox"])
    always = [name for name in FORM.named if name not in ("stop_angle", "stop_time", *drives)]
    checks.check_blank(FORM, always, working=2)  # the two masses of the parts list


def test_the_blank_form_filled_in_again_gives_the_same_sheet() -> None:
    checks.check_filled_in_again(FORM)


def test_one_wrong_input_shows_its_reason_beside_it_and_no_wall_of_errors() -> None:
    place = FORM.sheet[FORM.named["tilt_end"]]
    result = recalculate(FORM.written(), inputs={f"Inputs!{place.offset(0, 1).coordinate}": "kg"})
    assert [failure.cell for failure in result.errors] == [place.offset(0, 2).coordinate]
    assert "kg" in result.errors[0].reason
    parts = recalculate(FORM.written(), inputs={f"Inputs!{FORM.cell(FORM.rows[0], 'shape')}": "bix"})
    assert {failure.sheet for failure in parts.errors} == {"Working"}
    assert len(parts.errors) == 2


# pages


@pytest.fixture(scope="module")
def folder(tmp_path_factory: pytest.TempPathFactory) -> Path:
    return tmp_path_factory.mktemp("pages")


@pytest.mark.parametrize("paper", ["A4", "Letter"])
@pytest.mark.parametrize("drive", DRIVES)
def test_the_printed_pages_are_nine_and_nothing_is_cut_off(folder: Path, paper: str, drive: str) -> None:
    checks.check_pages(run({"drive": drive}).package, paper, folder, "Bin tipper", 9)


@pytest.mark.parametrize("drive", [*DRIVES, "blank"])
def test_every_text_has_the_room_that_it_needs(drive: str) -> None:
    result = FORM.blank() if drive == "blank" else run({"drive": drive})
    assert list(cut_off(result.package)) == []


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
