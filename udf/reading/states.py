"""Motion, loads and supports at the cell boundary."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any, Final

import numpy as np
from numpy.typing import NDArray

from ...core import states
from ...core.errors import InputError
from ...core.supports import COMPONENTS, PLANAR_KINDS, SPATIAL_KINDS, Hold, planar_support, spatial_support
from ..units import kinds
from ..units.quantities import folded, shown
from .arguments import Spin, Vector
from .records import Entry, Record
from .slips import AS_COLUMNS, OF_LOADS, OF_SUPPORTS
from .tables import Column, Table, TableData

Array = NDArray[np.float64]
STANDARD_GRAVITY: Final = 9.80665  # m/s^2, exact by definition (CGPM 1901, ISO 80000-3)
UNKNOWN, DOWN, NONE = "unknown", "down", "none"
UNKNOWN_ABOUT: Final = tuple(f"{UNKNOWN} about {k}" for k in "xyz")
WEIGHT_LABEL: Final = re.compile(
    r"(own |dead |self[- ]?)?weight( of (the )?body)?|gravity|m ?\*? ?g\Z", re.IGNORECASE
)


@dataclass(frozen=True, eq=False, slots=True)
class MotionRead:
    """A motion record as read, vectors lifted to x y z; None where a line is absent."""

    omega: Array
    alpha: Array | None  # None: unknown, to be solved
    planar: bool
    alpha_given: bool
    center_acceleration: Array | None
    fixed_point: Array | None
    point: Array | None
    point_acceleration: Array | None
    center_velocity: Array | None
    point_velocity: Array | None
    gravity: Array | None
    free_axis: str = ""  # of an unknown alpha: x, y or z; empty for all that the problem has

    def balance(self, in_space: bool = False) -> states.Motion:
        """Return the motion for a balance of forces and moments, an unknown alpha about its axes."""
        if not self.alpha_given:
            raise InputError(
                "motion", "a motion with a line 'alpha': a number, or 'unknown', or 'unknown about z'"
            )
        place, acceleration = self._place()
        turns: Sequence[Array] = ()
        if self.alpha is None:
            turns = (
                tuple(np.eye(3))
                if in_space and not self.free_axis
                else (np.eye(3)["xyz".index(self.free_axis or "z")],)
            )
        alpha = np.zeros(3) if self.alpha is None else self.alpha
        return states.Motion(self.omega, alpha, acceleration, place, turns)

    def _place(self) -> tuple[Array | None, Array]:
        """Return the point whose acceleration is known (None: the mass center) and that acceleration."""
        ways = [
            name
            for name, value in (
                ("center acceleration", self.center_acceleration),
                ("fixed point", self.fixed_point),
                ("point", self.point),
            )
            if value is not None
        ]
        if len(ways) != 1:
            got = " and ".join(ways) if ways else "none of them"
            raise InputError(
                "motion",
                "a motion with one of: 'center acceleration'; 'fixed point'; 'point' with 'point acceleration'; "
                f"got {got}",
            )
        if self.fixed_point is not None:
            return self.fixed_point, np.zeros(3)
        if self.point is not None:
            if self.point_acceleration is None:
                raise InputError("motion", "a motion with 'point acceleration' beside 'point'")
            return self.point, self.point_acceleration
        assert self.center_acceleration is not None
        return None, self.center_acceleration

    def falling(self) -> Array:
        """Return gravity, refusing a motion that does not tell it."""
        if self.gravity is None:
            raise InputError(
                "motion",
                "a motion with a line 'gravity': 'down' (along -y), 'none', or a vector like 0 | -9.81 | m/s^2",
            )
        return self.gravity


def lift(v: Any) -> Any:
    if type(v) is float:
        return np.array([0.0, 0.0, v])
    return np.array([v[0], v[1], 0.0]) if len(v) == 2 else v


def finish_motion(argument: str, out: dict[str, Any]) -> MotionRead:
    for label, v in out.items():
        if type(v) is np.ndarray and v.ndim != 1:
            raise InputError(argument, f"a motion with one value for '{label}'; got several rows")
        if not isinstance(v, (str, float, np.ndarray)):  # three cells below each other
            out[label] = v.array
    if "omega" not in out:
        raise InputError(
            argument, "a motion with a line 'omega'", remedy="Type 0 when the body does not turn"
        )
    if "point acceleration" in out and "point" not in out:
        raise InputError(argument, "a motion with 'point' beside 'point acceleration'")
    vectors = [v for k, v in out.items() if type(v) is np.ndarray and k not in ("omega", "alpha")]
    spins = [out[k] for k in ("omega", "alpha") if k in out]
    planar = all(len(v) == 2 for v in vectors) and not any(type(s) is np.ndarray for s in spins)
    gravity = out.get("gravity")
    if isinstance(gravity, str):
        gravity = np.zeros(3) if gravity == NONE else np.array([0.0, -STANDARD_GRAVITY, 0.0])
    alpha = out.get("alpha")

    def vector(label: str) -> Array | None:
        return lift(out[label]) if label in out else None

    return MotionRead(
        omega=lift(out["omega"]),
        alpha=None if alpha is None or isinstance(alpha, str) else lift(alpha),
        planar=planar,
        alpha_given=alpha is not None,
        center_acceleration=vector("center acceleration"),
        fixed_point=vector("fixed point"),
        point=vector("point"),
        point_acceleration=vector("point acceleration"),
        center_velocity=vector("center velocity"),
        point_velocity=vector("point velocity"),
        gravity=None if gravity is None else lift(gravity),
        free_axis=alpha[-1] if isinstance(alpha, str) and alpha != UNKNOWN else "",
    )


MOTION: Final = Record(
    entries=(
        Entry("omega", Spin(kinds.ANGULAR_VELOCITY), "angular velocity, ccw +"),
        Entry(
            "alpha",
            Spin(kinds.ANGULAR_ACCELERATION),
            "angular acceleration, or unknown",
            words=(UNKNOWN, *UNKNOWN_ABOUT),
        ),
        Entry(
            "gravity", Vector(kinds.ACCELERATION), "down (along -y), none, or a vector", words=(DOWN, NONE)
        ),
        Entry("fixed point", Vector(kinds.LENGTH), "a point of the body that does not move", also=("pivot",)),
        Entry("center acceleration", Vector(kinds.ACCELERATION), "acceleration of the mass center"),
        Entry("point", Vector(kinds.LENGTH), "a point of the body"),
        Entry("point acceleration", Vector(kinds.ACCELERATION), "its acceleration"),
        Entry("center velocity", Vector(kinds.VELOCITY), "velocity of the mass center"),
        Entry("point velocity", Vector(kinds.VELOCITY), "velocity of the point"),
    ),
    what="motion",
    example=(
        ("omega", 12.0, "deg/s"),
        ("alpha", 40.0, "deg/s^2"),
        ("gravity", "down", None),
        ("fixed point", "(0, 0) m", None),
    ),
    finish=finish_motion,
)

_FORCES = tuple(Column(f"F{k}", kinds.FORCE, f"force along {k}") for k in "xyz")
_COUPLES = tuple(
    Column(
        f"M{k}", kinds.TORQUE, f"couple about {k}, ccw +", also=("M", "moment", "couple") if k == "z" else ()
    )
    for k in "xyz"
)
_PLACE = tuple(Column(k, kinds.LENGTH, f"where the force acts, along {k}") for k in "xyz")

LOADS: Final = Table(
    columns=(
        Column("load", None, "name", also=("name",), required=True),
        *_FORCES,
        Column("F", kinds.FORCE, "size of a force in the plane, with `angle`", also=("force",)),
        Column("angle", kinds.ANGLE, "direction of F from x, ccw +"),
        *_PLACE,
        *_COUPLES,
    ),
    what="table of loads",
    example=(("load", "Fx [N]", "Fy [N]", "x [mm]", "y [mm]"), ("wind", 120.0, 0.0, 400.0, 900.0)),
    none_word=True,
    slips=OF_LOADS,
    finish=lambda argument, data: finish_loads(data),
)


@dataclass(frozen=True, eq=False, slots=True)
class LoadsRead:
    """A table of loads as read, and the row that names the body's own weight, empty when there is none."""

    loads: states.Loads
    weight_row: str

    def beside(self, gravity: Array) -> states.Loads:
        """Return the loads that act beside the weight, which must not be among them."""
        if self.weight_row and np.any(gravity != 0.0):
            raise InputError(
                "loads",
                "loads without the body's own weight: `gravity` of the motion already adds it",
                remedy="Name it otherwise if it is the weight of something else",
                where=self.weight_row,
            )
        return self.loads


def finish_loads(data: TableData) -> LoadsRead:
    """Return forces, their points and couples on the body."""
    if len(data) == 0:
        return LoadsRead(states.Loads(), "")
    weights = [data.where(i) for i, label in enumerate(data.labels) if WEIGHT_LABEL.fullmatch(label)]
    force = np.stack([data.numbers(f"F{k}") for k in "xyz"], axis=-1)
    couple = np.stack([data.numbers(f"M{k}") for k in "xyz"], axis=-1)
    place = np.stack([data.numbers(k) for k in "xyz"], axis=-1)
    size, angle = data.numbers("F"), data.numbers("angle")
    for i in range(len(data)):
        _load_row(data, i, force, couple, place, size, angle)
    has_force = ~np.isnan(force).all(axis=1)
    has_couple = ~np.isnan(couple).all(axis=1)
    loads = states.Loads(_zeros(force[has_force]), _zeros(place[has_force]), _zeros(couple[has_couple]))
    return LoadsRead(loads, weights[0] if weights else "")


def _zeros(values: Array) -> Array:
    return np.where(np.isnan(values), 0.0, values)


def _load_row(
    data: TableData, i: int, force: Array, couple: Array, place: Array, size: Array, angle: Array
) -> None:
    """Check one load and turn size and angle into components."""
    where = data.where(i)
    if not np.isnan(size[i]):
        if not np.isnan(force[i]).all():
            raise InputError(
                "loads", "loads with F and angle, or Fx and Fy, not both in one row", where=where
            )
        if np.isnan(angle[i]):
            raise InputError("loads", "loads with an angle for each F", where=where)
        force[i] = size[i] * np.array([np.cos(angle[i]), np.sin(angle[i]), 0.0])
    elif not np.isnan(angle[i]):
        raise InputError("loads", "loads with F for each angle", where=where)
    if np.isnan(force[i]).all():
        if np.isnan(couple[i]).all():
            raise InputError(
                "loads", "loads with a force or a couple in each row; all cells are blank", where=where
            )
        return
    if np.isnan(place[i, :2]).any() and np.any(_zeros(force[i]) != 0.0):
        raise InputError("loads", "loads with x and y of each force; one is blank", where=where)


_SUPPORT_PLACE = tuple(Column(k, kinds.LENGTH, f"where it holds the body, along {k}") for k in "xyz")
_FAR = tuple(Column(f"to {k}", kinds.LENGTH, f"far end of a cable or link, along {k}") for k in "xyz")
_NAME = Column("support", None, "name", also=("name",), required=True)
_ONE_WAY = (
    "roller (pushes only), slot (both ways), cable (pulls only), link (tension +), fixed, drive (a couple)"
)

SUPPORTS: Final = Table(
    columns=(
        _NAME,
        Column("type", None, f"pin, {_ONE_WAY}", also=("kind",), required=True),
        *_SUPPORT_PLACE[:2],
        Column("angle", kinds.ANGLE, "direction of the force on the body, from x, ccw +"),
        *_FAR[:2],
    ),
    what="table of supports",
    example=(
        ("support", "type", "x [mm]", "y [mm]", "angle [deg]"),
        ("hinge", "pin", 0.0, 0.0, None),
        ("stop", "roller", 900.0, 0.0, 90.0),
    ),
    slips=OF_SUPPORTS,
    finish=lambda argument, data: finish_supports(data, planar=True),
)

SUPPORTS_3D: Final = Table(
    columns=(
        _NAME,
        Column(
            "type", None, f"ball, bearing, thrust bearing, hinge, held, {_ONE_WAY}", ("kind",), required=True
        ),
        *_SUPPORT_PLACE,
        *(
            Column(f"along {k}", kinds.RATIO, f"{k} part of the direction of its force or axis")
            for k in "xyz"
        ),
        *_FAR,
        Column("holds", None, "for 'held': components like fx fy mz", also=("components",)),
    ),
    what="table of supports",
    example=(
        ("support", "type", "x [mm]", "y [mm]", "z [mm]", "along x", "along y", "along z"),
        ("lower hinge", "thrust bearing", 0.0, 0.0, 0.0, 0.0, 0.0, 1.0),
        ("upper hinge", "bearing", 0.0, 0.0, 1100.0, 0.0, 0.0, 1.0),
        ("stop", "slot", 2400.0, 0.0, 550.0, 0.0, 1.0, 0.0),
    ),
    slips=OF_SUPPORTS,
    finish=lambda argument, data: finish_supports(data, planar=False),
)


def _kind_word(data: TableData, i: int, known: Sequence[str]) -> str:
    text = folded(data.texts("type")[i])
    if text not in known:
        raise InputError(
            "supports",
            f"supports of a known type; got {shown(data.texts('type')[i])}",
            remedy=f"Known: {', '.join(known)}",
            where=data.where(i),
        )
    return text


def _vector(data: TableData, i: int, labels: Sequence[str], what: str, needed: int) -> Array | None:
    """Return three numbers of a row, None when all are blank; `needed` of them must not be blank."""
    values = np.array([data.numbers(label)[i] for label in labels])
    if np.isnan(values).all():
        return None
    if np.isnan(values[:needed]).any():
        raise InputError("supports", f"supports with all of {what}; one is blank", where=data.where(i))
    return _zeros(values)


@dataclass(frozen=True, eq=False, slots=True)
class SupportsRead:
    """What all supports can put on the body, and the kind of each by its name."""

    holds: tuple[Hold, ...]
    kinds: dict[str, str]


def finish_supports(data: TableData, planar: bool) -> SupportsRead:
    """Return what all supports can put on the body."""
    holds: list[Hold] = []
    needed = 2 if planar else 3
    for i, name in enumerate(data.labels):
        if folded(name) in map(folded, data.labels[:i]):
            raise InputError(
                "supports",
                f"supports with a name each; '{name}' stands twice",
                remedy="The results are found by these names",
                where=data.where(i),
            )
    for i in range(len(data)):
        kind = _kind_word(data, i, PLANAR_KINDS if planar else SPATIAL_KINDS)
        at = _vector(data, i, "xyz", "x, y" if planar else "x, y, z", needed)
        if at is None:
            if kind != "drive":
                raise InputError("supports", "supports with their place x, y", where=data.where(i))
            at = np.zeros(3)
        to = _vector(data, i, ("to x", "to y", "to z"), "to x, to y", needed)
        name = data.labels[i]
        try:
            if planar:
                angle = float(data.numbers("angle")[i])
                holds += planar_support(name, kind, at, angle=None if np.isnan(angle) else angle, to=to)
            else:
                holds += spatial_support(
                    name,
                    kind,
                    at,
                    direction=_vector(data, i, ("along x", "along y", "along z"), "along x, y, z", 3),
                    to=to,
                    components=_components(data, i),
                )
        except InputError as refused:
            argument, remedy = AS_COLUMNS.get(refused.argument, (refused.argument, ""))
            raise InputError(
                argument, refused.rule, refused.value, remedy=refused.remedy or remedy, where=data.where(i)
            ) from None
    types = map(folded, data.texts("type"))
    return SupportsRead(tuple(holds), dict(zip(data.labels, types, strict=True)))


def _components(data: TableData, i: int) -> tuple[str, ...]:
    words = data.texts("holds")[i].replace(",", " ").casefold().split()
    for w in words:
        if w not in COMPONENTS:
            raise InputError("holds", f"made of {' '.join(COMPONENTS)}; got {shown(w)}", where=data.where(i))
    return tuple(words)
