"""The swing gate against first principles, its inputs one by one, its unit cells, its blank form, its pages."""

from __future__ import annotations

from collections.abc import Mapping
from pathlib import Path
from typing import Any

import gate_first_principles as first
import numpy as np
import pytest
import template_checks as checks
from template_checks import in_si, named, shown
from text_room import cut_off

from rigidsheet.workbooks import Recalculation

NAMES = [case[0] for case in first.CASES]
HAND = ("hand_x", "hand_z", "hand_rating")
COLUMNS = {
    "x1": "F", "y1": "G", "x2": "H", "y2": "I", "axial": "J", "radial_1": "K", "radial_2": "L", "hold": "N",
    "gear": "P", "motor": "Q", "hand": "R", "brake": "S", "latch": "T",
}  # fmt: skip


FORM = checks.FormWithParts("swing-gate")
CASE_ROWS = [r for r in range(5, 20) if FORM.book["Cases"].cell(r, 2).value in NAMES]
run = FORM.run


def model(changes: Mapping[str, Any], parts: Mapping[str, float] | None = None) -> first.Expected:
    """Return first principles for changed inputs by name and changed parts by cell."""
    return first.expected(FORM.si_inputs(changes), FORM.parts(parts))


def compare(result: Recalculation, wanted: first.Expected, look: str = "person on the tip") -> None:
    """Every force of every case, every demand, the motion, and the case looked at, to 1e-9 of their scale."""
    for name, letter in COLUMNS.items():
        found = np.array([result.values["Cases", f"{letter}{row}"] for row in CASE_ROWS])
        values = np.array([case[name] for case in wanted.cases])
        scale = max(np.abs(values).max(), 1.0)
        assert np.abs(found - values).max() <= 1e-9 * scale, name
    for name, value in {**{f"demand_{k}": v for k, v in wanted.demands.items()}, **wanted.motion}.items():
        assert in_si(result, name) == pytest.approx(value, rel=1e-9, abs=1e-9), name
    results, case = named(result), wanted.cases[NAMES.index(look)]
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


@pytest.mark.parametrize(("rows", "labels"), FORM.part_sets())
def test_parts_changed_by_a_tenth_still_give_first_principles(rows: list[int], labels: list[str]) -> None:
    parts = FORM.part_changes(rows, labels)
    assert parts
    compare(run({f"Inputs!{cell}": value for cell, value in parts.items()}), model({}, parts))


# Rounding itself, as a part of the weight, of the moments or of the energy: compared with what is allowed.
ROUNDING = {"demand_agreement": 1e-4, "demand_residual": 1e-5, "demand_energy": 1e-6}


def check_same_physics(result: Recalculation, moved_by: str = "gearmotor") -> None:
    """Forces of the case looked at are compared with the scale of the weight."""
    usual, results = checks.quantities(run({"moved_by": moved_by})), named(result)
    for name, allowed in ROUNDING.items():
        assert results[name].value <= allowed, name
    weight = usual["look_weight"][0]
    checks.check_same_physics(
        result, usual, ROUNDING, lambda name: weight if name.startswith("look_") else 0.0
    )


@pytest.mark.parametrize("name", FORM.with_unit)
def test_each_unit_cell_can_be_switched_without_changing_the_physics(name: str) -> None:
    moved_by = moved_for(name)
    check_same_physics(run({"moved_by": moved_by, **FORM.in_other_unit(name)}), moved_by)


@pytest.mark.parametrize("label", FORM.labels[3:])
def test_each_unit_of_the_parts_list_can_be_switched(label: str) -> None:
    check_same_physics(run(FORM.column_in_other_unit(label)))


def test_the_units_of_all_results_can_be_switched_at_once() -> None:
    switched = FORM.results_in_other_units()
    assert len(switched) > 30
    result = run(switched)
    check_same_physics(result)
    units = {one.name: one.unit for one in result.results}
    assert units["mass"] == "lb"
    assert units["look_2x"] == "lbf"


def test_the_governing_case_is_named() -> None:
    """The case that governs each demand, and what holds the turn in it, as first principles find them."""
    labels = {
        "Lower hinge: radial load": "radial_1", "Upper hinge: radial load": "radial_2",
        "Thrust bearing: axial load": "axial", "Gearbox: torque at the hinge axis": "gear",
        "Motor: torque": "motor", "Brake: torque at the hinge axis": "brake", "Latch: force": "latch",
    }  # fmt: skip
    for changes in ({}, {"person": 0.1}):
        sheet = shown(run(changes))["Checks"]
        wanted = model(changes)
        rows = {sheet.cell(r, 2).value: r for r in range(1, 60)}
        for label, name in labels.items():
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
    checks.check_verdict(run({"moved_by": changes.get("moved_by", "gearmotor")}), run(changes), check)


def test_the_filled_form_has_no_warning_and_a_second_run_changes_no_byte() -> None:
    checks.check_second_run(FORM)


def test_only_built_ins_with_check_values_and_no_array_formula_or_boolean() -> None:
    checks.check_built_ins(FORM)


def test_every_input_has_a_name_and_choices_are_lists() -> None:
    checks.check_inputs_named(FORM)
    checks.check_choices(FORM, "look_case", NAMES)


# what a person may type


def test_the_blank_form_refuses_input_by_input_and_nowhere_else() -> None:
    drive = ("ratio", "efficiency", "gear_rating", "motor_rating", "motor_speed", "rotor")
    always = [n for n in FORM.named if n not in ("ramp_time", *HAND, *drive)]
    checks.check_blank(FORM, always, working=1)  # the mass of the parts list


def test_the_blank_form_filled_in_again_gives_the_same_sheet() -> None:
    checks.check_filled_in_again(FORM)


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
    ((what, value),) = inputs.items()
    result = FORM.typed(what, value, part="name board")
    checks.check_one_refusal(result, sheet)
    assert reason in result.errors[0].reason
    texts = [str(text) for (where, _), text in result.values.items() if where == "Inputs"]
    assert any("missing or refused" in text for text in texts)
    if what == "hinge_2_z":
        assert any("upper hinge must stand above" in text for text in texts)
    if what == "ramp_time":
        assert any("take longer than the run" in text for text in texts)


# pages


def test_every_printed_text_has_the_room_that_it_needs() -> None:
    assert list(cut_off(run({}).package)) == []
    assert list(cut_off(run({"moved_by": "hand", "look_case": "closing starts"}).package)) == []
    assert list(cut_off(FORM.blank().package)) == []


@pytest.mark.parametrize("paper", ["A4", "Letter"])
def test_the_printed_pages_are_counted_and_show_their_texts(paper: str, tmp_path: Path) -> None:
    checks.check_pages(run({}).package, paper, tmp_path, "Swing gate", 8)
