"""A flat plate from its outline, with polygon holes and round holes."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import isfinite

import numpy as np
from numpy.typing import ArrayLike

from .body import RigidBody
from .errors import InputError
from .outlines import (
    TOUCHING,
    AreaSums,
    Points,
    area_sums,
    distance_to_edges,
    holds_point,
    outline_problem,
    touching_edges,
    without_closing_corner,
)


def plate_body(
    outline: ArrayLike,
    thickness: float,
    density: float,
    *,
    holes: Sequence[ArrayLike] = (),
    round_holes: ArrayLike = (),
) -> RigidBody:
    """Return the body of a flat plate cut to an outline, thickness included.

    Parameters
    ----------
    outline : array_like, shape (n, 2)
        Corners x y in order, either way round [m]; a last corner that repeats the first is dropped.
    thickness : float
        Thickness along z [m]; the middle of the plate is at z = 0.
    density : float
        Density [kg/m^3].
    holes : sequence of array_like, shape (k, 2)
        Outlines of the holes [m].
    round_holes : array_like, shape (k, 3)
        Round holes: x, y and diameter [m].

    Returns
    -------
    RigidBody
        Mass [kg], mass center [m] and tensor about it [kg m^2], along the axes of the outline.

    Raises
    ------
    InputError
        Fewer than three corners, an outline that crosses or touches itself, a hole that is not wholly
        inside, holes that overlap, a thickness or density that is not positive.

    Notes
    -----
    Exact for a prism with square-cut edges. Straight edges: an arc is as good as its chords.

    References
    ----------
    C. Steger, On the Calculation of Arbitrary Moments of Polygons, TU Munich FGBV-96-05, 1996.
    """
    return section_body(plate_section(outline, holes, round_holes), thickness, density)


@dataclass(frozen=True, eq=False, slots=True)
class Section:
    """The flat section of a plate, its holes taken out.

    Parameters
    ----------
    area : float
        Area [m^2].
    center : ndarray, shape (3,)
        Center of the area, z = 0 [m].
    spread : ndarray, shape (3,)
        Means of x^2, y^2 and xy over the area, about its center [m^2].
    """

    area: float
    center: Points
    spread: Points


def plate_section(
    outline: ArrayLike, holes: Sequence[ArrayLike] = (), round_holes: ArrayLike = ()
) -> Section:
    """Return the section of a plate, which serves every thickness and density.

    Parameters
    ----------
    outline : array_like, shape (n, 2)
        Corners x y in order, either way round [m].
    holes : sequence of array_like, shape (k, 2)
        Outlines of the holes [m].
    round_holes : array_like, shape (k, 3)
        Round holes: x, y and diameter [m].

    Returns
    -------
    Section
        Area [m^2], center [m] and spread [m^2].

    Raises
    ------
    InputError
        As `plate_body`.

    Notes
    -----
    The holes must lie wholly inside and clear of each other.

    References
    ----------
    C. Steger, On the Calculation of Arbitrary Moments of Polygons, TU Munich FGBV-96-05, 1996.
    """
    corners = _outline("outline", outline)
    cuts = [_outline(f"hole {i + 1}", hole) for i, hole in enumerate(holes)]
    rounds = _round_holes(round_holes)
    _check_holes(corners, cuts)
    _check_round_holes(corners, cuts, rounds)
    pieces = [area_sums(corners), *(area_sums(cut) for cut in cuts), *(_circle_sums(row) for row in rounds)]
    signs = np.array([1.0] + [-1.0] * (len(pieces) - 1))
    shares = signs * [piece.area for piece in pieces]
    area = float(shares.sum())
    shares = shares / area
    # From the outline's own center, so that a plate far from the origin loses no digits.
    arms = np.array([piece.center for piece in pieces]) - pieces[0].center
    middle = shares @ arms
    x, y = (arms - middle).T
    spread = shares @ (
        np.array([piece.spread for piece in pieces]) + np.stack([x * x, y * y, x * y], axis=-1)
    )
    return Section(area, np.array([*(pieces[0].center + middle), 0.0]), spread)


def section_body(section: Section, thickness: float, density: float) -> RigidBody:
    """Return the body of a plate from its section.

    Parameters
    ----------
    section : Section
        Outline and holes.
    thickness : float
        Thickness along z [m]; the middle of the plate is at z = 0.
    density : float
        Density [kg/m^3].

    Returns
    -------
    RigidBody
        Mass [kg], mass center [m] and tensor about it [kg m^2], along the axes of the outline.

    Raises
    ------
    InputError
        A thickness or density that is not positive.

    Notes
    -----
    Exact for a prism with square-cut edges.

    References
    ----------
    C. Steger, On the Calculation of Arbitrary Moments of Polygons, TU Munich FGBV-96-05, 1996.
    """
    for name, value in (("thickness", thickness), ("density", density)):
        if not (isfinite(value) and value > 0.0):
            raise InputError(name, "a positive number", float(value))
    mass = density * thickness * section.area
    xx, yy, xy = section.spread.tolist()
    zz = thickness * thickness / 12.0
    tensor = [[yy + zz, -xy, 0.0], [-xy, xx + zz, 0.0], [0.0, 0.0, xx + yy]]
    return RigidBody.of(mass, section.center, mass * np.array(tensor))


def _circle_sums(row: Points) -> AreaSums:
    """Return area, center and spread of a round hole given as x, y, diameter."""
    each = row[2] ** 2 / 16.0
    return AreaSums(float(np.pi * row[2] ** 2 / 4.0), row[:2], np.array([each, each, 0.0]))


def _outline(name: str, outline: ArrayLike) -> Points:
    """Return the corners of an outline, or refuse it."""
    corners = np.asarray(outline, dtype=float)
    if corners.ndim != 2 or corners.shape[1] != 2:
        raise InputError(name, "rows of corners, each x and y")
    if not np.isfinite(corners).all():
        row = int(np.argmin(np.isfinite(corners).all(axis=1)))
        raise InputError(name, "finite numbers", where=f"corner {row + 1}")
    corners = without_closing_corner(corners)
    problem = outline_problem(corners)
    if problem:
        raise InputError(
            name,
            "corners in order round one closed outline",
            remedy=f"Found {problem}. List the corners as you meet them on a walk round the edge",
        )
    return corners


def _round_holes(round_holes: ArrayLike) -> Points:
    """Return the round holes as rows x, y, diameter, or refuse them."""
    rows = np.asarray(round_holes, dtype=float)
    if rows.size == 0:
        return np.zeros((0, 3))
    if rows.ndim != 2 or rows.shape[1] != 3:
        raise InputError("round_holes", "rows of x, y and diameter")
    good = np.isfinite(rows).all(axis=1) & (rows[:, 2] > 0.0)
    if not good.all():
        row = int(np.argmin(good))
        raise InputError(
            "round_holes",
            "finite, with a positive diameter",
            float(rows[row, 2]),
            where=f"round hole {row + 1}",
        )
    return rows


def _check_holes(corners: Points, cuts: list[Points]) -> None:
    """Refuse a polygon hole that is not wholly inside the outline, or that overlaps another."""
    for i, cut in enumerate(cuts):
        name = f"hole {i + 1}"
        if touching_edges(corners, cut) or not holds_point(corners, cut[0]):
            raise InputError(
                name,
                "wholly inside the outline",
                "a hole that reaches its edge",
                remedy="Draw a notch as part of the outline",
            )
        for j, other in enumerate(cuts[:i]):
            if touching_edges(cut, other) or holds_point(cut, other[0]) or holds_point(other, cut[0]):
                raise InputError(name, f"clear of hole {j + 1}", "two holes that overlap or touch")


def _check_round_holes(corners: Points, cuts: list[Points], rounds: Points) -> None:
    """Refuse a round hole that is not wholly inside the outline, or that overlaps another hole."""
    slack = TOUCHING * float(np.ptp(corners, axis=0).max())
    for i, (x, y, diameter) in enumerate(rounds):
        name, radius = f"round hole {i + 1}", diameter / 2.0 - slack
        if not holds_point(corners, (x, y)) or distance_to_edges(corners, (x, y)) < radius:
            raise InputError(
                name,
                "wholly inside the outline",
                "a hole that reaches its edge",
                remedy="The last number of a round hole is its diameter",
            )
        for j, cut in enumerate(cuts):
            if holds_point(cut, (x, y)) or distance_to_edges(cut, (x, y)) < radius:
                raise InputError(name, f"clear of hole {j + 1}", "two holes that overlap")
        for j, (other_x, other_y, other_diameter) in enumerate(rounds[:i]):
            if np.hypot(x - other_x, y - other_y) < radius + other_diameter / 2.0:
                raise InputError(name, f"clear of round hole {j + 1}", "two holes that overlap")
