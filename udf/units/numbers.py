"""Strict reading of numbers: one meaning or a refusal that says what to write instead."""

from __future__ import annotations

import re
from collections.abc import Callable
from math import isinf
from typing import Final, NoReturn

from ...core.errors import InputError

# Atomic, so that a number is never cut short to make sense of the rest (`11/min` is not 1 and 1/min).
_DIGITS: Final = r"(?>[+\-\u2212]?(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][+\-\u2212]?[0-9]+)?)"
# The common case in one match: number, blanks, a unit without blanks. Anything else takes the slow way.
_QUANTITY = re.compile(rf"\s*({_DIGITS})(?:\s*([A-Za-z\u00b5\u03bc°%\[(][^\s'\"]*)|\s+(1/[A-Za-z(]\S*))?\s*")
_NUMBER = re.compile(rf"\s*({_DIGITS})\s*")
_NUMBER_AND_REST = re.compile(rf"\s*({_DIGITS})(\s*)(\S.*)", re.DOTALL)


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

    Raises
    ------
    InputError
        When the text does not start with exactly one finite number.
    """
    found = _QUANTITY.fullmatch(text)
    if found is None:
        return _split_slowly(text, argument)
    number, unit, per = found.groups()
    if "\u2212" in number:
        number = number.replace("\u2212", "-")
    value = float(number)
    if value == 0.0 or isinf(value):
        value = _value(number, text, argument)
    return value, unit or per or ""


def _value(number: str, text: str, argument: str) -> float:
    """Return the float; a number that overflows, or that silently becomes zero, is refused."""
    value = float(number.replace("\u2212", "-"))
    if isinf(value):
        _raise(text, argument, "a number that a computer can hold", "The largest is about 1e308")
    if value == 0.0 and re.search("[1-9]", re.split("[eE]", number)[0]):
        _raise(text, argument, "a number that a computer can hold", "So near to zero, write 0")
    return value + 0.0  # a negative zero would be shown with its sign


LONGEST_QUANTITY: Final = 200
_PER: Final = re.compile(r"1\s*/\s*(?=[^\W\d]|\()")
_SECOND_NUMBER = re.compile(r"\s[+\-\u2212±]?\s*[.0-9]|[0-9]\s+[+\-\u2212±]")
_REMARK = re.compile(r"[^\s*/·]\s+[(\[]")


def _split_slowly(text: str, argument: str) -> tuple[float, str]:
    """Split a quantity whose unit holds blanks or unusual signs, or refuse it."""
    found = _NUMBER_AND_REST.fullmatch(text.strip())
    if found is None or len(text) > LONGEST_QUANTITY:
        _refuse(text, argument, "a number with a unit")
    number, gap, rest = found.groups()
    per = _PER.match(rest) if gap else None
    if not (per or rest[0].isalpha() or rest[0] in "°º˚%‰[("):
        _refuse(text, argument, "a number with a unit")
    unit = rest[per.end() :] if per else rest
    if "'" in rest or '"' in rest or _SECOND_NUMBER.search(unit):
        _raise(text, argument, "one number with one unit", _feet(text) or "One cell holds one number")
    if _REMARK.search(unit):
        _raise(text, argument, "a number with a unit", "Leave out the remark in brackets")
    return _value(number, text, argument), rest


def _raise(text: str, argument: str, rule: str, remedy: str = "") -> NoReturn:
    """Raise with the argument's name, or with a whole sentence where it is not known."""
    if argument:
        raise InputError(argument, rule, text, remedy=remedy)
    raise InputError("", f"The text must be {rule}", text, remedy=remedy)


def _refuse(text: str, argument: str, rule: str) -> NoReturn:
    """Raise with the remedy for what was probably meant."""
    if not text.strip():
        _raise("", argument, rule, "Nothing was given")
    _raise(text, argument, rule, _remedy(text.strip()))


_FEET = re.compile(
    r"(?P<feet>[0-9]+(?:\.[0-9]+)?)\s*(?:ft|feet|foot|'|\u2032)\.?\s*-?\s*"
    r"(?:(?P<inches>[0-9]+(?:\.[0-9]+)?)\s*(?:in|inch|inches|\"|\u2033|'')?\.?)?"
)
_INCHES = re.compile(r"(?P<inches>[0-9]+(?:\.[0-9]+)?)\s*(?:\"|\u2033|'')")


def _feet(text: str) -> str:
    """Return the remedy for feet and inches, or for the marks of either; empty for another text."""
    text = text.strip()
    inches = _INCHES.fullmatch(text)
    if inches:
        return f"Write {inches['inches']} in"
    found = _FEET.fullmatch(text)
    if found is None:
        return ""
    if found["inches"] is None:
        return f"Write {found['feet']} ft"
    if float(found["inches"]) >= 12:
        return ""
    return f"Write {12 * float(found['feet']) + float(found['inches']):.10g} in"


_SIGN: Final = r"(?P<sign>[+\-\u2212]?)"
_REST: Final = r"(?P<rest>\s*(?:[^\W\d_].*|[%°].*)?)"
_Rule = tuple[re.Pattern[str], Callable[[re.Match[str]], str]]


def _minus(found: re.Match[str]) -> str:
    return "-" if found["sign"] in ("-", "\u2212") else ""


def _after(found: re.Match[str]) -> str:
    rest = found["rest"].strip()
    return f" {rest}" if rest else ""


def _of_fraction(found: re.Match[str]) -> str:
    if int(found["bottom"]) == 0:
        return "Nothing is divided by 0"
    value = int(found["whole"] or 0) + int(found["top"]) / int(found["bottom"])
    return f"Write {_minus(found)}{value:.10g}{_after(found)}"


def _of_groups(found: re.Match[str]) -> str:
    plain = re.sub(r"[^0-9.]", "", found["body"])
    mark = "space" if re.search(r"\s", found["body"]) else "mark"
    return f"Write {_minus(found)}{plain}{_after(found)} without the {mark}"


def _of_commas(found: re.Match[str]) -> str:
    groups = found["body"].split(",")
    plain = f"{_minus(found)}{''.join(groups)}{found['decimals'] or ''}{_after(found)}"
    if len(groups) > 2 or found["decimals"]:
        return f"Write {plain}"
    decimal = f"{_minus(found)}{groups[0]}.{groups[1]}{_after(found)}"
    return f"Write {plain}, or {decimal} if the comma is a decimal sign"


def _of_points(found: re.Match[str]) -> str:
    return f"Write {_minus(found)}{found['body'].replace('.', '')}.{found['decimals']}{_after(found)}"


def _of_comma(found: re.Match[str]) -> str:
    return f"Write {_minus(found)}{found['whole'] or '0'}.{found['decimals']}{_after(found)} with a point"


_SUPERSCRIPTS: Final = str.maketrans("⁻⁰¹²³⁴⁵⁶⁷⁸⁹\u2212", "-0123456789-")


def _of_ten_power(found: re.Match[str]) -> str:
    body = (found["body"] or "1").replace("\u2212", "-")
    return f"Write {body}e{found['power'].translate(_SUPERSCRIPTS)}{_after(found)}"


def _of_dash(found: re.Match[str]) -> str:
    return f"Write -{found['body']}{_after(found)}"


def _of_percent(found: re.Match[str]) -> str:
    return f"Write {float(found['body']) / 100:.10g}"


def _of_ratio(found: re.Match[str]) -> str:
    if float(found["bottom"]) == 0:
        return "Nothing is divided by 0"
    return f"Write the ratio as one number, {float(found['top']) / float(found['bottom']):.10g}"


def _of_product(found: re.Match[str]) -> str:
    return f"Write {found['body']} {found['unit']}"


def _of_per(found: re.Match[str]) -> str:
    return f"Write {found['body']} 1/{found['unit']}"


def _of_any(sentence: str) -> Callable[[re.Match[str]], str]:
    def worded(found: re.Match[str]) -> str:
        return sentence

    return worded


_PLAIN: Final = r"(?P<body>[0-9]+(?:\.[0-9]+)?)"
_REMEDIES: Final[tuple[_Rule, ...]] = (
    (
        re.compile(
            rf"{_SIGN}(?:(?P<whole>[0-9]{{1,9}})(?:\s+|-))?(?P<top>[0-9]{{1,9}})\s*/\s*(?P<bottom>[0-9]{{1,9}}){_REST}"
        ),
        _of_fraction,
    ),
    (
        re.compile(rf"{_SIGN}(?P<body>[0-9]{{1,3}}(?:[\s'_\u2019][0-9]{{3}})+(?:\.[0-9]*)?){_REST}"),
        _of_groups,
    ),
    (
        re.compile(rf"{_SIGN}(?P<body>[1-9][0-9]{{0,2}}(?:,[0-9]{{3}})+)(?P<decimals>\.[0-9]*)?{_REST}"),
        _of_commas,
    ),
    (re.compile(rf"{_SIGN}(?P<body>[0-9]{{1,3}}(?:\.[0-9]{{3}})+),(?P<decimals>[0-9]+){_REST}"), _of_points),
    (re.compile(rf"{_SIGN}(?P<whole>[0-9]*),(?P<decimals>[0-9]+){_REST}"), _of_comma),
    (
        re.compile(
            r"(?:(?P<body>[+\-\u2212]?[0-9]+(?:\.[0-9]+)?)\s*[x×*·]\s*)?10\s*(?:\^|\*\*)?\s*"
            rf"(?P<power>(?<=[\^*])[+\-\u2212]?[0-9]+|[⁻⁰¹²³⁴-⁹]+){_REST}"
        ),
        _of_ten_power,
    ),
    (re.compile(rf"[\u2010-\u2015]\s*{_PLAIN}{_REST}"), _of_dash),
    (re.compile(rf"[-\u2212]\s+{_PLAIN}{_REST}"), _of_dash),
    (re.compile(rf"\(\s*{_PLAIN}(?P<rest>)\s*\)"), _of_dash),
    (re.compile(rf"{_PLAIN}(?P<rest>)\s*[-\u2212]"), _of_dash),
    (re.compile(rf"{_PLAIN}\s*%"), _of_percent),
    (re.compile(r"(?P<top>[0-9]+(?:\.[0-9]+)?)\s*:\s*(?P<bottom>[0-9]+(?:\.[0-9]+)?)"), _of_ratio),
    (re.compile(rf"{_PLAIN}\s*[*·×]\s*(?P<unit>[^\W\d].*)"), _of_product),
    (re.compile(rf"{_PLAIN}\s*/\s*(?P<unit>[^\W\d].*)"), _of_per),
    (re.compile(r"[±~≈<>≤≥].*"), _of_any("Write the number alone")),
    (re.compile(r"[+\-\u2212]?(?:nan|inf|infinity)", re.IGNORECASE), _of_any("Write a finite number")),
    (re.compile(r"[0-9.]*\.[0-9]*\.[0-9.]*.*"), _of_any("A number has one decimal point")),
    (re.compile(r"=.*|[0-9.\s]*(?:\*\*|[+*^/\-])\s*[0-9].*"), _of_any("Write the result, or a formula")),
    (
        re.compile(rf"{_DIGITS}(?:\s*[^\W\d]|\s*[°%\[(]|\s+1/).*"),
        _of_any("A unit is not read here; write the number alone"),
    ),
    (re.compile(r"[^\W\d]+\s*[0-9].*"), _of_any("The number comes first, then the unit")),
)


def _remedy(text: str) -> str:
    """Return what to write instead of a text that is no number, empty when it cannot be guessed."""
    if len(text) > 60:
        return ""
    feet = _feet(text)
    if feet:
        return feet
    for pattern, worded in _REMEDIES:
        found = pattern.fullmatch(text)
        if found:
            return worded(found)
    if any(one.isnumeric() and not one.isascii() for one in text):
        return "Write the digits 0 to 9"
    return ""
