"""Digits kept through the cells: 13 of them against mpmath at 50, from grams and micrometres to 1,000 t and 100 m.

A term that is a difference by nature is compared to the sum of the sizes of what it is made of.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import mpmath as mp
import numpy as np
import pytest
from cell_calls import array, ask, body_cells, motion_cells, number, row, rows, tensor_of_record, vector

DIGITS = mp.mpf("1e-13")
SEEDS = pytest.mark.parametrize("seed", range(10))
M = mp.mpf


@pytest.fixture(autouse=True)
def fifty_digits():
    with mp.workdps(50):
        yield


def near(found: float, *terms: Any, note: str = "") -> None:
    """Compare a number to the exact sum of terms, within 1e-13 of the sum of their sizes."""
    exact, size = mp.fsum(terms), mp.fsum(abs(t) for t in terms)
    assert abs(M(found) - exact) <= DIGITS * size, (note, found, exact)


def span(rng: np.random.Generator, low: float, high: float, *size: int) -> Any:
    """Return numbers spread evenly over the decades."""
    drawn = 10.0 ** rng.uniform(np.log10(low), np.log10(high), size or None)
    return drawn if size else float(drawn)


def length(rng: np.random.Generator) -> float:
    return span(rng, 1e-6, 1e2)


def mass(rng: np.random.Generator) -> float:
    return span(rng, 1e-3, 1e6)


Moments = tuple[
    Any, tuple[Any, Any, Any], tuple[Any, Any, Any]
]  # measure, center, second moments about the datum


def integral(f: Callable[[Any], Any], start: Any, end: Any) -> Any:
    """Integrate a polynomial of degree up to 11 exactly: Gauss-Legendre of six points at 50 digits."""
    nodes = mp.polyroots([M(231), 0, M(-315), 0, M(105), 0, M(-5)], maxsteps=200, extraprec=200)
    total = M(0)
    for x in nodes:
        slope = (M(1386) * x**5 - 1260 * x**3 + 210 * x) / 16
        total += 2 / ((1 - x**2) * slope**2) * f(start + (end - start) * (x + 1) / 2)
    return total * (end - start) / 2


def turned(square: Callable[[Any], Any], start: Any, end: Any) -> Moments:
    """Return the moments of a solid of revolution about z from its squared radius along z."""
    volume = mp.pi * integral(square, start, end)
    first = mp.pi * integral(lambda z: square(z) * z, start, end) if start != -end else M(0)
    across = mp.pi / 4 * integral(lambda z: square(z) ** 2, start, end)
    along = mp.pi * integral(lambda z: square(z) * z * z, start, end)
    return volume, (M(0), M(0), first / volume), (across, across, along)


def block(x: Any, y: Any, z: Any) -> Moments:
    v = x * y * z
    return v, (M(0), M(0), M(0)), (v * x * x / 12, v * y * y / 12, v * z * z / 12)


def less(whole: Moments, hole: Moments) -> Moments:
    """Return what is left of a body when another one is taken out of it, by naive differences at 50 digits."""
    v = whole[0] - hole[0]
    center = tuple((whole[0] * a - hole[0] * b) / v for a, b in zip(whole[1], hole[1], strict=True))
    return v, center, tuple(a - b for a, b in zip(whole[2], hole[2], strict=True))  # type: ignore[return-value]


def rod(s: Any, z: str = "L") -> Moments:
    return s[z], (M(0),) * 3, (M(0), M(0), s[z] ** 3 / 12)


def fan(inner: Any, outer: Any, angle: Any, depth: Any) -> Moments:
    """Return the moments of a ring sector about x, its middle, of some depth along z."""
    area = angle * (outer**2 - inner**2) / 2
    x = 2 * mp.sin(angle / 2) * (outer**3 - inner**3) / 3 / area
    fourth = (outer**4 - inner**4) / 4
    xx, yy = fourth * (angle + mp.sin(angle)) / 2, fourth * (angle - mp.sin(angle)) / 2
    return area * depth, (x, M(0), M(0)), (xx * depth, yy * depth, area * depth**3 / 12)


def half(whole: Moments, reach: Any) -> Moments:
    """Return the half y > 0 of a round body; `reach` is its first moment about the plane of the cut."""
    v = whole[0] / 2
    return v, (M(0), reach / v, M(0)), tuple(part / 2 for part in whole[2])  # type: ignore[return-value]


SHAPES: dict[str, tuple[str, Callable[[Any], Moments]]] = {
    "slender rod": ("L", rod),
    "box": ("L W H", lambda s: block(s["L"], s["W"], s["H"])),
    "solid cylinder": ("R L", lambda s: turned(lambda z: s["R"] ** 2, -s["L"] / 2, s["L"] / 2)),
    "tube": (
        "Ro t L",
        lambda s: less(
            turned(lambda z: s["Ro"] ** 2, -s["L"] / 2, s["L"] / 2),
            turned(lambda z: (s["Ro"] - s["t"]) ** 2, -s["L"] / 2, s["L"] / 2),
        ),
    ),
    "solid sphere": ("R", lambda s: turned(lambda z: s["R"] ** 2 - z * z, -s["R"], s["R"])),
    "hemisphere": ("R", lambda s: turned(lambda z: s["R"] ** 2 - z * z, M(0), s["R"])),
    "solid cone": ("R H", lambda s: turned(lambda z: (s["R"] * (1 - z / s["H"])) ** 2, M(0), s["H"])),
    "frustum": (
        "R1 R2 H",
        lambda s: turned(lambda z: (s["R1"] + (s["R2"] - s["R1"]) * z / s["H"]) ** 2, M(0), s["H"]),
    ),
    "paraboloid": ("R H", lambda s: turned(lambda z: s["R"] ** 2 * (1 - z / s["H"]), M(0), s["H"])),
    "ellipsoid": (
        "a b c",
        lambda s: (
            4 * mp.pi / 3 * s["a"] * s["b"] * s["c"],
            (M(0),) * 3,
            tuple(4 * mp.pi / 15 * s["a"] * s["b"] * s["c"] * s[k] ** 2 for k in "abc"),  # type: ignore[return-value]
        ),
    ),
    "hollow sphere": (
        "Ro t",
        lambda s: less(
            turned(lambda z: s["Ro"] ** 2 - z * z, -s["Ro"], s["Ro"]),
            turned(lambda z: (s["Ro"] - s["t"]) ** 2 - z * z, -(s["Ro"] - s["t"]), s["Ro"] - s["t"]),
        ),
    ),
    "hollow box": (
        "L W H t",
        lambda s: less(block(s["L"], s["W"], s["H"]), block(s["L"], s["W"] - 2 * s["t"], s["H"] - 2 * s["t"])),
    ),
    "half cylinder": (
        "R L",
        lambda s: half(
            turned(lambda z: s["R"] ** 2, -s["L"] / 2, s["L"] / 2), 2 * s["R"] ** 3 / 3 * s["L"]
        ),
    ),
    "sector": ("R angle", lambda s: fan(M(0), s["R"], s["angle"], M(1))),
    "annular sector": ("Ro Ri angle", lambda s: fan(s["Ri"], s["Ro"], s["angle"], M(1))),
    "disk": ("R", lambda s: (mp.pi * s["R"] ** 2, (M(0),) * 3, (mp.pi * s["R"] ** 4 / 4,) * 2 + (M(0),))),
}  # fmt: skip
FLAT = ("disk", "sector", "annular sector")


def drawn(rng: np.random.Generator, labels: str) -> dict[str, float]:
    """Return sizes over eight decades; walls from a millionth to most of the radius, angles from small to full."""
    sizes: dict[str, float] = {}
    for label in labels.split():
        if label == "angle":
            sizes[label] = span(rng, 1e-3, 6.0)
        elif label == "t":
            room = sizes.get("Ro") or min(sizes["W"], sizes["H"]) / 2
            sizes[label] = room * span(rng, 1e-6, 0.9)
        elif label == "Ri":
            sizes[label] = sizes["Ro"] * (1.0 - span(rng, 1e-6, 0.9))
        else:
            sizes[label] = length(rng)
    return sizes


@SEEDS
@pytest.mark.parametrize("shape", SHAPES)
def test_shapes_keep_13_digits(shape, seed):
    """Reference: integrals over primitive bodies and their differences, mpmath at 50 digits."""
    rng = np.random.default_rng([seed, len(shape)])
    labels, moments = SHAPES[shape]
    sizes, m = drawn(rng, labels), mass(rng)
    record = [[k, v, "rad" if k == "angle" else "m"] for k, v in sizes.items()]
    measure, center, second = moments({k: M(v) for k, v in sizes.items()})
    second = tuple(s / measure - c * c for s, c in zip(second, center, strict=True))
    if shape in FLAT:
        second = (*second[:2], M(0))
    elif shape == "slender rod":
        second = (M(0), M(0), second[2])
    tensor = array("RB_SHAPE", shape, m, record)
    offset = vector("RB_SHAPE", shape, m, record, "offset")
    for k in range(3):
        wanted = M(m) * (second[(k + 1) % 3] + second[(k + 2) % 3])
        near(tensor[k, k], wanted, note=f"I{'xyz'[k]} {sizes}")
        near(offset[k], center[k], note=f"{'xyz'[k]} {sizes}")
    assert np.count_nonzero(tensor - np.diag(np.diag(tensor))) == 0
    if shape not in (*FLAT, "slender rod"):
        near(number("RB_SHAPE_MASS", shape, 7850.0, record), 7850 * measure, note=f"mass {sizes}")


def random_tensor(rng: np.random.Generator) -> tuple[float, np.ndarray]:
    m, size = mass(rng), length(rng)
    p = rng.normal(size=(5, 3)) * size
    return m, m / 5 * sum(v @ v * np.eye(3) - np.outer(v, v) for v in p)


def offset_terms(m: Any, d: Any, i: int, j: int) -> list[Any]:
    """Return the terms of m ((d.d) E - d d^T), exactly."""
    d = [M(float(v)) for v in d]
    return [M(m) * sum(d[k] ** 2 for k in range(3) if k != i)] if i == j else [-M(m) * d[i] * d[j]]


@SEEDS
def test_shifts_keep_13_digits(seed):
    """Reference: the parallel axis theorem at 50 digits, for a tensor and for one moment, both ways."""
    rng = np.random.default_rng(seed + 100)
    m, tensor = random_tensor(rng)
    d = rng.normal(size=3) * length(rng)
    there = array("RB_SHIFT", rows(tensor), m, row(d))
    back = array("RB_SHIFT_BACK", rows(there), m, row(d))
    for i in range(3):
        for j in range(3):
            terms = offset_terms(m, d, i, j)
            near(there[i, j], M(float(tensor[i, j])), *terms)
            near(back[i, j], M(float(there[i, j])), *(-t for t in terms))
    moment, distance = float(tensor[2, 2]), length(rng)
    near(number("RB_SHIFT", moment, m, distance), M(moment), M(m) * M(distance) ** 2)


def cross_terms(a: Any, b: Any, k: int) -> list[Any]:
    i, j = (k + 1) % 3, (k + 2) % 3
    return [a[i] * b[j], -a[j] * b[i]]


@SEEDS
def test_moment_sum_and_transfers_keep_13_digits(seed):
    """Reference: the same vector equations written out term by term at 50 digits."""
    rng = np.random.default_rng(seed + 200)
    m, tensor = random_tensor(rng)
    r = rng.normal(size=3) * length(rng)
    w, al, ab = (rng.normal(size=3) * span(rng, 1e-3, 1e3) for _ in range(3))
    exact = [[M(float(v)) for v in part] for part in (r, w, al, ab)]
    er, ew, ea, eb = exact
    velocity = vector("RB_VELOCITY_AT", row(ab), row(w), row(r))
    for k in range(3):
        near(velocity[k], eb[k], *cross_terms(ew, er, k))
    acceleration = vector("RB_ACCELERATION_AT", row(ab), row(w), row(al), row(r))
    total = []
    for k in range(3):
        along = [ew[k] * ew[i] * er[i] for i in range(3) if i != k]
        inward = [-(ew[i] ** 2) * er[k] for i in range(3) if i != k]
        total.append([eb[k], *cross_terms(ea, er, k), *along, *inward])
        # omega (omega.r) - omega^2 r: its own terms may be larger than what is left of them
        near(acceleration[k], *total[k], ew[k] ** 2 * er[k], -(ew[k] ** 2) * er[k])
    moment = vector("RB_MOMENT_SUM", rows(tensor), m, row(r), row(w), row(al), row(ab))
    et = [[M(float(v)) for v in line] for line in tensor]
    for k in range(3):
        i, j = (k + 1) % 3, (k + 2) % 3
        terms = [et[k][n] * ea[n] for n in range(3)]
        terms += [ew[i] * et[j][n] * ew[n] for n in range(3)] + [-ew[j] * et[i][n] * ew[n] for n in range(3)]
        terms += [M(m) * er[i] * t for t in total[j]] + [-M(m) * er[j] * t for t in total[i]]
        near(moment[k], *terms)
    flat = number("RB_MOMENT_SUM", float(tensor[2, 2]), m, row(r[:2]), float(w[2]), float(al[2]), row(ab[:2]))
    inertial = et[2][2] * ea[2]
    carried = [M(m) * er[0] * (ea[2] * er[0]), M(m) * er[1] * ea[2] * er[1]]
    near(flat, inertial, *carried, M(m) * er[0] * eb[1], -M(m) * er[1] * eb[0])


@SEEDS
def test_rollup_keeps_13_digits_far_from_the_origin(seed):
    """Reference: sums at 50 digits; a small assembly far away, where I_O - m r^2 would lose every digit."""
    rng = np.random.default_rng(seed + 300)
    place = rng.normal(size=3) * 100.0
    near_by = span(rng, 1e-4, 1.0)
    table: list[list[Any]] = [
        ["part", "shape", "mass [kg]", "L [m]", "W [m]", "H [m]", "x [m]", "y [m]", "z [m]"]
    ]
    for k in range(6):
        sizes = span(rng, near_by / 30, near_by, 3)
        at = place + rng.normal(size=3) * near_by
        table.append([f"part {k}", "box", span(rng, 1e-3, 1e3), *map(float, sizes), *map(float, at)])
    found_mass, center, tensor = tensor_of_record(ask("RB_ROLLUP", table))
    parts = [[M(v) for v in line[2:]] for line in table[1:]]
    total = mp.fsum(p[0] for p in parts)
    near(found_mass, total)
    g = [mp.fsum(p[0] * p[4 + k] for p in parts) / total for k in range(3)]
    for k in range(3):
        near(center[k], g[k])
    for i in range(3):
        for j in range(3):
            terms = []
            for m, lx, ly, lz, *at in parts:
                d = [a - c for a, c in zip(at, g, strict=True)]
                own = [m * v * v / 12 for n, v in enumerate((lx, ly, lz)) if n != i]
                terms += (
                    [*own, *(m * d[n] ** 2 for n in range(3) if n != i)] if i == j else [-m * d[i] * d[j]]
                )
            near(tensor[i, j], *terms)


@SEEDS
def test_a_small_part_far_from_the_axis_keeps_its_digits(seed):
    """Reference: m d^2 at 50 digits for a gram of micrometre size at up to 100 m, alone and among the others."""
    rng = np.random.default_rng(seed + 400)
    distance, m, size = span(rng, 1.0, 100.0), span(rng, 1e-3, 1e-2), span(rng, 1e-6, 1e-5)
    head = ["part", "shape", "mass [kg]", "L [m]", "W [m]", "H [m]", "x [m]", "y [m]", "z [m]"]
    mark = ["mark", "box", m, size, size, size, distance, 0.0, 0.0]
    drum = ["drum", "box", 1e6, 3.0, 3.0, 3.0, 0.0, 0.0, 0.0]
    own = M(m) * 2 * M(size) ** 2 / 12
    alone = array("RB_ROLLUP", [head, mark], "inertia")
    near(alone[2, 2], own, note="about its own center, far from the origin")
    about = array("RB_ROLLUP", [head, mark], "inertia", "origin")
    near(about[2, 2], own, M(m) * M(distance) ** 2)
    near(about[0, 0], own, note="about the line through the part")
    table = ask("RB_ROLLUP", [head, drum, mark], "contributions", "origin")
    near(table[2][5], own, M(m) * M(distance) ** 2)
    near(table[2][3], own)


@SEEDS
def test_single_numbers_keep_13_digits(seed):
    """Reference: the formulas at 50 digits."""
    rng = np.random.default_rng(seed + 500)
    m, k, ratio, efficiency = mass(rng), length(rng), span(rng, 1e-2, 1e4), float(rng.uniform(0.3, 1))
    inertia, alpha = m * k * k, span(rng, 1e-3, 1e3)
    i, a = M(inertia), M(alpha)
    near(number("RB_TORQUE", inertia, alpha), i * a)
    near(number("RB_ANGULAR_ACCELERATION", alpha, inertia), a / i)
    near(number("RB_RADIUS_OF_GYRATION", inertia, m), mp.sqrt(i / M(m)))
    near(number("RB_GD2", inertia), i / 4)
    near(number("RB_GD2_FROM", inertia), 4 * i)
    near(number("RB_REFLECTED_INERTIA", inertia, ratio), i / M(ratio) ** 2)
    near(number("RB_MOTOR_TORQUE", alpha, ratio, efficiency), a / M(ratio) / M(efficiency))


@SEEDS
def test_turns_keep_13_digits_of_the_largest_term(seed):
    """Reference: R I R^T and n.I n with Rodrigues' formula at 50 digits, to a part of the largest term."""
    rng = np.random.default_rng(seed + 600)
    _, tensor = random_tensor(rng)
    axis, angle = rng.normal(size=3) * length(rng), float(rng.uniform(-6, 6))
    n = mp.matrix([M(float(v)) for v in axis])
    n /= mp.sqrt(sum(v * v for v in n))
    skew = mp.matrix([[0, -n[2], n[1]], [n[2], 0, -n[0]], [-n[1], n[0], 0]])
    turn = mp.eye(3) + mp.sin(M(angle)) * skew + (1 - mp.cos(M(angle))) * skew * skew
    exact = mp.matrix([[M(float(v)) for v in line] for line in tensor])
    turned_exact = turn * exact * turn.T
    found = array("RB_TURN", rows(tensor), row(axis), angle)
    largest = max(abs(v) for v in turned_exact)
    for i in range(3):
        for j in range(3):
            assert abs(M(float(found[i, j])) - turned_exact[i, j]) <= DIGITS * largest
    along = number("RB_AXIS_INERTIA", rows(tensor), row(axis))
    assert abs(M(along) - (n.T * exact * n)[0]) <= DIGITS * largest


@SEEDS
def test_energy_and_momentum_keep_13_digits(seed):
    """Reference: m v^2 / 2 + w.(I w) / 2 and I w + r x m v at 50 digits."""
    rng = np.random.default_rng(seed + 700)
    m, tensor = random_tensor(rng)
    center = rng.normal(size=3) * 10
    w, v = rng.normal(size=(2, 3)) * span(rng, 1e-3, 1e3)
    body, motion = body_cells(m, center, tensor), motion_cells(omega=w, center_velocity=v)
    ew, ev, ec = ([M(float(x)) for x in part] for part in (w, v, center))
    et = [[M(float(x)) for x in line] for line in tensor]
    spin = [ew[i] * et[i][j] * ew[j] / 2 for i in range(3) for j in range(3)]
    near(number("RB_KINETIC_ENERGY", body, motion), *(M(m) * x * x / 2 for x in ev), *spin)
    found = vector("RB_ANGULAR_MOMENTUM", body, motion, "origin")
    for k in range(3):
        near(found[k], *(et[k][n] * ew[n] for n in range(3)), *(M(m) * t for t in cross_terms(ec, ev, k)))
