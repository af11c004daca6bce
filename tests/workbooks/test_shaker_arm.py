"""The shaker arm against first principles, its inputs one by one, its unit cells, its blank form, its pages."""

from __future__ import annotations

import re
from collections.abc import Mapping
from functools import cache
from io import BytesIO
from pathlib import Path
from typing import Any

import numpy as np
import openpyxl
import pytest
import shaker_first_principles as first
import template_checks as checks
from template_checks import FACTORS, agrees, shown
from template_checks import quantities as named
from text_room import cut_off

from rigidsheet.workbooks import Recalculation, cases, recalculate

KEYS = {
    "sensor": ("Arm", 9),
    "side": ("Arm", 14),
    "thrust": ("Arm", 19),
    "lift": ("Tray", 12),
    "slip": ("Tray", 17),
}
SI = {"sensor": first.G}  # the tables hold g


FORM = checks.Form("shaker-arm")
NUMBERS = FORM.numbers
run = FORM.run


@cache
def _model(changes: tuple[tuple[str, Any], ...]) -> first.Expected:
    return first.expected(FORM.si_inputs(dict(changes)))


def model(changes: Mapping[str, Any]) -> first.Expected:
    return _model(tuple(sorted(changes.items())))


def table(result: Recalculation, key: str) -> np.ndarray[Any, Any]:
    sheet, start = KEYS[key]
    letters = [openpyxl.utils.get_column_letter(start + k) for k in range(5)]
    return np.array([[result.values[sheet, f"{letter}{row}"] for letter in letters] for row in range(10, 71)])


def compare(results: checks.Quantities, wanted: first.Expected) -> None:
    """Compare demands, and the position looked at, with first principles."""
    for name, value in wanted.demands.items():
        number, unit = results[f"demand_{name}"]
        assert agrees(number * FACTORS[unit], value), name
    for name, (x, y) in wanted.look.items():
        (nx, _), (ny, _), (size, unit) = (results[f"look_{name}{part}"] for part in ("_x", "_y", ""))
        scale = float(np.hypot(x, y))
        found = (nx * FACTORS[unit], ny * FACTORS[unit], size * FACTORS[unit])
        assert agrees(found, (x, y, scale), max(scale, 1e-2)), name
    for name, value in wanted.scalars.items():
        number, unit = results[f"look_{name}"]
        assert agrees(number * FACTORS[unit], value, 1e-3), name


SITUATIONS: tuple[dict[str, Any], ...] = (
    {},
    {"sensor_reads": "motion only", "look_case": "overspeed", "look_angle": 200},
    {"look_case": "jam stop begins", "look_angle": -35, "guide": -30},
    {"look_case": "jam stop ends", "look_angle": 290, "tray_u": 190},
    {"look_case": "slow", "look_angle": 152, "speed_rated": -110, "speed_jam": -95},
)


@pytest.mark.parametrize("changes", SITUATIONS, ids=str)
def test_every_table_and_demand_is_that_of_first_principles(changes: dict[str, Any]) -> None:
    result, wanted = run(changes), model(changes)
    for key in KEYS:
        assert agrees(table(result, key) * SI.get(key, 1.0), wanted.tables[key]), key
    compare(named(result), wanted)
    gaps = [
        value for name, (value, _) in named(result).items() if name in ("demand_guide", "demand_agreement")
    ]
    assert len(gaps) == 2
    assert max(gaps) < 1e-9  # percent


def test_signs_of_one_case_by_hand() -> None:
    """Steady crank, free bodies by hand.

    At 270 deg the crank pin is lowest and its acceleration r omega^2 points up to the crank shaft. The sensor is
    close to A, so its housing pushes it up with more than its weight: it reads more than 1 g by nearly r omega^2.
    At 90 deg the pin is highest and accelerates down: foot 1, near A, carries less than at rest, foot 2, near B,
    which only moves along its guide, hardly less. At 180 deg A accelerates in +x and so does the tray: the mat
    pushes it in +x, that is along the arm from A to B.
    """
    omega = 110 * np.pi / 30
    rise = 0.03 * omega**2 / first.G
    result = run({"look_angle": 270})
    reading = named(result)["look_reading_y"][0]
    assert 1.0 + rise < reading < 1.0 + 1.15 * rise  # beyond A, so a little more than A itself
    top = named(run({"look_angle": 90}))
    assert 0.0 < top["look_foot_1"][0] < 0.8 * top["look_foot_1_rest"][0]
    assert 0.9 * top["look_foot_2_rest"][0] < top["look_foot_2"][0]
    assert named(run({"look_angle": 180}))["look_mat"][0] > 0.0
    assert named(run({"look_angle": 0}))["look_mat"][0] < 0.0


def test_instant_center_is_at_rest_and_lies_where_it_must() -> None:
    """The body point at C has no velocity; C is on the line of the crank and straight above or below B.

    Source: construction of the instant center from two directions of velocity (any textbook, from memory).
    """
    for angle in (40, 130, 200, 330):
        results = named(run({"look_angle": angle}))
        c = np.array([results[f"look_center_{k}"][0] for k in "xy"])
        other = np.array([results[f"look_center_2_{k}"][0] for k in "xy"])
        pin = np.array([results[f"look_pin_{k}"][0] for k in "xy"])
        b = results["look_far_place_x"][0]
        assert agrees(other, c)
        assert agrees(c[0], b)
        assert agrees((c[0] * pin[1] - c[1] * pin[0]) / np.linalg.norm(pin), 0.0, float(np.linalg.norm(c)))
        omega = results["look_arm_omega"][0]
        v = np.array([results[f"look_pin_velocity_{k}"][0] for k in "xy"]) * 1e3  # mm/s
        assert agrees(v + omega * np.array([-(c - pin)[1], (c - pin)[0]]), 0.0, float(np.linalg.norm(v)))


@pytest.mark.parametrize("changes", [{"look_angle": 90}, {"look_case": "jam stop ends"}], ids=str)
def test_an_arm_that_does_not_turn_has_no_instant_center(changes: dict[str, Any]) -> None:
    results = named(run(changes))
    assert [results[f"look_{name}"][0] for name in ("center", "center_x", "center_2")] == ["none"] * 3


# one input after the other: the workbook is loaded once, and each row of a table of load cases is worked out


@pytest.fixture(scope="module")
def answers() -> Mapping[str, cases.Answer]:
    """Each number raised by a tenth ("more crank"), and each unit cell switched ("unit crank")."""
    units = {name: f"Inputs!{FORM.unit_cell(name).coordinate}" for name in FORM.with_unit}
    columns = tuple(cases.Column(name, "") for name in (*NUMBERS, *units.values()))
    plain = {name: repr(FORM.value(name)) for name in NUMBERS}
    plain |= {cell: FORM.unit(name) for name, cell in units.items()}
    rows = []
    for name in NUMBERS:
        rows.append((f"more {name}", {**plain, name: repr(FORM.value(name) * 1.1)}))
        if name in units:
            switched = FORM.in_other_unit(name)
            rows.append((f"unit {name}", {**plain, **switched, name: repr(switched[name])}))
    texts = tuple((case, tuple(row.values())) for case, row in rows)
    table = cases.Table(columns, texts)
    return {one.case: one for one in cases.Cases(FORM.written(), table, {"look_case": "jam stop begins"})}


@pytest.mark.parametrize("name", NUMBERS)
def test_each_input_changed_by_a_tenth_still_gives_first_principles(
    answers: Mapping[str, cases.Answer], name: str
) -> None:
    answer = answers[f"more {name}"]
    assert not answer.error
    compare(answer.results, model({"look_case": "jam stop begins", name: FORM.value(name) * 1.1}))


def same_physics(results: checks.Quantities, wanted: checks.Quantities) -> None:
    """Every named result is the same quantity, and every verdict the same word, whatever unit it stands in."""
    wanted = {name: one for name, one in wanted.items() if not name.startswith("check_")}
    assert set(wanted) <= set(results)
    for name, (value, unit) in wanted.items():
        if isinstance(value, str):
            assert results[name][0] == value, name
        elif name not in ("demand_guide", "demand_agreement"):  # rounding only: compared elsewhere
            number = value * FACTORS[unit]
            vector = re.sub("_[xy]$", "", name)
            size, of = wanted.get(vector, (value, unit))
            scale = max(abs(number), abs(size * FACTORS[of or unit]), 1e-3)
            assert abs(results[name][0] * FACTORS[results[name][1]] - number) <= 1e-9 * scale, name


@pytest.mark.parametrize("name", FORM.with_unit)
def test_each_unit_cell_can_be_switched_without_changing_the_physics(
    answers: Mapping[str, cases.Answer], name: str
) -> None:
    answer = answers[f"unit {name}"]
    assert not answer.error
    assert set(answer.verdicts.values()) == {"OK"}
    same_physics(answer.results, named(run({"look_case": "jam stop begins"})))


def test_the_units_of_all_results_can_be_switched_at_once() -> None:
    switched = FORM.results_in_other_units()
    assert len(switched) > 30
    result = run(switched)
    found, wanted = named(result), named(run({}))
    assert found["look_sensor_acceleration"][1] == "ft/s^2"
    components = {name for name in wanted if re.search("_[xy]$", name)}  # their unit stands with the size
    for name in components:
        vector = name[:-2]
        ratio = FACTORS[wanted[vector][1]] / FACTORS[found[vector][1]]
        scale = max(abs(wanted[vector][0]), 1e-3)
        assert abs(found[name][0] - wanted[name][0] * ratio) <= 1e-9 * scale * ratio, name
    rest = (dict(item for item in one.items() if item[0] not in components) for one in (found, wanted))
    same_physics(*rest)


# peaks, load cases, checks


def test_no_peak_is_lost_between_two_rows_or_within_a_stop() -> None:
    """Every quarter degree, and at speeds within the stop too, nothing is above the table by more than 0.3 %."""
    v = FORM.si_inputs({})
    fine = first.over_the_turn(v, np.arange(0.0, 360.0, 0.25), first.motions(v))
    coarse = model({}).tables
    within = [(share**0.5 * v["speed_jam"], first.stop(v)) for share in np.linspace(0.0, 1.0, 9)]
    stopping = first.over_the_turn(v, np.arange(0.0, 360.0, 2.0), within)
    for key in KEYS:
        assert np.all(fine[key].max(axis=0) <= 1.003 * coarse[key].max(axis=0)), key
        assert stopping[key].max() <= 1.003 * coarse[key][:, 3:].max(), key


def test_the_governing_case_is_named() -> None:
    book = shown(run({}))["Checks"]
    rows = {book.cell(r, 2).value: r for r in range(1, 60)}
    for label, key in (
        ("Sensor: acceleration within its range", "sensor"),
        ("Tray feet: weight taken off, lifts off at 1", "lift"),
        ("Tray: friction needed against that of the mat", "slip"),
        ("Pusher: side load of its guide", "side"),
        ("Pusher: thrust of its cylinder", "thrust"),
    ):
        grid = model({}).tables[key]
        row, case = np.unravel_index(grid.argmax(), grid.shape)
        assert book.cell(rows[label], 3).value == first.CASES[case]
        assert book.cell(rows[label], 4).value == 6 * row


@pytest.mark.parametrize(
    ("changes", "check"),
    [
        ({"sensor_limit": "1.9 g"}, "sensor"),
        ({"speed_over": "170 rpm"}, "lift"),
        ({"foot_1": 250}, "lift"),
        ({"friction": 0.7}, "slip"),
        ({"guide_rating": "40 N"}, "side"),
        ({"thrust_rating": "35 N"}, "thrust"),
    ],
)
def test_a_check_fails_when_its_capacity_does_not_suffice(changes: dict[str, Any], check: str) -> None:
    good, bad = ({one.name: one.verdict for one in run(c).checks} for c in ({}, changes))
    assert set(good.values()) == {"OK"}
    assert bad[f"check_{check}"] == "FAIL"
    assert re.search(r"\d of 8 checks fail", str(named(run(changes))["verdict"][0]))


@pytest.mark.parametrize(
    ("sheet", "cell", "change"),
    [
        ("Arm", "AB10", "+0.001"),  # a part of the sensor's acceleration along the arm: 1 mm of offset
        ("Arm", "AE15", "+0.001"),  # across
        ("Arm", "AG20", "+0.001"),  # of the pusher's
        ("Arm", "AH25", "+0.001"),
        ("Tray", "E30", "*1.0001"),  # the acceleration of G itself where a stop begins
        ("Tray", "J65", "*1.0001"),
        ("Arm", "F74", "*1.0001"),  # the position looked at: angular acceleration of the arm
        ("Arm", "J74", "*1.0001"),  # what the sensor reads
        ("Tray", "M74", "*1.0001"),
        ("Tray", "R74", "*1.0001"),
    ],
)
def test_a_table_that_is_not_what_the_functions_give_fails_its_check(
    sheet: str, cell: str, change: str
) -> None:
    book = openpyxl.load_workbook(BytesIO(FORM.written()))
    formula = book[sheet][cell].value
    assert formula.startswith("=IF(")
    assert formula.endswith(',"")')
    book[sheet][cell].value = f'{formula[:-4]}{change},"")'
    out = BytesIO()
    book.save(out)
    result = recalculate(out.getvalue())
    assert {one.name: one.verdict for one in result.checks}["check_agreement"] == "FAIL"


def test_a_foot_without_weight_at_rest_and_a_flying_tray_fail() -> None:
    """With G beyond both feet one foot carries nothing at rest; at 250 rpm the tray leaves the arm."""
    assert table(run({"foot_1": 250}), "lift").min() == 99.0
    assert table(run({"speed_over": 250}), "slip").max() == 99.0


# the form


def test_the_filled_form_has_no_warning_and_a_second_run_changes_no_byte() -> None:
    checks.check_second_run(FORM)


def test_only_built_ins_with_check_values_and_no_array_formula_or_boolean() -> None:
    used = checks.check_built_ins(FORM)
    assert {"RB_VELOCITY_SLIDING", "RB_ACCELERATION_SLIDING", "RB_INSTANT_CENTER", "RB_REACTIONS"} <= used


def test_inputs_have_names_and_limits() -> None:
    rules = {}
    for rule in FORM.sheet.data_validations.dataValidation:
        for cell in str(rule.sqref).split():
            rules.setdefault(cell, rule)
    checks.check_inputs_named(FORM)
    for row in FORM.sheet.iter_rows(max_col=4):
        if row[3].style in ("RS input", "RS input text"):
            assert row[3].coordinate in rules, row[3].coordinate
    assert (rules[FORM.named["crank"]].operator, rules[FORM.named["crank"]].formula1) == ("greaterThan", "0")
    words = rules[FORM.named["look_case"]].formula1.strip('"').split(",")
    assert words == list(first.CASES)


def test_the_blank_form_refuses_input_by_input_and_nowhere_else() -> None:
    checks.check_blank(FORM, FORM.named, working=0)


def test_the_blank_form_filled_in_again_gives_the_same_sheet() -> None:
    checks.check_filled_in_again(FORM)


@pytest.mark.parametrize(
    ("inputs", "words"),
    [
        ({"arm": 45}, "too short"),
        ({"foot_2": 50}, "farther"),
        ({f"Inputs!{FORM.unit_cell('crank').coordinate}": "kg"}, ""),
        ({"sensor_reads": "both"}, ""),
        ({"tray_mass": -1}, ""),
    ],
    ids=str,
)
def test_a_wrong_input_stops_the_sheet_without_a_wall_of_errors(inputs: dict[str, Any], words: str) -> None:
    result = recalculate(FORM.written(), inputs=inputs)
    assert len([failure for failure in result.errors if failure.source is None]) == 1
    assert {failure.sheet for failure in result.errors} == {"Inputs"}
    assert not result.checks
    texts = [str(value) for (sheet, _), value in result.values.items() if sheet == "Inputs"]
    assert any(words in text for text in texts)
    assert any("1 inputs are missing or refused" in text for text in texts)


# pages


@pytest.mark.parametrize("form", ["filled", "far", "blank"])
def test_every_text_has_the_room_that_it_needs(form: str) -> None:
    far = {"look_case": "jam stop begins", "look_angle": 222, "crank": 145.5, "sensor_u": -180}
    result = FORM.blank() if form == "blank" else run(far if form == "far" else {})
    assert list(cut_off(result.package)) == []


@pytest.fixture(scope="module")
def folder(tmp_path_factory: pytest.TempPathFactory) -> Path:
    return tmp_path_factory.mktemp("pages")


@pytest.mark.parametrize("paper", ["A4", "Letter"])
def test_the_printed_pages_are_eight_and_nothing_is_cut_off(folder: Path, paper: str) -> None:
    checks.check_pages(run({}).package, paper, folder, "Shaker arm", 8)
