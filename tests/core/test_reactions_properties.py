"""What holds for the reactions of any planar body: power, scale, origin, superposition, one-sidedness."""

from __future__ import annotations

from math import atan2, cos, pi, sin

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st
from planar_problem import AT_REST, PIN_O, UP, ZERO, Z, flat_body, loads, solve, vec

from rigidsheet.core import reactions as module
from rigidsheet.core.body import RigidBody
from rigidsheet.core.errors import PhysicsError
from rigidsheet.core.reactions import SolvedReactions
from rigidsheet.core.states import Loads, Motion
from rigidsheet.core.supports import planar_support

number = st.floats(-3, 3, allow_nan=False).map(lambda x: round(x, 3))
pair = st.tuples(number, number)
states = st.fixed_dictionaries(
    {
        "center": pair,
        "pin": pair,
        "slot": pair,
        "angle": st.floats(0, pi),
        "omega": number,
        "alpha": number,
        "acceleration": pair,
        "force": pair,
        "at": pair,
        "couple": number,
        "polar": st.floats(0.1, 5),
    }
)


def held(s: dict, unit: float = 1.0, mass: float = 1.0, shift: tuple[float, float] = (0, 0)):
    """Return body, motion, holds and loads with lengths in `unit` and masses in `mass` of the state's own."""

    def at(p: tuple[float, float]) -> np.ndarray:
        return unit * vec(p[0] + shift[0], p[1] + shift[1])

    polar = s["polar"] * mass * unit**2
    body = RigidBody(2.0 * mass, at(s["center"]), np.diag([polar, polar, polar]))
    motion = Motion(s["omega"] * Z, s["alpha"] * Z, unit * vec(*s["acceleration"]), at(s["pin"]))
    holds = planar_support("P", "pin", at(s["pin"])) + planar_support(
        "S", "slot", at(s["slot"]), angle=s["angle"]
    )
    force = mass * unit
    acting = loads((force * vec(*s["force"]), at(s["at"])), couple=s["couple"] * force * unit)
    return body, motion, holds, acting


def well_held(s: dict) -> None:
    dx, dy = s["slot"][0] - s["pin"][0], s["slot"][1] - s["pin"][1]
    assume(abs(dx * sin(s["angle"]) - dy * cos(s["angle"])) > 0.05)


def values(found: SolvedReactions) -> np.ndarray:
    return np.array([reaction.value for reaction in found.reactions])


@settings(max_examples=60, deadline=None)
@given(states)
def test_power_of_all_forces_is_the_rate_of_kinetic_energy(s):
    """First principles: F.v at each point plus couples times spin equals m v.a + I omega alpha."""
    well_held(s)
    body, motion, holds, acting = held(s)
    found = solve(body, motion, holds, acting, 9.81)
    drift = vec(0.7, -0.3)  # velocity of the pin, any

    def speed(point) -> np.ndarray:
        return drift + np.cross(motion.omega, np.asarray(point) - motion.point)

    power = float(np.dot(found.weight, speed(body.center))) + s["couple"] * s["omega"]
    power += float(acting.forces[0] @ speed(acting.points[0]))
    power += sum(float(np.dot(r.vector, speed(r.hold.point))) for r in found.reactions)
    r = body.center - motion.point
    center = motion.acceleration + np.cross(motion.alpha, r) - s["omega"] ** 2 * r
    rate = body.mass * float(speed(body.center) @ center) + s["polar"] * s["omega"] * s["alpha"]
    scale = 1 + np.abs(values(found)).max() * 30
    assert power == pytest.approx(rate, abs=1e-11 * scale)
    assert found.residual.relative < 1e-13


@settings(max_examples=40, deadline=None)
@given(states)
def test_millimetres_and_tonnes_give_the_same_newtons_and_the_same_judgement(s):
    """N, mm, t, s is a consistent set: forces keep their numbers, moments grow a thousandfold."""
    well_held(s)
    found = solve(*held(s), 9.81)
    small = solve(*held(s, 1e3, 1e-3), 9810.0)
    scale = 1e-9 * (1 + np.abs(values(found)).max())
    np.testing.assert_allclose(values(small), values(found), atol=scale)
    assert small.condition == pytest.approx(found.condition, rel=1e-6)
    far = solve(*held(s, 1e-3, 1e3), 9.81e-3)
    np.testing.assert_allclose(values(far), values(found), atol=scale)


@settings(max_examples=40, deadline=None)
@given(states, pair)
def test_moving_the_origin_changes_no_reaction(s, shift):
    well_held(s)
    found = solve(*held(s), 9.81)
    moved = solve(*held(s, shift=shift), 9.81)
    np.testing.assert_allclose(values(moved), values(found), atol=1e-10 * (1 + np.abs(values(found)).max()))


@settings(max_examples=40, deadline=None)
@given(states, number)
def test_loads_superpose(s, factor):
    """Reactions to a sum of loads are the sums of the reactions, the motion's own share counted once."""
    well_held(s)
    body, motion, holds, acting = held(s)
    more = Loads(factor * acting.forces, acting.points + 0.5, -factor * acting.couples)
    both = Loads(
        *(np.vstack([getattr(acting, n), getattr(more, n)]) for n in ("forces", "points", "couples"))
    )
    none = values(solve(body, motion, holds, Loads(), 9.81))
    first, second = (values(solve(body, motion, holds, one, 9.81)) for one in (acting, more))
    together = values(solve(body, motion, holds, both, 9.81))
    scale = sum(np.abs(x).max() for x in (none, first, second, together))
    np.testing.assert_allclose(together - none, first + second - 2 * none, atol=1e-11 * (1 + scale))


@settings(max_examples=40, deadline=None)
@given(states)
def test_solved_alpha_given_back_needs_no_drive(s):
    """Solve alpha on a pin, then give it and ask a drive for the rest: the drive has nothing to do."""
    body, motion, _, acting = held(s)
    pin = planar_support("P", "pin", motion.point)
    free = Motion(motion.omega, ZERO, motion.acceleration, motion.point, (Z,))
    found = solve(body, free, pin, acting, 9.81)
    given_back = Motion(motion.omega, np.array(found.alpha), motion.acceleration, motion.point)
    driven = solve(body, given_back, pin + planar_support("D", "drive", ZERO), acting, 9.81)
    scale = 1 + np.abs(values(found)).max() * 20
    assert driven.value("D", "mz") == pytest.approx(0, abs=1e-11 * scale)
    np.testing.assert_allclose(values(driven)[:2], values(found), atol=1e-11 * scale)


def test_residual_would_show_a_wrong_reaction():
    """The check about the second point is taken from the vectors: a disturbed value must show in it."""
    body = flat_body(20, 1.5, 0, 15)
    case = module.plain_balance(body, AT_REST, loads(), vec(0, -9.81), True)
    found = solve(body, AT_REST, PIN_O + planar_support("D", "drive", ZERO), loads(), 9.81)
    wrong = tuple(module.Reaction(r.hold, r.value * 1.001) for r in found.reactions)
    shown = module._residual(case, wrong, ZERO, ZERO, 1.5, 400.0, True)
    assert shown.relative > 1e-4
    assert found.residual.relative < 1e-15


def test_link_force_is_positive_in_tension_and_a_cable_points_to_its_anchor():
    """A weight hung from two ropes at 45 deg: each carries W / sqrt(2); statics from memory."""
    body = flat_body(10, 0, 0, 1)
    holds = planar_support("left", "cable", ZERO, to=vec(-1, 1))
    holds += planar_support("right", "link", ZERO, to=vec(1, 1)) + planar_support("stop", "drive", ZERO)
    found = solve(body, AT_REST, holds, loads(), 9.81)
    for name in ("left", "right"):
        assert found.value(name, "tension") == pytest.approx(98.1 / np.sqrt(2))
    assert atan2(*found.force_on_body("left")[1::-1]) == pytest.approx(3 * pi / 4)


def test_roller_that_would_have_to_pull_is_refused_with_the_number():
    body = flat_body(10, 2, 0, 1)
    holds = PIN_O + planar_support("B", "roller", vec(1), angle=-UP)
    with pytest.raises(
        PhysicsError, match=r"Support B can only push.* pull with 196\.2 N: the body lifts off"
    ):
        solve(body, AT_REST, holds, loads(), 9.81)
