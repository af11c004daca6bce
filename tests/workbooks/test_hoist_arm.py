"""The hoist arm against first principles, its inputs one by one, its unit cells, its blank form, its pages."""

from __future__ import annotations

import re
from collections.abc import Mapping
from pathlib import Path
from typing import Any

import hoist_first_principles as first
import numpy as np
import pytest
import template_checks as checks
from template_checks import agrees, in_si, shown
from text_room import cut_off

from rigidsheet.workbooks import Recalculation

COUNT = len(first.NAMES)
TORQUE, FIXED, EFFORT, PIN = 4, 4 + COUNT, 5 + COUNT, 5 + 2 * COUNT  # columns of the sheet Angles
STOP_LOWERING = first.NAMES.index("stop while lowering")
FORM = checks.FormWithParts("hoist-arm")
run = FORM.run


def model(changes: Mapping[str, Any], parts: Mapping[str, float] | None = None) -> first.Expected:
    """Return first principles for changed inputs by name and changed parts by cell."""
    return first.expected(FORM.si_inputs(changes), FORM.parts(parts))


def table(result: Recalculation, start: int, columns: int = COUNT) -> checks.Grid:
    """Return columns of the table over the angle, all of its rows."""
    return checks.table(result, "Angles", start, columns, first.STEPS + 1)


def compare(result: Recalculation, wanted: first.Expected) -> None:
    assert agrees(np.radians(table(result, 1, 1)[:, 0]), wanted.angles)
    assert agrees(table(result, TORQUE), wanted.torque)
    assert agrees(table(result, FIXED, 1)[:, 0], wanted.fixed[:, STOP_LOWERING])
    assert agrees(table(result, EFFORT), wanted.effort)
    assert agrees(table(result, PIN), wanted.pin)
    for name, demand in wanted.demands.items():
        assert in_si(result, f"demand_{name}") == pytest.approx(demand, rel=1e-9), name
    look, scale = wanted.look, np.abs(wanted.torque).max()
    for name, value in (
        ("torque", look.torque),
        ("torque_solved", look.torque),
        ("torque_fixed", look.fixed),
        ("error", look.fixed - look.torque),
    ):
        assert in_si(result, f"look_{name}") == pytest.approx(value, rel=1e-9, abs=1e-9 * scale), name
    assert in_si(result, "look_motor") == pytest.approx(look.effort, rel=1e-9, abs=1e-9)
    assert in_si(result, "look_pin_fx") == pytest.approx(look.pin[0], rel=1e-9, abs=1e-6)
    assert in_si(result, "look_pin_fy") == pytest.approx(look.pin[1], rel=1e-9)
    share = (look.fixed - look.torque) / abs(look.torque)
    assert in_si(result, "look_error_share") == pytest.approx(share, rel=1e-9, abs=1e-12)
    center = wanted.body.first / wanted.body.mass
    heights = center[0] * np.sin(wanted.angles) + center[1] * np.cos(wanted.angles)
    at = int(np.argmax(np.abs(heights)))
    lost = np.abs(wanted.fixed - wanted.torque)[at].max()
    assert in_si(result, "fixed_pivot_error") == pytest.approx(lost, rel=1e-9, abs=1e-9)


@pytest.mark.parametrize("stop_by", ["distance", "time"])
@pytest.mark.parametrize("in_stop", ["rolls on", "stops from forward", "stops from backward"])
def test_every_table_and_demand_is_that_of_first_principles(stop_by: str, in_stop: str) -> None:
    changes = {"stop_by": stop_by, "carriage_in_stop": in_stop}
    compare(run(changes), model(changes))


@pytest.mark.parametrize("case", first.NAMES)
def test_each_load_case_can_be_looked_at(case: str) -> None:
    changes = {"look_case": case, "look_angle": -12.0, "travel_acceleration": 0.7}
    compare(run(changes), model(changes))


def test_an_arm_past_the_upright_is_held_back_by_its_drive() -> None:
    """Above 90 degrees the load pulls the other way: the ramp that asks more turns the other way too."""
    changes = {"angle_from": 40, "angle_to": 140, "look_angle": 130, "look_case": "lower"}
    wanted = model(changes)
    assert wanted.look.torque < 0.0
    assert wanted.look.alpha < 0.0
    compare(run(changes), wanted)


def test_the_carriage_stop_by_hand() -> None:
    """Free body at 55 degrees, arm held, carriage braking from forward travel with 1.5^2 / (2 0.4) = 2.8125 m/s^2.

    Seen from the carriage, a force m 2.8125 acts forward on the mass center, which stands r_y above the pivot: it
    turns the arm clockwise, as the weight m g does at r_x in front. The drive holds both, counter-clockwise, so
    both add up. The pin pushes the arm back with m 2.8125 and up with m g. With the pivot taken as fixed only
    the weight is left.
    """
    result = run({"look_case": "carriage stop forward"})
    body = model({}).body
    x, y = body.first[0] / body.mass, body.first[1] / body.mass
    c, s = np.cos(np.radians(55.0)), np.sin(np.radians(55.0))
    weight, inertial = body.mass * first.G * (x * c - y * s), body.mass * 2.8125 * (x * s + y * c)
    assert in_si(result, "carriage_stop_deceleration") == pytest.approx(2.8125, rel=1e-12)
    assert in_si(result, "look_torque") == pytest.approx(weight + inertial, rel=1e-9)
    assert in_si(result, "look_error") == pytest.approx(-inertial, rel=1e-9)
    assert in_si(result, "look_pin_fx") == pytest.approx(-body.mass * 2.8125, rel=1e-9)
    assert in_si(result, "look_pin_fy") == pytest.approx(body.mass * first.G, rel=1e-9)
    assert in_si(result, "look_motor") == pytest.approx((weight + inertial) / 400.0, rel=1e-9)


def test_the_stop_while_lowering_from_the_path_of_each_point() -> None:
    """Accelerations by central differences of the places in time, so that no formula of a moving frame is used."""
    v = {name: FORM.value(name) for name in FORM.named}
    omega, alpha, pivot = -np.radians(20.0), np.radians(20.0) / 0.25, -(1.5**2) / (2 * 0.4)
    angle, body = np.radians(float(v["look_angle"])), model({}).body
    places, h = first.points(body), 1e-3

    def at(t: float) -> Any:
        carriage = np.array([0.5 * pivot * t**2, 0.0])
        return carriage + first.turned(places, angle + omega * t + 0.5 * alpha * t**2)

    a = (-at(2 * h) + 16 * at(h) - 30 * at(0.0) + 16 * at(-h) - at(-2 * h)) / (12 * h**2)
    push = body.mass / 4.0 * (a + np.array([0.0, first.G]))
    r = at(0.0)
    torque, force = float((r[:, 0] * push[:, 1] - r[:, 1] * push[:, 0]).sum()), push.sum(axis=0)
    result = run({"look_case": "stop while lowering"})
    assert in_si(result, "look_torque") == pytest.approx(torque, rel=1e-7)
    assert in_si(result, "look_pin_fx") == pytest.approx(force[0], rel=1e-7)
    assert in_si(result, "look_pin_fy") == pytest.approx(force[1], rel=1e-7)
    # Lowering, the arm gives power to the drive: the losses of the gearbox help to stop it.
    assert torque * omega < 0.0
    assert in_si(result, "look_power") == pytest.approx(torque * omega, rel=1e-7)
    assert in_si(result, "look_geared") == pytest.approx(torque * 0.9 / 400.0, rel=1e-7)


@pytest.mark.parametrize("name", FORM.numbers)
def test_each_input_changed_by_a_tenth_still_gives_first_principles(name: str) -> None:
    changes: dict[str, Any] = {name: FORM.value(name) * (0.9 if name == "efficiency" else 1.1)}
    if name == "stop_time":
        changes["stop_by"] = "time"
    compare(run(changes), model(changes))


@pytest.mark.parametrize("label", [k for k in FORM.labels if k not in ("part", "qty", "shape", "z")])
def test_parts_changed_by_a_tenth_still_give_first_principles(label: str) -> None:
    parts = FORM.part_changes(FORM.rows, [label])
    assert parts
    compare(run({f"Inputs!{cell}": value for cell, value in parts.items()}), model({}, parts))


def test_the_roll_up_is_that_of_first_principles() -> None:
    result, body = run({}), model({}).body
    center = body.first / body.mass
    about = body.second[0, 0] + body.second[1, 1]
    wanted = {
        "mass": body.mass, "x": center[0], "y": center[1], "inertia": about,
        "own": about - body.mass * (center[0] ** 2 + center[1] ** 2),
    }  # fmt: skip
    for name, value in wanted.items():
        assert in_si(result, f"arm_{name}") == pytest.approx(value, rel=1e-9), name
    alone = first.total([FORM.part(row) for row in FORM.rows[:-1]])
    assert in_si(result, "arm_mass_empty") == pytest.approx(alone.mass, rel=1e-12)
    assert in_si(result, "reflected_inertia") == pytest.approx(about / 400.0**2, rel=1e-9)
    assert in_si(result, "inertia_ratio") == pytest.approx(about / 400.0**2 / 0.012, rel=1e-9)


def test_no_peak_falls_between_the_rows_of_the_table() -> None:
    """A table 25 times as fine finds nothing above the sheet's by more than 0.1 %."""
    coarse = model({})
    before = first.STEPS
    try:
        first.STEPS = 25 * before
        fine = model({})
    finally:
        first.STEPS = before
    for name in ("torque", "effort", "pin"):
        a, b = (np.abs(getattr(one, name)).max(axis=0) for one in (coarse, fine))
        assert np.all(b <= 1.001 * a), name


def test_the_governing_cases_are_named() -> None:
    book, wanted = shown(run({}))["Checks"], model({})
    rows = {book.cell(r, 2).value: r for r in range(1, 60)}
    for label, grid in (
        ("Gearbox: torque at the pivot", wanted.torque),
        ("Motor: torque", np.where(np.arange(COUNT) < 2, wanted.effort, 0.0)),
        ("Brake: torque", np.where(np.arange(COUNT) < 2, 0.0, wanted.effort)),
        ("Pivot pin: load", wanted.pin),
    ):
        at, case = np.unravel_index(np.abs(grid).argmax(), grid.shape)
        assert book.cell(rows[label], 3).value == first.NAMES[case], label
        assert np.radians(book.cell(rows[label], 4).value) == pytest.approx(wanted.angles[at], abs=1e-9)


def test_what_a_fixed_pivot_loses_is_listed_for_each_load_case() -> None:
    book, wanted = shown(run({}))["Checks"], model({})
    head = next(r for r in range(1, 60) if book.cell(r, 6).value == "Pivot as fixed")
    assert np.radians(book.cell(head + 1, 4).value) == pytest.approx(wanted.angles[-1])  # highest mass center
    for k, name in enumerate(first.NAMES):
        row = head + 1 + k
        assert book.cell(row, 2).value == name
        true, fixed = wanted.torque[-1, k], wanted.fixed[-1, k]
        assert book.cell(row, 5).value == pytest.approx(true, rel=1e-9, abs=1e-8)
        assert book.cell(row, 6).value == pytest.approx(fixed, rel=1e-9, abs=1e-8)
        assert book.cell(row, 7).value == pytest.approx(fixed - true, rel=1e-9, abs=1e-8)
        share = book.cell(row, 8).value
        if abs(fixed - true) > 10.0 * abs(true):
            assert share == "over 10 x"
        else:
            assert share == pytest.approx((fixed - true) / abs(true), rel=1e-7, abs=1e-12)


def check_same_physics(result: Recalculation) -> None:
    rounding = ("demand_agreement", "demand_look")
    checks.check_same_physics(result, checks.quantities(run({})), rounding, lambda _: 1e-3)


@pytest.mark.parametrize("name", FORM.with_unit)
def test_each_unit_cell_can_be_switched_without_changing_the_physics(name: str) -> None:
    check_same_physics(run(FORM.in_other_unit(name)))


@pytest.mark.parametrize("label", FORM.labels[3:])
def test_each_unit_of_the_parts_list_can_be_switched(label: str) -> None:
    check_same_physics(run(FORM.column_in_other_unit(label)))


def test_the_units_of_all_results_can_be_switched_at_once() -> None:
    switched = FORM.results_in_other_units()
    assert len(switched) > 20
    result = run(switched)
    check_same_physics(result)
    units = {one.name: one.unit for one in result.results}
    assert (units["arm_mass"], units["look_torque"], units["look_power"]) == ("lb", "lbf*ft", "W")


@pytest.mark.parametrize(
    ("changes", "check"),
    [
        ({"gear_rating": "8 kN*m"}, "gearbox_torque"),
        ({"motor_rating": 21}, "motor_torque"),
        ({"motor_speed": "1300 rpm"}, "motor_speed"),
        ({"return_rating": "2 kW"}, "power_back"),
        ({"brake_rating": "30 N*m"}, "brake_torque"),
        ({"pin_rating": "9 kN"}, "pin"),
        ({"angle_from": -60, "look_angle": 0}, "step"),
        ({"look_angle": 81}, "look"),
    ],
)
def test_a_check_fails_when_its_capacity_does_not_suffice(changes: dict[str, Any], check: str) -> None:
    checks.check_verdict(run({}), run(changes), check)


def test_the_filled_form_has_no_warning_and_a_second_run_changes_no_byte() -> None:
    checks.check_second_run(FORM)


def test_only_built_ins_with_check_values_and_no_array_formula_or_boolean() -> None:
    checks.check_built_ins(FORM)


def test_the_working_shows_the_balance_with_numbers() -> None:
    lines = [str(row[1].value) for row in shown(run({}))["Working"].iter_rows(max_col=2)]
    wanted = model({})
    assert any(line.startswith("sum M_B = I_G alpha") for line in lines)
    total = next(line for line in lines if re.match(r"T = .* = [\d.]+ N\*m", line))
    assert float(total.split("=")[-1].split()[0]) == pytest.approx(wanted.look.torque, rel=1e-5)
    assert any("the load drives, losses help" in line for line in lines)
    held = [str(row[1].value) for row in shown(run({"look_case": "hold"}))["Working"].iter_rows(max_col=2)]
    assert any("the brake holds" in line for line in held)


def test_every_input_has_a_name_and_choices_are_lists() -> None:
    checks.check_inputs_named(FORM)
    checks.check_choices(FORM, "look_case", list(first.NAMES))


# what a person may type


def test_the_blank_form_refuses_input_by_input_and_nowhere_else() -> None:
    always = [name for name in FORM.named if name not in ("stop_distance", "stop_time")]
    checks.check_blank(FORM, always, working=1)  # the mass of the parts list


def test_the_blank_form_filled_in_again_gives_the_same_sheet() -> None:
    checks.check_filled_in_again(FORM)


@pytest.mark.parametrize(
    ("what", "value", "sheet", "words"),
    [
        ("unit of arm_speed", "kg", "Inputs", "kg"),
        ("unit of pin_rating", None, "Inputs", "unit"),
        ("angle_to", None, "Inputs", "blank"),
        ("gear_rating", "strong", "Inputs", "strong"),
        ("look_case", "fly", "Inputs", ""),
        ("arm_stop_time", 0, "Inputs", "must be greater than zero"),
        ("ratio", -400, "Inputs", "must be greater than zero"),
        ("efficiency", 1.2, "Inputs", "must be above 0 and at most 1"),
        ("angle_to", -45, "Inputs", "the highest angle must be above the lowest"),
        ("mass of a part", -1, "Working", "cradle"),
        ("shape of a part", "bix", "Working", "bix"),
    ],
)
def test_one_wrong_input_shows_its_reason_and_no_wall_of_errors(
    what: str, value: Any, sheet: str, words: str
) -> None:
    result = FORM.typed(what, value, part="cradle")
    checks.check_one_refusal(result, sheet)
    texts = [str(text) for (where, _), text in result.values.items() if where in ("Inputs", "Working")]
    assert any("missing or refused" in text for text in texts)
    assert any(words in text for text in [*texts, result.errors[0].reason])


# pages


def test_every_printed_text_has_the_room_that_it_needs() -> None:
    assert list(cut_off(run({}).package)) == []
    assert list(cut_off(run({"look_case": "carriage stop backward", "stop_by": "time"}).package)) == []
    assert list(cut_off(FORM.blank().package)) == []


@pytest.mark.parametrize("paper", ["A4", "Letter"])
def test_the_printed_pages_are_counted_and_show_their_texts(paper: str, tmp_path: Path) -> None:
    checks.check_pages(run({}).package, paper, tmp_path, "Hoist arm", 7)
