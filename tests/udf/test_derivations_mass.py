"""Mass through the cells: tensors, plates and parts lists against points, scipy's rotations and numpy."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from cell_calls import (
    OMITTED,
    array,
    ask,
    body_cells,
    number,
    refused,
    row,
    rows,
    tensor_of_record,
    terms,
    vector,
)
from part_clouds import Cloud, box, polygon, round_part, together
from scipy.spatial.transform import Rotation

SEEDS = pytest.mark.parametrize("seed", range(8))


def particles(seed: int, count: int = 8) -> Cloud:
    rng = np.random.default_rng(seed)
    return Cloud(
        rng.uniform(0.2, 3.0, count), rng.normal(size=(count, 3)) * [1.0, 0.6, 0.3] + rng.normal(size=3)
    )


def close(found: Any, expected: Any, tight: float = 1e-12) -> None:
    """Compare to a part of the largest term, as tensors turned in space lose small terms to rounding."""
    scale = float(np.abs(np.asarray(expected)).max())
    np.testing.assert_allclose(found, expected, rtol=0, atol=tight * scale)


@SEEDS
def test_turned_tensor_is_that_of_the_turned_points(seed):
    """Reference: scipy Rotation.from_rotvec on the particles themselves."""
    cloud, rng = particles(seed), np.random.default_rng(seed + 50)
    axis, angle = rng.normal(size=3), float(rng.uniform(-3, 3))
    turn = Rotation.from_rotvec(angle * axis / np.linalg.norm(axis))
    found = array("RB_TURN", rows(cloud.tensor()), row(axis), angle)
    close(found, cloud.turned(turn, cloud.center).tensor())
    word = array("RB_TURN", rows(cloud.tensor()), "y", f"{np.degrees(angle):.17g} deg")
    close(word, cloud.turned(Rotation.from_euler("y", angle), cloud.center).tensor())


@SEEDS
def test_moved_body_is_that_of_the_turned_points(seed):
    """Reference: scipy Rotation on the particles, about a line through a point."""
    cloud, rng = particles(seed), np.random.default_rng(seed + 60)
    axis, angle, through = rng.normal(size=3), float(rng.uniform(-3, 3)), rng.normal(size=3)
    turn = Rotation.from_rotvec(angle * axis / np.linalg.norm(axis))
    body = body_cells(cloud.mass, cloud.center, cloud.tensor())
    for cell, point in ((row(through), through), ("origin", np.zeros(3)), ("mass center", cloud.center)):
        mass, center, tensor = tensor_of_record(ask("RB_MOVE", body, row(axis), angle, cell))
        moved = cloud.turned(turn, point)
        assert mass == pytest.approx(cloud.mass, rel=1e-15)
        close(center, moved.center)
        close(tensor, moved.tensor())


@SEEDS
def test_axis_inertia_is_the_sum_of_squared_distances(seed):
    """First principles: sum of m times the squared distance of each particle from the line."""
    cloud, rng = particles(seed), np.random.default_rng(seed + 70)
    direction, offset = rng.normal(size=(2, 3))
    line = direction / np.linalg.norm(direction)

    def about(point):
        return float(cloud.masses @ (np.cross(cloud.points - point, line) ** 2).sum(axis=1))

    tensor = rows(cloud.tensor())
    assert number("RB_AXIS_INERTIA", tensor, row(direction)) == pytest.approx(about(cloud.center), rel=1e-12)
    off = number("RB_AXIS_INERTIA", tensor, row(direction), cloud.mass, row(offset))
    assert off == pytest.approx(about(cloud.center - offset), rel=1e-12)


@SEEDS
def test_shift_is_the_sum_about_the_other_point(seed):
    """First principles: the particles' tensor about another point, both ways."""
    cloud = particles(seed)
    offset = np.random.default_rng(seed + 80).normal(size=3)
    there = cloud.tensor(cloud.center - offset)
    close(array("RB_SHIFT", rows(cloud.tensor()), cloud.mass, row(offset)), there)
    close(array("RB_SHIFT_BACK", rows(there), cloud.mass, row(offset)), cloud.tensor(), 1e-11)


def orthonormal(axes: np.ndarray) -> None:
    np.testing.assert_allclose(axes.T @ axes, np.eye(3), rtol=0, atol=1e-12)
    assert np.linalg.det(axes) == pytest.approx(1.0, abs=1e-12)


@SEEDS
def test_principal_axes_match_eigenvectors(seed):
    """Reference: numpy.linalg.eigh; an axis may point either way."""
    tensor = particles(seed).tensor()
    moments, axes = vector("RB_PRINCIPAL", rows(tensor)), array("RB_PRINCIPAL", rows(tensor), "axes")
    expected, vectors = np.linalg.eigh(tensor)
    np.testing.assert_allclose(moments, expected, rtol=1e-12)
    np.testing.assert_allclose(np.abs((axes * vectors).sum(axis=0)), 1.0, atol=1e-12)
    orthonormal(axes)
    words = [number("RB_PRINCIPAL", rows(tensor), w) for w in ("smallest", "middle", "largest")]
    np.testing.assert_allclose(words, moments, rtol=0)


@SEEDS
@pytest.mark.parametrize(
    "moments",
    [
        (2, 2, 2),
        (1, 1, 2),
        (1, 2, 2),
        (0, 3, 3),
        (1, 2, 3),
        (1e-9, 1, 1),
        (1, 1 + 1e-15, 1.5),
        (1, 1, 1 + 1e-9),
    ],
    ids=[
        "sphere",
        "disk",
        "prolate",
        "slender",
        "flat",
        "nearly slender",
        "equal but rounding",
        "nearly a sphere",
    ],
)
def test_principal_axes_at_equal_moments_and_for_flat_and_slender_bodies(seed, moments):
    """Property: right-handed and orthonormal to 1e-12, and they make the tensor diagonal with these moments."""
    scale = 10.0 ** np.random.default_rng(seed).uniform(-9, 9)
    turn = Rotation.random(random_state=seed).as_matrix() if seed else np.eye(3)
    tensor = turn @ np.diag(moments) @ turn.T * scale
    tensor = (tensor + tensor.T) / 2
    axes = array("RB_PRINCIPAL", rows(tensor), "axes")
    orthonormal(axes)
    close(vector("RB_PRINCIPAL", rows(tensor)), np.sort(moments) * scale)
    close(axes.T @ tensor @ axes, np.diag(np.sort(moments)) * scale)


def outline(rng: np.random.Generator, count: int) -> np.ndarray:
    """Return the corners of a star-shaped outline."""
    angles = np.linspace(0, 2 * np.pi, count, endpoint=False) + rng.uniform(0, 0.4, count)
    return np.column_stack((np.cos(angles), np.sin(angles))) * rng.uniform(0.6, 1.0, count)[:, None]


@SEEDS
def test_plate_with_holes_is_the_signed_sum_of_triangles_and_disks(seed):
    """Reference: signed triangles integrated by their mid-side points, round holes by Gauss rings."""
    rng = np.random.default_rng(seed + 90)
    place = rng.normal(size=2) * 3
    outer, hole = outline(rng, 9) + place, outline(rng, 5) * 0.15 + [0.2, 0.1] + place
    thickness, density = 0.02, 7850.0
    spots = [(-0.25, 0.05, 0.16), (0.0, -0.28, 0.22)]
    table: list[list[Any]] = [["loop", "x [mm]", "y [mm]", "D [mm]"]]
    table += [["outline", 1e3 * x, 1e3 * y, None] for x, y in outer]
    table += [["window", 1e3 * x, 1e3 * y, None] for x, y in hole[::-1]]
    table += [["bore", 1e3 * (x + place[0]), 1e3 * (y + place[1]), 1e3 * d] for x, y, d in spots]
    cloud = [polygon(outer, thickness), polygon(hole, thickness).times(-1.0)]
    for x, y, d in spots:
        disk = round_part(0.0, d / 2, -thickness / 2, thickness / 2)
        cloud.append(disk.moved(np.array([x + place[0], y + place[1], 0.0])).times(-1.0))
    whole = together(cloud).times(density)
    mass, center, tensor = tensor_of_record(ask("RB_PLATE", table, "20 mm", density))
    assert mass == pytest.approx(whole.mass, rel=1e-12)
    close(center, whole.center)
    close(tensor, whole.tensor(), 1e-11)
    plain = tensor_of_record(ask("RB_PLATE", rows(outer), thickness, "7.85 g/cm^3"))
    close(plain[2], polygon(outer, thickness).times(density).tensor(), 1e-11)


def as_table(lines: list[dict[str, Any]]) -> list[list[Any]]:
    head = list(dict.fromkeys(k for entry in lines for k in entry))
    return [head, *([entry.get(k) for k in head] for entry in lines)]


def turned_xyz(cloud: Cloud, degrees: np.ndarray, about: np.ndarray) -> Cloud:
    """Turn about the sheet's x, then y, then z (scipy: lower case is extrinsic)."""
    return cloud.turned(Rotation.from_euler("xyz", degrees, degrees=True), about)


class Maker:
    """Makes random parts both as a line of the list and as points."""

    def __init__(self, seed: int) -> None:
        self.rng = np.random.default_rng(seed)

    def own(self) -> tuple[dict[str, Any], Cloud]:
        """Return a shape's cells and its points about its datum, at unit density."""
        a, b, c = (float(v) for v in self.rng.uniform(0.1, 0.9, 3))
        pick = self.rng.integers(5)
        if pick == 0:
            return {"shape": "box", "L [mm]": 1e3 * a, "W [mm]": 1e3 * b, "H [mm]": 1e3 * c}, box(a, b, c)
        if pick == 1:
            return {"shape": "tube", "sizes": f"OD {a:.17g} m; ID {a * b:.17g} m; L {c:.17g} m"}, round_part(
                a * b / 2, a / 2, -c / 2, c / 2
            )
        if pick == 2:
            return {"shape": "solid cylinder", "sizes": f"D {a:.17g} m; L {c:.17g} m"}, round_part(
                0, a / 2, -c / 2, c / 2
            )
        if pick == 3:
            return {"shape": "solid cone", "sizes": f"R {a:.17g} m; H {c:.17g} m"}, round_part(
                0, a, 0, c, 1.0
            )
        return {"shape": "frustum", "sizes": f"R1 {a:.17g} m; R2 {a * b:.17g} m; H {c:.17g} m"}, round_part(
            0, a, 0, c, 1 - b
        )

    def heavy(self, cells: dict[str, Any], cloud: Cloud) -> tuple[dict[str, Any], Cloud]:
        """Add a mass or a density."""
        if self.rng.random() < 0.5:
            mass = float(self.rng.uniform(5, 50))
            return {**cells, "mass [kg]": mass}, cloud.scaled_to(mass)
        density = float(self.rng.uniform(0.5, 8.0))
        return {**cells, "density [g/cm^3]": density}, cloud.times(1e3 * density)

    def placed(self, cells: dict[str, Any], cloud: Cloud) -> tuple[dict[str, Any], Cloud]:
        """Add turns and a place, of the mass center or of the datum."""
        turn, at = self.rng.uniform(-180, 180, 3), self.rng.normal(size=3)
        by_datum = self.rng.random() < 0.5
        start = np.zeros(3) if by_datum else cloud.center
        out = turned_xyz(cloud, turn, start).moved(at - start)
        cells = {**cells, "at": "datum" if by_datum else "mass center"}
        cells |= {f"turn {k} [deg]": float(v) for k, v in zip("xyz", turn, strict=True)}
        return cells | {f"{k} [mm]": float(1e3 * v) for k, v in zip("xyz", at, strict=True)}, out

    def part(self, name: str) -> tuple[dict[str, Any], Cloud]:
        cells, cloud = self.placed(*self.heavy(*self.own()))
        return {"part": name, **cells}, cloud


def circle(cloud: Cloud, count: int, axis: str, point: np.ndarray) -> Cloud:
    angles = 2 * np.pi * np.arange(count) / count
    return together([cloud.turned(Rotation.from_euler(axis, a), point) for a in angles])


def same_body(found: Any, cloud: Cloud) -> None:
    mass, center, tensor = tensor_of_record(found)
    assert mass == pytest.approx(cloud.mass, rel=1e-12)
    close(center, cloud.center, 1e-11)
    close(tensor, cloud.tensor(), 1e-11)


@SEEDS
def test_rollup_of_turned_shapes_with_cut_outs_and_patterns(seed):
    """Reference: the same parts as exact point sets, copied, turned and cut out point by point."""
    make = Maker(seed + 1000)
    lines, clouds = map(list, zip(*(make.part(f"part {k}") for k in range(7)), strict=True))
    for k in (4, 5):  # lighten what is cut out, so that a body is left
        lines[k].pop("density [g/cm^3]", None)
        lines[k] |= {"mass [kg]": 0.5, "qty": -1.0}
        clouds[k] = clouds[k].scaled_to(0.5).times(-1.0)
    axis, point, step = "xyz"[seed % 3], make.rng.normal(size=3), make.rng.normal(size=3)
    places = [f"pattern {k} [m]" for k in "xyz"]
    lines[0] |= {"qty": 5.0, "pattern": f"circle {axis}", **dict(zip(places, map(float, point), strict=True))}
    clouds[0] = circle(clouds[0], 5, axis, point)
    lines[1] |= {"qty": 4.0, "pattern": "line", **dict(zip(places, map(float, step), strict=True))}
    clouds[1] = together([clouds[1].moved(k * step) for k in range(4)])
    lines[2] |= {"qty": 3.0, "pattern": "one place"}
    clouds[2] = clouds[2].times(3.0)
    lines[5] |= {
        "qty": -2.0,
        "pattern": f"circle {axis}",
        **dict(zip(places, map(float, point), strict=True)),
    }
    clouds[5] = circle(clouds[5], 2, axis, point)
    whole = together(clouds)
    same_body(ask("RB_ROLLUP", as_table(lines)), whole)
    about = make.rng.normal(size=3)
    close(array("RB_ROLLUP", as_table(lines), "inertia", row(about)), whole.tensor(about), 1e-11)
    close(array("RB_ROLLUP", as_table(lines), "inertia", "origin"), whole.tensor(np.zeros(3)), 1e-11)


@SEEDS
def test_contributions_add_up_to_the_whole(seed):
    """First principles: what each part adds about the point is its own points' sum."""
    make = Maker(seed + 1100)
    lines, clouds = map(list, zip(*(make.part(f"part {k}") for k in range(4)), strict=True))
    about = make.rng.normal(size=3)
    table = ask("RB_ROLLUP", as_table(lines), "contributions", row(about))
    whole = together(clouds)
    for entry, cloud in zip(table[1:], [*clouds, whole], strict=True):
        expected = np.diag(cloud.tensor(about))
        np.testing.assert_allclose(entry[1:3], [cloud.mass, cloud.mass / whole.mass], rtol=1e-11)
        np.testing.assert_allclose(entry[3:6], expected, rtol=1e-11)
        np.testing.assert_allclose(entry[6:9], expected / np.diag(whole.tensor(about)), rtol=1e-11)


@SEEDS
def test_rollup_of_nested_sub_assemblies(seed):
    """Reference: points of the inner assembly, placed and turned as a whole, twice over."""
    make = Maker(seed + 1200)
    inner = [make.part(f"inner {k}") for k in range(3)]
    middle = [make.part(f"middle {k}") for k in range(2)]
    outer = [make.part(f"outer {k}") for k in range(2)]
    cells_in, cloud_in = make.placed({"part": "head", "shape": "assembly"}, together([c for _, c in inner]))
    cells_mid, cloud_mid = make.placed(
        {"part": "arm", "shape": "assembly"}, together([cloud_in, *(c for _, c in middle)])
    )
    point = make.rng.normal(size=3)
    cells_mid |= {"qty": 3.0, "pattern": "circle z"} | {
        f"pattern {k} [m]": float(v) for k, v in zip("xyz", point, strict=True)
    }
    lines = [
        *({**cells, "in": "head"} for cells, _ in inner),
        {**cells_in, "in": "arm"},
        *({**cells, "in": "Arm"} for cells, _ in middle),
        cells_mid,
        *(cells for cells, _ in outer),
    ]
    order = make.rng.permutation(len(lines))
    whole = together([circle(cloud_mid, 3, "z", point), *(c for _, c in outer)])
    same_body(ask("RB_ROLLUP", as_table([lines[k] for k in order])), whole)


@SEEDS
@pytest.mark.parametrize("form", ["tensor terms", "integrals"])
def test_rollup_of_measured_tensors(seed, form):
    """First principles: particles' tensors about the mass center and about the origin, in both forms."""
    clouds = [particles(seed + 1300), particles(seed + 1400)]
    lines = []
    for cloud, about in zip(clouds, ("mass center", "origin"), strict=True):
        tensor = cloud.tensor() if about == "mass center" else cloud.tensor(np.zeros(3))
        xx, yy, zz, xy, yz, zx = terms(tensor)
        sign = -1.0 if form == "integrals" else 1.0
        lines.append(
            {
                "part": about,
                "mass [kg]": cloud.mass,
                **{f"{k} [m]": float(v) for k, v in zip("xyz", cloud.center, strict=True)},
                "Ixx [kg*m^2]": xx,
                "Iyy [kg*m^2]": yy,
                "Izz [kg*m^2]": zz,
                "Ixy [kg*m^2]": sign * xy,
                "Iyz [kg*m^2]": sign * yz,
                "Izx [kg*m^2]": sign * zx,
                "about": about,
                "products": form,
            }
        )
    same_body(ask("RB_ROLLUP", as_table(lines)), together(clouds))


@SEEDS
def test_measured_part_that_is_turned(seed):
    """First principles: a measured tensor about the mass center, turned in the list, is that of the turned points."""
    cloud, rng = particles(seed + 1500), np.random.default_rng(seed)
    turn = rng.uniform(-180, 180, 3)
    xx, yy, zz, xy, yz, zx = terms(cloud.tensor())
    line = {"part": "casting", "mass [kg]": cloud.mass, "about": "mass center", "products": "tensor terms"}
    line |= {f"{k} [m]": float(v) for k, v in zip("xyz", cloud.center, strict=True)}
    line |= {f"turn {k} [deg]": float(v) for k, v in zip("xyz", turn, strict=True)}
    line |= {"Ixx [kg*m^2]": xx, "Iyy [kg*m^2]": yy, "Izz [kg*m^2]": zz}
    line |= {"Ixy [kg*m^2]": xy, "Iyz [kg*m^2]": yz, "Izx [kg*m^2]": zx}
    same_body(ask("RB_ROLLUP", as_table([line])), turned_xyz(cloud, turn, cloud.center))


@SEEDS
def test_measured_tensor_about_the_origin_that_is_turned(seed):
    """First principles: the part was measured in place along the sheet's axes, then turned about its center."""
    cloud, rng = particles(seed + 1600), np.random.default_rng(seed)
    turn = rng.uniform(-180, 180, 3)
    xx, yy, zz, xy, yz, zx = terms(cloud.tensor(np.zeros(3)))
    line = {"part": "casting", "mass [kg]": cloud.mass, "about": "origin", "products": "tensor terms"}
    line |= {f"{k} [m]": float(v) for k, v in zip("xyz", cloud.center, strict=True)}
    line |= {f"turn {k} [deg]": float(v) for k, v in zip("xyz", turn, strict=True)}
    line |= {"Ixx [kg*m^2]": xx, "Iyy [kg*m^2]": yy, "Izz [kg*m^2]": zz}
    line |= {"Ixy [kg*m^2]": xy, "Iyz [kg*m^2]": yz, "Izx [kg*m^2]": zx}
    same_body(ask("RB_ROLLUP", as_table([line])), turned_xyz(cloud, turn, cloud.center))


@SEEDS
def test_a_body_moves_through_the_cells_unchanged(seed):
    """Property: turning forth and back, and rolling up one part that is a body's tensor, give the body again."""
    cloud = particles(seed + 1700)
    body = body_cells(cloud.mass, cloud.center, cloud.tensor())
    there = ask("RB_MOVE", body, "(1, 2, -1)", 1.1, "(0.4, -0.2, 0.7) m")
    same_body(ask("RB_MOVE", there, "(1, 2, -1)", -1.1, "(0.4, -0.2, 0.7) m"), cloud)


@SEEDS
def test_tensor_check_and_terms(seed):
    """First principles: a cloud's tensor passes, the same with one moment above the others' sum does not."""
    tensor = particles(seed + 1800).tensor()
    assert ask("RB_TENSOR_CHECK", rows(tensor)) == "OK"
    values = list(terms(tensor))
    close(array("RB_TENSOR", *values, "tensor terms"), tensor)
    close(array("RB_TENSOR", *values[:3], *(-v for v in values[3:]), "integrals"), tensor)
    large = tensor + np.diag([3 * np.trace(tensor), 0, 0])
    assert ask("RB_TENSOR_CHECK", rows(large)) != "OK"
    assert refused("RB_PRINCIPAL", rows(large)).error == "#NUM!"


def test_flywheel_moment():
    """Common practice: GD2 = m D^2 g in force units, J = m D^2 / 4; a thin ring of 2 kg and D = 0.4 m."""
    ring = number("RB_SHAPE", "thin ring", "2 kg", "D 400 mm", "Izz")
    assert ring == pytest.approx(2 * 0.2**2, rel=1e-14)
    assert number("RB_GD2", "0.32 kgf*m^2") == pytest.approx(ring, rel=1e-14)
    assert number("RB_GD2", "0.32 kg*m^2") == pytest.approx(ring, rel=1e-14)
    assert number("RB_GD2_FROM", ring) == pytest.approx(4 * ring, rel=1e-14)


@SEEDS
def test_omitted_products_are_zero(seed):
    """Property: three moments alone are a diagonal tensor, whatever is passed as omitted between."""
    xx, yy, zz = np.random.default_rng(seed).uniform(1.0, 1.9, 3)
    np.testing.assert_array_equal(
        array("RB_TENSOR", xx, yy, zz, OMITTED, OMITTED, OMITTED), np.diag([xx, yy, zz])
    )
