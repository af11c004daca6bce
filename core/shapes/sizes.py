"""Sizes that many shapes share, and the ways to give a wall."""

from __future__ import annotations

from dataclasses import replace
from typing import Final

import numpy as np
from numpy.typing import NDArray

from .record import Alternative, Rule, Size, Sizes, Way
from .terms import all_hold

DIAMETER: Final = Alternative("D", "diameter", 0.5, ("dia", "diameter", "Ø"))
RADIUS: Final = Size("R", "radius", ("radius",), (DIAMETER,))
MEAN_RADIUS: Final = Size(
    "R",
    "mean radius, to the middle of the wall",
    ("radius", "mean radius"),
    (Alternative("D", "mean diameter", 0.5, ("dia", "diameter", "mean diameter")),),
)
OUTER: Final = Size(
    "Ro",
    "outer radius",
    ("outer radius",),
    (Alternative("OD", "outer diameter", 0.5, ("Do", "outer diameter", "outside diameter")),),
)
INNER: Final = Size(
    "Ri",
    "inner radius",
    ("inner radius",),
    (Alternative("ID", "inner diameter", 0.5, ("Di", "inner diameter", "inside diameter", "bore")),),
    sign="not negative",
)
WALL: Final = Size("t", "wall thickness", ("wall", "wall thickness"))
LENGTH: Final = Size("L", "length along z", ("length", "len"))
HEIGHT: Final = Size("H", "height along z", ("height",), (Alternative("L", "height", 1.0, ("length",)),))
ALONG_X: Final = Size("L", "length along x", ("length", "len", "a"))
ALONG_Y: Final = Size("W", "width along y", ("width", "b"))
ALONG_Z: Final = Size("H", "height along z", ("height", "c"))
THICKNESS: Final = Size(
    "t",
    "thickness, only for the mass from a density; the tensor takes it as zero",
    ("thickness", "thk"),
    for_density=True,
)
SHELL_WALL: Final = replace(THICKNESS, aliases=("wall", "wall thickness", "thickness", "thk"))
ANGLE: Final = Size(
    "angle",
    "whole angle, half of it on each side of x",
    ("theta", "sector angle"),
    (Alternative("half angle", "half of the angle", 2.0, ("alpha",)),),
    kind="angle",
)

# Wall, outer and inner radius: two of them are enough. The formulas take the wall from the difference of
# the given radii, which is exact, and never from a difference of squares.
_RING_WAYS: Final = (
    (("Ro", "Ri"), lambda s: {"t": s["Ro"] - s["Ri"]}),
    (("Ro", "t"), lambda s: {"Ri": s["Ro"] - s["t"]}),
    (("Ri", "t"), lambda s: {"Ro": s["Ri"] + s["t"]}),
)
RING_RULES: Final = (
    Rule("Ri must not be negative: the wall t must be at most half of OD", lambda s: s["Ri"] >= 0.0),
    Rule("ID must be less than OD", lambda s: s["t"] > 0.0),
)
FULL_TURN: Final = Rule(
    # A hair above a full turn is 360 deg after its conversion.
    "angle must be at most a full turn, 360 deg",
    lambda s: s["angle"] <= 2.0 * np.pi * (1.0 + 1e-12),
)


def ring_ways(*others: str) -> tuple[Way, ...]:
    """Return the ways to give a wall: OD and ID, OD and t, ID and t, each with the other sizes."""
    return tuple(Way((*labels, *others), complete) for labels, complete in _RING_WAYS)


def annulus_ways(*others: str) -> tuple[Way, ...]:
    """Return the one way to give an annulus whose t is a plate thickness: both radii."""
    return (Way(("Ro", "Ri", *others), lambda s: {"wall": s["Ro"] - s["Ri"]}),)


def thin(section: str, *widths: str, times: float = 0.1) -> Rule:
    """Return the rule that a thickness, if it is given, is small beside each of the widths."""

    def holds(sizes: Sizes) -> NDArray[np.bool_]:
        if section not in sizes:
            return np.array(True)
        return all_hold(sizes[section] <= times * sizes[width] for width in widths)

    return Rule(
        f"{section} must be at most {times:g} of {' and '.join(widths)} for thin formulas: use a solid shape",
        holds,
    )
