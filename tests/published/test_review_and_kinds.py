"""Functions that no printed number passes through: margins and checks by hand with fractions, kinds by pint."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
import pint
import pytest
from cell_calls import ask, number

SEEDS = pytest.mark.parametrize("seed", range(8))
# Exact by definition: pound 0.45359237 kg and standard gravity 9.80665 m/s^2.
POUND_FORCE = Fraction("0.45359237") * Fraction("9.80665")


@SEEDS
def test_margin_equals_exact_fractions(seed):
    """Common practice: margin of safety = capacity / (required factor * |demand|) - 1, in whole numbers here."""
    rng = np.random.default_rng(seed)
    demand, capacity, tenths = (int(v) for v in rng.integers((-900, 100, 10), (-5, 5000, 40)))
    required = Fraction(tenths, 10)
    factor = capacity * POUND_FORCE / -demand
    cells = (f"{demand} N", f"{capacity} lbf", float(required))
    assert number("RB_MARGIN", *cells, "factor") == pytest.approx(float(factor), rel=1e-14)
    assert number("RB_MARGIN", *cells) == pytest.approx(float(factor / required - 1), rel=1e-12)
    assert number("RB_MARGIN", *cells, "utilization") == pytest.approx(float(required / factor), rel=1e-14)


@SEEDS
def test_check_agrees_with_plain_comparison(seed):
    """Common practice: |demand| against the limit, or with its sign; whole numbers, so that the edge counts."""
    rng = np.random.default_rng(seed)
    for _ in range(40):
        demand, limit = int(rng.integers(-6, 7)), int(rng.integers(1, 4))
        signed = int(rng.integers(-6, 7))
        expected = {
            ("at most", limit, 2.0): abs(demand) * 2 <= limit,
            ("at least", limit, 2.0): abs(demand) >= 2 * limit,
            ("at most", limit): abs(demand) <= limit,
            ("signed at most", signed): demand <= signed,
            ("signed at least", signed): demand >= signed,
        }
        for (sense, against, *factor), holds in expected.items():
            found = ask("RB_CHECK", f"{1000 * demand} N", f"{against} kN", sense, *factor)
            assert found == ("OK" if holds else "FAIL"), (demand, against, sense, factor)


# Names of quantities as in ISO 80000-3, ISO 80000-4 and SI Brochure, 9th edition, tables 4 to 6; the unit of each
# in base units for pint.
QUANTITIES = {
    "length": "m",
    "angle": "rad",
    "mass": "kg",
    "time": "s",
    "velocity": "m/s",
    "acceleration": "m/s^2",
    "angular velocity": "rad/s",
    "angular acceleration": "rad/s^2",
    "force": "kg*m/s^2",
    "torque": "kg*m^2/s^2",
    "energy": "kg*m^2/s^2",
    "power": "kg*m^2/s^3",
    "pressure": "kg/m/s^2",
    "density": "kg/m^3",
    "line density": "kg/m",
    "moment of inertia": "kg*m^2",
    "angular momentum": "kg*m^2/s",
    "momentum": "kg*m/s",
}
UNITS = {
    "mm": "length",
    "arcmin": "angle",
    "slug": "mass",
    "min": "time",
    "km/h": "velocity",
    "ft/s^2": "acceleration",
    "rpm": "angular velocity",
    "deg/s^2": "angular acceleration",
    "kN": "force",
    "kip": "force",
    "N*m": "torque",
    "lbf*ft": "torque",
    "kJ": "energy",
    "hp": "power",
    "MPa": "pressure",
    "psi": "pressure",
    "g/cm^3": "density",
    "kg/m": "line density",
    "kg*mm^2": "moment of inertia",
    "slug*ft^2": "moment of inertia",
    "kg*m^2/s": "angular momentum",
    "N*s": "momentum",
}


@pytest.fixture(scope="module")
def registry() -> pint.UnitRegistry:
    return pint.UnitRegistry()


@pytest.mark.parametrize("unit", UNITS)
def test_kinds_have_the_dimension_that_pint_finds(unit, registry):
    names = ask("RB_KIND", unit).split(" or ")
    assert UNITS[unit] in names
    for name in names:
        if name in QUANTITIES:
            assert registry(unit).check(registry(QUANTITIES[name]).dimensionality), name
