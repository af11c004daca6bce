"""Judgements through the cells: what supports leave free, which fight, and that units do not change the verdict."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from cell_calls import refused

from rigidsheet.udf.calling import call
from rigidsheet.udf.cells import Refusal

# The same machine drawn in metres and kilograms, and in other units: (length, mass, force) with their SI factors.
UNITS = {
    "m and kg": (("m", 1.0), ("kg", 1.0), ("N", 1.0)),
    "mm and t": (("mm", 1e-3), ("t", 1e3), ("kN", 1e3)),
    "um and g": (("um", 1e-6), ("g", 1e-3), ("mN", 1e-3)),
    "ft and lb": (("ft", 0.3048), ("lb", 0.45359237), ("lbf", 4.4482216152605)),
}
HEAD = ["support", "type", "x", "y", "angle [deg]", "to x", "to y"]
SPACE = ["support", "type", "x", "y", "z", "along x", "along y", "along z", "to x", "to y", "to z", "holds"]


def planar(units: str, lines: list[list[Any]], size: float = 1.0, alpha: Any = 0.0) -> Any:
    """Ask for planar reactions, all lengths given in metres and written in other units; `size` scales the machine."""
    (length, to_m), (mass, to_kg), (force, to_n) = UNITS[units]
    inertia = f"{mass}*{length}^2"
    body = [
        ["mass", 40.0 / to_kg, mass],
        ["x", 1.5 * size / to_m, length],
        ["y", 0.2 * size / to_m, length],
        ["inertia", 10.0 * size**2 / (to_kg * to_m**2), inertia],
    ]
    motion = [["omega", 0.0], ["alpha", alpha], ["gravity", "down"], ["center acceleration", "(0, 0) m/s^2"]]
    loads = [
        ["load", f"Fx [{force}]", f"Fy [{force}]", f"x [{length}]", f"y [{length}]"],
        ["pull", 30.0 / to_n, -80.0 / to_n, 0.5 * size / to_m, 0.7 * size / to_m],
    ]
    head = [f"{h} [{length}]" if h.split()[-1] in ("x", "y") else h for h in HEAD]
    table = [head]
    for name, kind, *rest in lines:
        x, y, angle, tx, ty = rest + [None] * (5 - len(rest))
        here = [None if v is None else v * size / to_m for v in (x, y)]
        far = [None if v is None else v * size / to_m for v in (tx, ty)]
        table.append([name, kind, *here, angle, *far])
    return call("RB_REACTIONS", [body, motion, loads, table])


FREE_OR_FIGHTING = {
    "pin alone": ([["A", "pin", 0.0, 0.0]], "free to rotate about support A"),
    "two rollers": (
        [["A", "roller", 0.0, 0.0, 90.0], ["B", "roller", 3.0, 0.0, 90.0]],
        "free to slide along x",
    ),
    "two slots up a slope": (
        [["A", "slot", 0.0, 0.0, 30.0], ["B", "slot", 3.0, 0.0, 30.0]],
        "free to slide along 120 deg from x",
    ),
    "three parallel": (
        [["A", "slot", 0.0, 0.0, 90.0], ["B", "slot", 3.0, 0.0, 90.0], ["C", "slot", 1.0, 2.0, 90.0]],
        "The lines of action of A, B and C are parallel",
    ),
    "roller whose force passes the pin": (
        [["A", "pin", 0.0, 0.0], ["S", "slot", 1.0, 0.0, 0.0]],
        "free to rotate about support A",
    ),
    "two pins": (
        [["A", "pin", 0.0, 0.0], ["B", "pin", 3.0, 0.0]],
        "A (fx) and B (fx) work against each other",
    ),
    "fixed and roller": (
        [["A", "fixed", 0.0, 0.0], ["S", "roller", 1.0, 0.0, 90.0]],
        "A (fy, mz) and S (force) work against each other",
    ),
    "drive alone": ([["D", "drive"]], "free to slide along x (one of 2 free motions)"),
}


@pytest.mark.parametrize("name", FREE_OR_FIGHTING)
@pytest.mark.parametrize("units", UNITS)
@pytest.mark.parametrize("size", [1.0, 1e-4, 30.0])
def test_the_sentence_names_the_free_motion_or_the_fight_in_any_unit(name, units, size):
    """First principles: each arrangement's free motion or surplus force, seen from its drawing."""
    lines, sentence = FREE_OR_FIGHTING[name]
    said = planar(units, lines, size)
    assert isinstance(said, Refusal), said
    assert said.error == "#NUM!"
    assert sentence in said.reason


def test_lines_that_meet_are_named_with_their_point():
    """First principles: y = 0, x = 3 and the line at 45 deg through (4, 1) m meet at (3, 0) m."""
    lines = [["A", "slot", 0.0, 0.0, 0.0], ["B", "slot", 3.0, -2.0, 90.0], ["C", "slot", 4.0, 1.0, 45.0]]
    for units in UNITS:
        said = planar(units, lines)
        assert "The lines of action of A, B and C meet at (3, 0) m" in said.reason


@pytest.mark.parametrize("units", UNITS)
def test_asked_alpha_does_not_bend_the_free_motion(units):
    """First principles: upright slots leave only the slide along x, whatever else is unknown."""
    lines = [["A", "slot", 0.0, 0.0, 90.0], ["B", "slot", 3.0, 0.0, 90.0], ["C", "slot", 1.0, 2.0, 90.0]]
    said = planar(units, lines, alpha="unknown")
    assert "are parallel, so the body is free to slide along x" in said.reason
    said = planar(units, lines[:2], alpha="unknown")
    assert (
        "free to slide along x, while A (force) and B (force) cannot be found together with alpha"
        in said.reason
    )
    said = planar(units, [["A", "pin", 0.0, 0.0], ["B", "pin", 3.0, 0.0]], alpha="unknown")
    assert "alpha cannot be unknown" in said.reason


@pytest.mark.parametrize("seed", range(12))
@pytest.mark.parametrize("off", [1e-12, 1e-10, 1e-7, 1e-4, 1e-2])
def test_verdict_near_the_limit_is_the_same_in_every_unit(seed, off):
    """Property: a slot whose line passes the pin at a small distance is judged alike in all units and sizes."""
    rng = np.random.default_rng(seed)
    pin, turn = rng.normal(size=2), float(rng.uniform(-180, 180))
    t = np.radians(turn)
    slot = pin + np.array([np.cos(t), np.sin(t)]) + off * np.array([-np.sin(t), np.cos(t)])
    lines = [["A", "pin", *map(float, pin)], ["S", "slot", *map(float, slot), turn]]
    answers = [planar(units, lines, size) for units in UNITS for size in (1.0, 1e-3)]
    if off <= 1e-7:
        how = "so the body is free to" if off <= 1e-10 else "hold the body only just: it is almost free to"
        assert all(isinstance(a, Refusal) and f"{how} rotate about support A" in a.reason for a in answers)
        return
    weigh = [{r[0]: r[1] for r in a}["S force"] for a in answers if not isinstance(a, Refusal)]
    assert len(weigh) == len(answers)
    np.testing.assert_allclose(weigh, weigh[0], rtol=1e-13 / off)


def spatial(lines: list[list[Any]], factor: float = 1.0, length: str = "m") -> Refusal:
    body = [["mass", 40.0, "kg"], ["x", 0.6, "m"], ["y", 0.0, "m"], ["z", 0.5, "m"]]
    body += [[k, v, "kg*m^2"] for k, v in (("Ixx", 3.0), ("Iyy", 5.0), ("Izz", 7.0))]
    motion = [["omega", 0.0], ["alpha", 0.0], ["gravity", "(0, 0, -9.81) m/s^2"]]
    motion += [["center acceleration", "(0, 0, 0) m/s^2"]]
    head = [f"{h} [{length}]" if h[-1] in "xyz" and not h.startswith("along") else h for h in SPACE]
    table: list[list[Any]] = [head]
    for name, kind, at, *rest in lines:
        along, holds = rest + [None] * (2 - len(rest))
        place = [v / factor for v in at]
        table.append([name, kind, *place, *(along or [None] * 3), *[None] * 3, holds])
    return refused("RB_REACTIONS_3D", body, motion, "none", table)


@pytest.mark.parametrize(("length", "factor"), [("m", 1.0), ("mm", 1e-3), ("in", 0.0254)])
def test_space_sentences_name_the_motion_or_the_fight(length, factor):
    """First principles: a gate on its hinge line, a body on a ball, two thrust bearings on one axis."""
    low, high = (0.0, 0.0, 0.0), (0.0, 0.0, 1.1)
    z = [0.0, 0.0, 1.0]
    gate = [["low", "thrust bearing", low, z], ["high", "bearing", high, z]]
    assert "rotate about the line through supports low and high" in spatial(gate, factor, length).reason
    both = [["low", "thrust bearing", low, z], ["high", "thrust bearing", high, z]]
    stop = ["stop", "slot", (1.2, 0.0, 0.5), [0.0, 1.0, 0.0]]
    said = spatial([*both, stop], factor, length).reason
    assert "low (fz) and high (fz) work against each other" in said
    assert "(one of 3 free motions)" in spatial([["B", "ball", low]], factor, length).reason
    slides = [["low", "bearing", low, z], ["high", "bearing", high, z], stop]
    assert "slide along z" in spatial(slides, factor, length).reason
