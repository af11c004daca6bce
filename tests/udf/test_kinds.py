"""The kinds of quantity, and every common spelling against pint's own registry.

The expressions for pint are built here from a table of this test (symbol to pint's long name, per kind where
a symbol has two meanings) or written out one by one; nothing of the reader under test is used for them.
"""

from __future__ import annotations

import re

import pint
import pytest

from rigidsheet.core.errors import AbsentError
from rigidsheet.udf.units import kinds
from rigidsheet.udf.units.factors import canonical, factor, is_si, shown
from rigidsheet.udf.units.kinds import KINDS, Kind, kind_named

REGISTRY = pint.UnitRegistry(cache_folder=None)

PREFIXES = {"n": "nano", "u": "micro", "m": "milli", "c": "centi", "d": "deci", "da": "deca"}
PREFIXES |= {"h": "hecto", "k": "kilo", "M": "mega", "G": "giga"}
SI = {"m": "meter", "g": "gram", "s": "second", "N": "newton", "J": "joule", "W": "watt", "Pa": "pascal"}
SI |= {"bar": "bar", "Hz": "(1/second)", "rad": "radian", "l": "liter", "L": "liter", "Wh": "(watt*hour)"}
WORDS = {prefix + symbol: f"{long}{name}" for prefix, long in PREFIXES.items() for symbol, name in SI.items()}
WORDS |= SI
WORDS |= {
    "Hz": "(1/second)",
    "mHz": "(0.001/second)",
    "kHz": "(1000/second)",
    "MHz": "(1e6/second)",
    "kWh": "(kilowatt*hour)",
    "t": "(1000*kilogram)",
    "tonne": "(1000*kilogram)",
    **dict.fromkeys(("in", "inch", "inches"), "inch"),
    **dict.fromkeys(("ft", "foot", "feet"), "foot"),
    "yd": "yard",
    "mi": "mile",
    **dict.fromkeys(("thou", "mil", "mils"), "(0.001*inch)"),
    "uin": "(1e-6*inch)",
    "micron": "micrometer",
    **dict.fromkeys(("lb", "lbs", "lbm"), "pound"),
    **dict.fromkeys(("oz", "ozm"), "ounce"),
    **dict.fromkeys(("slug", "slugs"), "slug"),
    "slinch": "(12*slug)",
    "short_ton": "(2000*pound)",
    "long_ton": "(2240*pound)",
    "lbf": "pound_force",
    "ozf": "(pound_force/16)",
    **dict.fromkeys(("kip", "kips", "klbf"), "(1000*pound_force)"),
    "kgf": "kilogram_force",
    "kp": "kilogram_force",
    "gf": "(0.001*kilogram_force)",
    "tf": "(1000*kilogram_force)",
    "dyn": "dyne",
    "pdl": "(pound*foot/second**2)",
    **dict.fromkeys(("sec", "second", "seconds"), "second"),
    **dict.fromkeys(("min", "minutes"), "minute"),
    **dict.fromkeys(("h", "hr", "hour", "hours"), "hour"),
    "day": "day",
    **dict.fromkeys(("deg", "degree", "degrees", "°"), "degree"),
    **dict.fromkeys(("grad", "gon"), "(degree*0.9)"),
    "arcmin": "(degree/60)",
    "arcsec": "(degree/3600)",
    **dict.fromkeys(("rev", "r", "U", "turn", "turns"), "(360*degree)"),
    "rpm": "(360*degree/minute)",
    "krpm": "(360000*degree/minute)",
    "rps": "(360*degree/second)",
    "cpm": "(1/minute)",
    "cps": "(1/second)",
    "mph": "(mile/hour)",
    **dict.fromkeys(("kph", "kmh"), "(kilometer/hour)"),
    "ips": "(inch/second)",
    "ipm": "(inch/minute)",
    "fps": "(foot/second)",
    "fpm": "(foot/minute)",
    "gn": "standard_gravity",
    "psi": "(pound_force/inch**2)",
    "ksi": "(1000*pound_force/inch**2)",
    "Msi": "(1000000*pound_force/inch**2)",
    "psf": "(pound_force/foot**2)",
    "atm": "(101325*pascal)",
    "pcf": "(pound/foot**3)",
    "pci": "(pound/inch**3)",
    "cc": "(centimeter**3)",
    "hp": "(550*foot*pound_force/second)",
    "PS": "(75*kilogram_force*meter/second)",
    "metric_hp": "metric_horsepower",
    "Nm": "(newton*meter)",
    "uNm": "(1e-6*newton*meter)",
    "mNm": "(0.001*newton*meter)",
    "cNm": "(0.01*newton*meter)",
    "dNm": "(0.1*newton*meter)",
    "daNm": "(10*newton*meter)",
    "kNm": "(1000*newton*meter)",
    "MNm": "(1e6*newton*meter)",
    "Nmm": "(newton*millimeter)",
    "Ncm": "(newton*centimeter)",
    "ftlb": "(foot*pound_force)",
    "lbft": "(foot*pound_force)",
    "inlb": "(inch*pound_force)",
    "lbin": "(inch*pound_force)",
    "ozin": "(inch*pound_force/16)",
    "kgm": "kilogram*meter",
    "%": "0.01",
    "percent": "0.01",
    "‰": "0.001",
}

POUND_AS_FORCE = {"lb": "pound_force", "lbs": "pound_force", "oz": "(pound_force/16)"}
FORCE_KINDS = {
    "force",
    "torque",
    "energy",
    "power",
    "pressure",
    "stiffness",
    "line load",
    "torsional stiffness",
    "damping",
    "torsional damping",
}
# Spellings that a table of symbols cannot give: the meaning belongs to the whole text in its kind.
WHOLE = {
    ("mass", "lb*s^2/in"): "pound_force*second**2/inch",
    ("mass", "lb*s^2/ft"): "pound_force*second**2/foot",
    ("acceleration", "g"): "standard_gravity",
    ("acceleration", "G"): "standard_gravity",
    ("jerk", "g/s"): "standard_gravity/second",
    ("jerk", "G/s"): "standard_gravity/second",
    ("angular velocity", "1/min"): "revolution/minute",
    ("angular velocity", "min^-1"): "revolution/minute",
    ("angular velocity", "r*p*m"): "revolution/minute",
    ("moment of inertia", "kgm^2"): "kilogram*meter**2",
    ("moment of inertia", "kgcm^2"): "kilogram*centimeter**2",
    ("moment of inertia", "kgmm^2"): "kilogram*millimeter**2",
    ("moment of inertia", "gcm^2"): "gram*centimeter**2",
    ("moment of inertia", "gmm^2"): "gram*millimeter**2",
    ("GD2", "kgm^2"): "kilogram*meter**2",
    ("GD2", "kgcm^2"): "kilogram*centimeter**2",
    ("GD2", "kgf*m^2"): "kilogram*meter**2",
    ("GD2", "kp*m^2"): "kilogram*meter**2",
    ("GD2", "kgf*cm^2"): "kilogram*centimeter**2",
    ("GD2", "kgf*mm^2"): "kilogram*millimeter**2",
    ("GD2", "N*m^2"): "newton*meter**2/standard_gravity",
    ("GD2", "lbf*ft^2"): "pound*foot**2",
    ("GD2", "lbf*in^2"): "pound*inch**2",
    ("momentum", "lb*s"): "pound_force*second",
    ("angular momentum", "lb*ft*s"): "pound_force*foot*second",
    ("angular momentum", "lb*in*s"): "pound_force*inch*second",
    ("angular momentum", "ft*lb*s"): "pound_force*foot*second",
    ("angular momentum", "in*lb*s"): "pound_force*inch*second",
    ("angular momentum", "oz*in*s"): "pound_force/16*inch*second",
    **{("ratio", text): "1" for text in ("", "-", "1")},
    **{("count", text): "1" for text in ("", "-", "1", "pc", "pcs", "ea")},
}

ROWS = [pytest.param(kind, text, id=f"{kind.name}: {text}") for kind in KINDS for text in kind.spellings]


def pint_expression(kind: Kind, text: str) -> str:
    """Return what the common spelling means, in the words of pint."""
    whole = WHOLE.get((kind.name, text))
    if whole is not None:
        return whole
    words = dict(WORDS)
    if kind.name in FORCE_KINDS or (kind.name == "moment of inertia" and "s^2" in text):
        words |= POUND_AS_FORCE
    return re.sub(r"[^\W\d]+|[°%‰]", lambda found: words[found[0]], text).replace("^", "**")


@pytest.mark.parametrize(("kind", "text"), ROWS)
def test_each_common_spelling_has_the_value_of_pint(kind: Kind, text: str) -> None:
    expected = REGISTRY.Quantity(1.0, "") * REGISTRY.parse_expression(pint_expression(kind, text))
    assert kind.spellings[text] == pytest.approx(expected.to_base_units().magnitude, rel=4e-15)
    assert dict(expected.dimensionality) == kind.dimension


@pytest.mark.parametrize("kind", KINDS, ids=lambda kind: kind.name)
def test_a_kind_reads_its_own_si_unit_and_keeps_tables_canonical(kind: Kind) -> None:
    assert factor(kind.si, kind) == 1.0
    assert is_si(kind.si, kind)
    assert shown(kind) == kind.si
    assert all(canonical(text) == text for text in kind.spellings)
    assert not set(kind.spellings) & set(kind.hints)
    assert kind_named(kind.name.upper()) is kind


def test_every_kind_of_the_module_is_in_the_list_once() -> None:
    found = [one for one in vars(kinds).values() if isinstance(one, Kind)]
    assert sorted(one.name for one in found) == sorted(one.name for one in KINDS)
    assert len({one.name for one in KINDS}) == len(KINDS)


def test_the_article_fits_the_name() -> None:
    assert kinds.AREA.phrase == "an area"
    assert kinds.INERTIA.phrase == "a moment of inertia"


def test_an_unknown_kind_is_refused() -> None:
    with pytest.raises(AbsentError, match="must be the name of a kind of quantity; got 'charm'"):
        kind_named("charm")
