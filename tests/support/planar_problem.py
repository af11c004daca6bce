"""Planar problems in a few words, shared by the tests of reactions."""

from __future__ import annotations

from math import pi

import numpy as np

from rigidsheet.core.body import RigidBody
from rigidsheet.core.reactions import SolvedReactions, solve_reactions
from rigidsheet.core.states import Loads, Motion
from rigidsheet.core.supports import Hold, planar_support

ZERO = np.zeros(3)
Z = np.array([0.0, 0.0, 1.0])
UP = pi / 2


def vec(*parts: float) -> np.ndarray:
    return np.array([*parts, *([0.0] * (3 - len(parts)))], dtype=float)


def flat_body(mass: float, x: float, y: float, polar: float) -> RigidBody:
    return RigidBody(mass, vec(x, y), np.diag([polar / 2, polar / 2, polar]))


def turning(omega: float, alpha: float | None, pivot: np.ndarray, acceleration: np.ndarray = ZERO) -> Motion:
    free = (Z,) if alpha is None else ()
    return Motion(omega * Z, (alpha or 0.0) * Z, acceleration, pivot, free)


def loads(*rows: tuple[np.ndarray, np.ndarray], couple: float = 0.0) -> Loads:
    forces = np.array([force for force, _ in rows]).reshape(-1, 3)
    points = np.array([point for _, point in rows]).reshape(-1, 3)
    return Loads(forces, points, np.array([couple * Z]))


def solve(
    body: RigidBody, motion: Motion, holds: tuple[Hold, ...], acting: Loads, g: float
) -> SolvedReactions:
    return solve_reactions(body, motion, holds, loads=acting, gravity=vec(0, -g), planar=True)


AT_REST = Motion(ZERO, ZERO, ZERO)
PIN_O = planar_support("O", "pin", ZERO)
