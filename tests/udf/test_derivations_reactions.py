"""Loads and reactions through the cells: against the balance written out in the test and solved by numpy."""

from __future__ import annotations

import re
from typing import Any

import numpy as np
import pytest
from cell_calls import ask, body_cells, motion_cells, number, refused, row, tensor_of_record, vector
from scipy.spatial.transform import Rotation

SEEDS = pytest.mark.parametrize("seed", range(6))
X, Y, Z = np.eye(3)


class Case:
    """A random body, its motion and loads, with the forces and moments that supports must give."""

    def __init__(self, seed: int, planar: bool) -> None:
        rng = self.rng = np.random.default_rng(seed)
        flat = np.array([1.0, 1.0, 0.0 if planar else 1.0])
        upright = 1.0 - flat if planar else np.ones(3)
        points = rng.normal(size=(7, 3)) + rng.normal(size=3) * flat
        masses = rng.uniform(1.0, 9.0, 7)
        self.planar, self.mass = planar, float(masses.sum())
        self.center = masses @ points / self.mass * flat
        r = points - masses @ points / self.mass
        self.tensor = sum(m * (p @ p * np.eye(3) - np.outer(p, p)) for m, p in zip(masses, r, strict=True))
        if planar:  # the x-y plane is a plane of symmetry
            self.tensor[:2, 2] = self.tensor[2, :2] = 0.0
        self.omega, self.alpha = rng.normal(size=(2, 3)) * upright
        self.point, self.point_a, self.gravity = rng.normal(size=(3, 3)) * flat
        self.forces, self.places = rng.normal(size=(2, 4, 3)) * flat
        self.forces *= 40
        self.couples = rng.normal(size=(2, 3)) * upright * 9

    def body(self) -> list[list[Any]]:
        return body_cells(self.mass, self.center, self.tensor)

    def motion(self, alpha: Any = None, **change: Any) -> list[list[Any]]:
        axes = 2 if self.planar else 3
        spin = lambda v: float(v[2]) if self.planar else v  # noqa: E731
        lines = {
            "omega": spin(self.omega),
            "alpha": spin(self.alpha) if alpha is None else alpha,
            "point": self.point[:axes],
            "point_acceleration": self.point_a[:axes],
            "gravity": self.gravity[:axes],
        }
        return motion_cells(**(lines | change))

    def loads(self) -> list[list[Any]]:
        head = [
            "load",
            *(f"F{k} [N]" for k in "xyz"),
            *(f"{k} [mm]" for k in "xyz"),
            *(f"M{k} [N*m]" for k in "xyz"),
        ]
        table = [head]
        for i, (f, p) in enumerate(zip(self.forces, self.places, strict=True)):
            table.append([f"load {i}", *map(float, f), *(float(1e3 * v) for v in p), None, None, None])
        for i, c in enumerate(self.couples):
            table.append([f"friction {i}", *[None] * 6, *map(float, c)])
        return table

    def asked(self, alpha: np.ndarray, about: np.ndarray) -> np.ndarray:
        """Return force and moment about a point that the supports must give together (6,)."""
        arm = self.center - self.point
        a = self.point_a + np.cross(alpha, arm) + np.cross(self.omega, np.cross(self.omega, arm))
        force = self.mass * (a - self.gravity) - self.forces.sum(axis=0)
        moment = (
            self.tensor @ alpha
            + np.cross(self.omega, self.tensor @ self.omega)
            + np.cross(self.center - about, self.mass * (a - self.gravity))
            - np.cross(self.places - about, self.forces).sum(axis=0)
            - self.couples.sum(axis=0)
        )
        return np.concatenate((force, moment))


def solved(
    case: Case, unknowns: list[tuple[str, np.ndarray, np.ndarray | None]], turns: list[np.ndarray]
) -> Any:
    """Return unknown reactions (by row label) and rates, from numpy's least squares on the balance.

    An unknown is a label, a direction, and the point of a force (None for a couple); each turn is an axis about
    which the angular acceleration is unknown.
    """
    about = case.rng.normal(size=3)
    rows = [0, 1, 5] if case.planar else list(range(6))
    columns = []
    for _, d, at in unknowns:
        force, moment = (np.zeros(3), d) if at is None else (d, np.cross(at - about, d))
        columns.append(np.concatenate((force, moment)))
    start = np.zeros(3) if turns else case.alpha
    base = case.asked(start, about)
    columns += [base - case.asked(start + axis, about) for axis in turns]
    matrix = np.array(columns).T[rows]
    found, _, rank, _ = np.linalg.lstsq(matrix, base[rows], rcond=None)
    assert rank == len(rows) == len(columns)
    return dict(zip([u[0] for u in unknowns], found, strict=False)), found[len(unknowns) :]


def table_of(head: list[str], *lines: list[Any]) -> list[list[Any]]:
    return [head, *(line + [None] * (len(head) - len(line)) for line in lines)]


PLANAR_HEAD = ["support", "type", "x [m]", "y [m]", "angle [deg]", "to x [m]", "to y [m]"]


def line_of(name: str, kind: str, at: np.ndarray, angle: float | None = None, to: np.ndarray | None = None):
    far = [None, None] if to is None else [float(v) for v in to[:2]]
    return [name, kind, float(at[0]), float(at[1]), None if angle is None else float(np.degrees(angle)), *far]


def planar_sets(case: Case):
    """Yield (name, support lines, unknowns, whether alpha is unknown) for every kind of planar support.

    One-sided supports are first solved as slots, then turned so that they push or pull.
    """
    rng = case.rng
    p, q, s = (np.append(rng.normal(size=2), 0.0) for _ in range(3))
    a, b, c = rng.uniform(-3, 3, 3)
    along = lambda t: np.array([np.cos(t), np.sin(t), 0.0])  # noqa: E731
    pin = lambda n, at: [(f"{n} fx", X, at), (f"{n} fy", Y, at)]  # noqa: E731
    slot = lambda n, at, t: (f"{n} force", along(t), at)  # noqa: E731
    far = q + 1.7 * along(b)
    link = ("rod tension", along(b), q)
    yield (
        "pin and slot",
        [line_of("P", "pin", p), line_of("S", "slot", q, a)],
        [*pin("P", p), slot("S", q, a)],
        False,
    )
    yield (
        "pin and link",
        [line_of("P", "pin", p), line_of("rod", "link", q, to=far)],
        [*pin("P", p), link],
        False,
    )
    yield "fixed", [line_of("F", "fixed", p)], [*pin("F", p), ("F mz", Z, None)], False
    yield (
        "pin and drive",
        [line_of("P", "pin", p), ["D", "drive", None, None, None, None, None]],
        [*pin("P", p), ("D mz", Z, None)],
        False,
    )
    yield (
        "three slots",
        [line_of(n, "slot", at, t) for n, at, t in (("A", p, a), ("B", q, b), ("C", s, c))],
        [slot(n, at, t) for n, at, t in (("A", p, a), ("B", q, b), ("C", s, c))],
        False,
    )
    yield "pin, alpha unknown", [line_of("P", "pin", p)], pin("P", p), True
    yield (
        "slot and link, alpha unknown",
        [line_of("S", "slot", p, a), line_of("rod", "link", q, to=far)],
        [slot("S", p, a), link],
        True,
    )


@SEEDS
def test_planar_reactions_of_every_support(seed):
    """Reference: numpy lstsq of three balance equations about a random point, set up in the test."""
    case = Case(seed, planar=True)
    for name, lines, unknowns, free in planar_sets(case):
        values, rates = solved(case, unknowns, [Z] if free else [])
        motion = case.motion(alpha="unknown" if free else None)
        call = (case.body(), motion, case.loads(), table_of(PLANAR_HEAD, *lines))
        found = {line[0]: line[1] for line in ask("RB_REACTIONS", *call)}
        scale = max(abs(v) for v in values.values())
        for label, value in values.items():
            assert found[label] == pytest.approx(value, rel=1e-9, abs=1e-10 * scale), (name, label)
        if free:
            assert found["alpha"] == pytest.approx(rates[0], rel=1e-9), name
        assert found["residual force"] <= 1e-10 * scale
        assert found["residual moment"] <= 1e-10 * scale
        label, value = next(iter(values.items()))
        unit, factor = ("N*m", 1.0) if label.split()[-1] in ("mz", "torque") else ("kN", 1e-3)
        alone = number("RB_REACTIONS", *call, label, unit)
        assert alone == pytest.approx(factor * value, rel=1e-9, abs=1e-10 * scale)


@SEEDS
@pytest.mark.parametrize("kind", ["roller", "cable", "cable to its anchor"])
def test_one_sided_supports(seed, kind):
    """Reference: the same lstsq; a support turned the other way would have to pull (push): refused with the number."""
    case = Case(seed + 50, planar=True)
    p, q = (np.append(case.rng.normal(size=2), 0.0) for _ in range(2))
    angle = float(case.rng.uniform(-3, 3))
    d = np.array([np.cos(angle), np.sin(angle), 0.0])
    unknowns = [("P fx", X, p), ("P fy", Y, p), ("S", d, q)]
    force = solved(case, unknowns, [])[0]["S"]
    for turn in (0.0, np.pi):
        holds = (force > 0) == (turn == 0.0)
        if kind == "cable to its anchor":
            line = line_of("S", "cable", q, to=q + 2.0 * d * np.cos(turn))
        else:
            line = line_of("S", kind, q, angle + turn)
        call = (case.body(), case.motion(), case.loads(), table_of(PLANAR_HEAD, line_of("P", "pin", p), line))
        label = "S force" if kind == "roller" else "S tension"
        if holds:
            assert number("RB_REACTIONS", *call, label) == pytest.approx(abs(force), rel=1e-9)
        else:
            said = refused("RB_REACTIONS", *call)
            assert said.error == "#NUM!"
            told = re.search(r"needs it to (?:push|pull) with (\S+) N", said.reason)
            assert told is not None, said.reason
            assert float(told[1]) == pytest.approx(abs(force), rel=1e-5)


SPACE_HEAD = ["support", "type", *(f"{k} [m]" for k in "xyz"), *(f"along {k}" for k in "xyz")]
SPACE_HEAD += [*(f"to {k} [m]" for k in "xyz"), "holds"]


def space_line(
    name: str, kind: str, at: np.ndarray, along: Any = None, to: Any = None, holds: str | None = None
):
    three = lambda v: [None] * 3 if v is None else [float(x) for x in v]  # noqa: E731
    return [name, kind, *three(at), *three(along), *three(to), holds]


def push(name: str, at: np.ndarray, axes: str = "xyz") -> list[tuple[str, np.ndarray, np.ndarray]]:
    return [(f"{name} f{k}", np.eye(3)["xyz".index(k)], at) for k in axes]


def twist(name: str, axes: str = "xyz") -> list[tuple[str, np.ndarray, None]]:
    return [(f"{name} m{k}", np.eye(3)["xyz".index(k)], None) for k in axes]


def space_sets(case: Case):
    """Yield (name, support lines, unknowns, free turns) for every kind of support in space."""
    p, q, r, s = case.rng.normal(size=(4, 3))
    d, e = case.rng.normal(size=(2, 3))
    unit = lambda v: v / np.linalg.norm(v)  # noqa: E731
    q_up = p + 1.3 * Z
    six = [(f"L{k} tension", unit(d_), at) for k, (at, d_) in enumerate(case.rng.normal(size=(6, 2, 3)))]
    rods = [space_line(f"L{k}", "link", at, to=at + 2 * u) for k, (_, u, at) in enumerate(six)]
    yield "fixed", [space_line("F", "fixed", p)], [*push("F", p), *twist("F")], []
    yield (
        "gate on two bearings and a slot",
        [
            space_line("low", "thrust bearing", p, Z),
            space_line("high", "bearing", q_up, Z),
            space_line("stop", "slot", r, d),
        ],
        [*push("low", p), *push("high", q_up, "xy"), ("stop force", unit(d), r)],
        [],
    )
    yield (
        "ball and links",
        [space_line("B", "ball", p)]
        + [space_line(f"L{k}", "link", at, to=at + 2 * u) for k, (_, u, at) in enumerate(six[:3])],
        [*push("B", p), *six[:3]],
        [],
    )
    yield (
        "six links",
        rods,
        six,
        [],
    )
    yield (
        "hinge about x and a drive",
        [space_line("H", "hinge", p, X), space_line("D", "drive", q, e)],
        [*push("H", p), *twist("H", "yz"), ("D torque", unit(e), None)],
        [],
    )
    yield (
        "held by components and slots",
        [
            space_line("H", "held", p, holds="fx fz my"),
            space_line("A", "slot", q, d),
            space_line("B", "slot", r, e),
            space_line("C", "slot", s, d + e),
        ],
        [
            *push("H", p, "xz"),
            *twist("H", "y"),
            ("A force", unit(d), q),
            ("B force", unit(e), r),
            ("C force", unit(d + e), s),
        ],
        [],
    )
    yield "ball, alpha unknown", [space_line("B", "ball", p)], push("B", p), [X, Y, Z]


@SEEDS
def test_reactions_in_space_of_every_support(seed):
    """Reference: numpy lstsq of six balance equations about a random point, set up in the test."""
    case = Case(seed + 100, planar=False)
    for name, lines, unknowns, turns in space_sets(case):
        values, rates = solved(case, unknowns, turns)
        motion = case.motion(alpha="unknown" if turns else None)
        call = (case.body(), motion, case.loads(), table_of(SPACE_HEAD, *lines))
        found = {line[0]: line[1] for line in ask("RB_REACTIONS_3D", *call)}
        scale = max(abs(v) for v in values.values())
        for label, value in values.items():
            assert found[label] == pytest.approx(value, rel=1e-8, abs=1e-9 * scale), (name, label)
        for k, rate in zip("xyz", rates, strict=False):
            assert found[f"alpha {k}"] == pytest.approx(rate, rel=1e-8), name
        assert found["residual force"] <= 1e-9 * scale
        assert found["residual moment"] <= 1e-9 * scale


@SEEDS
def test_inclined_bearings_carry_the_same_load(seed):
    """Property: the whole gate turned in space keeps the size of each bearing's radial and axial load."""
    case = Case(seed + 150, planar=False)
    turn = Rotation.random(random_state=seed + 1)
    p, stop = case.rng.normal(size=(2, 3))
    q, push_to = p + 1.4 * Z, np.array([0.3, 1.0, 0.1])

    def loads_of(rotate) -> dict[str, float]:
        t = Case(seed + 150, planar=False)
        for name in (
            "center",
            "omega",
            "alpha",
            "point",
            "point_a",
            "gravity",
            "forces",
            "places",
            "couples",
        ):
            setattr(t, name, rotate.apply(getattr(case, name)))
        m = rotate.as_matrix()
        t.tensor = m @ case.tensor @ m.T
        t.tensor = (t.tensor + t.tensor.T) / 2
        lines = [
            space_line("low", "thrust bearing", rotate.apply(p), rotate.apply(Z)),
            space_line("high", "bearing", rotate.apply(q), rotate.apply(Z)),
            space_line("stop", "slot", rotate.apply(stop), rotate.apply(push_to)),
        ]
        call = (t.body(), t.motion(), t.loads(), table_of(SPACE_HEAD, *lines))
        return {line[0]: line[1] for line in ask("RB_REACTIONS_3D", *call)}

    straight, inclined = loads_of(Rotation.identity()), loads_of(turn)
    for label in ("low radial", "low force", "high force", "stop force"):
        assert inclined[label] == pytest.approx(straight[label], rel=1e-9), label
    assert abs(inclined["low axial"]) == pytest.approx(abs(straight["low fz"]), rel=1e-9)


def test_body_straight_from_the_parts_list():
    """First principles: a rolled-up beam on pin and roller; the record is handed on as it stands."""
    parts = [
        ["part", "shape", "mass [kg]", "L [mm]", "W [mm]", "H [mm]", "x [mm]", "y [mm]", "z [mm]"],
        ["beam", "box", 40.0, 3000.0, 100.0, 100.0, 1500.0, 0.0, 0.0],
        ["motor", "box", 25.0, 300.0, 200.0, 200.0, 2400.0, 150.0, 0.0],
    ]
    body = ask("RB_ROLLUP", parts)
    motion = [
        ["omega", 0.0, "rad/s"],
        ["alpha", 0.0, "rad/s^2"],
        ["gravity", "down", None],
        ["center acceleration", "(0, 0) m/s^2", None],
    ]
    supports = table_of(
        PLANAR_HEAD, line_of("A", "pin", np.zeros(3)), line_of("B", "roller", 3 * X, np.pi / 2)
    )
    g = 9.80665
    at_b = (40 * g * 1.5 + 25 * g * 2.4) / 3.0
    assert number("RB_REACTIONS", body, motion, "none", supports, "B force") == pytest.approx(at_b, rel=1e-13)
    at_a = 65 * g - at_b
    assert number("RB_REACTIONS", body, motion, "none", supports, "A fy") == pytest.approx(at_a, rel=1e-13)
    held = table_of(
        SPACE_HEAD, space_line("A", "ball", np.zeros(3)), space_line("B", "held", 3 * X, holds="fy fz mx")
    )
    motion[2:] = [
        ["gravity", "(0, -9.80665, 0) m/s^2", None],
        ["center acceleration", "(0, 0, 0) m/s^2", None],
    ]
    assert number("RB_REACTIONS_3D", body, motion, "none", held, "B fy") == pytest.approx(at_b, rel=1e-13)


@SEEDS
def test_resultant_is_the_sum_and_its_wrench(seed):
    """First principles: numpy sums about a random point; the wrench's moment is along the force at the lever."""
    case = Case(seed + 200, planar=False)
    about = case.rng.normal(size=3)
    force = case.forces.sum(axis=0)
    moment = np.cross(case.places - about, case.forces).sum(axis=0) + case.couples.sum(axis=0)
    call = ("RB_RESULTANT", case.loads(), row(about))
    np.testing.assert_allclose(vector(*call, "force"), force, rtol=1e-12)
    np.testing.assert_allclose(vector(*call, "moment"), moment, rtol=1e-11, atol=1e-11)
    for i, k in enumerate("xyz"):
        assert number(*call, f"F{k}", "kN") == pytest.approx(force[i] / 1e3, rel=1e-12)
        assert number(*call, f"M{k}") == pytest.approx(moment[i], rel=1e-11, abs=1e-11)
    size = np.linalg.norm(force)
    assert number(*call, "size") == pytest.approx(size, rel=1e-13)
    assert number(*call, "pitch") == pytest.approx(moment @ force / size**2, rel=1e-11)
    across = moment - force * (moment @ force) / size**2
    assert number(*call, "lever") == pytest.approx(np.linalg.norm(across) / size, rel=1e-11)


@SEEDS
def test_planar_resultant_crosses_the_axes(seed):
    """First principles: the resultant at the crossing alone gives the same moment."""
    case = Case(seed + 250, planar=True)
    force = case.forces.sum(axis=0)
    moment = (np.cross(case.places, case.forces).sum(axis=0) + case.couples.sum(axis=0))[2]
    on_x, on_y = (number("RB_RESULTANT", case.loads(), "origin", w) for w in ("crosses x", "crosses y"))
    assert on_x * force[1] == pytest.approx(moment, rel=1e-11)
    assert -on_y * force[0] == pytest.approx(moment, rel=1e-11)


@SEEDS
def test_moment_and_center_acceleration(seed):
    """Reference: numpy's cross product; mass times the answer is the force."""
    force, arm = np.random.default_rng(seed + 300).normal(size=(2, 3))
    found = vector("RB_MOMENT", row(force), row(arm))
    np.testing.assert_allclose(found, np.cross(arm, force), rtol=1e-13, atol=1e-15)
    np.testing.assert_allclose(vector("RB_CENTER_ACCELERATION", row(force), 7.0) * 7.0, force, rtol=1e-14)


@SEEDS
def test_envelope_equals_numpy(seed):
    """Reference: numpy argmax and argmin over the cases, in mixed units."""
    rng = np.random.default_rng(seed + 350)
    values = rng.normal(size=9) * 1e3
    names = [f"case {k}" for k in range(9)]
    table = [["case", "torque [N*m]"], *([n, float(v)] for n, v in zip(names, values, strict=True))]
    for what, expected in (
        ("governing", names[np.abs(values).argmax()]),
        ("magnitude", np.abs(values).max()),
        ("largest", values.max()),
        ("smallest", values.min()),
        ("largest case", names[values.argmax()]),
        ("smallest case", names[values.argmin()]),
        ("unit", "N*m"),
    ):
        assert ask("RB_ENVELOPE", table, what) == expected
    mixed = [[n, float(v), "N*m"] for n, v in zip(names, values, strict=True)]
    mixed[::2] = [[n, v / 1e3, "kN*m"] for n, v, _ in mixed[::2]]
    assert ask("RB_ENVELOPE", mixed, "governing") == names[np.abs(values).argmax()]
    assert number("RB_ENVELOPE", mixed, "largest") == pytest.approx(values.max() / 1e3, rel=1e-13)


def test_records_of_bodies_keep_their_tensor():
    """Property: what the helper writes is what RB_MOVE by no angle gives back."""
    case = Case(7, planar=False)
    mass, center, tensor = tensor_of_record(ask("RB_MOVE", case.body(), "z", 0.0, "origin"))
    assert mass == case.mass
    np.testing.assert_allclose(center, case.center, rtol=1e-15)
    np.testing.assert_allclose(tensor, case.tensor, rtol=1e-14)
