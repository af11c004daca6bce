"""What reactions refuse, with the reason a designer needs: each case is a known mechanism or a known excess.

The sources are the definitions: a body in the plane has three freedoms, in space six; forces through one
point have no moment about it; parallel forces have no part across them.
"""

from __future__ import annotations

import re
from math import inf, pi, radians

import numpy as np
import pytest
from planar_problem import AT_REST, PIN_O, UP, ZERO, Z, flat_body, loads, solve, turning, vec

from rigidsheet.core.body import RigidBody
from rigidsheet.core.errors import InputError, PhysicsError
from rigidsheet.core.reactions import solve_reactions
from rigidsheet.core.states import Loads, Motion
from rigidsheet.core.supports import Hold, planar_support, spatial_support

BODY = flat_body(20, 1.5, 0.2, 15)
Holds = tuple[Hold, ...]


def roller(name: str, x: float, y: float, degrees: float) -> Holds:
    return planar_support(name, "roller", vec(x, y), angle=radians(degrees))


def slot(name: str, x: float, y: float, degrees: float) -> Holds:
    return planar_support(name, "slot", vec(x, y), angle=radians(degrees))


def pin(name: str, x: float, y: float = 0.0) -> Holds:
    return planar_support(name, "pin", vec(x, y))


PLANAR_CASES = [
    (PIN_O, "free to rotate about support O"),
    (roller("A", 0, 0, 90) + roller("B", 3, 0, 90), "free to slide along x"),
    (slot("A", 0, 0, 0) + slot("B", 3, 1, 0), "free to slide along y"),
    (slot("A", 0, 0, 30) + slot("B", 3, 0, 30), "free to slide along 120 deg from x"),
    (planar_support("D", "drive", ZERO), r"free to slide along x \(one of 2 free motions\)"),
    (
        slot("A", 0, 0, 45) + slot("B", 2, 0, 135) + slot("C", 1, 5, 90),
        r"lines of action of A, B and C meet at \(1, 1\) m.*free to rotate about \(1, 1\) m",
    ),
    (
        slot("A", 0, 0, 90) + slot("B", 2, 0, 90) + slot("C", 1, 5, 90),
        "lines of action of A, B and C are parallel, so the body is free to slide along x",
    ),
    (PIN_O + slot("B", 3, 0, 0), "lines of action of O and B meet .* free to rotate about support O"),
    (pin("A", 0.1 + 0.2) + slot("B", 0.3, 0, 90), "free to rotate about support A"),
    (slot("A", 0, 0, 90) + slot("B", 1, 0, 90) + slot("C", 2, 0, 90) + slot("D", 3, 0, 90), "slide along x"),
    (
        PIN_O + planar_support("D", "drive", ZERO) + planar_support("E", "drive", vec(1)),
        r"Too many supports by 1: D \(mz\) and E \(mz\) work against each other",
    ),
    (PIN_O + pin("B", 3), r"Too many supports by 1: O \(fx\) and B \(fx\) work against each other"),
    (
        PIN_O + slot("B", 3, 0, 90) + slot("C", 2, 0, 90),
        r"O \(fy\), B \(force\) and C \(force\) work against",
    ),
    (
        planar_support("A", "fixed", ZERO) + roller("B", 3, 0, 90),
        r"Too many supports by 1: A \(fy, mz\) and B \(force\)",
    ),
    (
        planar_support("A", "fixed", ZERO) + planar_support("B", "fixed", vec(2, 1)),
        r"Too many supports by 3: A \(fx, fy, mz\) and B \(fx, fy, mz\)",
    ),
    (PIN_O + slot("B", 3, 0, np.degrees(1e-7)), "almost free to rotate about support O, condition number"),
    ((), "no support and its motion is given"),
]


@pytest.mark.parametrize(("holds", "reason"), PLANAR_CASES)
@pytest.mark.parametrize("unit", [1.0, 1e3, 1e-3])
def test_planar_supports_that_cannot_be_solved_say_why(holds, reason, unit):
    """The same refusal for metres and kilograms, millimetres and tonnes, and kilometres and grams."""
    moved = tuple(
        Hold(h.support, h.component, h.direction, tuple(unit * x for x in h.point), h.couple, h.one_sided)
        for h in holds
    )
    body = RigidBody(BODY.mass / unit, BODY.center * unit, BODY.inertia * unit)
    if unit != 1.0:
        reason = re.sub(r"\\\(1, 1\\\) m", r"\\(.*\\) m", reason)
    with pytest.raises(PhysicsError, match=reason) as refusal:
        solve(body, AT_REST, moved, loads(), 9.81 * unit)
    assert len(str(refusal.value)) <= 255


def test_unknown_alpha_of_a_held_body_is_refused():
    with pytest.raises(PhysicsError, match="alpha cannot be unknown: the supports hold the body against it"):
        solve(BODY, turning(0, None, ZERO), planar_support("W", "fixed", ZERO), loads(), 9.81)
    motion = Motion(ZERO, ZERO, ZERO, None, (Z,))
    with pytest.raises(PhysicsError, match="alpha cannot be unknown: the body has no inertia"):
        solve(RigidBody(1.0, ZERO, np.zeros((3, 3))), motion, PIN_O, loads(), 9.81)


def test_unknown_alpha_does_not_hide_another_free_motion():
    with pytest.raises(PhysicsError, match=r"free to slide along x\. Add a support"):
        solve(BODY, turning(0, None, ZERO), roller("A", 0, 0, 90), loads(), 9.81)


def test_the_axis_that_is_solved_is_not_named_as_left_free():
    """A ball joint with the turn about x unknown leaves the turns about y and z."""
    motion = Motion(ZERO, ZERO, ZERO, ZERO, (np.array([1.0, 0, 0]),))
    with pytest.raises(PhysicsError, match=r"rotate about support A, axis along y \(one of 2"):
        space(spatial_support("A", "ball", ZERO), motion)


def space(holds: Holds, motion: Motion = AT_REST) -> None:
    body = RigidBody(20, np.array([1.0, 0.4, 0.3]), np.diag([3.0, 4.0, 5.0]))
    solve_reactions(body, motion, holds, loads=Loads(), gravity=vec(0, -9.81), planar=False)


def bearing(name: str, x: float, axis: tuple[float, float, float] = (1, 0, 0)) -> Holds:
    return spatial_support(name, "bearing", (x * axis[0], x * axis[1], x * axis[2]), direction=axis)


SPATIAL_CASES = [
    (spatial_support("A", "ball", ZERO), r"rotate about support A, axis along x \(one of 3"),
    (
        spatial_support("A", "ball", ZERO) + spatial_support("B", "bearing", (0, 2, 1), direction=(0, 2, 1)),
        "free to rotate about the line through supports A and B",
    ),
    (bearing("A", 0) + bearing("B", 3), r"free to slide along x \(one of 2"),
    (
        bearing("A", 0, (0.6, 0.8, 0))
        + bearing("B", 3, (0.6, 0.8, 0))
        + spatial_support("D", "drive", ZERO, direction=(0.6, 0.8, 0)),
        r"free to slide along \(0\.6, 0\.8, 0\)",
    ),
    (
        spatial_support("A", "ball", ZERO)
        + spatial_support("B", "ball", (3, 0, 0))
        + spatial_support("D", "drive", ZERO, direction=(1, 0, 0)),
        r"Too many supports by 1: A \(fx\) and B \(fx\) work against each other",
    ),
    (
        spatial_support("A", "ball", ZERO) + spatial_support("B", "ball", (3, 0, 0)),
        r"free to rotate about the line through supports A and B, while A \(fx\) and B \(fx\) share",
    ),
    (
        spatial_support("A", "hinge", ZERO, direction=(0, 0, 1))
        + spatial_support("B", "hinge", (0, 0, 2), direction=(0, 0, 1)),
        "free to rotate about support A, axis along z|free to rotate about the line through supports A and B",
    ),
    (
        spatial_support("A", "fixed", ZERO) + spatial_support("B", "ball", (3, 0, 0)),
        r"Too many supports by 3: A \(fx, fy, fz, my, mz\) and B \(fx, fy, fz\)",
    ),
]


@pytest.mark.parametrize(("holds", "reason"), SPATIAL_CASES)
def test_spatial_supports_that_cannot_be_solved_say_why(holds, reason):
    with pytest.raises(PhysicsError, match=reason) as refusal:
        space(holds)
    assert len(str(refusal.value)) <= 255


def test_a_thread_is_named_as_a_screw_with_its_pitch():
    """A nut on a thread of 0.5 m/rad about z through (2, 1, 0): its flank pushes along and around."""
    holds = spatial_support("nut", "held", (2, 1, 0), components=("fx", "fy", "mx", "my"))
    # A turn about z by one moves the flank's point by 1 along y and by 0.5 along z: square to the flank.
    holds += spatial_support("flank", "slot", (3, 1, 0), direction=(0, -0.5, 1))
    reason = r"screw of 0\.5 m/rad about the axis through \(2, 1, 0\) m along \(0, 0, 1\)"
    with pytest.raises(PhysicsError, match=reason):
        space(holds)


@pytest.mark.parametrize("seed", range(12))
def test_the_motion_that_five_links_leave_free_is_the_one_that_is_named(seed):
    """First principles: at the motion read from the sentence, no link's end moves along the link."""
    random = np.random.default_rng(seed)
    holds: Holds = ()
    for i in range(5):
        points = random.normal(size=(2, 3))
        holds += spatial_support(f"link {i}", "link", points[0], to=points[1])
    with pytest.raises(PhysicsError, match="move as a screw") as refusal:
        space(holds)
    assert len(str(refusal.value)) <= 255
    numbers = [float(text) for text in re.findall(r"-?\d[\d.]*(?:e[-+]\d+)?", str(refusal.value))]
    advance, through, along = numbers[0], np.array(numbers[1:4]), np.array(numbers[4:7])
    for hold in holds:
        speed = np.cross(along, np.array(hold.point) - through) + advance * along
        assert abs(np.dot(speed, hold.direction)) < 2e-3 * (1 + np.linalg.norm(speed))


def test_long_names_and_many_supports_stay_readable():
    name = "bearing on the far side of the sorting line, number "
    holds = sum((pin(f"{name}{i}", float(i)) for i in range(9)), ())
    with pytest.raises(PhysicsError, match=r"Too many supports by 15: .* and 6 more work against") as refusal:
        solve(BODY, AT_REST, holds, loads(), 9.81)
    assert len(str(refusal.value)) <= 255
    walls = sum((spatial_support(f"{name}{i}", "fixed", (i, i * i, 1)) for i in range(4)), ())
    with pytest.raises(PhysicsError, match=r"by 18: bearing \.\.\. number 0, .* and 1 more") as other:
        space(walls)
    assert len(str(other.value)) <= 255


def test_one_sided_supports_name_the_worst_and_the_others():
    holds = roller("A", 0, 0, -90) + roller("B", 2, 0, -90) + slot("C", 1, 0, 0)
    with pytest.raises(PhysicsError, match="lifts off there; the same holds for A"):
        solve(BODY, AT_REST, holds, loads(), 9.81)
    pushed = PIN_O + planar_support("rope", "cable", vec(1), angle=-UP)
    with pytest.raises(PhysicsError, match=r"Support rope can only pull.* push with 294\.3 N: it goes slack"):
        solve(BODY, AT_REST, pushed, loads(), 9.81)


def test_one_sided_support_without_load_is_no_refusal():
    """The load passes through the pin: the roller carries nothing but rounding, of either sign."""
    signs = set()
    for i in range(1, 60):
        x = 0.1 * i
        body = flat_body(20, x + 0.2, 0.7 * x, 15)
        holds = pin("A", 0.1 * (i + 2), 0.3) + roller("B", 1.7 * x, 0.4, 77)
        roller_force = solve(body, AT_REST, holds, loads(), 9.81).value("B", "force")
        assert abs(roller_force) < 1e-9
        signs.add(np.sign(roller_force))
    assert -1 in signs  # else the case would show nothing


@pytest.mark.parametrize(
    ("arguments", "reason"),
    [
        (("A", "hook", ZERO, {}), "`kind` must be one of pin, roller"),
        (("A", "roller", ZERO, {}), r"`angle` must be given: the direction of the force.*support A"),
        (("A", "link", ZERO, {}), "`to` must be given: the far end of the link"),
        (("A", "cable", ZERO, {}), "`angle` must be given, or `to`: the anchor"),
        (("A", "pin", ZERO, {"angle": 1.0}), "`angle` must be left out, as a pin has none"),
        (("A", "roller", ZERO, {"to": vec(1)}), "`to` must be left out, as a roller has no far end"),
        (("A", "link", ZERO, {"angle": 1.0}), "`angle` must be left out, as a link's two ends"),
        (("A", "cable", ZERO, {"angle": 1.0, "to": vec(1)}), "`angle` must be left out when the anchor"),
        (("A", "link", vec(1, 1), {"to": vec(1, 1)}), "`to` must be another point than the link's point"),
        (("A", "slot", ZERO, {"angle": inf}), "`angle` must be a finite number"),
        (("A", "pin", (1.0, 2.0), {}), "`point` must be three finite coordinates"),
    ],
)
def test_malformed_planar_supports(arguments, reason):
    *plain, named = arguments
    with pytest.raises(InputError, match=reason):
        planar_support(*plain, **named)


@pytest.mark.parametrize(
    ("kind", "named", "reason"),
    [
        ("hook", {}, "`kind` must be one of held, ball"),
        ("bearing", {}, "`direction` must be given: its axis"),
        ("link", {}, "`to` must be given"),
        ("link", {"direction": (0, 0, 1)}, "`direction` must be left out, as a link has none"),
        ("ball", {"direction": (0, 0, 1)}, "`direction` must be left out, as a ball has none"),
        ("ball", {"components": ("fx",)}, "`components` must be left out, as a ball has none"),
        ("roller", {"direction": (0, 0, 0)}, "`direction` must be a finite vector other than zero"),
        ("held", {}, "`components` must be one or more of fx, fy"),
        ("held", {"components": ("fq",)}, "`components` must be any of fx, .*'fq'"),
        ("held", {"components": ("fx", "fx")}, "`components` must be listed once each; got 'fx'"),
        ("held", {"components": ("fx",), "axes": np.ones((3, 3))}, "`axes` must be three unit vectors"),
        ("cable", {"to": (0, 0, 1), "direction": (0, 0, 1)}, "`direction` must be left out when the anchor"),
    ],
)
def test_malformed_spatial_supports(kind, named, reason):
    with pytest.raises(InputError, match=reason):
        spatial_support("A", kind, ZERO, **named)


def test_two_supports_of_one_name():
    with pytest.raises(InputError, match="`supports` must be named differently; got 'A'"):
        solve(BODY, AT_REST, pin("A", 0) + slot("B", 1, 1, 90) + slot("A", 2, 0, 90), loads(), 9.81)
    with pytest.raises(InputError, match="named differently"):
        solve(BODY, AT_REST, pin("A", 0) + pin("A", 1), loads(), 9.81)


@pytest.mark.parametrize(
    ("motion", "acting", "gravity", "reason"),
    [
        (AT_REST, Loads(), vec(0, 0, -9.81), "`gravity` must be in the x-y plane"),
        (AT_REST, loads((vec(0, 0, 1), ZERO)), ZERO, r"`loads` must be forces in the x-y plane.*force 1"),
        (AT_REST, Loads(couples=np.array([vec(0, 0, 1), vec(1)])), ZERO, r"couples about z.*couple 2"),
        (Motion(vec(1), ZERO, ZERO), Loads(), ZERO, "`omega` must be about z for a planar balance"),
        (Motion(ZERO, vec(0, 1), ZERO), Loads(), ZERO, "`alpha` must be about z"),
    ],
)
def test_planar_balance_refuses_what_it_would_leave_out(motion, acting, gravity, reason):
    holds = PIN_O + roller("B", 3, 0, 90)
    with pytest.raises(InputError, match=reason):
        solve_reactions(BODY, motion, holds, loads=acting, gravity=gravity, planar=True)


def test_a_thin_but_real_lever_is_solved():
    """A short bearing pair under a long load is a hard case, not an impossible one: factor 10,000."""
    body = flat_body(1.0, 100.0, 0, 1.0)
    found = solve(body, AT_REST, pin("A", 0) + slot("B", 0.01, 0, 90), loads(), 9.81)
    assert found.value("B", "force") == pytest.approx(9.81 * 100 / 0.01, rel=1e-9)


def test_angle_of_a_slot_is_the_direction_of_its_force():
    assert planar_support("A", "slot", ZERO, angle=pi / 3)[0].direction == pytest.approx((0.5, 0.75**0.5, 0))
