"""Every shape against numerical quadrature over the region it fills, and its written formulas."""

from __future__ import annotations

import re

import mpmath
import numpy as np
import pytest
from shape_geometry import GEOMETRY, integrate

from rigidsheet.core.errors import InputError
from rigidsheet.core.shapes import SHAPES, Shape, complete_sizes
from rigidsheet.core.tensors import tensor_problem

SEEDS = range(4)


def any_sizes(
    shape: Shape, rng: np.random.Generator, low: float = 0.05, high: float = 2.0
) -> dict[str, float]:
    """Return random sizes that the shape can have, log-uniform between two lengths, any way to give them."""
    ways = shape.needed()
    for _ in range(2000):
        way = ways[int(rng.integers(len(ways)))]
        given = {}
        for size in shape.sizes:
            if size.label in way.labels:
                value = float(np.exp(rng.uniform(np.log(low), np.log(high))))
                if size.kind == "angle":
                    value = float(rng.uniform(0.05, 2.0 * np.pi))
                elif size.sign == "any":
                    value *= float(rng.choice([-1.0, 1.0]))
                given[size.label] = value
        try:
            complete_sizes(shape, given)
        except InputError:
            continue
        return given
    raise AssertionError(f"no possible sizes found for {shape.name}")


def evaluated(shape: Shape, sizes: dict[str, float], *, exact: bool = False) -> dict[str, mpmath.mpf]:
    """Return the values of the shape's written formulas, with m = 1, computed to 50 digits."""
    with mpmath.workdps(50):
        names: dict[str, object] = {key: mpmath.mpf(value) for key, value in sizes.items()}
        names |= {
            "m": mpmath.mpf(1),
            "pi": mpmath.pi,
            "sin": mpmath.sin,
            "cos": mpmath.cos,
            "sqrt": mpmath.sqrt,
        }
        names["number"] = mpmath.mpf
        for line in shape.working:
            *targets, formula = [part.strip() for part in line.split("=")]
            formula = re.sub(r"(?<![A-Za-z_])\d+", lambda found: f"number({found.group()})", formula)
            value = eval(formula.replace("^", "**"), {"__builtins__": {}}, names)
            names |= dict.fromkeys(targets, value)
        return names  # type: ignore[return-value]


def test_every_shape_has_its_region() -> None:
    # A new row must be described as a region too, or it would go unchecked.
    assert set(GEOMETRY) | {"point"} == set(SHAPES)


@pytest.mark.parametrize("seed", SEEDS)
@pytest.mark.parametrize("name", [name for name in SHAPES if name != "point"])
def test_formulas_equal_quadrature(name: str, seed: int) -> None:
    """Gauss-Legendre quadrature over the region; independent of every formula in the package."""
    shape = SHAPES[name]
    sizes = complete_sizes(shape, any_sizes(shape, np.random.default_rng(seed)))
    expected = integrate(GEOMETRY[name]({key: float(value) for key, value in sizes.items()}))
    scale = float(np.abs(expected.unit_tensor).max())
    assert float(shape.measure(sizes)) == pytest.approx(expected.measure, rel=1e-9)
    np.testing.assert_allclose(shape.center(sizes), expected.center, rtol=1e-9, atol=1e-9 * scale**0.5)
    np.testing.assert_allclose(shape.unit_tensor(sizes), expected.unit_tensor, rtol=1e-9, atol=1e-10 * scale)


@pytest.mark.parametrize("seed", SEEDS)
@pytest.mark.parametrize("name", SHAPES)
def test_a_body_can_have_the_tensor(name: str, seed: int) -> None:
    """Triangle inequality of the principal moments (Landau and Lifshitz, Mechanics, section 32)."""
    shape = SHAPES[name]
    sizes = complete_sizes(shape, any_sizes(shape, np.random.default_rng(100 + seed), 1e-4, 50.0))
    assert tensor_problem(shape.unit_tensor(sizes), 1e-13) is None


@pytest.mark.parametrize("name", SHAPES)
def test_scaling_law(name: str) -> None:
    """Sizes times s: measure grows with its dimension, center with s, tensor per mass with s^2."""
    shape, s = SHAPES[name], 3.7
    sizes = complete_sizes(shape, any_sizes(shape, np.random.default_rng(5)))
    angles = {size.label for size in shape.sizes if size.kind == "angle"}
    larger = {key: value if key in angles else s * value for key, value in sizes.items()}
    power = {"solid": 3, "plate": 2, "shell": 2, "line": 1, "point": 0}[shape.dimension]
    assert float(shape.measure(larger)) == pytest.approx(float(shape.measure(sizes)) * s**power, rel=1e-13)
    np.testing.assert_allclose(shape.center(larger), s * shape.center(sizes), rtol=1e-13)
    np.testing.assert_allclose(shape.unit_tensor(larger), s**2 * shape.unit_tensor(sizes), rtol=1e-13)


TERMS = {"Ixx": (0, 0), "Iyy": (1, 1), "Izz": (2, 2), "Ixy": (0, 1), "Iyz": (1, 2), "Izx": (2, 0)}
# Sizes that once cost digits: thin walls, small angles, needles, far apart scales.
HARD = [
    ("tube", {"Ro": 0.5, "t": 1e-7, "L": 2.0}),
    ("tube", {"Ri": 100.0, "t": 1e-6, "L": 1e-6}),
    ("tube", {"OD": 1e-6, "ID": 0.9999e-6, "L": 100.0}),
    ("half tube", {"Ro": 30.0, "t": 1e-6, "L": 1e-6}),
    ("hollow sphere", {"Ro": 7.0, "t": 1e-6}),
    ("annular disk", {"OD": 2.0, "ID": 2.0 - 1e-9}),
    ("annular sector", {"Ro": 50.0, "Ri": 49.999999, "angle": 1e-5}),
    ("annular sector", {"Ro": 50.0, "Ri": 49.999999, "angle": 1.9999}),
    ("annular sector", {"Ro": 50.0, "Ri": 1e-6, "angle": 2.0001}),
    ("sector", {"R": 3.0, "angle": 1e-6}),
    ("sector", {"R": 3.0, "angle": 0.9999999}),
    ("sector", {"R": 3.0, "angle": 1.0000001}),
    ("thin arc", {"R": 80.0, "angle": 1e-6}),
    ("thin arc", {"R": 80.0, "angle": 6.28}),
    ("thin frustum", {"R1": 1.0, "R2": 1.0 + 1e-9, "H": 1e-6}),
    ("frustum", {"R1": 100.0, "R2": 0.0, "H": 1e-6}),
    ("hollow box", {"L": 1e-6, "W": 20.0, "H": 30.0, "t": 1e-6}),
    ("closed hollow box", {"L": 60.0, "W": 20.0, "H": 30.0, "t": 1e-6}),
    ("triangular plate", {"b": 1.0, "h": 1e-6, "e": 0.5 + 1e-9}),
    ("triangular prism", {"b": 1e-6, "h": 100.0, "e": -80.0, "L": 1e-3}),
    ("spherical cap", {"R": 100.0, "H": 1e-6}),
    ("spherical cap", {"R": 1.0, "H": 2.0}),
    ("thin spherical cap", {"R": 100.0, "H": 1e-6}),
    ("torus", {"R": 100.0, "r": 1e-6}),
]


def _check_digits(shape: Shape, given: dict[str, float]) -> None:
    full = complete_sizes(shape, given)
    # The reference starts from what was typed: the wall follows from the radii, or the radii from it.
    with mpmath.workdps(50):
        exact = {key: mpmath.mpf(float(value)) for key, value in full.items()}
        typed = {key: mpmath.mpf(value) for key, value in given.items()}
        for outer, diameter in (("Ro", "OD"), ("Ri", "ID")):
            if diameter in typed:
                typed[outer] = typed[diameter] / 2
        exact |= {key: value for key, value in typed.items() if key in exact}
        if "Ro" in exact and "t" in typed:
            if "Ri" in typed:
                exact["Ro"] = typed["Ri"] + typed["t"]
            else:
                exact["Ri"] = typed["Ro"] - typed["t"]
    wanted = evaluated(shape, exact)  # type: ignore[arg-type]
    tensor, center = shape.unit_tensor(full), np.asarray(shape.center(full))
    for name, place in TERMS.items():
        assert _close(tensor[place], wanted.get(name, mpmath.mpf(0))), name
    for axis, name in enumerate(("xc", "yc", "zc")):
        assert _close(center[axis], wanted.get(name, mpmath.mpf(0))), name
    for name in ("V", "area", "length"):
        if name in wanted:
            assert _close(shape.measure(full), wanted[name]), name


def _close(ours: object, wanted: mpmath.mpf) -> bool:
    with mpmath.workdps(50):
        return bool(abs(mpmath.mpf(float(ours)) - wanted) <= mpmath.mpf("1e-13") * abs(wanted))  # type: ignore[arg-type]


@pytest.mark.parametrize("seed", range(6))
@pytest.mark.parametrize("name", SHAPES)
def test_no_digits_are_lost(name: str, seed: int) -> None:
    """The written formulas at 50 digits (mpmath), sizes from micrometres to 100 m: 13 digits in each term."""
    shape = SHAPES[name]
    given = any_sizes(shape, np.random.default_rng(1000 + seed), 1e-6, 100.0)
    if {"a", "b", "c"} <= set(given) and "h" in [size.label for size in shape.sizes]:
        given = {"b": given["b"], "h": given["a"], "e": -given["c"]} | {
            k: given[k] for k in given if k == "L"
        }
    _check_digits(shape, given)


@pytest.mark.parametrize(("name", "given"), HARD, ids=lambda value: str(value))
def test_no_digits_are_lost_at_hard_sizes(name: str, given: dict[str, float]) -> None:
    """The written formulas at 50 digits (mpmath) at thin walls, small angles and needles."""
    _check_digits(SHAPES[name], given)


@pytest.mark.parametrize(
    ("name", "symbol"),
    [
        (name, "V" if row.dimension == "solid" else "area")
        for name, row in SHAPES.items()
        if row.dimension in ("solid", "plate", "shell")
    ],
)
def test_working_states_volume_or_area(name: str, symbol: str) -> None:
    assert any(line.startswith(f"{symbol} = ") for line in SHAPES[name].working)
    assert all(len(line) < 255 for line in SHAPES[name].working)
