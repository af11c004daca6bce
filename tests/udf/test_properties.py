"""Laws that hold whatever the numbers: round trips, bodies cut in two, units switched, motions and loads added."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest
from cell_answers import answer, flat
from hypothesis import assume, given
from hypothesis import strategies as st

from rigidsheet.udf.catalogue import FUNCTIONS
from rigidsheet.udf.cells import OMITTED
from rigidsheet.udf.compiling import arguments_of
from rigidsheet.udf.reading.arguments import Scalar, Spin, Vector
from rigidsheet.udf.units import kinds
from rigidsheet.udf.units.kinds import KINDS, Kind

Rows = list[list[Any]]


def numbers(low: float, high: float) -> st.SearchStrategy[float]:
    return st.floats(low, high, allow_nan=False, allow_infinity=False)


SIZE = numbers(0.02, 3.0)
PLACE = numbers(-3.0, 3.0)
MASS = numbers(0.05, 500.0)
VECTOR = st.tuples(PLACE, PLACE, PLACE).map(list)


def units_of(kind: Kind) -> list[str]:
    return [u for u in kind.spellings if u not in ("", "-", "1") and u[0] not in "°%'\""]


CONVERTIBLE = [k for k in KINDS if len(units_of(k)) > 1 and k is not kinds.COUNT]


@given(data=st.data(), number=numbers(-1e9, 1e9))
def test_there_and_back_is_the_same_quantity(data: st.DataObject, number: float) -> None:
    kind = data.draw(st.sampled_from(CONVERTIBLE))
    first = data.draw(st.sampled_from(units_of(kind)))
    second = data.draw(st.sampled_from(units_of(kind)))
    there = answer("RB_CONVERT", [[number, first]], second) if first != second else number
    assume(math.isfinite(there) and (there == 0.0 or 1e-200 < abs(there) < 1e200))
    assert answer("RB_CONVERT", [[there, second]], first) == pytest.approx(number, rel=1e-13, abs=1e-300)


@given(mass=MASS, own=numbers(0.001, 500.0), distance=numbers(0.0, 5.0))
def test_the_parallel_axis_goes_both_ways_for_a_number(mass: float, own: float, distance: float) -> None:
    there = answer("RB_SHIFT", own, mass, distance)
    assert answer("RB_SHIFT_BACK", there, mass, distance) == pytest.approx(own, abs=1e-14 * there)


@given(mass=MASS, sizes=st.tuples(SIZE, SIZE, SIZE), offset=VECTOR)
def test_the_parallel_axis_goes_both_ways_for_a_tensor(
    mass: float, sizes: tuple[float, ...], offset: list[float]
) -> None:
    a, b, c = (mass * s**2 / 12 for s in sizes)
    own = [[b + c, 0.0, 0.0], [0.0, a + c, 0.0], [0.0, 0.0, a + b]]
    there = answer("RB_SHIFT", own, mass, [offset])
    back = np.array(answer("RB_SHIFT_BACK", there, mass, [offset]))
    assert back == pytest.approx(np.array(own), abs=1e-13 * np.abs(there).max())


def record(rows: Rows) -> dict[str, Any]:
    return {row[0]: row[1] for row in answer("RB_ROLLUP", rows)}


def same_body(whole: dict[str, Any], parts: dict[str, Any]) -> None:
    scale = max(whole["Ixx"], whole["Iyy"], whole["Izz"])
    assert parts["mass"] == pytest.approx(whole["mass"], rel=1e-13)
    for k in "xyz":
        assert parts[k] == pytest.approx(whole[k], abs=1e-12)
    for k in ("Ixx", "Iyy", "Izz", "Ixy", "Iyz", "Izx"):
        assert parts[k] == pytest.approx(whole[k], abs=1e-11 * scale)


@given(
    length=SIZE, width=SIZE, height=SIZE, density=numbers(10.0, 1e4), share=numbers(0.05, 0.95), place=VECTOR
)
def test_a_box_cut_in_two_is_the_same_box(
    length: float, width: float, height: float, density: float, share: float, place: list[float]
) -> None:
    header = ["part", "shape", "density [kg/m^3]", "L [m]", "W [m]", "H [m]", "x [m]", "y [m]", "z [m]"]
    x, y, z = place
    left = share * length
    whole = record([header, ["box", "box", density, length, width, height, x, y, z]])
    parts = record(
        [
            header,
            ["left", "box", density, left, width, height, x - (length - left) / 2, y, z],
            ["right", "box", density, length - left, width, height, x + left / 2, y, z],
        ]
    )
    same_body(whole, parts)


@given(outer=SIZE, wall=numbers(0.02, 0.95), length=SIZE, share=numbers(0.05, 0.95), turn=numbers(-3.0, 3.0))
def test_a_tube_cut_in_two_or_bored_from_a_cylinder_is_the_same_tube(
    outer: float, wall: float, length: float, share: float, turn: float
) -> None:
    header = [
        "part",
        "qty",
        "shape",
        "density [kg/m^3]",
        "OD [m]",
        "ID [m]",
        "D [m]",
        "L [m]",
        "z [m]",
        "x [m]",
        "y [m]",
    ]
    inner, low = outer * (1.0 - wall), share * length
    whole = record([header, ["tube", 1.0, "tube", 7850.0, outer, inner, None, length, 0.0, 0.0, 0.0]])
    cut = record(
        [
            header,
            ["low", 1.0, "tube", 7850.0, outer, inner, None, low, -(length - low) / 2, 0.0, 0.0],
            ["high", 1.0, "tube", 7850.0, outer, inner, None, length - low, low / 2, 0.0, 0.0],
        ]
    )
    same_body(whole, cut)
    bored = record(
        [
            header,
            ["bar", 1.0, "solid cylinder", 7850.0, None, None, outer, length, 0.0, 0.0, 0.0],
            ["bore", -1.0, "solid cylinder", 7850.0, None, None, inner, length, 0.0, 0.0, 0.0],
        ]
    )
    solid = 7850.0 * math.pi / 4 * outer**2 * length
    assert bored["mass"] == pytest.approx(whole["mass"], abs=1e-12 * solid)
    assert bored["Izz"] == pytest.approx(whole["Izz"], abs=1e-12 * solid * outer**2)
    assert bored["Ixx"] == pytest.approx(whole["Ixx"], abs=1e-12 * solid * (outer**2 + length**2))


# -- switching the unit of any argument changes nothing

UNITED = {
    name: [
        (i, a.shape.kind)
        for i, a in enumerate(arguments_of(f))
        if not a.optional and isinstance(a.shape, Scalar | Vector | Spin) and len(units_of(a.shape.kind)) > 1
    ]
    for name, f in FUNCTIONS.items()
}


def uneven(cell: Any, position: int) -> Any:
    """Return the usual sample vector differently for each argument, so that nothing cancels to zero."""
    if cell == [[0.3, -0.4, 0.5]]:
        return [[v * (1.0 + 0.1 * (position + 1) * (k + 1)) for k, v in enumerate(cell[0])]]
    return cell


def in_unit(cell: Any, unit: str, factor: float) -> Any:
    """Return a sample cell in another unit, the unit in a cell of its own."""
    if isinstance(cell, float):
        return [[cell / factor, unit]]
    return [[v / factor for v in row] + [unit] for row in cell]


@pytest.mark.parametrize("name", [name for name, united in UNITED.items() if united])
@given(data=st.data())
def test_switching_units_changes_no_result(name: str, data: st.DataObject) -> None:
    cells = [
        uneven(a.shape.sample(), i) for i, a in enumerate(arguments_of(FUNCTIONS[name])) if not a.optional
    ]
    before = flat(name, *cells)
    for i, kind in UNITED[name]:
        unit = data.draw(st.sampled_from(units_of(kind)))
        cells[i] = in_unit(cells[i], unit, kind.spellings[unit])
    after = flat(name, *cells)
    scale = max([abs(v) for v in before if isinstance(v, float)], default=1.0)
    for old, new in zip(before, after, strict=True):
        if isinstance(old, str):
            assert new == old
        else:
            assert new == pytest.approx(old, rel=1e-12, abs=1e-12 * scale)


PARTS_UNITS = st.tuples(
    st.sampled_from(["kg", "lb", "g", "oz", "slug"]), st.sampled_from(["m", "mm", "in", "ft", "cm"])
)


@given(units=PARTS_UNITS, result=st.sampled_from(["kg*m^2", "lb*in^2", "kg*mm^2", "slug*ft^2"]))
def test_switching_the_units_of_a_parts_list_changes_no_result(units: tuple[str, str], result: str) -> None:
    mass_unit, length_unit = units
    m, d = kinds.MASS.spellings[mass_unit], kinds.LENGTH.spellings[length_unit]
    frame, bin_ = [62.0, 1.2, 0.08, 0.06, 0.6, 0.04, 0.0], [38.0, 1.0, 0.7, 0.9, 0.65, 0.43, 0.1]
    names = ["mass", "L", "W", "H", "x", "y", "z"]

    def table(m: float, d: float, mass_unit: str, length_unit: str) -> Rows:
        header = ["part", "shape", *(f"{n} [{mass_unit if n == 'mass' else length_unit}]" for n in names)]
        rows = [
            [label, "box", row[0] / m, *(v / d for v in row[1:])]
            for label, row in (("frame", frame), ("bin", bin_))
        ]
        return [header, *rows]

    si = answer("RB_ROLLUP", table(1.0, 1.0, "kg", "m"), "Izz")
    other = answer("RB_ROLLUP", table(m, d, mass_unit, length_unit), "Izz", OMITTED, result)
    assert other * kinds.INERTIA.spellings[result] == pytest.approx(si, rel=1e-12)


# -- motion and forces


@given(v=VECTOR, omega=VECTOR, first=VECTOR, second=VECTOR)
def test_velocities_chain_from_point_to_point(
    v: list[float], omega: list[float], first: list[float], second: list[float]
) -> None:
    via = answer("RB_VELOCITY_AT", [v], [omega], [first])
    through = flat("RB_VELOCITY_AT", via, [omega], [second])
    direct = flat("RB_VELOCITY_AT", [v], [omega], [[a + b for a, b in zip(first, second, strict=True)]])
    assert through == pytest.approx(direct, abs=1e-12)


@given(a=VECTOR, omega=VECTOR, alpha=VECTOR, first=VECTOR, second=VECTOR)
def test_accelerations_chain_and_split_into_their_parts(
    a: list[float], omega: list[float], alpha: list[float], first: list[float], second: list[float]
) -> None:
    via = answer("RB_ACCELERATION_AT", [a], [omega], [alpha], [first])
    through = flat("RB_ACCELERATION_AT", via, [omega], [alpha], [second])
    whole = [p + q for p, q in zip(first, second, strict=True)]
    direct = flat("RB_ACCELERATION_AT", [a], [omega], [alpha], [whole])
    assert through == pytest.approx(direct, abs=1e-10)
    parts = [
        flat("RB_ACCELERATION_AT", [a], [omega], [alpha], [whole], part)
        for part in ("tangential", "centripetal")
    ]
    assert [x + t + c for x, t, c in zip(a, *parts, strict=True)] == pytest.approx(direct, abs=1e-10)


@given(inertia=numbers(0.01, 100.0), mass=MASS, omega=PLACE, alpha=PLACE, a=st.tuples(PLACE, PLACE))
def test_about_the_mass_center_the_moment_sum_is_the_plain_torque(
    inertia: float, mass: float, omega: float, alpha: float, a: tuple[float, float]
) -> None:
    about_g = answer("RB_MOMENT_SUM", inertia, mass, [[0.0, 0.0]], omega, alpha, [list(a)])
    assert about_g == pytest.approx(answer("RB_TORQUE", inertia, alpha), abs=1e-12)


@given(inertia=numbers(0.01, 100.0), mass=MASS, arm=st.tuples(PLACE, PLACE), omega=PLACE, alpha=PLACE)
def test_about_a_fixed_point_it_is_the_shifted_inertia_times_alpha(
    inertia: float, mass: float, arm: tuple[float, float], omega: float, alpha: float
) -> None:
    about_b = answer("RB_MOMENT_SUM", inertia, mass, [list(arm)], omega, alpha, [[0.0, 0.0]])
    shifted = answer("RB_SHIFT", inertia, mass, [list(arm)])
    assert about_b == pytest.approx(answer("RB_TORQUE", shifted, alpha), rel=1e-12, abs=1e-12)


REST: Rows = [
    ["omega", 0.0, None, None],
    ["alpha", 0.0, None, None],
    ["gravity", "down", None, None],
    ["center acceleration", 0.0, 0.0, "m/s^2"],
]


def body(mass: float, x: float, y: float) -> Rows:
    return [["mass", mass, "kg"], ["x", x, "m"], ["y", y, "m"], ["Izz", mass, "kg*m^2"]]


@given(mass=MASS, factor=numbers(0.1, 10.0), x=PLACE, y=PLACE)
def test_weight_scales_with_mass(mass: float, factor: float, x: float, y: float) -> None:
    held = [
        answer("RB_DRIVE_TORQUE", body(m, x, y), REST, "none", "(0, 0) m", "weight")
        for m in (mass, factor * mass)
    ]
    assert held[1] == pytest.approx(factor * held[0], rel=1e-12, abs=1e-12)
    assert held[0] == pytest.approx(mass * 9.80665 * x, rel=1e-12, abs=1e-12)


SUPPORTS: Rows = [
    ["support", "type", "x [m]", "y [m]", "angle [deg]"],
    ["A", "pin", 0.0, 0.0, None],
    ["B", "slot", 2.0, 0.5, 80.0],
]
LOAD = st.tuples(numbers(-1e3, 1e3), numbers(-1e3, 1e3), PLACE, PLACE, numbers(-1e3, 1e3)).map(list)


def reactions(loads: list[list[float]]) -> dict[str, float]:
    header = ["load", "Fx [N]", "Fy [N]", "x [m]", "y [m]", "M [N*m]"]
    table: Any = [header, *[[f"load {i}", *load] for i, load in enumerate(loads)]] if loads else "none"
    rows = answer("RB_REACTIONS", body(50.0, 0.7, 0.2), REST, table, SUPPORTS)
    return {row[0]: row[1] for row in rows}


@given(first=LOAD, second=LOAD)
def test_reactions_of_loads_add_up(first: list[float], second: list[float]) -> None:
    none, one, two, both = reactions([]), reactions([first]), reactions([second]), reactions([first, second])
    for k in ("A fx", "A fy", next(name for name in none if name.startswith("B "))):
        assert both[k] == pytest.approx(one[k] + two[k] - none[k], abs=1e-8)


@given(loads=st.lists(LOAD, min_size=1, max_size=4))
def test_reactions_balance_the_loads(loads: list[list[float]]) -> None:
    found = reactions(loads)
    slot = next(v for name, v in found.items() if name.startswith("B "))
    along = math.radians(80.0)
    fx = found["A fx"] + slot * math.cos(along) + sum(load[0] for load in loads)
    fy = found["A fy"] + slot * math.sin(along) + sum(load[1] for load in loads) - 50.0 * 9.80665
    about_a = 2.0 * slot * math.sin(along) - 0.5 * slot * math.cos(along) - 0.7 * 50.0 * 9.80665
    about_a += sum(x * b - y * a + m for a, b, x, y, m in loads)
    assert [fx, fy, about_a] == pytest.approx([0.0, 0.0, 0.0], abs=1e-8)
