"""Strict reading of numbers: one meaning or a refusal that says what to write instead."""

from __future__ import annotations

import re
from math import isinf
from typing import Final, NoReturn

from ..core.errors import InputError

_DIGITS: Final = r"[+\-\u2212]?(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][+\-\u2212]?[0-9]+)?"
# The common case in one match: number, blanks, a unit without blanks. Anything else takes the slow way.
_QUANTITY = re.compile(rf"\s*({_DIGITS})\s*((?:1/)?[A-Za-z\u00b5\u03bc°%\[(][^\s'\"]*|-?)\s*")
_NUMBER = re.compile(rf"\s*({_DIGITS})\s*")
_NUMBER_AND_REST = re.compile(rf"\s*({_DIGITS})\s*(\S.*?)\s*", re.DOTALL)


def read_number(text: str, argument: str = "") -> float:
    """Return the number that a text holds and nothing else.

    Raises
    ------
    InputError
        When the text is not exactly one finite number; the remedy says what to write.
    """
    found = _NUMBER.fullmatch(text)
    if found is None:
        _refuse(text, argument, "a number")
    return _value(found[1], text, argument)


def split_quantity(text: str, argument: str = "") -> tuple[float, str]:
    """Return the number at the start of a text and the unit text after it, which may be empty.

    The unit text is not judged here beyond holding no second number and no remark.
    """
    found = _QUANTITY.fullmatch(text)
    if found is None:
        return _split_slowly(text, argument)
    number, unit = found.groups()
    if "\u2212" in number:
        number = number.replace("\u2212", "-")
    value = float(number)
    if value == 0.0 or isinf(value):
        value = _value(number, text, argument)
    return value, unit


def _value(number: str, text: str, argument: str) -> float:
    """Return the float; a number that overflows, or that silently becomes zero, is refused."""
    value = float(number.replace("\u2212", "-"))
    if isinf(value):
        _raise(text, argument, "a number that a computer can hold", "The largest is about 1e308")
    if value == 0.0 and re.search("[1-9]", re.split("[eE]", number)[0]):
        _raise(
            text, argument, "a number that a computer can hold", "Nearer to zero than 1e-320 is lost; write 0"
        )
    return value


_SECOND_NUMBER = re.compile(r"\s[+\-\u2212]?[.0-9]")
_REMARK = re.compile(r"\S\s+[(\[]")


def _split_slowly(text: str, argument: str) -> tuple[float, str]:
    """Split a quantity whose unit holds blanks or unusual signs, or refuse it."""
    found = _NUMBER_AND_REST.fullmatch(text)
    if found is None:
        _refuse(text, argument, "a number with a unit")
    number, rest = found.groups()
    joined = number[-1:] + text[found.end(1) : found.end(1) + 1]
    starts_unit = rest[0].isalpha() or rest[0] in "°º˚%‰[(" or re.match(r"1\s*/\s*[^\W\d(]", rest)
    if not starts_unit or (rest[0] == "1" and joined[-1] == "1"):
        _refuse(text, argument, "a number with a unit")
    inner = re.sub(r"^1\s*/", "", rest)
    if "'" in rest or '"' in rest or _SECOND_NUMBER.search(inner):
        _raise(text, argument, "one number with one unit", _one_unit(number, rest))
    if _REMARK.search(inner) and not re.search(r"[*/·]\s+\(", inner):
        _raise(text, argument, "a number with a unit", "Leave out the remark in brackets")
    return _value(number, text, argument), rest


_FEET_AND_INCHES = re.compile(
    r"\s*(?P<feet>[0-9]+)\s*(?:ft|'|\u2032)\.?\s*-?\s*(?P<inches>[0-9]+(?:\.[0-9]+)?)\s*(?:in|\"|\u2033|'')?\.?\s*"
)


def _one_unit(number: str, rest: str) -> str:
    """Return the remedy for a quantity spread over two units, such as feet and inches."""
    found = _FEET_AND_INCHES.fullmatch(f"{number} {rest}")
    if found:
        return f"Write {12 * int(found['feet']) + float(found['inches']):.10g} in"
    if rest in ("'", "\u2032"):
        return f"Write {number} ft"
    if rest in ('"', "\u2033", "''"):
        return f"Write {number} in"
    return "Write the sum in one unit"


def _raise(text: str, argument: str, rule: str, remedy: str = "") -> NoReturn:
    if argument:
        raise InputError(argument, rule, text, remedy=remedy)
    raise InputError("", f"The text must be {rule}", text, remedy=remedy)


def _refuse(text: str, argument: str, rule: str) -> NoReturn:
    """Raise with the remedy for what was probably meant."""
    if not text.strip():
        _raise("", argument, rule, "Nothing was given")
    _raise(text, argument, rule, _remedy(text.strip()))


_SIGN: Final = r"(?P<sign>[+\-\u2212]?)"
_UNIT_AFTER: Final = r"(?P<rest>\s*(?:[^\W\d].*|[%°].*)?)"
_MIXED = re.compile(
    rf"{_SIGN}(?:(?P<whole>[0-9]+)(?:\s+|-))?(?P<top>[0-9]+)\s*/\s*(?P<bottom>[0-9]+){_UNIT_AFTER}"
)
_SPACED = re.compile(
    rf"{_SIGN}(?P<body>[0-9]{{1,3}}(?:[\s'_\u2019][0-9]{{3}})+(?P<decimals>\.[0-9]*)?){_UNIT_AFTER}"
)
_COMMAS = re.compile(rf"{_SIGN}(?P<body>[0-9]{{1,3}}(?:,[0-9]{{3}})+)(?P<decimals>\.[0-9]*)?{_UNIT_AFTER}")
_POINTS = re.compile(rf"{_SIGN}(?P<body>[0-9]{{1,3}}(?:\.[0-9]{{3}})+),(?P<decimals>[0-9]+){_UNIT_AFTER}")
_COMMA = re.compile(rf"{_SIGN}(?P<whole>[0-9]*),(?P<decimals>[0-9]+){_UNIT_AFTER}")
_TEN_POWER = re.compile(
    r"(?P<body>[+\-\u2212]?[0-9]+(?:\.[0-9]+)?)\s*[x×*·]\s*10\s*(?:\^|\*\*)?\s*(?P<power>[+\-\u2212]?[0-9]+|[⁻⁰¹²³⁴-⁹]+).*"
)
_SUPERSCRIPTS: Final = str.maketrans("⁻⁰¹²³⁴⁵⁶⁷⁸⁹\u2212", "-0123456789-")


def _remedy(text: str) -> str:
    """Return what to write instead of a text that is no number, empty when it cannot be guessed."""
    for pattern, worded in _REMEDIES:
        found = pattern.fullmatch(text)
        if found:
            return worded(found)
    return ""


def _of_fraction(found: re.Match[str]) -> str:
    bottom = int(found["bottom"])
    if bottom == 0:
        return "Divide by something other than 0"
    value = int(found["whole"] or 0) + int(found["top"]) / bottom
    return f"Write {_minus(found)}{value:.10g}{_after(found)}"


def _of_spaces(found: re.Match[str]) -> str:
    return f"Write {_minus(found)}{re.sub(r'[^0-9.]', '', found['body'])}{_after(found)} without the space"


def _of_commas(found: re.Match[str]) -> str:
    groups = found["body"].split(",")
    plain = f"{_minus(found)}{''.join(groups)}{found['decimals'] or ''}{_after(found)}"
    if len(groups) > 2 or found["decimals"] or groups[0] == "0":
        return f"Write {plain}" if groups[0] != "0" else _of_comma_text(found, groups)
    return f"Write {plain}, or {_minus(found)}{groups[0]}.{groups[1]}{_after(found)} if the comma is a decimal sign"


def _of_comma_text(found: re.Match[str], groups: list[str]) -> str:
    return f"Write {_minus(found)}{groups[0]}.{''.join(groups[1:])}{_after(found)} with a point"


def _of_points(found: re.Match[str]) -> str:
    whole = found["body"].replace(".", "")
    return f"Write {_minus(found)}{whole}.{found['decimals']}{_after(found)}"


def _of_comma(found: re.Match[str]) -> str:
    return f"Write {_minus(found)}{found['whole'] or '0'}.{found['decimals']}{_after(found)} with a point"


def _of_ten_power(found: re.Match[str]) -> str:
    body = found["body"].replace("\u2212", "-")
    return f"Write {body}e{found['power'].translate(_SUPERSCRIPTS)}"


def _minus(found: re.Match[str]) -> str:
    return "-" if found["sign"] in ("-", "\u2212") else ""


def _after(found: re.Match[str]) -> str:
    rest = found["rest"].strip()
    return f" {rest}" if rest else ""


def _fixed(sentence: str):  # type: ignore[no-untyped-def]
    return lambda found: sentence


_REMEDIES: Final = (
    (_MIXED, _of_fraction),
    (_SPACED, _of_spaces),
    (_COMMAS, _of_commas),
    (_POINTS, _of_points),
    (_COMMA, _of_comma),
    (_TEN_POWER, _of_ten_power),
)
