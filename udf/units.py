"""Unit texts to factors: each spelling resolved once for each kind, then one dictionary look-up.

pint is loaded only for a symbol that is not in the tables, and only whole names of an allowed list are taken
from it: its short names and its physical constants are not what a machine designer means.
"""

from __future__ import annotations

import re
from difflib import get_close_matches
from functools import lru_cache
from typing import Any, Final

from ..core.errors import InputError, KindError
from .kinds import KINDS, Kind
from .spellings import NOTHING, SYMBOLS, Measure, Readings, canonical, measures, terms_of

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


def readings(unit: str) -> list[tuple[Kind, float]]:
    """Return every kind that a unit text can mean, the most usual first, with its factor to SI.

    Raises
    ------
    KindError
        When the text is no unit of any kind.
    InputError
        When the text cannot be a unit at all.
    """
    text = canonical(unit)
    found = _readings(text)
    if not found:
        unknown = _unknown(text)
        if unknown is not None:
            raise _error("unit", "a known unit", unit, "not a known unit", unknown)
        raise KindError("unit", "a unit of a known kind of quantity", _quoted(unit))
    return found


def _readings(text: str) -> list[tuple[Kind, float]]:
    """Return the kinds that a canonical unit text can mean; empty when there are none."""
    try:
        found = measures(terms_of(text), _readings_of_symbol) if text not in _NO_SYMBOLS else ()
        _refuse_power_on_run_together(text)
    except _Unknown:
        found = ()
    answer: list[tuple[Kind, float]] = []
    for kind in KINDS:
        value = kind.spellings.get(text)
        if value is None and text not in kind.hints:
            value = next((one.factor() for one in found if one.powers == kind.powers != NOTHING), None)
        if value is not None:
            answer.append((kind, value))
    return answer


_NO_SYMBOLS: Final = ("", "-", "1")


def _resolve(unit: str, kind: Kind, argument: str) -> float:
    """Return the factor of a unit text that was not seen before."""
    text = canonical(unit)
    known = kind.spellings.get(text)
    if known is not None:
        return known
    hint = kind.hints.get(text)
    if hint is not None:
        raise _error(argument, kind.phrase, unit, _described(text), hint)
    if text in _NO_SYMBOLS:
        raise _error(argument, kind.phrase, unit, "no unit", f"Its SI unit is {kind.si}")
    try:
        _refuse_power_on_run_together(text)
        found = measures(terms_of(text), _readings_of_symbol)
    except _Unknown as unknown:
        raise _error(argument, kind.phrase, unit, "not a known unit", unknown.remedy) from None
    except InputError as wrong:
        rule = "a unit text with one meaning" if "two ways" in wrong.rule else "a unit"
        raise InputError(argument, rule, unit, remedy=wrong.remedy) from None
    fitting = [one.factor() for one in found if one.powers == kind.powers]
    if not fitting or kind.powers == NOTHING:
        raise _error(argument, kind.phrase, unit, _described(text), _weight_remedy(text, kind))
    return fitting[0]


def _error(argument: str, rule: str, unit: str, what: str, remedy: str) -> KindError:
    """Return the refusal of a unit: rule, the text as typed, what it is, the remedy."""
    if argument == "unit":
        rule = f"a unit of {rule.split(' ', 1)[1]}" if not rule.startswith("a known") else rule
    return KindError(argument, rule, f"{_quoted(unit)} ({what})" if what else _quoted(unit), remedy=remedy)


def _quoted(unit: str) -> str:
    return f"'{unit}'" if len(unit) <= 40 else f"'{unit[:37]}...'"


def _described(text: str) -> str:
    """Return the kinds that a text does mean, for a message."""
    try:
        names = [kind.name for kind, _ in _readings(text)]
    except InputError:
        names = []
    if len(names) > 3:
        names = names[:3]
    return " or ".join(names) if names else "not a kind of quantity used here"


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


# Several symbols without a sign between them: a power on them has two meanings.
_RUN_TOGETHER = re.compile(
    r"(?<![A-Za-z_])(?:[mucdk]|da|M)?(?:Nm|Nmm|Ncm|ftlb|lbft|inlb|lbin|ozin|inoz|Wh)\^-?[0-9]"
)


def _refuse_power_on_run_together(text: str) -> None:
    if _RUN_TOGETHER.search(text):
        raise InputError("", "a unit", text, remedy="Put a * between the symbols, as in N*m^2")


# What these mean differs between countries or trades, or from what pint takes them for.
_REMEDIES: Final = {
    **dict.fromkeys(("ton", "tons"), "Write t (1000 kg), short_ton or long_ton"),
    "tonf": "Write tf, kip or kN",
    **dict.fromkeys(("gal", "gallon", "gallons"), "Write US_gal, UK_gal or l"),
    "mm_": "Write mm",
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
    "lbs_f": "Write lbf",
    "NM": "Write Nm or N*m",
    "MPA": "Write MPa",
    "mpa": "Write MPa",
    "Mpa": "Write MPa",
    "kts": "Write knot",
    "klb": "Write kip",
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
    measure = _from_pint(name)
    if measure is None:
        near = get_close_matches(name, SYMBOLS, 1, 0.75) if len(name) > 2 else []
        raise _Unknown(f"Did you mean {near[0]}?" if near else "")
    return (measure,)


# The whole names that are taken from pint, by its own names; those in _SCALED also with a decimal prefix.
_SCALED: Final = frozenset(
    ["meter", "gram", "second", "newton", "joule", "watt", "pascal", "hertz", "liter", "bar", "dyne", "erg", "force_gram", "watt_hour", "metric_ton"]
)
_WHOLE: Final = frozenset(
    ["inch", "foot", "yard", "mile", "nautical_mile", "furlong", "fathom", "rod", "chain", "hand", "angstrom", "micron", "week", "fortnight", "year", "carat", "stone", "slug", "slinch", "force_pound", "force_ounce", "force_kilogram", "force_metric_ton", "poundal", "kip", "horsepower", "metric_horsepower", "foot_pound", "pound_force_per_square_inch", "kip_per_square_inch", "standard_atmosphere", "technical_atmosphere", "torr", "inch_Hg", "mile_per_hour", "kilometer_per_hour", "kilometer_per_second", "foot_per_second", "standard_gravity", "galileo", "acre", "hectare", "cubic_centimeter", "centimeter_H2O"]
)
_NAME = re.compile(r"[A-Za-z_]{3,40}")
_UNLIKELY_ENDINGS: Final = frozenset({"s"})


@lru_cache(maxsize=1)
def _registry() -> Any:
    # Imported here because it takes longer than all the rest of the package together.
    import pint

    return pint.UnitRegistry(cache_folder=None)


@lru_cache(maxsize=1024)
def _from_pint(name: str) -> Measure | None:
    """Return pint's reading of a whole name on the allowed lists, None for everything else."""
    if not _NAME.fullmatch(name):
        return None
    registry = _registry()
    choices = registry.parse_unit_name(name)
    if not choices:
        return None
    prefix, unit, suffix = choices[0]
    if unit not in (_SCALED if prefix else _SCALED | _WHOLE):
        return None
    if suffix and len(name) <= 4:
        return None
    size, base = registry.get_root_units(name)
    powers = {str(one): int(power) for one, power in base._units.items()}
    if not powers or not set(powers) <= {"gram", "meter", "second"}:
        return None
    top, bottom = float(size).as_integer_ratio()
    grams = powers.get("gram", 0)
    top, bottom = (top, bottom * 1000**grams) if grams >= 0 else (top * 1000**-grams, bottom)
    return Measure(top, bottom, 0, (grams, powers.get("meter", 0), powers.get("second", 0), 0))
