"""Plates cut to an outline, against boxes by hand, extruded meshes and exact arithmetic."""

from __future__ import annotations

from fractions import Fraction
from itertools import pairwise

import numpy as np
import pytest
import trimesh
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.typing import ArrayLike, NDArray

from rigidsheet.core.body import RigidBody, combine, removed
from rigidsheet.core.errors import InputError
from rigidsheet.core.plates import plate_body
from rigidsheet.core.shapes import shape_body, shape_mass

Array = NDArray[np.float64]
SQUARE = [(0.0, 0.0), (1.0, 0.0), (1.0, 1.0), (0.0, 1.0)]
STEEL = 7850.0


def box(x0: float, x1: float, y0: float, y1: float, t: float) -> RigidBody:
    """Return a steel box from m (b^2 + c^2)/12 (handbook, from memory), mid-plane at z = 0."""
    a, b = x1 - x0, y1 - y0
    m = STEEL * a * b * t
    moments = m / 12.0 * np.array([b * b + t * t, a * a + t * t, a * a + b * b])
    return RigidBody.of(m, [(x0 + x1) / 2, (y0 + y1) / 2, 0.0], np.diag(moments))


def assert_same(one: RigidBody, other: RigidBody, rtol: float = 1e-13) -> None:
    assert one.mass == pytest.approx(other.mass, rel=rtol)
    np.testing.assert_allclose(one.center, other.center, rtol=rtol, atol=rtol)
    np.testing.assert_allclose(
        one.inertia, other.inertia, rtol=10 * rtol, atol=10 * rtol * np.abs(other.inertia).max()
    )


def star(seed: int, count: int = 11) -> list[tuple[float, float]]:
    """Return a ragged outline that can't cross itself: its corners are in order of direction."""
    rng = np.random.default_rng(seed)
    angle = 2.0 * np.pi * (np.arange(count) + rng.uniform(-0.3, 0.3, count)) / count
    radius = rng.uniform(0.3, 1.0, count)
    return list(zip(radius * np.cos(angle), radius * np.sin(angle), strict=True))


def extruded(outline: ArrayLike, thickness: float) -> trimesh.Trimesh:
    """Return a star-shaped prism as a mesh: two fans from the origin and the walls."""
    flat = np.asarray(outline, dtype=float)
    n = len(flat)
    low, high = -thickness / 2.0, thickness / 2.0
    points = [[x, y, z] for z in (low, high) for x, y in flat] + [[0, 0, low], [0, 0, high]]
    faces = []
    for i in range(n):
        j = (i + 1) % n
        faces += [[2 * n, j, i], [2 * n + 1, n + i, n + j], [i, j, n + j], [i, n + j, n + i]]
    return trimesh.Trimesh(points, faces, process=False)


def test_rectangle() -> None:
    outline = [(0.2, 0.1), (1.4, 0.1), (1.4, 0.6), (0.2, 0.6)]
    assert_same(plate_body(outline, 0.02, STEEL), box(0.2, 1.4, 0.1, 0.6, 0.02))


def test_bracket_of_two_boxes() -> None:
    """An L-shaped outline is two boxes."""
    outline = [(0.0, 0.0), (0.6, 0.0), (0.6, 0.1), (0.1, 0.1), (0.1, 0.5), (0.0, 0.5)]
    whole = combine([box(0, 0.6, 0, 0.1, 0.012), box(0, 0.1, 0.1, 0.5, 0.012)])
    assert_same(plate_body(outline, 0.012, STEEL), whole)
    assert plate_body(outline, 0.012, STEEL).inertia[0, 1] != 0.0


@settings(max_examples=40, deadline=None)
@given(st.integers(0, 2**32 - 1))
def test_ragged_outline_equals_its_mesh(seed: int) -> None:
    """Divergence theorem over the triangles of the extruded prism (trimesh): exact for flat faces."""
    outline = star(seed)
    found = trimesh.triangles.mass_properties(extruded(outline, 0.3).triangles, density=STEEL)
    body = plate_body(outline, 0.3, STEEL)
    assert body.mass == pytest.approx(found["mass"], rel=1e-12)
    np.testing.assert_allclose(body.center, found["center_mass"], atol=1e-12)
    scale = np.abs(found["inertia"]).max()
    np.testing.assert_allclose(body.inertia, found["inertia"], atol=1e-11 * scale)


@settings(max_examples=40, deadline=None)
@given(st.integers(0, 2**32 - 1), st.integers(0, 10))
def test_either_way_round_and_any_first_corner(seed: int, first: int) -> None:
    outline = star(seed)
    body = plate_body(outline, 0.01, STEEL)
    assert_same(plate_body(outline[::-1], 0.01, STEEL), body, rtol=1e-12)
    assert_same(plate_body(outline[first:] + outline[:first], 0.01, STEEL), body, rtol=1e-12)
    assert_same(plate_body([*outline, outline[0]], 0.01, STEEL), body)


def test_holes_are_taken_away() -> None:
    """Polygon hole: a box by hand; round hole: a cylinder (handbook, from memory)."""
    t = 0.025
    hole = [(0.1, 0.1), (0.4, 0.1), (0.4, 0.3), (0.1, 0.3)]
    body = plate_body(SQUARE, t, STEEL, holes=[hole[::-1]], round_holes=[(0.7, 0.6, 0.2)])
    m = STEEL * np.pi * 0.1**2 * t
    across = m * (0.1**2 / 4.0 + t**2 / 12.0)
    bore = RigidBody.of(m, [0.7, 0.6, 0.0], np.diag([across, across, m * 0.1**2 / 2.0]))
    assert_same(body, removed(removed(box(0, 1, 0, 1, t), box(0.1, 0.4, 0.1, 0.3, t)), bore))


def test_disk_from_many_corners() -> None:
    """Regular polygon of n corners: area n/2 R^2 sin(2 pi/n), against the cylinder for large n."""
    angle = 2.0 * np.pi * np.arange(2000) / 2000
    body = plate_body(np.stack([0.3 * np.cos(angle), 0.3 * np.sin(angle)], axis=1), 0.05, STEEL)
    assert body.mass == pytest.approx(STEEL * 0.05 * 1000 * 0.09 * np.sin(2 * np.pi / 2000), rel=1e-13)
    mass = float(shape_mass("cylinder", STEEL, {"R": 0.3, "L": 0.05}))
    np.testing.assert_allclose(
        body.inertia, shape_body("cylinder", mass, {"R": 0.3, "L": 0.05}).inertia, rtol=5e-6, atol=1e-12
    )


def exact_area_moments(outline: list[tuple[float, float]]) -> tuple[Fraction, Fraction, Fraction, Fraction]:
    """Return the area, center and mean of x^2 about the center, by rational arithmetic on the floats.

    Sum over the triangles from the first corner: mean of x^2 over a triangle is the sum of all products of
    its corners' x, pairs once and squares once, over 6.
    """
    points = [(Fraction(float(x)), Fraction(float(y))) for x, y in outline]
    (x0, y0), area, first_x, first_y, second = points[0], Fraction(), Fraction(), Fraction(), Fraction()
    for (x1, y1), (x2, y2) in pairwise(points[1:]):
        a = ((x1 - x0) * (y2 - y0) - (x2 - x0) * (y1 - y0)) / 2
        u, v = x1 - x0, x2 - x0
        area += a
        first_x += a * (u + v) / 3
        first_y += a * (y1 - y0 + y2 - y0) / 3
        second += a * (u * u + v * v + u * v) / 6
    shift = first_x / area
    return abs(area), x0 + shift, y0 + first_y / area, second / area - shift * shift


@pytest.mark.parametrize("far", [0.0, 1e3, 1e6])
def test_a_far_outline_loses_no_digits(far: float) -> None:
    """Rational arithmetic on the same floats."""
    outline = [(x + far, y - far) for x, y in star(3)]
    area, x, y, xx = exact_area_moments(outline)
    body = plate_body(outline, 1.0, 1.0)
    assert body.mass == pytest.approx(float(area), rel=1e-14)
    np.testing.assert_allclose(body.center[:2], [float(x), float(y)], rtol=1e-15, atol=1e-15)
    assert body.inertia[1, 1] - body.mass / 12.0 == pytest.approx(float(area * xx), rel=1e-13)


BOW_TIE = [(0.0, 0.0), (1.0, 1.0), (1.0, 0.0), (0.0, 1.0)]
REFUSED_OUTLINES: list[tuple[ArrayLike, str]] = [
    (BOW_TIE, "edge 1 and edge 3 that cross or touch"),
    # Two lobes through one shared corner: their areas would cancel.
    ([(-1, -1), (0, 0), (1, 1), (1, -1), (0, 0), (-1, 1)], "cross or touch"),
    # A corner that stands on another edge.
    ([(0, 0), (2, 0), (2, 1), (1, 0), (0, 1)], "cross or touch"),
    ([(0, 0), (1, 0)], "only 2 corners"),
    ([(0, 0), (1, 0), (0, 0)], "only 2 corners"),
    (np.zeros((0, 2)), "only 0 corners"),
    ([(0, 0), (1, 0), (2, 0)], "runs back over itself"),
    ([(0, 0), (2, 0), (1, 0), (1, 1)], "runs back over itself at corner 2"),
    ([(0, 0), (1, 0), (1, 0), (0, 1)], "corner 3 in the same place as corner 2"),
    ([(0, 0, 0), (1, 0, 0), (0, 1, 0)], "each x and y"),
    ([(0, 0), (1, 0), (0, np.nan)], "corner 3"),
]


@pytest.mark.parametrize(("outline", "words"), REFUSED_OUTLINES)
def test_refused_outline(outline: ArrayLike, words: str) -> None:
    with pytest.raises(InputError, match=words) as caught:
        plate_body(outline, 0.01, STEEL)
    assert caught.value.argument == "outline"
    assert len(str(caught.value)) < 255


def test_crossing_far_apart_in_a_long_outline() -> None:
    """One corner of a 600-corner ring pulled out beyond a later part of it."""
    angle = 2.0 * np.pi * np.arange(600) / 600
    ring = np.stack([np.cos(angle), np.sin(angle)], axis=1)
    assert plate_body(ring, 0.01, STEEL).mass > 0.0
    ring[300] = (0.3, -1.2)
    with pytest.raises(InputError, match=r"edge (300|301) and edge 4\d\d that cross or touch"):
        plate_body(ring, 0.01, STEEL)


def test_a_corner_on_a_slanted_edge_is_touching() -> None:
    """The same touch as on a straight edge, turned so that rounding moves the corner off the line."""
    for angle in np.radians(np.arange(1.0, 90.0, 7.0)):
        turn = np.array([[np.cos(angle), -np.sin(angle)], [np.sin(angle), np.cos(angle)]])
        outline = np.array([(0, 0), (2, 0), (2, 1), (0.7, 0), (0, 1)]) @ turn.T
        with pytest.raises(InputError, match="cross or touch"):
            plate_body(outline, 0.01, STEEL)


def test_round_hole_in_line_with_an_inner_edge() -> None:
    """Beyond the end of an edge its line does not count: a hole at the heel of an L-shaped bracket is inside."""
    outline = [(0.0, 0.0), (0.6, 0.0), (0.6, 0.1), (0.1, 0.1), (0.1, 0.5), (0.0, 0.5)]
    body = plate_body(outline, 0.01, 1000.0, round_holes=[(0.05, 0.1, 0.06)])
    assert body.mass == pytest.approx(10.0 * (0.1 - np.pi * 0.03**2), rel=1e-14)


TRIANGLE = [(0.2, 0.2), (0.4, 0.2), (0.2, 0.4)]
REFUSED_HOLES: list[tuple[dict[str, object], str, str]] = [
    ({"holes": [[(0.5, 0.5), (3.0, 0.5), (0.5, 0.6)]]}, "hole 1", "wholly inside"),
    ({"holes": [[(5.0, 5.0), (6.0, 5.0), (5.0, 6.0)]]}, "hole 1", "wholly inside"),
    ({"holes": [[(-1.0, -1.0), (5.0, -1.0), (5.0, 5.0), (-1.0, 5.0)]]}, "hole 1", "wholly inside"),
    ({"holes": [[(0.0, 0.4), (0.2, 0.4), (0.0, 0.6)]]}, "hole 1", "notch"),
    ({"holes": [TRIANGLE, TRIANGLE]}, "hole 2", "clear of hole 1"),
    ({"holes": [TRIANGLE, [(0.1, 0.1), (0.8, 0.1), (0.1, 0.8)]]}, "hole 2", "clear of hole 1"),
    ({"holes": [[(0.1, 0.1), (0.8, 0.1), (0.1, 0.8)], TRIANGLE]}, "hole 2", "clear of hole 1"),
    ({"holes": [BOW_TIE]}, "hole 1", "cross"),
    ({"round_holes": [(0.0, 0.0, 0.1)]}, "round hole 1", "diameter"),
    ({"round_holes": [(0.5, 0.5, 1.1)]}, "round hole 1", "wholly inside"),
    ({"round_holes": [(5.0, 0.5, 0.1)]}, "round hole 1", "wholly inside"),
    ({"round_holes": [(0.5, 0.5, 0.2), (0.5, 0.65, 0.2)]}, "round hole 2", "clear of round hole 1"),
    ({"round_holes": [(0.25, 0.25, 0.02)], "holes": [TRIANGLE]}, "round hole 1", "clear of hole 1"),
    ({"round_holes": [(0.3, 0.3, 0.5)], "holes": [TRIANGLE]}, "round hole 1", "clear of hole 1"),
    ({"round_holes": [(0.5, 0.5, -0.2)]}, "round_holes", "positive diameter"),
    ({"round_holes": [(0.5, np.nan, 0.2)]}, "round_holes", "finite"),
    ({"round_holes": [(0.5, 0.5)]}, "round_holes", "x, y and diameter"),
]


@pytest.mark.parametrize(("holes", "argument", "words"), REFUSED_HOLES)
def test_refused_hole(holes: dict[str, object], argument: str, words: str) -> None:
    with pytest.raises(InputError, match=words) as caught:
        plate_body(SQUARE, 0.01, STEEL, **holes)  # type: ignore[arg-type]
    assert caught.value.argument == argument


def test_round_holes_may_just_touch_each_other() -> None:
    body = plate_body(SQUARE, 0.01, 1000.0, round_holes=[(0.3, 0.5, 0.2), (0.5, 0.5, 0.2)])
    assert body.mass == pytest.approx(10.0 * (1.0 - 2.0 * np.pi * 0.01), rel=1e-14)


@pytest.mark.parametrize("value", [0.0, -1.0, np.nan, np.inf])
def test_refused_thickness_and_density(value: float) -> None:
    with pytest.raises(InputError, match="`thickness` must be a positive number"):
        plate_body(SQUARE, value, STEEL)
    with pytest.raises(InputError, match="`density` must be a positive number"):
        plate_body(SQUARE, 0.01, value)
