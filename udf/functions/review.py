"""Review: margins and checks of a demand against a rated capacity."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from ...core.errors import InputError, PhysicsError
from ..declaration import WHAT, Arg, CellFunction, Example, Field, Form, Result
from ..limits import POSITIVE
from ..reading.arguments import Scalar
from ..reading.cases import Cases, CaseValues
from ..reading.words import Amount, AnyQuantity, Choice
from ..units import kinds
from ..units.amounts import pair
from ..working import for_rows, num

GROUP = "Review"
AT_MOST, AT_LEAST = "at most", "at least"
SIGNED_MOST, SIGNED_LEAST = "signed at most", "signed at least"


@dataclass(frozen=True, slots=True)
class Margin:
    """Margin [-], factor [-] and utilization [-] of a demand against a capacity."""

    margin: Any
    factor: Any
    utilization: Any


def compared(demand: Amount, capacity: Amount) -> tuple[Any, Any, str]:
    """Return |demand| and capacity in one unit; a capacity must be positive."""
    a, b, unit = pair("demand", demand, "capacity", capacity)
    if not np.all(np.asarray(b) > 0.0):
        raise InputError("capacity", f"greater than zero; got {num(np.min(b))} {unit}".rstrip())
    return np.abs(a), b, unit


def margin(demand: Amount, capacity: Amount, required_factor: Any) -> Margin:
    a, b, _ = compared(demand, capacity)
    if not np.all(a > 0.0):
        raise PhysicsError("", "A demand of zero has no margin: any capacity carries it")
    factor = b / a
    return Margin(factor / required_factor - 1.0, factor, required_factor / factor)


def margin_working(values: tuple[Any, ...], answer: Margin) -> list[str]:
    demand, capacity, required = values
    a, b, unit = compared(demand, capacity)
    a, b, rows = np.ravel(a)[0], np.ravel(b)[0], np.size(answer.factor)
    factor, rest, used = (np.ravel(x)[0] for x in (answer.factor, answer.margin, answer.utilization))
    lines = [
        "Margin of a demand against a capacity, by magnitude",
        f"factor = capacity / |demand| = {num(b)} / {num(a)} {unit} = {num(factor)}".replace("  ", " "),
        f"margin = factor / required - 1 = {num(factor)} / {num(np.ravel(required)[0])} - 1 = {num(rest)}",
        f"utilization = required / factor = {num(used)}",
    ]
    return for_rows(lines, rows)


def holds(demand: Amount, limit: Amount, sense: str, required_factor: Any) -> Any:
    """Return whether the check holds, for one demand or a column."""
    a, b, unit = pair("demand", demand, "limit", limit)
    if sense in (SIGNED_MOST, SIGNED_LEAST):
        if required_factor is not None:
            raise InputError("required_factor", "left out when the sense is signed; apply it to the limit")
        return a <= b if sense == SIGNED_MOST else a >= b
    if not np.all(np.asarray(b) > 0.0):
        raise InputError(
            "limit",
            f"greater than zero; got {num(np.min(b))} {unit}".rstrip(),
            remedy=f"A limit with a sign needs the sense '{SIGNED_MOST}' or '{SIGNED_LEAST}'",
        )
    required = 1.0 if required_factor is None else required_factor
    return np.abs(a) * required <= b if sense == AT_MOST else np.abs(a) >= b * required


def check(demand: Amount, limit: Amount, sense: str, required_factor: Any) -> Any:
    good = np.asarray(holds(demand, limit, sense, required_factor))
    words = np.where(good, "OK", "FAIL")
    return str(words) if words.ndim == 0 else [str(w) for w in words]


def check_working(values: tuple[Any, ...], answer: Any) -> list[str]:
    demand, limit, sense, required_factor = values
    a, b, unit = pair("demand", demand, "limit", limit)
    x, y = np.ravel(a)[0], np.ravel(b)[0]
    verdict = answer if isinstance(answer, str) else answer[0]
    required = 1.0 if required_factor is None else np.ravel(required_factor)[0]
    signed = sense in (SIGNED_MOST, SIGNED_LEAST)
    shown = num(x) if signed else num(abs(x))
    if sense in (AT_MOST, SIGNED_MOST):
        text = f"{shown} * {num(required)} <= {num(y)}" if required != 1.0 else f"{shown} <= {num(y)}"
    else:
        text = f"{shown} >= {num(y)} * {num(required)}" if required != 1.0 else f"{shown} >= {num(y)}"
    lines = [
        f"Check: {'demand' if signed else '|demand|'} {sense.removeprefix('signed ')} the limit",
        f"{text} {unit}: {verdict}".replace(" :", ":"),
    ]
    return for_rows(lines, 1 if isinstance(answer, str) else len(answer))


@dataclass(frozen=True, slots=True)
class Envelope:
    """Extremes of a column of cases, in the cases' own unit, and the names that go with them."""

    largest: float
    smallest: float
    magnitude: float
    governing: str
    largest_case: str
    smallest_case: str
    unit: str


def envelope(cases: CaseValues) -> Envelope:
    values = cases.values
    top, low, far = int(values.argmax()), int(values.argmin()), int(np.abs(values).argmax())
    names = cases.names
    return Envelope(
        float(values[top]),
        float(values[low]),
        float(abs(values[far])),
        names[far],
        names[top],
        names[low],
        cases.unit,
    )


def envelope_working(values: tuple[Any, ...], answer: Envelope) -> list[str]:
    unit = f" {answer.unit}" if answer.unit else ""
    lines = [f"Envelope of {len(values[0].names)} cases"]
    lines += [
        f"{name}: {num(v)}{unit}"
        for name, v in list(zip(values[0].names, values[0].values, strict=True))[:40]
    ]
    return [
        *lines,
        f"largest {num(answer.largest)}{unit} ({answer.largest_case}), "
        f"smallest {num(answer.smallest)}{unit} ({answer.smallest_case})",
        f"governing by magnitude: {answer.governing}, {num(answer.magnitude)}{unit}",
    ]


REQUIRED_FACTOR = "factor the standard or the project asks for"
COMMON = "Common practice of strength checks: factor of safety and margin of safety"

FUNCTIONS = (
    CellFunction(
        name="RB_MARGIN",
        group=GROUP,
        line="Margin of a rated capacity over a demand, by magnitude: capacity / (required |demand|) - 1.",
        args=(
            Arg("demand", AnyQuantity(), "what is asked, with its unit"),
            Arg("capacity", AnyQuantity(), "what is rated, with its unit"),
            Arg(
                "required_factor",
                Scalar(kinds.RATIO),
                REQUIRED_FACTOR + "; 1 when omitted",
                POSITIVE,
                default=1.0,
            ),
            WHAT,
        ),
        result=Result(
            (
                Field("margin", None, "capacity / (required |demand|) - 1; negative fails"),
                Field("factor", None, "capacity / |demand|"),
                Field("utilization", None, "required |demand| / capacity; above 1 fails"),
            ),
            default="margin",
        ),
        kernel=margin,
        working=margin_working,
        source=COMMON,
        examples=(
            Example(
                '=RB_MARGIN("-212 N*m", "340 N*m", 1.5)',
                "Margin of the tipper's gearmotor with a factor of 1.5.",
            ),
        ),
    ),
    CellFunction(
        name="RB_CHECK",
        group=GROUP,
        line="OK or FAIL: a demand against a limit, by magnitude unless the sense says signed.",
        args=(
            Arg("demand", AnyQuantity(), "what is asked, with its unit"),
            Arg("limit", AnyQuantity(), "what is allowed, with its unit"),
            Arg(
                "sense",
                Choice((AT_MOST, AT_LEAST, SIGNED_MOST, SIGNED_LEAST), {"<=": AT_MOST, ">=": AT_LEAST}),
                "at most when omitted",
                default=AT_MOST,
            ),
            Arg("required_factor", Scalar(kinds.RATIO), REQUIRED_FACTOR, POSITIVE, default=None),
        ),
        result=Result((Field("verdict", None, "OK or FAIL", Form.TEXT),)),
        kernel=check,
        working=check_working,
        source=COMMON,
        examples=(
            Example(
                '=RB_CHECK("6.2 kN", "15 kN", "at most", 2)', "Whether the hinge pin carries twice its load."
            ),
        ),
    ),
    CellFunction(
        name="RB_ENVELOPE",
        group=GROUP,
        line="Largest, smallest and governing case of a column: case names first, values in the last number column.",
        args=(Arg("cases", Cases(), "names in the first column, values in the last number column"),),
        result=Result(
            (
                Field("governing", None, "name of the case with the largest magnitude", Form.TEXT),
                Field("magnitude", None, "largest magnitude, in the unit of the values"),
                Field("largest", None, "largest value"),
                Field("smallest", None, "smallest value"),
                Field("largest case", None, "its name", Form.TEXT),
                Field("smallest case", None, "its name", Form.TEXT),
                Field("unit", None, "unit of the values, empty when none was given", Form.TEXT),
            ),
        ),
        kernel=envelope,
        working=envelope_working,
        source="Common practice of load cases",
        examples=(
            Example(
                '=RB_ENVELOPE(B6:F9, "governing")', "Which load case of the tipper governs the drive torque."
            ),
        ),
    ),
)
