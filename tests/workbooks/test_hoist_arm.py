"""The hoist arm against first principles, its inputs one by one, its unit cells, its blank form, its pages."""

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

import hoist_first_principles as first
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
    "s": 1.0, "ms": 1e-3, "N": 1.0, "kN": 1e3, "lbf": POUND * first.G, "N*m": 1.0, "kN*m": 1e3,
    "lbf*ft": POUND * first.G * FOOT, "rpm": np.pi / 30, "rad/s": 1.0, "deg/s": np.pi / 180, "kg*m^2": 1.0,
    "lb*ft^2": POUND * FOOT**2, "kg/m^3": 1.0, "lb/in^3": POUND / (FOOT / 12) ** 3, "rad/s^2": 1.0,
    "deg/s^2": np.pi / 180, "m/s^2": 1.0, "ft/s^2": FOOT, "m/s": 1.0, "ft/s": FOOT, "W": 1.0, "kW": 1e3,
    "ft*lbf/s": POUND * first.G * FOOT,
}  # fmt: skip
OTHER = {
    "mm": "in", "m": "ft", "kg": "lb", "deg": "rad", "s": "ms", "kN": "lbf", "N": "lbf", "N*m": "lbf*ft",
    "kN*m": "lbf*ft", "rpm": "rad/s", "kg*m^2": "lb*ft^2", "kg/m^3": "lb/in^3", "deg/s": "rad/s",
    "deg/s^2": "rad/s^2", "m/s^2": "ft/s^2", "m/s": "ft/s", "kW": "W",
}  # fmt: skip
COUNT = len(first.NAMES)
TORQUE, FIXED, EFFORT, PIN = 4, 4 + COUNT, 5 + COUNT, 5 + 2 * COUNT  # columns of the sheet Angles
STOP_LOWERING = first.NAMES.index("stop while lowering")
PAGES = 7


@cache
def written(blank: bool = False) -> bytes:
    import tempfile

    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "hoist-arm.xlsx"
        TEMPLATES["hoist-arm"].write(path, blank)
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


def in_si(result: Recalculation, name: str) -> float:
    one = named(result)[name]
    return float(one.value) * FACTORS.get(one.unit, 1.0)


def table(result: Recalculation, start: int, columns: int = COUNT) -> np.ndarray[Any, Any]:
    """Return columns of the table over the angle, all of its rows."""
    values = result.values
    rows = sorted(
        int(cell[1:])
        for where, cell in values
        if where == "Angles" and re.fullmatch(r"A\d+", cell) and isinstance(values[where, cell], float)
    )[: first.STEPS + 1]
    letters = [openpyxl.utils.get_column_letter(start + k) for k in range(columns)]
    return np.array([[values["Angles", f"{letter}{row}"] for letter in letters] for row in rows])


def agrees(found: Any, wanted: Any, relative: float = 1e-9) -> bool:
    """Compare with the scale of the wanted numbers."""
    wanted = np.asarray(wanted)
    return bool(np.max(np.abs(np.asarray(found) - wanted)) <= relative * np.max(np.abs(wanted)))


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
    factor = 0.9 if label in ("t", "ID") else 1.1
    parts = {
        FORM.cell(row, label): FORM.part(row)[label] * factor for row in FORM.rows if FORM.part(row)[label]
    }
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


def shown(result: Recalculation) -> Any:
    """Return the workbook with the values that were written into it."""
    return openpyxl.load_workbook(BytesIO(result.package), data_only=True)


@cache
def unswitched() -> dict[str, tuple[Any, str]]:
    return {one.name: (one.value, one.unit) for one in run({}).results}


def same_physics(result: Recalculation) -> None:
    """Every named result is the same quantity, and every verdict the same word, whatever unit it stands in."""
    for one in result.results:
        value, unit = unswitched()[one.name]
        if isinstance(value, str):
            assert one.value == value, one.name
        elif one.name not in ("demand_agreement", "demand_look"):  # nothing but rounding
            wanted = value * FACTORS.get(unit, 1.0)
            assert one.value * FACTORS.get(one.unit, 1.0) == pytest.approx(wanted, rel=1e-9), one.name


@pytest.mark.parametrize("name", [name for name in FORM.numbers if FORM.unit(name)])
def test_each_unit_cell_can_be_switched_without_changing_the_physics(name: str) -> None:
    unit, place = FORM.unit(name), FORM.unit_cell(name)
    value = FORM.value(name) * FACTORS[unit] / FACTORS[OTHER[unit]]
    same_physics(run({f"Inputs!{place.coordinate}": OTHER[unit], name: value}))


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
    assert len(boxed) > 20
    result = run({f"Working!{cell.coordinate}": OTHER[cell.value] for cell in boxed})
    same_physics(result)
    switched = {one.name: one.unit for one in result.results}
    assert (switched["arm_mass"], switched["look_torque"], switched["look_power"]) == ("lb", "lbf*ft", "W")


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
    assert unswitched()[f"check_{check}"][0] == "OK"
    bad = run(changes)
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
    for row in FORM.sheet.iter_rows(max_col=4):
        if row[3].style in ("RS input", "RS input text"):
            assert row[3].coordinate in FORM.named.values(), row[3].coordinate
    lists = [rule for rule in FORM.sheet.data_validations.dataValidation if rule.type == "list"]
    look = next(rule for rule in lists if FORM.named["look_case"] in str(rule.sqref))
    assert look.formula1.strip('"').split(",") == list(first.NAMES)


# what a person may type


def test_the_blank_form_refuses_input_by_input_and_nowhere_else() -> None:
    result = recalculate(written(True))
    assert all(failure.reason for failure in result.errors)
    places = {(failure.sheet, failure.cell) for failure in result.errors}
    always = [name for name in FORM.named if name not in ("stop_distance", "stop_time")]
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
    cradle = next(row for row in FORM.rows if FORM.part(row)["part"] == "cradle")
    if what.startswith("unit of "):
        cell = FORM.unit_cell(what.removeprefix("unit of ")).coordinate
    elif what.endswith(" of a part"):
        cell = FORM.cell(cradle, what.removesuffix(" of a part"))
    else:
        cell = FORM.named[what]
    book = openpyxl.load_workbook(BytesIO(written()))
    book["Inputs"][cell] = value
    out = BytesIO()
    book.save(out)
    result = recalculate(out.getvalue())
    assert 1 <= len(result.errors) <= 2
    assert result.errors[0].sheet == sheet
    assert not result.checks
    texts = [str(text) for (where, _), text in result.values.items() if where in ("Inputs", "Working")]
    assert any("missing or refused" in text for text in texts)
    assert any(words in text for text in [*texts, result.errors[0].reason])


# pages


def test_every_printed_text_has_the_room_that_it_needs() -> None:
    assert list(cut_off(run({}).package)) == []
    assert list(cut_off(run({"look_case": "carriage stop backward", "stop_by": "time"}).package)) == []
    assert list(cut_off(recalculate(written(True)).package)) == []


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


@pytest.mark.parametrize("paper", ["A4", "Letter"])
def test_the_printed_pages_are_counted_and_show_their_texts(paper: str, tmp_path: Path) -> None:
    program = shutil.which("soffice") or shutil.which("libreoffice")
    if program is None or shutil.which("pdftotext") is None:
        assert not os.environ.get("CI"), "LibreOffice and pdftotext must be there"
        pytest.skip("LibreOffice and pdftotext are not both on this machine")
    package = run({}).package
    (tmp_path / "arm.xlsx").write_bytes(on_letter(package) if paper == "Letter" else package)
    profile = f"-env:UserInstallation={(tmp_path / 'profile').as_uri()}"
    command = [program, profile, "--headless", "--convert-to", "pdf", "--outdir", str(tmp_path)]
    for _ in range(2):  # a fresh profile may end its first start without work
        subprocess.run([*command, str(tmp_path / "arm.xlsx")], capture_output=True, timeout=180, check=False)
        if (tmp_path / "arm.pdf").exists():
            break
    read = ["pdftotext", "-layout", str(tmp_path / "arm.pdf"), "-"]
    pages = subprocess.run(read, capture_output=True, check=True, timeout=60).stdout.decode().split("\f")[:-1]
    assert len(pages) == PAGES
    whole = re.sub(r"\s+", "", "".join(pages))
    assert "###" not in whole
    assert "#NAME" not in whole
    for i, page in enumerate(pages, 1):
        assert f"Page {i} of {PAGES}" in page
        assert "Hoist arm" in page
    for sheet in openpyxl.load_workbook(BytesIO(package), data_only=True):
        for row in sheet[sheet.print_area.split("!")[-1].replace("$", "")]:
            for cell in row:
                if isinstance(cell.value, str) and cell.style != "RS symbol" and not cell.alignment.wrap_text:
                    assert re.sub(r"\s+", "", cell.value) in whole, cell.value
