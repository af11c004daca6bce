"""Closed outlines of straight edges: area sums, and whether an outline is one that a plate can have."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final, TypeAlias

import numpy as np
from numpy.typing import ArrayLike, NDArray

Points: TypeAlias = NDArray[np.float64]

# Two corners or edges closer than this, relative to the outline, count as touching.
TOUCHING: Final = 1e-12
# Edges compared at a time, which bounds the memory a long outline takes.
_BLOCK: Final = 256


@dataclass(frozen=True, eq=False, slots=True)
class AreaSums:
    """Area, center and spread of a flat outline.

    Parameters
    ----------
    area : float
        Area [m^2], positive.
    center : ndarray, shape (2,)
        Center of the area [m].
    spread : ndarray, shape (3,)
        Means of x^2, y^2 and xy over the area, about its center [m^2].
    """

    area: float
    center: NDArray[np.float64]
    spread: NDArray[np.float64]


def area_sums(outline: ArrayLike) -> AreaSums:
    """Return area, center and spread of a closed outline of straight edges.

    Parameters
    ----------
    outline : array_like, shape (n, 2)
        Corners in order, either way round [m].

    Returns
    -------
    AreaSums
        Area [m^2], center [m], means of x^2, y^2 and xy about the center [m^2].

    Notes
    -----
    The sums are taken from the first corner, then from the center, so that an outline far from the origin
    loses no digits. Valid for outlines that do not cross themselves.

    References
    ----------
    C. Steger, On the Calculation of Arbitrary Moments of Polygons, TU Munich FGBV-96-05, 1996.
    """
    points = np.asarray(outline, dtype=float)
    local = points - points[0]
    after = np.roll(local, -1, axis=0)
    twice = local[:, 0] * after[:, 1] - after[:, 0] * local[:, 1]
    total = twice.sum()
    middle = ((local + after) * twice[:, None]).sum(axis=0) / (3.0 * total)
    local, after = local - middle, after - middle
    twice = local[:, 0] * after[:, 1] - after[:, 0] * local[:, 1]
    x0, y0, x1, y1 = local[:, 0], local[:, 1], after[:, 0], after[:, 1]
    xx = ((x0 * x0 + x0 * x1 + x1 * x1) * twice).sum()
    yy = ((y0 * y0 + y0 * y1 + y1 * y1) * twice).sum()
    xy = ((2.0 * x0 * y0 + x0 * y1 + x1 * y0 + 2.0 * x1 * y1) * twice).sum() / 2.0
    return AreaSums(float(abs(total) / 2.0), points[0] + middle, np.array([xx, yy, xy]) / (6.0 * total))


def without_closing_corner(outline: Points) -> Points:
    """Return the corners without a last one that repeats the first.

    Parameters
    ----------
    outline : ndarray, shape (n, 2)
        Corners in order [m].

    Returns
    -------
    ndarray, shape (n, 2) or (n - 1, 2)
        Corners, each once [m].

    Notes
    -----
    Only an exact repeat is dropped.

    References
    ----------
    J. O'Rourke, Computational Geometry in C, 2nd ed., section 1.3 (a polygon as its list of corners).
    """
    if len(outline) > 1 and np.array_equal(outline[0], outline[-1]):
        return outline[:-1]
    return outline


def outline_problem(outline: Points) -> str | None:
    """Return what keeps these corners from being the outline of a plate, or None.

    Parameters
    ----------
    outline : ndarray, shape (n, 2)
        Corners in order [m].

    Returns
    -------
    str or None
        What was found, worded to follow "found" [-]; None for a simple outline.

    Notes
    -----
    Edges that only touch are refused too: two lobes through one corner would cancel in the area sums.

    References
    ----------
    J. O'Rourke, Computational Geometry in C, 2nd ed., section 1.1 (simple polygons).
    """
    count = len(outline)
    if count < 3:
        return f"only {count} corner{'' if count == 1 else 's'}; at least three are needed"
    edge = np.roll(outline, -1, axis=0) - outline
    size = float(np.ptp(outline, axis=0).max())
    short = np.flatnonzero(np.hypot(edge[:, 0], edge[:, 1]) <= TOUCHING * size)
    if short.size:
        first = int(short[0])
        return f"corner {(first + 1) % count + 1} in the same place as corner {first + 1}"
    back = np.roll(edge, -1, axis=0)
    turn = edge[:, 0] * back[:, 1] - edge[:, 1] * back[:, 0]
    folded = np.flatnonzero((np.abs(turn) <= TOUCHING * size**2) & ((edge * back).sum(axis=1) < 0.0))
    if folded.size:
        return f"an edge that runs back over itself at corner {(int(folded[0]) + 1) % count + 1}"
    pair = touching_edges(outline, outline, same=True)
    if pair:
        return f"edge {pair[0] + 1} and edge {pair[1] + 1} that cross or touch"
    return None


def touching_edges(one: Points, other: Points, *, same: bool = False) -> tuple[int, int] | None:
    """Return the first two edges that share a point, of two outlines or of one, neighbors left out.

    Parameters
    ----------
    one : ndarray, shape (n, 2)
        Corners in order [m].
    other : ndarray, shape (k, 2)
        Corners of the other outline [m].
    same : bool
        Both are the same outline: neighboring edges share a corner and do not count.

    Returns
    -------
    tuple of int or None
        Numbers of the two edges, counted from 0 [-].

    Notes
    -----
    Touching to within TOUCHING of the outline counts. Every pair is tried, a block at a time.

    References
    ----------
    J. O'Rourke, Computational Geometry in C, 2nd ed., section 1.5 (segment intersection).
    """
    p, q = one, np.roll(one, -1, axis=0)
    r, s = other, np.roll(other, -1, axis=0)
    slack = TOUCHING * float(np.ptp(np.concatenate([one, other]), axis=0).max())
    for start in range(0, len(p), _BLOCK):
        rows = slice(start, start + _BLOCK)
        meet = _meet(p[rows, None], q[rows, None], r[None], s[None], slack)
        if same:
            i, j = np.arange(start, start + len(meet))[:, None], np.arange(len(r))[None]
            gap = (j - i) % len(r)
            meet &= (gap > 1) & (gap < len(r) - 1) & (j > i)
        if meet.any():
            row, column = np.argwhere(meet)[0]
            return start + int(row), int(column)
    return None


def _meet(p: Points, q: Points, r: Points, s: Points, slack: float) -> NDArray[np.bool_]:
    """Return where the closed segments p q and r s share a point, to within `slack`."""
    boxes = np.all(
        (np.maximum(p, q) >= np.minimum(r, s) - slack) & (np.maximum(r, s) >= np.minimum(p, q) - slack),
        axis=-1,
    )
    r_s_apart = _side(p, q, r, slack) * _side(p, q, s, slack) > 0.0
    p_q_apart = _side(r, s, p, slack) * _side(r, s, q, slack) > 0.0
    return np.asarray(boxes & ~r_s_apart & ~p_q_apart)


def _side(a: Points, b: Points, point: Points, slack: float) -> Points:
    """Return on which side of the line a b a point lies: +1 left, -1 right, 0 on it."""
    along, arm = b - a, point - a
    cross = along[..., 0] * arm[..., 1] - along[..., 1] * arm[..., 0]
    on_line = np.abs(cross) <= slack * np.hypot(along[..., 0], along[..., 1])
    return np.where(on_line, 0.0, np.sign(cross))


def holds_point(outline: Points, point: ArrayLike) -> bool:
    """Return whether a point lies inside an outline, by the number of edges to its right.

    Parameters
    ----------
    outline : ndarray, shape (n, 2)
        Corners in order [m].
    point : array_like, shape (2,)
        Point [m].

    Returns
    -------
    bool
        True inside [-].

    Notes
    -----
    A point on the edge itself may count either way.

    References
    ----------
    J. O'Rourke, Computational Geometry in C, 2nd ed., section 7.4 (point in polygon).
    """
    x, y = np.asarray(point, dtype=float)
    after = np.roll(outline, -1, axis=0)
    spans = (outline[:, 1] > y) != (after[:, 1] > y)
    start, end = outline[spans], after[spans]
    reach = start[:, 0] + (y - start[:, 1]) * (end[:, 0] - start[:, 0]) / (end[:, 1] - start[:, 1])
    return bool(np.count_nonzero(reach > x) % 2)


def distance_to_edges(outline: Points, point: ArrayLike) -> float:
    """Return the distance from a point to the nearest edge of an outline.

    Parameters
    ----------
    outline : ndarray, shape (n, 2)
        Corners in order [m].
    point : array_like, shape (2,)
        Point [m].

    Returns
    -------
    float
        Distance [m], the same inside and outside.

    Notes
    -----
    Beyond the end of an edge the distance is to its corner.

    References
    ----------
    C. Ericson, Real-Time Collision Detection, section 5.1.2 (closest point on a segment).
    """
    edge = np.roll(outline, -1, axis=0) - outline
    arm = np.asarray(point, dtype=float) - outline
    share = np.clip((arm * edge).sum(axis=1) / (edge * edge).sum(axis=1), 0.0, 1.0)
    left = arm - share[:, None] * edge
    return float(np.hypot(left[:, 0], left[:, 1]).min())
