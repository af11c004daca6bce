"""Unit texts to factors: each spelling resolved once for each kind, then one dictionary look-up.

pint is loaded only for a symbol that is not in the tables, and only whole names of an allowed list are taken
from it: its short names and its physical constants are not what a machine designer means.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from difflib import get_close_matches
from fractions import Fraction
from functools import lru_cache
from typing import Any, Final

from ...core.errors import InputError, KindError
from .kinds import COUNT, KINDS, TORQUE, Kind
from .spellings import (
    LONGEST_UNIT,
    NOTHING,
    SYMBOLS,
    Measure,
    Powers,
    Readings,
    canonical,
    measures,
    terms_of,
)

__all__ = ["canonical", "factor", "is_si", "readings", "shown"]

# Texts typed by users are remembered up to this many per kind; a sheet has a few dozen.
MOST_SEEN: Final = 2000


def factor(unit: str, kind: Kind, argument: str = "unit") -> float:
    """Return what a number in `unit` is multiplied by to be in the SI unit of `kind`.

    Raises
    ------
    KindError
        When the unit is not one of this kind, or is not known.
    InputError
        When the text cannot be a unit, such as `kg/m s`.
    """
    known = kind.seen.get(unit)
    if known is not None:
        return known
    found = _resolve(unit, kind, argument)
    if len(kind.seen) >= MOST_SEEN:
        kind.seen.clear()
        kind.seen.update(kind.spellings)
    kind.seen[unit] = found
    return found


def is_si(unit: str, kind: Kind) -> bool:
    """Tell whether a number in `unit` is already the SI number of `kind`."""
    return factor(unit, kind) == 1.0


def shown(kind: Kind) -> str:
    """Return the SI unit of a kind as it is displayed; empty for a ratio or a count."""
    return kind.si


@lru_cache(maxsize=4096)
def readings(unit: str) -> tuple[tuple[Kind, float], ...]:
    """Return every kind that a unit text can mean, the most usual first, with its factor to SI.

    Raises
    ------
    KindError
        When the text is no unit of any kind.
    InputError
        When the text cannot be a unit at all.
    """
    text = _canonical_of(unit, "unit")
    try:
        found = _readings(text)
        remedy = "" if found else _unknown(text)
    except InputError as wrong:
        raise _syntax(wrong, unit, "unit") from None
    if found:
        return tuple(found)
    if remedy is None:
        raise KindError("unit", "a unit of a known kind of quantity", Found(unit))
    raise KindError("unit", "a known unit", Found(unit), remedy=remedy)


def _readings(text: str) -> list[tuple[Kind, float]]:
    """Return the kinds that a canonical unit text can mean; empty when there are none."""
    try:
        found = measures(terms_of(text), _readings_of_symbol) if text not in _NO_SYMBOLS else ()
    except _Unknown:
        found = ()
    except InputError:
        if not any(text in kind.spellings for kind in KINDS):
            raise
        found = ()
    answer: list[tuple[Kind, float]] = []
    for kind in KINDS:
        value = kind.spellings.get(text)
        if value is None and found and _may_be(text, kind):
            value = next((one.factor() for one in found if one.powers == kind.powers), None)
        if value is not None:
            answer.append((kind, value))
    return answer


# Energy and power have the dimension of a torque, or of a torque per time, but are no force at an arm.
_ENERGETIC = re.compile(
    r"(?:[umkMG]?(?:J|Wh|W))|hp|PS|.*(?:joule|erg|watt|horsepower)s?|.*watt_?hours?", re.IGNORECASE
)


def _may_be(text: str, kind: Kind) -> bool:
    """Tell whether the dimension alone decides if a text that is not in the table is of a kind."""
    if text in kind.hints or kind is COUNT:
        return False
    return kind is not TORQUE or not any(_ENERGETIC.fullmatch(name) for name, _ in terms_of(text))


def _canonical_of(unit: str, argument: str) -> str:
    """Return the canonical form; a text too long for any unit is refused before any work is done on it."""
    if len(unit) > 2 * LONGEST_UNIT:
        raise InputError(argument, "a unit", Found(unit), remedy="Such a long text is no unit")
    return canonical(unit)


_NO_SYMBOLS: Final = ("", "-", "1")


def _resolve(unit: str, kind: Kind, argument: str) -> float:
    """Return the factor of a unit text that was not seen before."""
    text = _canonical_of(unit, argument)
    known = kind.spellings.get(text)
    if known is not None:
        return known
    hint = kind.hints.get(text)
    if hint is not None:
        raise _error(argument, kind.phrase, unit, _described(text), hint)
    if text in _NO_SYMBOLS:
        raise _error(argument, kind.phrase, unit, "no unit", f"Its SI unit is {kind.si}")
    try:
        found = measures(terms_of(text), _readings_of_symbol)
    except _Unknown as unknown:
        raise _error(argument, kind.phrase, unit, _described(text), unknown.remedy) from None
    except InputError as wrong:
        raise _syntax(wrong, unit, argument) from None
    fitting = [one.factor() for one in found if one.powers == kind.powers]
    if not fitting or not _may_be(text, kind):
        raise _error(argument, kind.phrase, unit, _described(text), _weight_remedy(text, kind))
    # Readings of one dimension have one factor: what a weight adds, a weight divided by takes away.
    return fitting[0]


@dataclass(frozen=True)
class Found:
    """A refused unit as it is quoted in a message: the text as typed and what it is."""

    unit: str
    what: str = ""

    def __str__(self) -> str:
        what = f" ({self.what})" if self.what else ""
        room = max(50 - len(what), 10)
        return f"'{self.unit if len(self.unit) <= room else self.unit[: room - 3] + '...'}'{what}"


def _error(argument: str, phrase: str, unit: str, what: str, remedy: str) -> KindError:
    """Return the refusal of a unit: which kind it must be, what it is, the remedy."""
    rule = f"a unit of {phrase.split(' ', 1)[1]}" if argument == "unit" else phrase
    return KindError(argument, rule, Found(unit, what), remedy=remedy)


def _syntax(wrong: InputError, unit: str, argument: str) -> InputError:
    """Return the refusal of a text that cannot be a unit, naming the argument and the text as typed."""
    rule = "a unit with one meaning" if "two ways" in wrong.rule else "a unit"
    return InputError(argument, rule, Found(unit), remedy=wrong.remedy)


def _described(text: str) -> str:
    """Return the kinds that a canonical text does mean, for a message."""
    try:
        names = [kind.name for kind, _ in _readings(text)]
        if not names:
            return "not a known unit" if _unknown(text) is not None else "of no kind used here"
    except InputError:
        return "not a unit"
    if names == ["GD2"]:
        return "a weight times a length squared"
    return " or ".join(names) if len(" or ".join(names)) <= 36 else names[0]


# A mass typed where its weight is meant, or the other way round.
_WEIGHTS: Final = {
    "kg": "kgf",
    "g": "gf",
    "t": "tf",
    "lbm": "lbf",
    "kgf": "kg",
    "lbf": "lb",
    "ozf": "oz",
    "gf": "g",
}


def _weight_remedy(text: str, kind: Kind) -> str:
    """Return the text with a mass unit exchanged for its force unit, or back, if this kind reads that."""
    terms = terms_of(text)
    for name, _ in terms:
        other = _WEIGHTS.get(name)
        if other is None:
            continue
        changed = tuple((other if one == name else one, power) for one, power in terms)
        if any(m.powers == kind.powers for m in measures(changed, _readings_of_symbol)):
            return f"Write {re.sub(rf'(?<![a-zA-Z]){name}(?![a-zA-Z])', other, text)} if that is meant"
    return f"Write it in {kind.si}" if kind.si else "It has no unit"


class _Unknown(Exception):
    """A symbol that is not known, with a remedy that may be empty."""

    def __init__(self, remedy: str) -> None:
        self.remedy = remedy
        super().__init__(remedy)


def _unknown(text: str) -> str | None:
    """Return the remedy for the first unknown symbol of a text; None when all are known."""
    try:
        for name, _ in terms_of(text):
            _readings_of_symbol(name)
    except _Unknown as unknown:
        return unknown.remedy
    return None


# What these mean differs between countries or trades, or from what pint takes them for.
_REMEDIES: Final = {
    **dict.fromkeys(("ton", "tons"), "Write t (1000 kg), short_ton or long_ton"),
    "tonf": "Write tf, kip or kN",
    **dict.fromkeys(("gal", "gallon", "gallons"), "Write US_gal, UK_gal or l"),
    **dict.fromkeys(("MM", "Mm"), "Write mm"),
    "M": "Write m; a capital letter is another unit",
    "S": "Write s",
    "H": "Write h",
    "T": "Write t",
    "G": "Write g",
    "n": "Write N",
    "w": "Write W",
    "j": "Write J",
    "d": "Write day, or deg for degrees",
    "a": "Write day or h",
    "c": "Write m/s",
    "r": "Write rev or rad; r/min is read",
    "k": "Write kN, kg or kip",
    "NM": "Write Nm or N*m",
    "MPA": "Write MPa",
    "mpa": "Write MPa",
    "Mpa": "Write MPa",
    "kts": "Write knot",
    "klb": "Write kip",
    "US": "Write us",
    "gm": "Write g",
    "lb_f": "Write lbf",
    **dict.fromkeys(("psig", "psia"), "Write psi; say in words from which zero it counts"),
    "C": "Temperature is not used here",
    "F": "Temperature is not used here",
    "K": "Temperature is not used here",
    "degC": "Temperature is not used here",
    "degF": "Temperature is not used here",
}


def _by_folded_case() -> dict[str, tuple[str, ...]]:
    """Return the symbols that read the same in small letters, one-letter symbols left out."""
    folded: dict[str, tuple[str, ...]] = {}
    for name in SYMBOLS:
        if len(name) > 1:
            key = name.casefold()
            folded[key] = (*folded.get(key, ()), name)
    return folded


_FOLDED: Final = _by_folded_case()
# A small m is a thousandth, a capital M a million: where either could be meant, case is never folded.
_MILLI_OR_MEGA = re.compile(r"[mM](?:m|g|s|N|Nm|J|W|Pa|Hz|rad|l|L|bar|si)")


def _readings_of_symbol(name: str) -> Readings:
    """Return what one symbol can mean: from the table, with its case folded, or from pint."""
    found = SYMBOLS.get(name)
    if found is not None:
        return found
    remedy = _REMEDIES.get(name)
    if remedy is not None:
        raise _Unknown(remedy)
    alike = _FOLDED.get(name.casefold(), ())
    meanings = {SYMBOLS[one] for one in alike}
    if len(meanings) == 1 and not any(_MILLI_OR_MEGA.fullmatch(one) for one in alike):
        return meanings.pop()
    if alike:
        raise _Unknown(f"Write {' or '.join(alike)}: capital and small letters differ")
    measure = _from_pint(name) or _from_pint(name.lower(), spelled_out=True)
    if measure is None:
        near = get_close_matches(name, _NEAR, 1, 0.8) if len(name) > 3 else []
        raise _Unknown(f"Did you mean {near[0]}?" if near else "")
    return (measure,)


def _names(text: str) -> frozenset[str]:
    return frozenset(text.split())


# The whole names that are taken from pint, by its own names; those in _SCALED also with a decimal prefix.
_SCALED: Final = _names(
    "meter gram second newton joule watt pascal hertz liter bar dyne erg force_gram watt_hour"
)
_WHOLE: Final = _names(
    "inch foot yard mile nautical_mile angstrom micron week carat stone slug slinch metric_ton "
    "force_pound force_ounce force_kilogram force_metric_ton poundal kip horsepower metric_horsepower "
    "foot_pound standard_atmosphere technical_atmosphere torr inch_Hg standard_gravity hectare"
)
_PREFIXES: Final = _names("nano micro milli centi deci deca hecto kilo mega giga") | {""}
_NEAR: Final = (
    *(name for name in SYMBOLS if len(name) > 3),
    "meter",
    "millimeter",
    "kilogram",
    "newton",
    "radian",
)
_NAME = re.compile(r"[A-Za-z_]{3,40}")


@lru_cache(maxsize=1)
def _registry() -> Any:
    # Imported here because it takes longer than all the rest of the package together.
    import pint

    return pint.UnitRegistry(cache_folder=None)


@lru_cache(maxsize=1024)
def _from_pint(name: str, spelled_out: bool = False) -> Measure | None:
    """Return pint's reading of a whole name on the allowed lists, None for everything else.

    A name that was typed in capitals must be `spelled_out`: MBARS says neither milli nor mega.
    """
    if not _NAME.fullmatch(name):
        return None
    registry = _registry()
    choices = registry.parse_unit_name(name)
    if not choices:
        return None
    prefix, unit, suffix = choices[0]
    if prefix not in _PREFIXES or unit not in (_SCALED if prefix else _SCALED | _WHOLE):
        return None
    if spelled_out and not name.startswith((prefix + unit)[:5]):
        return None
    if suffix and len(name) <= 4:
        return None  # a symbol with an s is more likely a product with a second left unmarked
    root = registry.Quantity(1.0, name).to_root_units()
    powers = {str(one): int(power) for one, power in root.unit_items()}
    grams = powers.pop("gram", 0)
    dimension = (grams, powers.pop("meter", 0), powers.pop("second", 0), 0)
    if powers or dimension == NOTHING:
        return None
    return _exact(float(root.magnitude), grams, dimension)


def _exact(size: float, grams: int, dimension: Powers) -> Measure:
    """Return pint's size, which counts in grams, as an exact measure in kilograms."""
    # Fifteen digits drop the rounding noise of pint's own arithmetic: a liter is 0.001 m^3 and nothing more.
    exact = Fraction(f"{size:.15g}") / Fraction(1000) ** grams
    return Measure(exact.numerator, exact.denominator, 0, dimension)
