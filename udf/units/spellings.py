"""How unit texts are written: one canonical form, its factors, and the symbols a designer uses.

A unit text is cut into symbols with whole powers. Each symbol has one or two readings (`lb` is a mass
or the force that it weighs); the kind of quantity asked for decides between them by its dimension.
Factors stay exact fractions (times a power of pi) until the very end, so `g/cm^3` is exactly 1000.
"""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Callable, Mapping, Sequence
from fractions import Fraction
from functools import lru_cache
from itertools import product
from math import pi
from typing import Final, NamedTuple, TypeAlias

from ...core.errors import InputError

# Powers of mass, length, time and angle. Angle counts as a dimension here, so that a torque per radian
# and a torque, or a speed in turns and a frequency, can never be mistaken for each other.
Powers: TypeAlias = tuple[int, int, int, int]

LONGEST_UNIT: Final = 60
LARGEST_POWER: Final = 9
# Of all powers in one text together; keeps every factor far inside the range of a float.
LARGEST_POWER_SUM: Final = 12


class Measure(NamedTuple):
    """One reading of a unit: top / bottom * pi**pies in SI units, and its dimension."""

    top: int
    bottom: int
    pies: int
    powers: Powers

    def factor(self) -> float:
        """Return what a number in this unit is multiplied by to be in SI units."""
        return self.top / self.bottom * pi**self.pies


Readings: TypeAlias = tuple[Measure, ...]

NOTHING: Final[Powers] = (0, 0, 0, 0)
MASS: Final[Powers] = (1, 0, 0, 0)
LENGTH: Final[Powers] = (0, 1, 0, 0)
TIME: Final[Powers] = (0, 0, 1, 0)
ANGLE: Final[Powers] = (0, 0, 0, 1)
PER_TIME: Final[Powers] = (0, 0, -1, 0)
SPEED: Final[Powers] = (0, 1, -1, 0)
ACCELERATION: Final[Powers] = (0, 1, -2, 0)
TURNING: Final[Powers] = (0, 0, -1, 1)
FORCE: Final[Powers] = (1, 1, -2, 0)
ENERGY: Final[Powers] = (1, 2, -2, 0)
POWER: Final[Powers] = (1, 2, -3, 0)
PRESSURE: Final[Powers] = (1, -1, -2, 0)
VOLUME: Final[Powers] = (0, 3, 0, 0)
DENSITY: Final[Powers] = (1, -3, 0, 0)

# Exact by definition: international yard and pound agreement of 1959, standard gravity of the 3rd CGPM.
INCH: Final = Fraction("0.0254")
FOOT: Final = 12 * INCH
POUND: Final = Fraction("0.45359237")
OUNCE: Final = POUND / 16
GRAVITY: Final = Fraction("9.80665")
POUND_FORCE: Final = POUND * GRAVITY


def _measure(size: Fraction | int | str, powers: Powers, pies: int = 0) -> Measure:
    exact = Fraction(size)
    return Measure(exact.numerator, exact.denominator, pies, powers)


def _symbols() -> dict[str, Readings]:
    """Return every symbol of the trade with its readings."""
    table: dict[str, Readings] = {}

    def add(names: str, *readings: Measure) -> None:
        for name in names.split():
            table[name] = readings

    prefixes = {"n": -9, "u": -6, "m": -3, "c": -2, "d": -1, "": 0, "da": 1, "h": 2, "k": 3, "M": 6, "G": 9}

    def add_prefixed(symbol: str, powers: Powers, allowed: str, scale: Fraction | int = 1) -> None:
        for prefix in ["", *allowed.split()]:
            add(prefix + symbol, _measure(Fraction(10) ** prefixes[prefix] * scale, powers))

    add_prefixed("m", LENGTH, "n u m c d k")
    add_prefixed("g", MASS, "u m k M", Fraction(1, 1000))
    add_prefixed("s", TIME, "n u m")
    add_prefixed("N", FORCE, "u m c d da h k M")
    # A torque is often run together; a power on it would have two meanings and is refused.
    add_prefixed("Nm", ENERGY, "u m c d da k M")
    add_prefixed("J", ENERGY, "u m k M G")
    add_prefixed("W", POWER, "u m k M G")
    add_prefixed("Pa", PRESSURE, "m h k M G")
    add_prefixed("bar", PRESSURE, "m k", 100_000)
    add_prefixed("Hz", PER_TIME, "m k M")
    add_prefixed("rad", ANGLE, "u m")
    for litre in ("l", "L"):
        add_prefixed(litre, VOLUME, "m c d h", Fraction(1, 1000))

    add("Nmm", _measure("0.001", ENERGY))
    add("Ncm", _measure("0.01", ENERGY))
    add("kNmm", _measure(1, ENERGY))
    add("t tonne tonnes", _measure(1000, MASS))
    add("in inch inches", _measure(INCH, LENGTH))
    add("ft foot feet", _measure(FOOT, LENGTH))
    add("yd yard yards", _measure(3 * FOOT, LENGTH))
    add("mi mile miles", _measure(5280 * FOOT, LENGTH))
    add("thou mil mils", _measure(INCH / 1000, LENGTH))
    add("uin", _measure(INCH / 1_000_000, LENGTH))
    add("micron microns", _measure("1e-6", LENGTH))

    add("lb lbs pound pounds", _measure(POUND, MASS), _measure(POUND_FORCE, FORCE))
    add("oz ounce ounces", _measure(OUNCE, MASS), _measure(OUNCE * GRAVITY, FORCE))
    add("lbm", _measure(POUND, MASS))
    add("ozm", _measure(OUNCE, MASS))
    add("kgs", _measure(1, MASS))
    add("gr grain grains", _measure(POUND / 7000, MASS))
    add("slug slugs", _measure(POUND_FORCE / FOOT, MASS))
    add("slinch slinches blob blobs", _measure(POUND_FORCE / INCH, MASS))
    add("short_ton short_tons", _measure(2000 * POUND, MASS))
    add("long_ton long_tons", _measure(2240 * POUND, MASS))

    add("lbf", _measure(POUND_FORCE, FORCE))
    add("ozf", _measure(OUNCE * GRAVITY, FORCE))
    add("kip kips klbf", _measure(1000 * POUND_FORCE, FORCE))
    add("kgf kp", _measure(GRAVITY, FORCE))
    add("gf", _measure(GRAVITY / 1000, FORCE))
    add("tf", _measure(1000 * GRAVITY, FORCE))
    add("dyn", _measure("1e-5", FORCE))
    add("pdl", _measure(POUND * FOOT, FORCE))

    add("sec secs second seconds", _measure(1, TIME))
    add("min mins minute minutes", _measure(60, TIME))
    add("h hr hrs hour hours", _measure(3600, TIME))
    add("day days", _measure(86400, TIME))

    add("rads radian radians", _measure(1, ANGLE))
    add("deg degs degree degrees °", _measure(Fraction(1, 180), ANGLE, 1))
    add("arcmin", _measure(Fraction(1, 10800), ANGLE, 1))
    add("arcsec", _measure(Fraction(1, 648000), ANGLE, 1))
    add("grad gon", _measure(Fraction(1, 200), ANGLE, 1))
    add("rev revs turn turns revolution revolutions", _measure(2, ANGLE, 1))
    add("rpm", _measure(Fraction(1, 30), TURNING, 1))
    add("rps", _measure(2, TURNING, 1))
    add("krpm", _measure(Fraction(1000, 30), TURNING, 1))
    add("cpm", _measure(Fraction(1, 60), PER_TIME))
    add("cps", _measure(1, PER_TIME))

    add("mph", _measure(5280 * FOOT / 3600, SPEED))
    add("kph kmh", _measure(Fraction(1000, 3600), SPEED))
    add("ips", _measure(INCH, SPEED))
    add("ipm", _measure(INCH / 60, SPEED))
    add("fps", _measure(FOOT, SPEED))
    add("fpm", _measure(FOOT / 60, SPEED))
    add("knot knots", _measure(Fraction(1852, 3600), SPEED))
    add("gn", _measure(GRAVITY, ACCELERATION))

    add("psi", _measure(POUND_FORCE / INCH**2, PRESSURE))
    add("ksi", _measure(1000 * POUND_FORCE / INCH**2, PRESSURE))
    add("Msi", _measure(1_000_000 * POUND_FORCE / INCH**2, PRESSURE))
    add("psf", _measure(POUND_FORCE / FOOT**2, PRESSURE))
    add("atm", _measure(101_325, PRESSURE))
    add("pcf", _measure(POUND / FOOT**3, DENSITY))
    add("pci", _measure(POUND / INCH**3, DENSITY))
    add("cc", _measure("1e-6", VOLUME))
    add("US_gal", _measure(231 * INCH**3, VOLUME))
    add("UK_gal", _measure("0.00454609", VOLUME))

    add("hp", _measure(550 * POUND_FORCE * FOOT, POWER))
    add("PS metric_hp", _measure(75 * GRAVITY, POWER))
    add("Wh", _measure(3600, ENERGY))
    add("kWh", _measure(3_600_000, ENERGY))
    add("ftlb lbft", _measure(POUND_FORCE * FOOT, ENERGY))
    add("inlb lbin", _measure(POUND_FORCE * INCH, ENERGY))
    add("ozin inoz", _measure(OUNCE * GRAVITY * INCH, ENERGY))

    add("% percent", _measure("0.01", NOTHING))
    add("‰", _measure("0.001", NOTHING))
    return table


SYMBOLS: Final[Mapping[str, Readings]] = _symbols()

_SIGNS: Final = str.maketrans(
    {
        "\N{MINUS SIGN}": "-",
        "\N{HYPHEN}": "-",
        "\N{NON-BREAKING HYPHEN}": "-",
        "\N{GREEK SMALL LETTER MU}": "u",
        "\N{MIDDLE DOT}": "*",
        "\N{DOT OPERATOR}": "*",
        "\N{BULLET OPERATOR}": "*",
        "\N{BULLET}": "*",
        "\N{MULTIPLICATION SIGN}": "*",
        "\N{FRACTION SLASH}": "/",
        "\N{DIVISION SLASH}": "/",
        "\N{DIVISION SIGN}": "/",
    }
)
# These look like a degree sign, but the compatibility form would turn them into a letter or a blank.
_DEGREES: Final = str.maketrans({"\N{MASCULINE ORDINAL INDICATOR}": "°", "\N{RING ABOVE}": "°"})

_PER = re.compile(r"\s+per\s+")
_FULL_STOP = re.compile(r"\.+(?=$|[\s*/^)\-])")
_DOT_PRODUCT = re.compile(r"(?<=[^\W\d])\.(?=[^\W\d])|(?<=[0-9])\.(?=[^\W\d])")
_AROUND_SIGN = re.compile(r"\s*([*/^])\s*|(?<=\()\s+|\s+(?=\))")
_HYPHEN_PRODUCT = re.compile(r"(?<=[\w°)])\s*-\s*(?=[^\W\d]|[°(])")
_SQUARE_OR_CUBIC = re.compile(r"(?<!\w)(sq|cu)[\s*]+([^\W\d]+)(?![\w^])")
_BARE_POWER = re.compile(r"(?<=[^\W\d_]|°)(-?[0-9])")
_POWER_IN_BRACKETS = re.compile(r"\^\((-?[0-9]+)\)")
_POWER_PLUS = re.compile(r"\^\+(?=[0-9])")


def canonical(text: str) -> str:
    """Return a unit text in its one canonical form, such as `kg*m^2` or `lb*in*s^2`.

    Outer brackets go; superscripts, `m2`, `m**2` become `m^2`; `·`, `×`, `.`, a hyphen between symbols
    and a space become `*`; `sq in` becomes `in^2`; full stops of abbreviations go. No meaning is judged here.
    """
    unit = unicodedata.normalize("NFKC", text.translate(_DEGREES)).translate(_SIGNS)
    unit = _without_brackets(" ".join(unit.split())).replace("**", "^")
    unit = _PER.sub("/", unit)
    unit = _FULL_STOP.sub("", unit)
    unit = _DOT_PRODUCT.sub("*", unit)
    unit = _HYPHEN_PRODUCT.sub("*", unit)
    unit = _AROUND_SIGN.sub(lambda found: found[1] or "", unit)
    unit = _SQUARE_OR_CUBIC.sub(lambda found: f"{found[2]}^{2 if found[1] == 'sq' else 3}", unit)
    unit = _BARE_POWER.sub(r"^\1", unit)
    unit = _POWER_PLUS.sub("^", _POWER_IN_BRACKETS.sub(r"^\1", unit))
    return "*".join(unit.split())


def _without_brackets(unit: str) -> str:
    """Return the text without a pair of brackets that encloses all of it."""
    inner = unit[1:-1]
    if unit[:1] + unit[-1:] not in ("[]", "()") or len(unit) < 2 or unit[0] in inner or unit[-1] in inner:
        return unit
    return _without_brackets(inner.strip())


Terms: TypeAlias = tuple[tuple[str, int], ...]

_FACTOR = re.compile(r"([^\W\d]+|[°%‰])(?:\^(-?[0-9]{1,3}))?")
_RUN_TOGETHER = re.compile(r"(?:[umcdkM]|da)?(?:Nm|Wh)|k?Nmm|Ncm|ftlb|lbft|inlb|lbin|ozin|inoz")


@lru_cache(maxsize=2048)
def terms_of(unit: str) -> Terms:
    """Return the symbols of a canonical unit text with their powers, in the order written."""
    if len(unit) > LONGEST_UNIT:
        raise InputError("", "A unit text is at most 60 characters long", unit)
    parts = _parts(unit)
    terms: list[tuple[str, int]] = []
    for place, part in enumerate(parts):
        if place == 0 and part == "1" and len(parts) > 1:
            continue
        bracketed = part[:1] == "(" and part[-1:] == ")"
        if place and "*" in part and not bracketed:
            divided, rest = part.split("*", 1)
            raise InputError(
                "",
                "A slash followed by a product can be read in two ways",
                unit,
                remedy=f"Write /({divided}*{rest}) or move {rest} before the slash",
            )
        terms += _product(part[1:-1] if bracketed else part, -1 if place else 1, unit)
    if sum(abs(power) for _, power in terms) > LARGEST_POWER_SUM:
        raise InputError("", "Too many powers for a unit", unit)
    return tuple(terms)


def _parts(unit: str) -> list[str]:
    """Return the texts between the slashes; a slash inside brackets is refused."""
    parts = unit.split("/")
    if any(part.count("(") != part.count(")") for part in parts):
        raise InputError(
            "", "A unit has brackets only around a product", unit, remedy="Write m/s^2, kg/(m*s)"
        )
    return parts


def _product(part: str, sign: int, unit: str) -> list[tuple[str, int]]:
    """Return the symbols and powers of one product."""
    terms: list[tuple[str, int]] = []
    for piece in part.split("*"):
        found = _FACTOR.fullmatch(piece)
        if found is None:
            raise InputError("", "Not a unit", unit, remedy=_remedy_for(piece))
        if found[2] and _RUN_TOGETHER.fullmatch(found[1]):
            raise InputError("", "Not a unit", unit, remedy="Put a * between the symbols, as in N*m^2")
        power = int(found[2] or 1)
        if not 1 <= abs(power) <= LARGEST_POWER:
            raise InputError("", "A power in a unit is a whole number up to 9, not 0", unit)
        terms.append((found[1], sign * power))
    return terms


def _remedy_for(piece: str) -> str:
    """Return what to write instead of a piece that is no symbol with a power."""
    if "'" in piece or '"' in piece or "\N{PRIME}" in piece:
        return "Write ft or in; for an angle arcmin or arcsec"
    if piece[:1] == "°":
        return "Temperature is not used here"
    if piece[:1].isdigit():
        return "A unit holds no number of its own but a leading 1/"
    if "^" in piece or "." in piece:
        return "Powers are whole numbers, as in m^2"
    return ""


def measures(terms: Terms, lookup: Callable[[str], Readings]) -> Readings:
    """Return every reading of the symbols together, each different one once.

    A symbol that occurs twice keeps one meaning throughout.
    """
    names = list(dict.fromkeys(name for name, _ in terms))
    choices: Sequence[Readings] = [lookup(name) for name in names]
    found: dict[Measure, None] = {}
    for chosen in product(*choices):
        meaning = dict(zip(names, chosen, strict=True))
        found[_multiply([(meaning[name], power) for name, power in terms])] = None
    return tuple(found)


def _multiply(parts: list[tuple[Measure, int]]) -> Measure:
    """Return the product of measures raised to whole powers, in lowest terms."""
    top = bottom = 1
    pies = mass = length = time = angle = 0
    for measure, power in parts:
        if power > 0:
            top *= measure.top**power
            bottom *= measure.bottom**power
        else:
            top *= measure.bottom**-power
            bottom *= measure.top**-power
        pies += measure.pies * power
        mass += measure.powers[0] * power
        length += measure.powers[1] * power
        time += measure.powers[2] * power
        angle += measure.powers[3] * power
    exact = Fraction(top, bottom)
    return Measure(exact.numerator, exact.denominator, pies, (mass, length, time, angle))
