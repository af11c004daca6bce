"""What the shaker arm must say, from positions alone in plain numpy: nothing of rigidsheet is used here.

Where each point is follows from the closed triangle of crank, arm and guide; velocities and accelerations are
differences of positions over time in extended precision (central, sixth order: Fornberg, Generation of finite
difference formulas, Math. Comp. 51, 1988; coefficients from memory), forces from Newton and Euler as a linear
system. No formula for an angular velocity, a centripetal or a Coriolis part is used.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

Array = NDArray[Any]
G = 9.80665
CASES = ("slow", "rated", "overspeed", "jam stop begins", "jam stop ends")
LOST = 99.0  # what the sheet shows at most: no contact
TICK = np.longdouble("0.0015")  # s
SPANS = np.arange(-3, 4).astype(np.longdouble)
FIRST = np.array([-1, 9, -45, 0, 45, -9, 1], dtype=np.longdouble) / (60 * TICK)
SECOND = np.array([2, -27, 270, -490, 270, -27, 2], dtype=np.longdouble) / (180 * TICK**2)


def stop(v: Mapping[str, Any]) -> float:
    """Return the acceleration that takes a speed off within an angle, against the turning."""
    return float(-np.sign(v["speed_jam"]) * v["speed_jam"] ** 2 / (2.0 * v["stop_angle"]))


def motions(v: Mapping[str, Any]) -> list[tuple[float, float]]:
    """Return speed and acceleration of the crank in each load case."""
    return [
        (v["speed_slow"], 0.0),
        (v["speed_rated"], 0.0),
        (v["speed_over"], 0.0),
        (v["speed_jam"], stop(v)),
        (0.0, stop(v)),
    ]


class Instant:
    """The linkage a few ticks before and after one instant, at many crank angles at once."""

    def __init__(self, v: Mapping[str, Any], angles: Array, omega: float, alpha: float) -> None:
        self.v, t = v, SPANS * TICK
        theta = np.asarray(angles, dtype=np.longdouble)[:, None] + omega * t + alpha * t * t / 2
        self.time = t
        self.pin = v["crank"] * np.exp(1j * theta)
        self.tilt = np.arcsin((v["guide"] - self.pin.imag) / v["arm"])

    def point(self, u: Any, across: float) -> Array:
        """Return the place of a point of the arm, or of one that slides (u over time), at all ticks."""
        return np.asarray(self.pin + (u + 1j * across) * np.exp(1j * self.tilt))

    @property
    def along(self) -> Array:
        """Return the direction of the arm at the instant."""
        return np.asarray(np.exp(1j * self.tilt[:, 3]).astype(complex))


def rate(path: Array) -> Array:
    return np.asarray((path @ FIRST).astype(complex if np.iscomplexobj(path) else float))


def second_rate(path: Array) -> Array:
    return np.asarray((path @ SECOND).astype(complex if np.iscomplexobj(path) else float))


def feet(v: Mapping[str, Any], a: Array, spin: Array, along: Array) -> Array:
    """Return the forces of foot 1, foot 2 and the mat for accelerations of G, from three equations each."""
    m = v["tray_mass"]
    inertia = m * (v["tray_length"] ** 2 + v["tray_height"] ** 2) / 12.0
    system, right = np.zeros((len(a), 3, 3)), np.zeros((len(a), 3))
    for column, (u, turn) in enumerate(((v["foot_1"], 1j), (v["foot_2"], 1j), (v["foot_1"], 1.0))):
        force = turn * along
        arm = ((u - v["tray_u"]) + 1j * (v["seat"] - v["tray_v"])) * along  # from G to where it acts
        system[:, 0, column], system[:, 1, column] = force.real, force.imag
        system[:, 2, column] = (np.conj(arm) * force).imag
    right[:, 0], right[:, 1], right[:, 2] = m * a.real, m * (a.imag + G), inertia * spin
    return np.asarray(np.linalg.solve(system, right[:, :, None])[:, :, 0])


def over_the_turn(
    v: Mapping[str, Any], degrees: Array, cases: Sequence[tuple[float, float]]
) -> dict[str, Array]:
    """Return what the tables hold, in SI: rows over the crank angle, a column for each motion of the crank."""
    out: dict[str, list[Array]] = {key: [] for key in ("sensor", "side", "thrust", "lift", "slip")}
    for omega, alpha in cases:
        for key, column in _case(Instant(v, np.radians(degrees), omega, alpha)).items():
            out[key].append(column)
    return {key: np.array(columns).T for key, columns in out.items()}


def _case(at: Instant) -> dict[str, Array]:
    v, along = at.v, at.along
    felt = G if v["sensor_reads"] == "with gravity" else 0.0
    sensor = abs(second_rate(at.point(v["sensor_u"], v["sensor_v"])) + 1j * felt)
    sides, thrusts = [], []
    for sign in (1, -1):  # out and back
        u = v["pusher_u"] + sign * (v["slide_speed"] * at.time + v["slide_rise"] * at.time**2 / 2)
        force = v["pusher_mass"] * (second_rate(at.point(u, v["pusher_v"])) + 1j * G) * np.conj(along)
        sides.append(abs(force.imag))
        thrusts.append(abs(force.real))
    moving, resting = tray(at)
    with np.errstate(divide="ignore", invalid="ignore"):
        taken = np.where(resting[:, :2] > 0.0, 1.0 - moving[:, :2] / resting[:, :2], LOST).max(axis=1)
        press = moving[:, 0] + moving[:, 1]
        needed = np.where(press > 0.0, abs(moving[:, 2]) / press, LOST)
    taken, needed = np.minimum(taken, LOST), np.minimum(needed, LOST)
    return {
        "sensor": sensor,
        "side": np.maximum(*sides),
        "thrust": np.maximum(*thrusts),
        "lift": taken,
        "slip": needed,
    }


def tray(at: Instant) -> tuple[Array, Array]:
    """Return the forces on the tray, moving and with the arm held where it is."""
    v = at.v
    moving = feet(v, second_rate(at.point(v["tray_u"], v["tray_v"])), second_rate(at.tilt), at.along)
    return moving, feet(v, np.zeros(len(moving), complex), np.zeros(len(moving)), at.along)


@dataclass(frozen=True)
class Expected:
    """Tables by key (61 rows, 5 cases), demands of the checks, and the position looked at, all in SI."""

    tables: dict[str, Array]
    demands: dict[str, float]
    look: dict[str, tuple[float, float]]
    scalars: dict[str, float]


def expected(v: Mapping[str, Any]) -> Expected:
    """Return everything from inputs in SI and words for choices."""
    tables = over_the_turn(v, np.arange(0.0, 361.0, 6.0), motions(v))
    demands = {key: float(grid.max()) for key, grid in tables.items()}
    demands["turns"] = v["crank"] + abs(v["guide"])
    omega, alpha = motions(v)[CASES.index(v["look_case"])]
    at = Instant(v, np.array([v["look_angle"]]), omega, alpha)
    return Expected(tables, demands, _vectors(at), _scalars(at))


def _vectors(at: Instant) -> dict[str, tuple[float, float]]:
    v, middle = at.v, len(SPANS) // 2
    u = v["pusher_u"] + v["slide_speed"] * at.time + v["slide_rise"] * at.time**2 / 2
    paths = {
        "pin": at.pin,
        "far": at.point(v["arm"], 0.0),
        "sensor": at.point(v["sensor_u"], v["sensor_v"]),
        "tray": at.point(v["tray_u"], v["tray_v"]),
        "pusher": at.point(u, v["pusher_v"]),
    }
    found: dict[str, complex] = {}
    for name, path in paths.items():
        found[name] = complex(path[0, middle]) - (0 if name == "pin" else complex(at.pin[0, middle]))
        found[f"{name}_velocity"], found[f"{name}_acceleration"] = rate(path)[0], second_rate(path)[0]
    del found["tray_velocity"]
    omega, alpha = rate(at.tilt)[0], second_rate(at.tilt)[0]
    for name in ("sensor", "pusher"):
        found[f"{name}_tangential"] = 1j * alpha * found[name]
        found[f"{name}_centripetal"] = -(omega**2) * found[name]
    # What is left of the pusher's acceleration without a point fixed to the arm and the slide: Coriolis.
    fixed = second_rate(at.point(v["pusher_u"], v["pusher_v"]))[0]
    found["pusher_coriolis"] = found["pusher_acceleration"] - fixed - v["slide_rise"] * at.along[0]
    felt = G if v["sensor_reads"] == "with gravity" else 0.0
    found["reading"] = found["sensor_acceleration"] + 1j * felt
    return {name: (float(value.real), float(value.imag)) for name, value in found.items()}


def _scalars(at: Instant) -> dict[str, float]:
    moving, resting = tray(at)
    values = _case(at)
    names = ("foot_1", "foot_2", "mat")
    return {
        "arm_angle": float(at.tilt[0, 3]),
        "arm_omega": float(rate(at.tilt)[0]),
        "arm_alpha": float(second_rate(at.tilt)[0]),
        **{name: float(moving[0, k]) for k, name in enumerate(names)},
        **{f"{name}_rest": float(resting[0, k]) for k, name in enumerate(names[:2])},
        **{key: float(values[key][0]) for key in ("side", "thrust", "lift", "slip")},
    }
