"""Every solid against the mass properties of a fine triangle mesh (trimesh)."""

from __future__ import annotations

from collections.abc import Callable, Mapping

import numpy as np
import pytest
import trimesh
from numpy.typing import NDArray

from rigidsheet.core.shapes import SHAPES, complete_sizes

Sizes = Mapping[str, float]
SECTIONS = 360
# A regular 360-gon misses about 2 pi^2 / (3 * 360^2) = 5e-5 of the circle's area and twice that of its
# second moment; the icosphere of five subdivisions misses less than 5e-4 of the sphere's.
TOLERANCE = 1e-3


def turned(profile: list[tuple[float, float]]) -> trimesh.Trimesh:
    """Return the solid that a profile of (r, z) sweeps about z; it starts and ends on the axis or closes."""
    return trimesh.creation.revolve(np.array(profile), sections=SECTIONS)


def hull(points: list[tuple[float, float, float]]) -> trimesh.Trimesh:
    return trimesh.convex.convex_hull(np.array(points))


def ball(a: float, b: float, c: float) -> trimesh.Trimesh:
    mesh = trimesh.creation.icosphere(subdivisions=5)
    mesh.apply_scale([a, b, c])
    return mesh


def box(x: float, y: float, z: float) -> trimesh.Trimesh:
    return trimesh.creation.box(extents=(x, y, z))


def less(outer: trimesh.Trimesh, inner: trimesh.Trimesh) -> trimesh.Trimesh:
    """Return the outer mesh with the inner one turned inside out, which takes its volume away."""
    hollow = inner.copy()
    hollow.invert()
    return trimesh.util.concatenate([outer, hollow])


def half_bar(R: float, L: float) -> trimesh.Trimesh:
    angles = np.linspace(0.0, np.pi, SECTIONS + 1)
    return hull([(R * np.cos(a), R * np.sin(a), z) for a in angles for z in (-L / 2, L / 2)])


def cap(s: Sizes) -> trimesh.Trimesh:
    down = np.linspace(0.0, np.arccos(1.0 - s["H"] / s["R"]), 240)
    arc = [(s["R"] * np.sin(a), s["R"] * np.cos(a) - s["R"] + s["H"]) for a in down]
    return turned([(0.0, 0.0), *((r, z) for r, z in arc[:0:-1]), (0.0, s["H"])])


def torus(s: Sizes) -> trimesh.Trimesh:
    return trimesh.creation.torus(s["R"], s["r"], major_sections=SECTIONS, minor_sections=180)


def prism(corners: list[tuple[float, float]], z0: float, z1: float) -> trimesh.Trimesh:
    return hull([(x, y, z) for x, y in corners for z in (z0, z1)])


MESHES: dict[str, Callable[[Sizes], trimesh.Trimesh]] = {
    "solid cylinder": lambda s: trimesh.creation.cylinder(s["R"], s["L"], sections=SECTIONS),
    "tube": lambda s: trimesh.creation.annulus(s["Ri"], s["Ro"], s["L"], sections=SECTIONS),
    "half cylinder": lambda s: half_bar(s["R"], s["L"]),
    "half tube": lambda s: less(half_bar(s["Ro"], s["L"]), half_bar(s["Ri"], s["L"])),
    "elliptic cylinder": lambda s: trimesh.creation.cylinder(1.0, s["L"], sections=SECTIONS).apply_scale(
        [s["a"], s["b"], 1.0]
    ),
    "solid sphere": lambda s: ball(s["R"], s["R"], s["R"]),
    "hollow sphere": lambda s: less(ball(s["Ro"], s["Ro"], s["Ro"]), ball(s["Ri"], s["Ri"], s["Ri"])),
    "hemisphere": lambda s: cap({"R": s["R"], "H": s["R"]}),
    "spherical cap": cap,
    "solid cone": lambda s: turned([(0.0, 0.0), (s["R"], 0.0), (0.0, s["H"])]),
    "frustum": lambda s: turned([(0.0, 0.0), (s["R1"], 0.0), (s["R2"], s["H"]), (0.0, s["H"])]),
    "paraboloid": lambda s: turned(
        [(0.0, 0.0), *((s["R"] * u, s["H"] * (1.0 - u * u)) for u in np.linspace(1.0, 0.0, 240))]
    ),
    "ellipsoid": lambda s: ball(s["a"], s["b"], s["c"]),
    "torus": torus,
    "box": lambda s: box(s["L"], s["W"], s["H"]),
    "hollow box": lambda s: less(
        box(s["L"], s["W"], s["H"]), box(s["L"], s["W"] - 2 * s["t"], s["H"] - 2 * s["t"])
    ),
    "closed hollow box": lambda s: less(
        box(s["L"], s["W"], s["H"]), box(*(s[k] - 2 * s["t"] for k in ("L", "W", "H")))
    ),
    "hexagonal bar": lambda s: prism(
        [
            (s["AF"] / np.sqrt(3) * np.cos(a), s["AF"] / np.sqrt(3) * np.sin(a))
            for a in np.radians([30, 90, 150, 210, 270, 330])
        ],
        -s["L"] / 2,
        s["L"] / 2,
    ),
    "triangular prism": lambda s: prism(
        [(0.0, 0.0), (s["b"], 0.0), (s["e"], s["h"])], -s["L"] / 2, s["L"] / 2
    ),
    "wedge": lambda s: prism([(0.0, 0.0), (s["L"], 0.0), (0.0, s["W"])], 0.0, s["H"]),
    "right pyramid": lambda s: hull(
        [(x * s["L"] / 2, y * s["W"] / 2, 0.0) for x in (-1, 1) for y in (-1, 1)] + [(0.0, 0.0, s["H"])]
    ),
    "tetrahedron": lambda s: hull(
        [(0.0, 0.0, 0.0), (s["a"], 0.0, 0.0), (0.0, s["b"], 0.0), (0.0, 0.0, s["c"])]
    ),
}
# Sizes of a machine part each, in metres.
GIVEN: dict[str, dict[str, float]] = {
    "solid cylinder": {"D": 0.08, "L": 0.6},
    "tube": {"OD": 0.114, "ID": 0.088, "L": 0.52},
    "half cylinder": {"R": 0.2, "L": 0.35},
    "half tube": {"OD": 0.4, "t": 0.05, "L": 0.7},
    "elliptic cylinder": {"a": 0.3, "b": 0.11, "L": 0.25},
    "solid sphere": {"D": 0.3},
    "hollow sphere": {"OD": 0.3, "t": 0.06},
    "hemisphere": {"R": 0.25},
    "spherical cap": {"R": 0.4, "H": 0.13},
    "solid cone": {"D": 0.3, "H": 0.45},
    "frustum": {"D1": 0.5, "D2": 0.2, "H": 0.33},
    "paraboloid": {"R": 0.2, "H": 0.5},
    "ellipsoid": {"a": 0.3, "b": 0.2, "c": 0.45},
    "torus": {"D": 0.5, "d": 0.12},
    "box": {"L": 0.6, "W": 0.4, "H": 0.25},
    "hollow box": {"L": 1.2, "W": 0.1, "H": 0.06, "t": 0.008},
    "closed hollow box": {"L": 0.6, "W": 0.4, "H": 0.3, "t": 0.02},
    "hexagonal bar": {"AF": 0.05, "L": 0.12},
    "triangular prism": {"b": 0.4, "h": 0.3, "e": -0.1, "L": 0.2},
    "wedge": {"L": 0.4, "W": 0.3, "H": 0.2},
    "right pyramid": {"L": 0.4, "W": 0.3, "H": 0.5},
    "tetrahedron": {"a": 0.4, "b": 0.3, "c": 0.5},
}


def mesh_properties(mesh: trimesh.Trimesh) -> tuple[float, NDArray[np.float64], NDArray[np.float64]]:
    found = trimesh.triangles.mass_properties(mesh.triangles, density=1.0, skip_inertia=False)
    volume = float(found["volume"])
    sign = np.sign(volume)
    return (
        abs(volume),
        np.asarray(found["center_mass"]),
        sign * np.asarray(found["inertia"]) / abs(volume),
    )


def test_every_solid_has_a_mesh() -> None:
    solids = {name for name, row in SHAPES.items() if row.dimension == "solid"}
    assert set(MESHES) == set(GIVEN) == solids


@pytest.mark.parametrize("name", MESHES)
def test_solid_equals_its_mesh(name: str) -> None:
    """Divergence theorem over the triangles (trimesh), to the coarseness of the mesh."""
    sizes = complete_sizes(SHAPES[name], GIVEN[name])
    volume, center, tensor = mesh_properties(MESHES[name]({k: float(v) for k, v in sizes.items()}))
    scale = float(np.abs(tensor).max())
    assert float(SHAPES[name].measure(sizes)) == pytest.approx(volume, rel=TOLERANCE)
    np.testing.assert_allclose(
        np.broadcast_to(SHAPES[name].center(sizes), 3), center, atol=TOLERANCE * scale**0.5
    )
    np.testing.assert_allclose(
        SHAPES[name].unit_tensor(sizes), tensor, rtol=TOLERANCE, atol=TOLERANCE * scale
    )
