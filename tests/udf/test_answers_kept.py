"""One solution serves every result that a sheet asks for, and never a sheet with other cells."""

from __future__ import annotations

import math
from typing import Any

import pytest

from rigidsheet.udf import calling
from rigidsheet.udf.catalogue import find

SUPPORTS: Any = [
    ["support", "type", "x [m]", "y [m]", "angle [deg]"],
    ["pin", "pin", 0.0, 0.0, None],
    ["roller", "roller", 2.0, 0.0, 90.0],
]
MOTION: Any = [["omega", 0.0], ["alpha", 0.0], ["gravity", "down"], ["fixed point", "(0, 0) m"]]


def body(mass: float, x: float) -> Any:
    return [["mass", mass, "kg"], ["x", x, "m"], ["y", 0.0, "m"], ["inertia", 1.0, "kg*m^2"]]


def reaction(mass: float, x: float, what: str, unit: str = "N") -> Any:
    return calling.call("RB_REACTIONS", (body(mass, x), MOTION, "none", SUPPORTS, what, unit))


def test_each_result_of_one_beam_and_of_another_follows_its_own_cells() -> None:
    """Beam on two supports, by hand. g = 9.80665 m/s^2 (3rd CGPM, 1901; from memory): roller = m g x / L,
    pin = m g (1 - x / L).
    """
    for mass, x in [(100.0, 0.5), (100.0, 1.5), (40.0, 0.5), (100.0, 0.5)] * 3:
        weight = mass * 9.80665
        assert reaction(mass, x, "roller force") == pytest.approx(weight * x / 2.0, rel=1e-12)
        assert reaction(mass, x, "pin fy") == pytest.approx(weight * (1.0 - x / 2.0), rel=1e-12)
        assert reaction(mass, x, "pin fy", "kN") == pytest.approx(weight * (1.0 - x / 2.0) / 1e3, rel=1e-12)


def test_a_kernel_works_once_for_all_results_of_the_same_cells() -> None:
    ready = find("RB_REACTIONS")
    worked: list[float] = []
    kernel = ready.function.kernel

    def counted(*own: Any) -> Any:
        worked.append(1.0)
        return kernel(*own)

    object.__setattr__(ready.function, "kernel", counted)
    try:
        mass = math.pi  # of no other test, which would have left its answer
        for what in ("roller force", "pin fx", "pin fy", "residual moment"):
            assert isinstance(reaction(mass, 0.7, what, "N*m" if "moment" in what else "N"), float)
        assert len(worked) == 1
        reaction(mass, 0.8, "pin fy")
        assert len(worked) == 2
    finally:
        object.__setattr__(ready.function, "kernel", kernel)
