"""Names, labels, refusals and columns of the shapes, and formulas as handbooks print them."""

from __future__ import annotations

from collections.abc import Callable
from math import cos, pi, radians, sin, sqrt

import numpy as np
import pytest

from rigidsheet.core.body import RigidBody, combine, inertia_about, removed
from rigidsheet.core.errors import InputError
from rigidsheet.core.shapes import SHAPES, complete_sizes, shape_body, shape_mass, shape_named, shape_problem

D4 = "Meriam and Kraige, Dynamics, table D/4, from memory"
D3 = "Meriam and Kraige, Statics, table D/3 (area moments per area), from memory"
MH = "Machinery's Handbook, mass moments of inertia, from memory"
DIFF = "difference of two handbook bodies, worked by hand"

# Shape, sizes, axis, a point of the axis from the datum (None: the mass center), the moment of inertia per
# kg as the handbook prints it, source. Many are about an end, a base or an apex, where the package shifts.
R, L, H, A, B, C = 0.3, 1.1, 0.7, 0.9, 0.5, 0.4
ROWS: list[tuple[str, dict[str, float], str, tuple[float, float, float] | None, float, str]] = [
    ("slender rod", {"L": L}, "x", None, L**2 / 12, D4),
    ("slender rod", {"L": L}, "x", (0, 0, L / 2), L**2 / 3, D4),
    ("slender rod", {"L": L}, "z", None, 0.0, D4),
    ("thin ring", {"R": R}, "z", None, R**2, D4),
    ("thin ring", {"R": R}, "x", None, R**2 / 2, D4),
    ("thin ring", {"R": R}, "z", (R, 0, 0), 2 * R**2, D4),
    ("thin arc", {"R": R, "angle": pi / 2}, "z", (0, 0, 0), R**2, D4),
    ("thin arc", {"R": R, "angle": pi}, "x", (0, 0, 0), R**2 / 2, D3),
    ("disk", {"R": R}, "z", None, R**2 / 2, D4),
    ("disk", {"R": R}, "x", None, R**2 / 4, D4),
    ("disk", {"D": 2 * R}, "x", (0, R, 0), 5 / 4 * R**2, D3),
    ("annular disk", {"OD": 0.6, "ID": 0.2}, "z", None, (0.3**2 + 0.1**2) / 2, MH),
    ("half disk", {"R": R}, "x", (0, 0, 0), R**2 / 4, D3),
    ("half disk", {"R": R}, "x", None, R**2 / 4 - (4 * R / 3 / pi) ** 2, D3),
    ("half disk", {"R": R}, "z", (0, 0, 0), R**2 / 2, D3),
    ("sector", {"R": R, "angle": 1.2}, "x", (0, 0, 0), R**2 / 4 * (1 - sin(1.2) / 1.2), D3),
    ("sector", {"R": R, "angle": 1.2}, "y", (0, 0, 0), R**2 / 4 * (1 + sin(1.2) / 1.2), D3),
    ("sector", {"R": R, "angle": pi / 2}, "z", (0, 0, 0), R**2 / 2, D3),
    ("elliptic disk", {"a": A, "b": B}, "x", None, B**2 / 4, D3),
    ("elliptic disk", {"a": A, "b": B}, "z", None, (A**2 + B**2) / 4, D3),
    ("thin plate", {"L": A, "W": B}, "x", None, B**2 / 12, D3),
    ("thin plate", {"L": A, "W": B}, "x", (0, -B / 2, 0), B**2 / 3, D3),
    ("thin plate", {"L": A, "W": B}, "z", None, (A**2 + B**2) / 12, D4),
    ("triangular plate", {"b": B, "h": H, "e": 0.2}, "x", (0, 0, 0), H**2 / 6, D3),
    ("triangular plate", {"b": B, "h": H, "e": 0.2}, "x", (0, H, 0), H**2 / 2, D3),
    ("triangular plate", {"b": B, "h": H, "e": 0.2}, "x", None, H**2 / 18, D3),
    ("thin tube", {"R": R, "L": L}, "z", None, R**2, D4),
    ("thin tube", {"R": R, "L": L}, "x", None, R**2 / 2 + L**2 / 12, D4),
    ("thin tube", {"R": R, "L": L}, "x", (0, 0, L / 2), R**2 / 2 + L**2 / 3, D4),
    ("thin half tube", {"R": R, "L": L}, "z", (0, 0, 0), R**2, D4),
    ("thin half tube", {"R": R, "L": L}, "z", None, (1 - 4 / pi**2) * R**2, D4),
    ("thin sphere", {"R": R}, "z", None, 2 / 3 * R**2, D4),
    ("thin hemisphere", {"R": R}, "x", (0, 0, 0), 2 / 3 * R**2, D4),
    ("thin hemisphere", {"R": R}, "y", None, 5 / 12 * R**2, D4),
    ("thin cone", {"R": R, "H": H}, "z", None, R**2 / 2, D4),
    ("thin cone", {"R": R, "H": H}, "y", (0, 0, H), R**2 / 4 + H**2 / 2, D4),
    ("thin cone", {"R": R, "H": H}, "x", (0, 0, 0), R**2 / 4 + H**2 / 6, D4),
    ("thin cone", {"R": R, "H": H}, "x", None, R**2 / 4 + H**2 / 18, D4),
    ("solid cylinder", {"R": R, "L": L}, "z", None, R**2 / 2, D4),
    ("solid cylinder", {"R": R, "L": L}, "x", None, R**2 / 4 + L**2 / 12, D4),
    ("solid cylinder", {"R": R, "L": L}, "x", (0, 0, -L / 2), R**2 / 4 + L**2 / 3, D4),
    ("tube", {"OD": 0.6, "t": 0.05, "L": L}, "z", None, (0.3**2 + 0.25**2) / 2, MH),
    ("tube", {"OD": 0.6, "ID": 0.5, "L": L}, "x", None, (3 * (0.3**2 + 0.25**2) + L**2) / 12, MH),
    ("half cylinder", {"R": R, "L": L}, "z", (0, 0, 0), R**2 / 2, D4),
    ("half cylinder", {"R": R, "L": L}, "z", None, (1 / 2 - 16 / (9 * pi**2)) * R**2, D4),
    ("half cylinder", {"R": R, "L": L}, "x", (0, 0, L / 2), R**2 / 4 + L**2 / 3, D4),
    ("elliptic cylinder", {"a": A, "b": B, "L": L}, "x", None, B**2 / 4 + L**2 / 12, D4),
    ("elliptic cylinder", {"a": A, "b": B, "L": L}, "z", None, (A**2 + B**2) / 4, D4),
    ("solid sphere", {"R": R}, "z", None, 2 / 5 * R**2, D4),
    ("solid sphere", {"R": R}, "x", (0, R, 0), 7 / 5 * R**2, D4),
    ("hollow sphere", {"Ro": 0.3, "Ri": 0.2}, "x", None, 2 / 5 * (0.3**5 - 0.2**5) / (0.3**3 - 0.2**3), MH),
    ("hemisphere", {"R": R}, "x", (0, 0, 0), 2 / 5 * R**2, D4),
    ("hemisphere", {"R": R}, "x", None, 83 / 320 * R**2, D4),
    ("spherical cap", {"R": R, "H": R}, "z", None, 2 / 5 * R**2, "a cap as high as its radius: hemisphere"),
    ("solid cone", {"R": R, "H": H}, "z", None, 3 / 10 * R**2, D4),
    ("solid cone", {"R": R, "H": H}, "y", (0, 0, H), 3 / 20 * R**2 + 3 / 5 * H**2, D4),
    ("solid cone", {"R": R, "H": H}, "y", (0, 0, 0), 3 / 20 * R**2 + 1 / 10 * H**2, D4),
    ("solid cone", {"R": R, "H": H}, "y", None, 3 / 20 * R**2 + 3 / 80 * H**2, D4),
    ("frustum", {"R1": 0.5, "R2": 0.2, "H": H}, "z", None, 0.3 * (0.5**5 - 0.2**5) / (0.5**3 - 0.2**3), MH),
    ("paraboloid", {"R": R, "H": H}, "z", None, R**2 / 3, D4),
    ("paraboloid", {"R": R, "H": H}, "x", (0, 0, H), R**2 / 6 + H**2 / 2, D4),
    ("paraboloid", {"R": R, "H": H}, "x", None, R**2 / 6 + H**2 / 18, D4),
    ("ellipsoid", {"a": A, "b": B, "c": C}, "x", None, (B**2 + C**2) / 5, MH),
    ("torus", {"R": 0.5, "r": 0.1}, "z", None, 0.5**2 + 3 / 4 * 0.1**2, D4),
    ("torus", {"R": 0.5, "r": 0.1}, "x", None, 0.5**2 / 2 + 5 / 8 * 0.1**2, D4),
    ("box", {"L": A, "W": B, "H": C}, "x", None, (B**2 + C**2) / 12, D4),
    ("box", {"L": A, "W": B, "H": C}, "x", (0, B / 2, C / 2), (B**2 + C**2) / 3, D4),
    (
        "hollow box", {"L": A, "W": 0.5, "H": 0.4, "t": 0.1}, "x", None,
        (0.2 * (0.5**2 + 0.4**2) - 0.06 * (0.3**2 + 0.2**2)) / (12 * 0.14), DIFF,
    ),
    ("hexagonal bar", {"AF": 0.1, "L": L}, "z", None, 5 / 36 * 0.1**2, MH),
    ("hexagonal bar", {"AC": 0.1, "L": L}, "z", None, 5 / 48 * 0.1**2, MH),
    ("right pyramid", {"L": A, "W": B, "H": H}, "z", None, (A**2 + B**2) / 20, MH),
    ("right pyramid", {"L": A, "W": B, "H": H}, "x", (0, 0, 0), (B**2 + 2 * H**2) / 20, MH),
    ("wedge", {"L": A, "W": B, "H": C}, "z", (0, 0, 0), (A**2 + B**2) / 6, D3),
    ("tetrahedron", {"a": A, "b": B, "c": C}, "x", (0, 0, 0), (B**2 + C**2) / 10, D4),
    ("tetrahedron", {"a": A, "b": B, "c": C}, "x", None, 3 / 80 * (B**2 + C**2), D4),
]  # fmt: skip


@pytest.mark.parametrize(("name", "sizes", "axis", "point", "wanted", "source"), ROWS)
def test_handbook_moment(
    name: str,
    sizes: dict[str, float],
    axis: str,
    point: tuple[float, float, float] | None,
    wanted: float,
    source: str,
) -> None:
    assert source
    inertia, offset = shape_body(name, 2.5, sizes)
    body = RigidBody.of(2.5, offset, inertia)
    tensor = inertia if point is None else inertia_about(body, point)
    i = "xyz".index(axis)
    assert tensor[i, i] == pytest.approx(2.5 * wanted, rel=1e-12, abs=1e-15)


def test_handbook_rows_cover_every_tabulated_shape() -> None:
    unlisted = {
        "point",
        "annular sector",
        "half tube",
        "thin spherical cap",
        "thin frustum",
        "closed hollow box",
    }
    assert {row[0] for row in ROWS} | unlisted | {"triangular prism"} == set(SHAPES)


# Product terms and centers, D/3 and D/4 from memory: tensor form, minus the integral.
def test_product_of_a_right_triangle_about_its_corner() -> None:
    """The integral of xy over a right triangle is b^2 h^2 / 24: per area b h / 12 (D/3, from memory)."""
    inertia, offset = shape_body("triangular plate", 1.0, {"b": B, "h": H, "e": 0.0})
    assert inertia_about(RigidBody.of(1.0, offset, inertia), (0, 0, 0))[0, 1] == pytest.approx(-B * H / 12)


def test_product_of_a_corner_tetrahedron_about_its_corner() -> None:
    """Integral of xy dm = m a b / 20 (D/4, rectangular tetrahedron, from memory)."""
    inertia, offset = shape_body("tetrahedron", 1.0, {"a": A, "b": B, "c": C})
    about = inertia_about(RigidBody.of(1.0, offset, inertia), (0, 0, 0))
    assert about[0, 1] == pytest.approx(-A * B / 20)
    assert about[1, 2] == pytest.approx(-B * C / 20)
    assert about[2, 0] == pytest.approx(-C * A / 20)


# Steel at 7850 kg/m^3; volumes from first principles.
MASSES: list[tuple[str, dict[str, float], float]] = [
    ("tube", {"OD": 0.1143, "ID": 0.1017, "L": 0.52}, pi / 4 * (0.1143**2 - 0.1017**2) * 0.52),
    ("tube", {"OD": 0.1143, "t": 0.0063, "L": 0.52}, pi * 0.108 * 0.0063 * 0.52),
    ("disk", {"D": 0.4, "t": 0.01}, pi / 4 * 0.4**2 * 0.01),
    ("slender rod", {"L": 1.0, "D": 0.02}, pi / 4 * 0.02**2),
    ("slender rod", {"L": 1.0, "R": 0.01}, pi * 0.01**2),
    ("thin ring", {"D": 0.5, "wire": 0.01}, pi * 0.5 * pi / 4 * 0.01**2),
    ("thin sphere", {"D": 0.5, "t": 0.002}, pi * 0.5**2 * 0.002),
    ("triangular plate", {"a": 0.3, "b": 0.4, "c": 0.5, "t": 0.005}, 0.06 * 0.005),
    ("box", {"L": 0.2, "W": 0.1, "H": 0.05}, 0.001),
    ("hexagonal bar", {"AF": 0.02, "L": 1.0}, 2 * sqrt(3) * 0.01**2),
]


@pytest.mark.parametrize(("name", "sizes", "volume"), MASSES)
def test_mass_from_density(name: str, sizes: dict[str, float], volume: float) -> None:
    assert float(shape_mass(name, 7850.0, sizes)) == pytest.approx(7850.0 * volume, rel=1e-13)


@pytest.mark.parametrize(
    ("word", "name"),
    [
        ("cylinder", "solid cylinder"),
        ("Solid Cylinders", "solid cylinder"),
        (" PIPE ", "tube"),
        ("disc", "disk"),
        ("annular discs", "annular disk"),
        ("solid-sphere", "solid sphere"),
        ("thin_ring", "thin ring"),
        ("box tube", "hollow box"),
        ("point mass", "point"),
        ("thick spherical shell", "hollow sphere"),
    ],
)
def test_names_in_usual_spellings(word: str, name: str) -> None:
    assert shape_named(word).name == name


def test_names_do_not_clash() -> None:
    words = [
        word.lower().replace("-", "").replace(" ", "")
        for row in SHAPES.values()
        for word in (row.name, *row.aliases)
    ]
    assert len(words) == len(set(words))
    for row in SHAPES.values():
        for word in (
            row.name,
            *row.aliases,
            row.name.upper() + ("es" if row.name.endswith(("s", "x")) else "s"),
        ):
            assert shape_named(word) is row


@pytest.mark.parametrize(
    ("word", "hint"), [("tueb", "Did you mean tube"), ("cilinder", "solid cylinder"), ("gear", "For example")]
)
def test_unknown_name(word: str, hint: str) -> None:
    with pytest.raises(InputError, match=hint) as caught:
        shape_named(word)
    assert caught.value.argument == "shape"
    assert len(str(caught.value)) < 255


REFUSED: list[tuple[str, dict[str, object], str]] = [
    ("tube", {"OD": 0.1, "ID": 0.2, "L": 1.0}, "ID must be less than OD"),
    ("tube", {"OD": 0.1, "ID": 0.1, "L": 1.0}, "ID must be less than OD"),
    ("tube", {"OD": 0.1, "t": 0.06, "L": 1.0}, "at most half of OD"),
    ("tube", {"OD": 0.1, "Ro": 0.05, "ID": 0.01, "L": 1.0}, "left out when OD is given"),
    ("tube", {"OD": 0.1, "ID": 0.08, "t": 0.01, "L": 1.0}, "surplus"),
    ("tube", {"OD": 0.1, "L": 1.0}, "got no ID/Ri"),
    ("tube", {"D": 0.1, "ID": 0.08, "L": 1.0}, "takes OD/Ro, ID/Ri, t, L"),
    ("solid cylinder", {"R": 0.1, "D": 0.2, "L": 1.0}, "left out when R is given"),
    ("solid cylinder", {"R": 0.1, "radius": 0.1, "L": 1.0}, "left out when R is given"),
    ("solid cylinder", {"R": -0.1, "L": 1.0}, "`R` must be a positive length; got -0.1"),
    ("solid cylinder", {"R": 0.0, "L": 1.0}, "positive length"),
    ("solid cylinder", {"R": float("nan"), "L": 1.0}, "positive length"),
    ("solid cylinder", {"R": float("inf"), "L": 1.0}, "positive length"),
    ("solid cylinder", {"R": 0.1}, "got no L"),
    ("solid cylinder", {"R": 0.1, "L": 1.0, "lenght": 1.0}, "Did you mean length"),
    ("solid cylinder", {"R": [0.1, -0.2], "L": 1.0}, "row 2"),
    ("tube", {"OD": [0.1, 0.1], "ID": [0.05, 0.1], "L": 1.0}, "row 2"),
    ("triangular plate", {"a": 1.0, "b": 2.0, "c": 3.5}, "no triangle"),
    ("triangular plate", {"a": 1.0, "b": 2.0, "c": 3.0}, "no triangle"),
    ("triangular plate", {"b": 1.0, "h": 2.0}, "got no e"),
    ("sector", {"R": 1.0, "angle": radians(361.0)}, "full turn"),
    ("torus", {"R": 0.1, "r": 0.2}, "overlaps itself"),
    ("frustum", {"R1": 0.0, "R2": 0.0, "H": 1.0}, "both be zero"),
    ("spherical cap", {"R": 0.1, "H": 0.21}, "at most the diameter"),
    ("hollow box", {"L": 1.0, "W": 0.1, "H": 0.2, "t": 0.05}, "half of W"),
    ("disk", {"R": 0.1, "t": 0.05}, "solid shape"),
    ("slender rod", {"L": 0.1, "D": 0.05}, "solid shape"),
    ("point", {"R": 0.1}, "takes no sizes"),
    ("box", {}, "got no size"),
]


@pytest.mark.parametrize(("name", "sizes", "words"), REFUSED)
def test_refused_sizes(name: str, sizes: dict[str, object], words: str) -> None:
    with pytest.raises(InputError, match=words) as caught:
        shape_body(name, 1.0, sizes)  # type: ignore[arg-type]
    assert len(str(caught.value)) < 255
    assert shape_problem(name, sizes) == str(caught.value)  # type: ignore[arg-type]


def test_shape_without_problem() -> None:
    assert shape_problem("sector", {"R": 1.0, "angle": radians(360.0)}) is None


@pytest.mark.parametrize("mass", [0.0, -1.0, float("nan"), float("inf")])
def test_refused_mass_and_density(mass: float) -> None:
    with pytest.raises(InputError, match="`mass` must be positive"):
        shape_body("point", mass, {})
    with pytest.raises(InputError, match="`density` must be positive"):
        shape_mass("box", mass, {"L": 1.0, "W": 1.0, "H": 1.0})


def test_density_needs_the_thickness() -> None:
    with pytest.raises(InputError, match=r"got no t\. t is the thickness"):
        shape_mass("disk", 7850.0, {"R": 0.2})
    with pytest.raises(InputError, match="volume"):
        shape_mass("point", 7850.0, {})


def test_radius_and_diameter_are_told_apart_by_case_where_both_exist() -> None:
    by_radius = shape_body("torus", 1.0, {"R": 0.5, "r": 0.1}).inertia
    by_diameter = shape_body("torus", 1.0, {"D": 1.0, "d": 0.2}).inertia
    np.testing.assert_allclose(by_diameter, by_radius, rtol=1e-15)
    # Only one size has this letter in a cylinder: its case does not matter.
    np.testing.assert_allclose(
        shape_body("cylinder", 1.0, {"d": 1.0, "l": 0.2}).inertia,
        shape_body("cylinder", 1.0, {"R": 0.5, "L": 0.2}).inertia,
        rtol=1e-15,
    )


@pytest.mark.parametrize("sides", [(3.0, 4.0, 5.0), (5.0, 4.0, 3.0), (2.0, 3.0, 2.5), (9.0, 5.0, 4.5)])
def test_triangle_by_sides(sides: tuple[float, float, float]) -> None:
    """The corners put back from base, height and apex offset are as far apart as the sides say."""
    a, b, c = sides
    s = complete_sizes(SHAPES["triangular plate"], {"a": a, "b": b, "c": c})
    assert np.hypot(s["e"], s["h"]) == pytest.approx(c, rel=1e-14)
    assert np.hypot(s["e"] - b, s["h"]) == pytest.approx(a, rel=1e-14)


def test_needle_triangle_by_sides_keeps_its_area() -> None:
    """W. Kahan, Miscalculating Area and Angles of a Needle-like Triangle: exact area from rationals.

    Sides 1, 1 and 2^-30: height over the short base is sqrt(1 - 2^-62), area 2^-31 of it.
    """
    s = complete_sizes(SHAPES["triangular plate"], {"a": 1.0, "b": 2.0**-30, "c": 1.0})
    assert float(SHAPES["triangular plate"].measure(s)) == pytest.approx(2.0**-31, rel=1e-15, abs=0.0)


@pytest.mark.parametrize("name", SHAPES)
def test_columns_equal_single_calls(name: str) -> None:
    shape = SHAPES[name]
    way = shape.needed()[0].labels
    rng = np.random.default_rng(8)
    base = dict.fromkeys(way, 0.5) | {k: v for k, v in {"Ri": 0.2, "t": 0.05, "r": 0.2}.items() if k in way}
    columns = {label: value * rng.uniform(0.9, 1.1, 5) for label, value in base.items()}
    masses = rng.uniform(1.0, 2.0, 5)
    inertia, offset = shape_body(name, masses, columns)
    assert inertia.shape == (5, 3, 3)
    assert offset.shape == (5, 3)
    for i in range(5):
        one = shape_body(name, masses[i], {label: column[i] for label, column in columns.items()})
        np.testing.assert_array_equal(inertia[i], one.inertia)
        np.testing.assert_array_equal(offset[i], one.offset)


@pytest.mark.parametrize("name", SHAPES)
def test_rows_are_complete(name: str) -> None:
    row = SHAPES[name]
    assert row.datum
    assert "atum" in row.datum
    assert row.source
    assert (row.section() is not None) == (row.dimension in ("plate", "shell", "line"))
    labels = [size.label for size in row.sizes]
    assert len(labels) == len(set(labels))
    assert all(size.help for size in row.sizes)
    # Words that differ in case alone would make a label ambiguous; single letters are matched as typed.
    words = [
        word.lower()
        for size in row.sizes
        for one in (size, *size.alternatives)
        for word in (one.label, *one.aliases)
        if len(word) > 1
    ]
    assert len(words) == len(set(words))


def _same(one: RigidBody, other: RigidBody) -> None:
    assert one.mass == pytest.approx(other.mass, rel=1e-13)
    np.testing.assert_allclose(one.center, other.center, atol=1e-13)
    np.testing.assert_allclose(one.inertia, other.inertia, rtol=1e-12, atol=1e-12 * np.abs(one.inertia).max())


def solid(name: str, sizes: dict[str, float], at: tuple[float, float, float] = (0.0, 0.0, 0.0)) -> RigidBody:
    """Return a shape of density 1 (thin ones 1 mm thick) with its datum at a point."""
    section = shape_named(name).section()
    extra = {section.label: 1e-3} if section else {}
    mass = float(shape_mass(name, 1.0, sizes | extra))
    inertia, offset = shape_body(name, mass, sizes)
    return RigidBody.of(mass, np.add(at, offset), inertia)


SPLITS: dict[str, Callable[[], tuple[RigidBody, list[RigidBody]]]] = {
    "box in two": lambda: (
        solid("box", {"L": 1.0, "W": 0.4, "H": 0.3}),
        [
            solid("box", {"L": 0.3, "W": 0.4, "H": 0.3}, (-0.35, 0, 0)),
            solid("box", {"L": 0.7, "W": 0.4, "H": 0.3}, (0.15, 0, 0)),
        ],
    ),
    "cylinder in core and tube": lambda: (
        solid("cylinder", {"R": 0.4, "L": 0.9}),
        [solid("cylinder", {"R": 0.15, "L": 0.9}), solid("tube", {"Ro": 0.4, "Ri": 0.15, "L": 0.9})],
    ),
    "tube in lengths": lambda: (
        solid("tube", {"OD": 0.4, "t": 0.02, "L": 1.0}),
        [
            solid("tube", {"OD": 0.4, "t": 0.02, "L": 0.25}, (0, 0, -0.375)),
            solid("tube", {"OD": 0.4, "ID": 0.36, "L": 0.75}, (0, 0, 0.125)),
        ],
    ),
    "cone in frustum and tip": lambda: (
        solid("cone", {"R": 0.6, "H": 0.9}),
        [
            solid("frustum", {"R1": 0.6, "R2": 0.2, "H": 0.6}),
            solid("cone", {"R": 0.2, "H": 0.3}, (0, 0, 0.6)),
        ],
    ),
    "thin cone in frustum and tip": lambda: (
        solid("thin cone", {"R": 0.6, "H": 0.9}),
        [
            solid("thin frustum", {"R1": 0.6, "R2": 0.2, "H": 0.6}),
            solid("thin cone", {"R": 0.2, "H": 0.3}, (0, 0, 0.6)),
        ],
    ),
    "sphere in shell and core": lambda: (
        solid("sphere", {"R": 0.5}),
        [solid("hollow sphere", {"Ro": 0.5, "t": 0.2}), solid("sphere", {"R": 0.3})],
    ),
    "sphere in two caps": lambda: (
        solid("sphere", {"R": 0.5}, (0, 0, 0.5)),
        [
            solid("spherical cap", {"R": 0.5, "H": 0.3}, (0, 0, 0.7)),
            solid("spherical cap", {"R": 0.5, "H": 0.7})
            .turned(np.diag([1.0, -1.0, -1.0]), (0, 0, 0))
            .moved((0, 0, 0.7)),
        ],
    ),
    "thin sphere in two caps": lambda: (
        solid("thin sphere", {"R": 0.5}, (0, 0, 0.5)),
        [
            solid("thin spherical cap", {"R": 0.5, "H": 0.3}, (0, 0, 0.7)),
            solid("thin spherical cap", {"R": 0.5, "H": 0.7})
            .turned(np.diag([1.0, -1.0, -1.0]), (0, 0, 0))
            .moved((0, 0, 0.7)),
        ],
    ),
    "disk in sectors": lambda: (
        solid("disk", {"R": 0.5}),
        [
            solid("sector", {"R": 0.5, "angle": 2.0}),
            solid("sector", {"R": 0.5, "angle": 2 * pi - 2.0}).turned(np.diag([-1.0, -1.0, 1.0]), (0, 0, 0)),
        ],
    ),
    "sector in bore and ring": lambda: (
        solid("sector", {"R": 0.5, "angle": 1.0}),
        [
            solid("sector", {"R": 0.3, "angle": 1.0}),
            solid("annular sector", {"Ro": 0.5, "Ri": 0.3, "angle": 1.0}),
        ],
    ),
    "tube in halves": lambda: (
        solid("tube", {"Ro": 0.5, "Ri": 0.3, "L": 0.7}),
        [
            solid("half tube", {"Ro": 0.5, "Ri": 0.3, "L": 0.7}),
            solid("half tube", {"Ro": 0.5, "Ri": 0.3, "L": 0.7}).turned(
                np.diag([-1.0, -1.0, 1.0]), (0, 0, 0)
            ),
        ],
    ),
    "box in wedges": lambda: (
        solid("box", {"L": 0.6, "W": 0.4, "H": 0.2}, (0.3, 0.2, 0.1)),
        [
            solid("wedge", {"L": 0.6, "W": 0.4, "H": 0.2}),
            solid("wedge", {"L": 0.6, "W": 0.4, "H": 0.2})
            .turned(np.diag([-1.0, -1.0, 1.0]), (0, 0, 0))
            .moved((0.6, 0.4, 0)),
        ],
    ),
    "closed box in tube and ends": lambda: (
        solid("closed hollow box", {"L": 0.6, "W": 0.4, "H": 0.3, "t": 0.02}),
        [
            solid("hollow box", {"L": 0.56, "W": 0.4, "H": 0.3, "t": 0.02}),
            solid("box", {"L": 0.02, "W": 0.4, "H": 0.3}, (0.29, 0, 0)),
            solid("box", {"L": 0.02, "W": 0.4, "H": 0.3}, (-0.29, 0, 0)),
        ],
    ),
}


@pytest.mark.parametrize("name", SPLITS)
def test_parts_add_up_to_the_whole(name: str) -> None:
    whole, parts = SPLITS[name]()
    _same(combine(parts), whole)
    _same(removed(whole, parts[0]), combine(parts[1:]))


def test_hexagon_angle() -> None:
    """Width across corners times cos 30 deg is the width across flats (plane geometry)."""
    s = complete_sizes(SHAPES["hexagonal bar"], {"AC": 1.0, "L": 1.0})
    assert float(s["AF"]) == pytest.approx(cos(pi / 6), rel=1e-15)
