"""The shaker arm against first principles, its inputs one by one, its unit cells, its blank form, its pages."""

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
import shaker_first_principles as first
from text_room import cut_off

from rigidsheet.workbooks import Recalculation, cases, recalculate
from rigidsheet.workbooks.templates import TEMPLATES

# Exact or defined factors to SI (NIST SP 811, appendix B; from memory).
FOOT, POUND = 0.3048, 0.45359237
FACTORS: dict[str, float] = {
    "mm": 1e-3, "m": 1.0, "in": FOOT / 12, "kg": 1.0, "lb": POUND, "deg": np.pi / 180, "rad": 1.0, "N": 1.0,
    "lbf": POUND * first.G, "rpm": np.pi / 30, "rad/s": 1.0, "deg/s": np.pi / 180, "m/s": 1.0, "ft/s": FOOT,
    "m/s^2": 1.0, "ft/s^2": FOOT, "g": first.G, "rad/s^2": 1.0, "deg/s^2": np.pi / 180, "kg*m^2": 1.0,
    "lb*ft^2": POUND * FOOT**2, "N*m": 1.0, "lbf*ft": POUND * first.G * FOOT, "": 1.0, "%": 0.01,
}  # fmt: skip
OTHER = {
    "mm": "in", "kg": "lb", "deg": "rad", "N": "lbf", "rpm": "rad/s", "rad/s": "deg/s", "m/s": "ft/s",
    "m/s^2": "ft/s^2", "g": "m/s^2", "rad/s^2": "deg/s^2", "kg*m^2": "lb*ft^2", "N*m": "lbf*ft",
}  # fmt: skip
KEYS = {
    "sensor": ("Arm", 9),
    "side": ("Arm", 14),
    "thrust": ("Arm", 19),
    "lift": ("Tray", 12),
    "slip": ("Tray", 17),
}
SI = {"sensor": first.G}  # the tables hold g


@cache
def written(blank: bool = False) -> bytes:
    import tempfile

    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "shaker-arm.xlsx"
        TEMPLATES["shaker-arm"].write(path, blank)
        return path.read_bytes()


BOOK = openpyxl.load_workbook(BytesIO(written()))
SHEET = BOOK["Inputs"]
NAMED = {
    name: defined.attr_text.split("!")[1].replace("$", "")
    for name, defined in BOOK.defined_names.items()
    if defined.attr_text.startswith("Inputs!") and not name.startswith(("sheet_", "inputs_"))
}
VALUES = {name: SHEET[cell].value for name, cell in NAMED.items()}
UNITS = {name: SHEET[cell].offset(0, 1).value or "" for name, cell in NAMED.items()}
NUMBERS = [name for name, value in VALUES.items() if not isinstance(value, str)]


def si_inputs(changes: Mapping[str, Any]) -> dict[str, Any]:
    """Return every input in SI, words as they stand, with changes in the unit of the form."""
    out = {}
    for name, value in {**VALUES, **changes}.items():
        out[name] = value if isinstance(value, str) else value * FACTORS[UNITS[name]]
    return out


@cache
def _model(changes: tuple[tuple[str, Any], ...]) -> first.Expected:
    return first.expected(si_inputs(dict(changes)))


def model(changes: Mapping[str, Any]) -> first.Expected:
    return _model(tuple(sorted(changes.items())))


@cache
def _run(inputs: tuple[tuple[str, Any], ...]) -> Recalculation:
    result = recalculate(written(), inputs=dict(inputs))
    assert not result.errors, result.errors[:3]
    return result


def run(inputs: Mapping[str, Any]) -> Recalculation:
    return _run(tuple(sorted(inputs.items())))


Quantities = Mapping[str, tuple[Any, str]]


def named(result: Recalculation) -> dict[str, tuple[Any, str]]:
    return {one.name: (one.value, one.unit) for one in result.results}


def table(result: Recalculation, key: str) -> np.ndarray[Any, Any]:
    sheet, start = KEYS[key]
    letters = [openpyxl.utils.get_column_letter(start + k) for k in range(5)]
    return np.array([[result.values[sheet, f"{letter}{row}"] for letter in letters] for row in range(10, 71)])


def agrees(found: Any, wanted: Any, scale: float = 0.0, relative: float = 1e-9) -> bool:
    """Compare with the scale of the wanted numbers, or a larger one."""
    wanted = np.asarray(wanted, dtype=float)
    return bool(np.max(np.abs(np.asarray(found) - wanted)) <= relative * max(scale, np.max(np.abs(wanted))))


def compare(results: Quantities, wanted: first.Expected) -> None:
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


def other_unit(name: str) -> str:
    """Return the number of an input in another unit, as a text without a unit."""
    unit = UNITS[name]
    return repr(VALUES[name] * FACTORS[unit] / FACTORS[OTHER[unit]])


@pytest.fixture(scope="module")
def answers() -> Mapping[str, cases.Answer]:
    """Each number raised by a tenth ("more crank"), and each unit cell switched ("unit crank")."""
    united = [name for name in NUMBERS if UNITS[name]]
    units = {name: f"Inputs!{SHEET[NAMED[name]].offset(0, 1).coordinate}" for name in united}
    columns = tuple(cases.Column(name, "") for name in (*NUMBERS, *units.values()))
    plain = [repr(VALUES[name]) for name in NUMBERS]
    rows = []
    for i, name in enumerate(NUMBERS):
        texts = [*plain, *(UNITS[one] for one in united)]
        rows.append((f"more {name}", (*texts[:i], repr(VALUES[name] * 1.1), *texts[i + 1 :])))
        if name in united:
            k = len(NUMBERS) + united.index(name)
            texts[i], texts[k] = other_unit(name), OTHER[UNITS[name]]
            rows.append((f"unit {name}", tuple(texts)))
    table = cases.Table(columns, tuple(rows))
    return {one.case: one for one in cases.Cases(written(), table, {"look_case": "jam stop begins"})}


@pytest.mark.parametrize("name", NUMBERS)
def test_each_input_changed_by_a_tenth_still_gives_first_principles(
    answers: Mapping[str, cases.Answer], name: str
) -> None:
    answer = answers[f"more {name}"]
    assert not answer.error
    compare(answer.results, model({"look_case": "jam stop begins", name: VALUES[name] * 1.1}))


def same_physics(results: Quantities, wanted: Quantities) -> None:
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


@pytest.mark.parametrize("name", [name for name in NUMBERS if UNITS[name]])
def test_each_unit_cell_can_be_switched_without_changing_the_physics(
    answers: Mapping[str, cases.Answer], name: str
) -> None:
    answer = answers[f"unit {name}"]
    assert not answer.error
    assert set(answer.verdicts.values()) == {"OK"}
    same_physics(answer.results, named(run({"look_case": "jam stop begins"})))


def test_the_units_of_all_results_can_be_switched_at_once() -> None:
    boxed = [row[4] for row in BOOK["Working"].iter_rows(max_col=5) if row[4].style == "RS unit"]
    assert len(boxed) > 30
    result = run({f"Working!{cell.coordinate}": OTHER[cell.value] for cell in boxed})
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
    v = si_inputs({})
    fine = first.over_the_turn(v, np.arange(0.0, 360.0, 0.25), first.motions(v))
    coarse = model({}).tables
    within = [(share**0.5 * v["speed_jam"], first.stop(v)) for share in np.linspace(0.0, 1.0, 9)]
    stopping = first.over_the_turn(v, np.arange(0.0, 360.0, 2.0), within)
    for key in KEYS:
        assert np.all(fine[key].max(axis=0) <= 1.003 * coarse[key].max(axis=0)), key
        assert stopping[key].max() <= 1.003 * coarse[key][:, 3:].max(), key


def test_the_governing_case_is_named() -> None:
    book = openpyxl.load_workbook(BytesIO(run({}).package), data_only=True)["Checks"]
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
    book = openpyxl.load_workbook(BytesIO(written()))
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
    result = run({})
    assert result.warnings == ()
    assert result.holds
    again = recalculate(result.package)
    assert not again.changed
    assert again.package == result.package


def test_only_built_ins_with_check_values_and_no_array_formula_or_boolean() -> None:
    from rigidsheet.workbooks.evaluation.builtins import VERIFIED_FUNCTIONS

    used = set()
    for sheet in BOOK:
        for row in sheet.iter_rows():
            for cell in row:
                assert not isinstance(cell.value, bool)
                assert cell.data_type != "a"
                if cell.data_type == "f":
                    used |= set(re.findall(r"([A-Z][A-Z0-9_.]*)\(", re.sub(r'"[^"]*"', "", str(cell.value))))
    assert {name for name in used if not name.startswith("RB_")} <= VERIFIED_FUNCTIONS
    assert {"RB_VELOCITY_SLIDING", "RB_ACCELERATION_SLIDING", "RB_INSTANT_CENTER", "RB_REACTIONS"} <= used
    assert not any(isinstance(value, bool) for value in run({}).values.values())


def test_inputs_have_names_and_limits() -> None:
    rules = {}
    for rule in SHEET.data_validations.dataValidation:
        for cell in str(rule.sqref).split():
            rules.setdefault(cell, rule)
    for row in SHEET.iter_rows(max_col=4):
        if row[3].style in ("RS input", "RS input text"):
            assert row[3].coordinate in NAMED.values(), row[3].coordinate
            assert row[3].coordinate in rules, row[3].coordinate
    assert (rules[NAMED["crank"]].operator, rules[NAMED["crank"]].formula1) == ("greaterThan", "0")
    words = rules[NAMED["look_case"]].formula1.strip('"').split(",")
    assert words == list(first.CASES)


def test_the_blank_form_refuses_input_by_input_and_nowhere_else() -> None:
    result = recalculate(written(True))
    assert all(failure.source is None and failure.reason for failure in result.errors)
    beside = {("Inputs", SHEET[cell].offset(0, 2).coordinate) for cell in NAMED.values()}
    assert {(failure.sheet, failure.cell) for failure in result.errors} == beside
    assert "missing" in str(named(result)["verdict"][0])
    assert not result.checks


def test_the_blank_form_filled_in_again_gives_the_same_sheet() -> None:
    inputs = {f"Inputs!{cell}": VALUES[name] for name, cell in NAMED.items()}
    result = recalculate(written(True), inputs=inputs)
    assert not result.errors
    assert dict(result.values) == dict(run({}).values)


@pytest.mark.parametrize(
    ("inputs", "words"),
    [
        ({"arm": 45}, "too short"),
        ({"foot_2": 50}, "farther"),
        ({f"Inputs!{SHEET[NAMED['crank']].offset(0, 1).coordinate}": "kg"}, ""),
        ({"sensor_reads": "both"}, ""),
        ({"tray_mass": -1}, ""),
    ],
    ids=str,
)
def test_a_wrong_input_stops_the_sheet_without_a_wall_of_errors(inputs: dict[str, Any], words: str) -> None:
    result = recalculate(written(), inputs=inputs)
    assert len([failure for failure in result.errors if failure.source is None]) == 1
    assert {failure.sheet for failure in result.errors} == {"Inputs"}
    assert not result.checks
    shown = [str(value) for (sheet, _), value in result.values.items() if sheet == "Inputs"]
    assert any(words in text for text in shown)
    assert any("1 inputs are missing or refused" in text for text in shown)


# pages


@pytest.mark.parametrize("form", ["filled", "far", "blank"])
def test_every_text_has_the_room_that_it_needs(form: str) -> None:
    far = {"look_case": "jam stop begins", "look_angle": 222, "crank": 145.5, "sensor_u": -180}
    package = (
        recalculate(written(True)).package if form == "blank" else run(far if form == "far" else {}).package
    )
    assert list(cut_off(package)) == []


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
    done = subprocess.run(
        ["pdftotext", "-layout", str(book.with_suffix(".pdf")), "-"],
        capture_output=True,
        check=True,
        timeout=60,
    )
    return done.stdout.decode().split("\f")[:-1]


@pytest.mark.parametrize("paper", ["A4", "Letter"])
def test_the_printed_pages_are_eight_and_nothing_is_cut_off(office: tuple[str, Path], paper: str) -> None:
    package = run({}).package if paper == "A4" else on_letter(run({}).package)
    pages = pdf_pages(office, package, paper)
    assert len(pages) == 8
    whole = squeezed("\n".join(pages))
    assert "###" not in whole
    assert "#NAME" not in whole
    for i, page in enumerate(pages, 1):
        assert f"Page {i} of 8" in page
        assert "Shaker arm" in page
        assert "Drawing" in page
    for text in printed_texts(package):
        assert squeezed(text) in whole, text


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
    """Return a text without blanks, in which columns that part do not matter."""
    return re.sub(r"\s+", "", text)


def printed_texts(package: bytes) -> Iterator[str]:
    """Yield every text that stands in one line in the printed part of a sheet."""
    for sheet in openpyxl.load_workbook(BytesIO(package), data_only=True):
        for row in sheet[sheet.print_area.split("!")[-1].replace("$", "")]:
            for cell in row:
                words = isinstance(cell.value, str) and cell.value.strip()
                if words and not cell.alignment.wrap_text and cell.style != "RS symbol":
                    yield str(cell.value)
