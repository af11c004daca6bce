"""Motion, loads and supports as typed: what they mean for one body, and what is refused with its line."""

from __future__ import annotations

import math
from typing import Any

import pytest
from cell_answers import answer, refused

Rows = list[list[Any]]
G = 9.80665  # m/s^2, standard gravity

BODY: Rows = [["mass", 2.0, "kg"], ["x", 0.5, "m"], ["y", 0.1, "m"], ["Izz", 1.5, "kg*m^2"]]
OMEGA: list[Any] = ["omega", 3.0, "rad/s", None]
ALPHA: list[Any] = ["alpha", 4.0, "rad/s^2", None]
DOWN: list[Any] = ["gravity", "down", None, None]
HINGE: list[Any] = ["fixed point", 0.0, 0.0, "m"]
MOTION: Rows = [OMEGA, ALPHA, DOWN, HINGE]
PIVOT = "(0, 0) m"
# about the fixed hinge: (I_G + m r^2) alpha + m g x
TORQUE = (1.5 + 2.0 * (0.5**2 + 0.1**2)) * 4.0 + 2.0 * G * 0.5


def torque(motion: Any = MOTION, loads: Any = "none", *more: Any) -> Any:
    return answer("RB_DRIVE_TORQUE", BODY, motion, loads, PIVOT, *more)


def no_torque(motion: Any, loads: Any, *says: str) -> None:
    refused("RB_DRIVE_TORQUE", [BODY, motion, loads, PIVOT], *says)


MOTIONS: dict[str, Any] = {
    "as it is": MOTION,
    "another order": MOTION[::-1],
    "pivot for fixed point": [OMEGA, ALPHA, DOWN, ["pivot", "(0, 0) m", None, None]],
    "one text": "omega 3 rad/s; alpha 4 rad/s^2; gravity down; fixed point (0, 0) m",
    "gravity as a vector": [OMEGA, ALPHA, ["gravity", 0.0, -G, "m/s^2"], HINGE],
    "gravity in g": [OMEGA, ALPHA, ["gravity", 0.0, -1.0, "g"], HINGE],
    "gravity in space": [OMEGA, ALPHA, ["gravity", "(0, -1, 0) g", None, None], HINGE],
    "degrees": [
        ["omega", math.degrees(3.0), "deg/s", None],
        ["alpha", math.degrees(4.0), "deg/s^2", None],
        DOWN,
        HINGE,
    ],
    # a_G = alpha x r + omega x (omega x r): the same motion told at the mass center
    "by the mass center": [
        OMEGA,
        ALPHA,
        DOWN,
        ["center acceleration", -4.0 * 0.1 - 9.0 * 0.5, 4.0 * 0.5 - 9.0 * 0.1, "m/s^2"],
    ],
    # ... and at another point, (0.2, -0.3)
    "by a point": [
        OMEGA,
        ALPHA,
        DOWN,
        ["point", 0.2, -0.3, "m"],
        ["point acceleration", 4.0 * 0.3 - 9.0 * 0.2, 4.0 * 0.2 + 9.0 * 0.3, "m/s^2"],
    ],
}


@pytest.mark.parametrize("motion", MOTIONS.values(), ids=MOTIONS)
def test_a_motion_is_read(motion: Any) -> None:
    assert torque(motion) == pytest.approx(TORQUE, rel=1e-12)


def test_no_gravity() -> None:
    assert torque([OMEGA, ALPHA, ["gravity", "none", None, None], HINGE]) == pytest.approx(
        TORQUE - 2.0 * G * 0.5
    )


NO_MOTION: dict[str, tuple[Any, tuple[str, ...]]] = {
    "no omega": ([ALPHA, DOWN, HINGE], ("a line 'omega'", "Type 0")),
    "no alpha": ([OMEGA, DOWN, HINGE], ("a line 'alpha'", "'unknown'")),
    "no gravity": ([OMEGA, ALPHA, HINGE], ("a line 'gravity'", "'down'", "'none'")),
    "no place": ([OMEGA, ALPHA, DOWN], ("one of: 'center acceleration'; 'fixed point'", "none of them")),
    "two places": (
        [*MOTION, ["center acceleration", 0.0, 0.0, None]],
        ("center acceleration and fixed point",),
    ),
    "a point without acceleration": (
        [OMEGA, ALPHA, DOWN, ["point", 0.0, 0.0, "m"]],
        ("'point acceleration' beside",),
    ),
    "an acceleration without its point": (
        [OMEGA, ALPHA, DOWN, ["point acceleration", 0.0, 0.0, "m"]],
        ("`point acceleration`",),
    ),
    "a unit of frequency": (
        [["omega", 3.0, "Hz", None], ALPHA, DOWN, HINGE],
        ("`omega`", "'Hz'", "rev/s", "(motion, row 1)"),
    ),
    "a word for alpha": (
        [OMEGA, ["alpha", "fast", None, None], DOWN, HINGE],
        ("`alpha`", "'unknown'", "(motion, row 2)"),
    ),
    "a word for gravity": (
        [OMEGA, ALPHA, ["gravity", "up", None, None], HINGE],
        ("`gravity`", "'down' or 'none'", "(motion, row 3)"),
    ),
    "a number for gravity": (
        [OMEGA, ALPHA, ["gravity", -9.81, "m/s^2", None], HINGE],
        ("`gravity`", "the single number -9.81"),
    ),
    "a blank gravity": ([OMEGA, ALPHA, ["gravity", None, None, None], HINGE], ("`gravity`", "a blank cell")),
    "a near miss": ([["omga", 3.0, "rad/s", None], ALPHA, DOWN, HINGE], ("'omga'", "Did you mean 'omega'?")),
    "alpha unknown to the drive": (
        [OMEGA, ["alpha", "unknown", None, None], DOWN, HINGE],
        ("the drive makes it",),
    ),
    "a spin about x": (
        [["omega", 1.0, 0.0, 3.0], ALPHA, DOWN, HINGE],
        ("planar", "one number about z", "RB_REACTIONS_3D"),
    ),
}


@pytest.mark.parametrize(("motion", "says"), NO_MOTION.values(), ids=NO_MOTION)
def test_a_motion_is_refused(motion: Any, says: tuple[str, ...]) -> None:
    no_torque(motion, "none", *says)


# A load's part of the torque is minus its moment about the pivot: -(x Fy - y Fx) - M.
LOADS: dict[str, tuple[Rows, float]] = {
    "a force": (
        [["load", "Fx [N]", "Fy [N]", "x [mm]", "y [mm]"], ["wind", 5.0, -7.0, 300.0, 200.0]],
        -(0.3 * -7.0 - 0.2 * 5.0),
    ),
    "one component": ([["load", "Fy [N]", "x [m]", "y [m]"], ["jet", 10.0, 0.3, 9.0]], -3.0),
    "size and angle": (
        [["load", "F [N]", "angle [deg]", "x [m]", "y [m]"], ["jet", 10.0, 90.0, 0.3, 0.0]],
        -3.0,
    ),
    "a couple": ([["load", "M [N*m]"], ["friction", -4.0]], 4.0),
    "a couple by another name": ([["name", "couple [N*cm]"], ["friction", -400.0]], 4.0),
    "force and couple": (
        [["load", "Fy [N]", "x [m]", "y [m]", "Mz [N*m]"], ["jet", 10.0, 0.3, 0.0, 1.0]],
        -4.0,
    ),
    "several": (
        [
            ["load", "Fy [N]", "x [m]", "y [m]", "Mz [N*m]"],
            ["a", 10.0, 0.3, 0.0, None],
            ["b", None, None, None, 1.0],
        ],
        -4.0,
    ),
    "in pounds": (
        [["load", "Fy [lbf]", "x [in]", "y [in]"], ["jet", 1.0, 1.0, 0.0]],
        -0.45359237 * G * 0.0254,
    ),
    "the weight of something else": (
        [["load", "Fy [N]", "x [m]", "y [m]"], ["weight of the fruit", -10.0, 0.3, 0.0]],
        3.0,
    ),
}


@pytest.mark.parametrize(("loads", "part"), LOADS.values(), ids=LOADS)
def test_loads_are_held_by_the_drive(loads: Rows, part: float) -> None:
    assert torque(MOTION, loads, "loads") == pytest.approx(part, rel=1e-12)
    assert torque(MOTION, loads) == pytest.approx(TORQUE + part, rel=1e-12)


XY = ["x [m]", "y [m]"]
NO_LOADS: dict[str, tuple[Any, tuple[str, ...]]] = {
    "blank": (None, ("a table of loads", "the word 'none'", "a blank cell")),
    "zero": (0.0, ("a table of loads", "the word 'none'", "got 0")),
    "another word": ("nothing", ("the word 'none'", "'nothing'")),
    "no name": ([["Fx [N]", *XY], [1.0, 0.0, 0.0]], ("a column 'load'",)),
    "the body's weight": (
        [["load", "Fy [N]", *XY], ["Weight", -20.0, 0.5, 0.1]],
        ("the body's own weight", "(row 2, 'Weight')"),
    ),
    "no place": (
        [["load", "Fy [N]", *XY], ["jet", 1.0, None, 0.0]],
        ("x and y of each force", "(row 2, 'jet')"),
    ),
    "no place at all": ([["load", "Fy [N]"], ["jet", 1.0]], ("x and y of each force",)),
    "nothing in the row": (
        [["load", "Fy [N]", *XY], ["jet", None, 0.0, 0.0]],
        ("a force or a couple in each row", "(row 2, 'jet')"),
    ),
    "a size without its angle": ([["load", "F [N]", *XY], ["jet", 1.0, 0.0, 0.0]], ("an angle for each F",)),
    "an angle without its size": (
        [["load", "F [N]", "angle [deg]", "Fx [N]", *XY], ["jet", None, 9.0, 1.0, 0.0, 0.0]],
        ("F for each angle",),
    ),
    "size and components": (
        [["load", "F [N]", "angle [deg]", "Fx [N]", *XY], ["jet", 1.0, 9.0, 1.0, 0.0, 0.0]],
        ("not both in one row",),
    ),
    "a mass for a force": (
        [["load", "Fy [kg]", *XY], ["jet", 1.0, 0.0, 0.0]],
        ("`Fy`", "'kg' (mass)", "kgf"),
    ),
    "a bare angle": (
        [["load", "F [N]", "angle", *XY], ["jet", 1.0, 90.0, 0.0, 0.0]],
        ("column 'angle' has none",),
    ),
}


@pytest.mark.parametrize(("loads", "says"), NO_LOADS.values(), ids=NO_LOADS)
def test_loads_are_refused(loads: Any, says: tuple[str, ...]) -> None:
    no_torque(MOTION, loads, *says)


def test_without_gravity_the_weight_may_be_a_load() -> None:
    still = [["omega", 0.0, None, None], ["alpha", 0.0, None, None], ["gravity", "none", None, None], HINGE]
    loads = [["load", "Fy [N]", *XY], ["weight", -20.0, 0.5, 0.1]]
    assert torque(still, loads) == pytest.approx(10.0)


# -- supports: a beam of 2 kg at rest on two supports 1 m apart, its mass center in the middle

REST: Rows = [
    ["omega", 0.0, None, None],
    ["alpha", 0.0, None, None],
    DOWN,
    ["center acceleration", 0.0, 0.0, "m/s^2"],
]
BEAM: Rows = [["mass", 2.0, "kg"], ["x", 0.5, "m"], ["y", 0.0, "m"], ["Izz", 1.5, "kg*m^2"]]
SUPPORTS = ["support", "type", "x [m]", "y [m]", "angle [deg]", "to x [m]", "to y [m]"]
A: list[Any] = ["A", "pin", 0.0, 0.0, None, None, None]
B: list[Any] = ["B", "roller", 1.0, 0.0, 90.0, None, None]


def held(*rows: list[Any], what: str = "B force", motion: Rows = REST, body: Rows = BEAM) -> Any:
    return answer("RB_REACTIONS", body, motion, "none", [SUPPORTS, *rows], what)


def not_held(rows: Rows, *says: str, error: str = "#VALUE!", motion: Rows = REST) -> None:
    refused("RB_REACTIONS", [BEAM, motion, "none", [SUPPORTS, *rows]], *says, error=error)


def test_the_weight_is_shared() -> None:
    assert held(A, B, what="A Fy") == pytest.approx(G, rel=1e-12)
    assert held(A, B, what="A Fx") == pytest.approx(0.0, abs=1e-12)
    rows = {row[0]: row[1:] for row in answer("RB_REACTIONS", BEAM, REST, "none", [SUPPORTS, A, B])}
    assert rows["weight y"] == [pytest.approx(-2.0 * G), "N"]
    assert rows["residual force"][1] == "N"
    assert rows["residual moment"][1] == "N*m"


@pytest.mark.parametrize(
    "support",
    [
        ["B", "ROLLER", 1.0, 0.0, 90.0, None, None],
        ["B", "slot", 1.0, 0.0, 90.0, None, None],
        ["B", "slot", 1.0, 0.0, -90.0, None, None],
        ["B", "cable", 1.0, 0.0, None, 1.0, 5.0],
        ["B", "cable", 1.0, 0.0, 90.0, None, None],
        ["B", "link", 1.0, 0.0, None, 1.0, -2.0],
    ],
    ids=lambda s: f"{s[1]} {s[4]}",
)
def test_every_kind_of_single_force_carries_half_the_weight(support: list[Any]) -> None:
    rows = answer("RB_REACTIONS", BEAM, REST, "none", [SUPPORTS, A, support])
    sizes = [abs(row[1]) for row in rows if row[0].startswith("B ")]
    assert sizes == [pytest.approx(G, rel=1e-12)]


def test_a_drive_and_a_fixed_support_hold_alone() -> None:
    drive = ["motor", "drive", None, None, None, None, None]
    rows = {row[0]: row[1] for row in answer("RB_REACTIONS", BEAM, REST, "none", [SUPPORTS, A, drive])}
    assert [v for k, v in rows.items() if k.startswith("motor")] == [pytest.approx(2.0 * G * 0.5)]
    fixed = ["wall", "fixed", 0.0, 0.0, None, None, None]
    rows = {row[0]: row[1] for row in answer("RB_REACTIONS", BEAM, REST, "none", [SUPPORTS, fixed])}
    assert rows["wall fy"] == pytest.approx(2.0 * G)
    assert rows["wall mz"] == pytest.approx(2.0 * G * 0.5)


def test_an_unknown_alpha_is_solved() -> None:
    # a rod let go about its pinned end: alpha = -m g L/2 / (I_G + m L^2/4)
    falling = [["omega", 0.0, None, None], ["alpha", "unknown", None, None], DOWN, HINGE]
    alpha = held(A, what="alpha", motion=falling)
    assert alpha == pytest.approx(-2.0 * G * 0.5 / (1.5 + 2.0 * 0.25), rel=1e-12)


NOT_HELD: dict[str, tuple[Rows, tuple[str, ...], str]] = {
    "an unknown kind": (
        [["A", "pinn", 0.0, 0.0, None, None, None], B],
        ("a known type", "'pinn'", "pin, roller", "(row 2, 'A')"),
        "#VALUE!",
    ),
    "no kind": (
        [["A", None, 0.0, 0.0, None, None, None], B],
        ("a text in column 'type'", "(row 2, 'A')"),
        "#VALUE!",
    ),
    "no place": (
        [["A", "pin", None, None, None, None, None], B],
        ("their place x, y", "(row 2, 'A')"),
        "#VALUE!",
    ),
    "half a place": (
        [["A", "pin", 0.0, None, None, None, None], B],
        ("all of x, y", "(row 2, 'A')"),
        "#VALUE!",
    ),
    "no angle": (
        [A, ["B", "roller", 1.0, 0.0, None, None, None]],
        ("`angle` must be given", "(row 3, 'B')"),
        "#VALUE!",
    ),
    "an angle that means nothing": (
        [["A", "pin", 0.0, 0.0, 30.0, None, None], B],
        ("`angle` must be left out", "(row 2, 'A')"),
        "#VALUE!",
    ),
    "one name twice": ([A, ["a", *B[1:]]], ("a name each", "'a' stands twice", "(row 3, 'a')"), "#VALUE!"),
    "too few": ([A], ("free to rotate",), "#NUM!"),
    "too many": (
        [A, ["B", "pin", 1.0, 0.0, None, None, None]],
        ("Too many supports by 1", "stiffness"),
        "#NUM!",
    ),
    "a roller that would pull": (
        [A, ["B", "roller", 1.0, 0.0, -90.0, None, None]],
        ("can only push", "9.80665 N"),
        "#NUM!",
    ),
    "a cable that would push": (
        [A, ["B", "cable", 1.0, 0.0, None, 1.0, -5.0]],
        ("can only pull", "9.80665 N"),
        "#NUM!",
    ),
}


@pytest.mark.parametrize(("rows", "says", "error"), NOT_HELD.values(), ids=NOT_HELD)
def test_supports_are_refused(rows: Rows, says: tuple[str, ...], error: str) -> None:
    not_held(rows, *says, error=error)


def test_a_refused_support_in_space_names_the_columns_to_fill() -> None:
    body = "mass 80 kg; center (1.2, 0, 0.6) m; Ixx 10 kg*m^2; Iyy 20 kg*m^2; Izz 30 kg*m^2"
    motion = "omega 0; alpha 0; gravity (0, 0, -9.8) m/s^2; fixed point (0, 0, 0) m"
    head = ["support", "type", "x [m]", "y [m]", "z [m]"]
    for kind, says in (("bearing", "columns are along x, along y"), ("held", "`holds` must be one or more")):
        table = [head, ["post", kind, 0.0, 0.0, 0.0]]
        refused("RB_REACTIONS_3D", [body, motion, "none", table], says, "'post'")
