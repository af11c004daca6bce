"""Every declared function: words that fit the wizard, examples that answer, working that ends in its result."""

from __future__ import annotations

import json
import math
import re
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest
from host_cases import HostCase, good

from rigidsheet.udf import hosts, vba
from rigidsheet.udf.calling import call, working
from rigidsheet.udf.catalogue import FUNCTIONS, GROUPS
from rigidsheet.udf.cells import OMITTED, Refusal
from rigidsheet.udf.compiling import arguments_of
from rigidsheet.udf.declaration import Arg, CellFunction, Form
from rigidsheet.udf.reading.words import Rest

every = pytest.mark.parametrize("f", FUNCTIONS.values(), ids=FUNCTIONS)
PUBLISHED = Path(__file__).parents[1] / "published"

# The catalogue of the design, by group; what is beyond it is listed apart.
CATALOGUE = {
    "Units": "CONVERT KIND",
    "Mass": "SHAPE SHAPE_MASS TENSOR SHIFT SHIFT_BACK TURN AXIS_INERTIA PRINCIPAL RADIUS_OF_GYRATION TENSOR_CHECK "
    "ROLLUP PLATE MOVE GD2",
    "Motion": "ARM VELOCITY_AT ACCELERATION_AT VELOCITY_SLIDING ACCELERATION_SLIDING INSTANT_CENTER "
    "INSTANT_CENTER_2 OMEGA_FROM SPIN_SUM",
    "Forces": "RESULTANT MOMENT CENTER_ACCELERATION ANGULAR_ACCELERATION TORQUE MOMENT_SUM SPIN_TORQUE "
    "ANGULAR_MOMENTUM KINETIC_ENERGY REACTIONS REACTIONS_3D DRIVE_TORQUE REFLECTED_INERTIA MOTOR_TORQUE",
    "Review": "MARGIN CHECK ENVELOPE WORKING WHY",
}


def test_the_catalogue_is_complete_and_grouped() -> None:
    assert set(GROUPS) == set(CATALOGUE)
    for group, names in CATALOGUE.items():
        for name in names.split():
            assert FUNCTIONS[f"RB_{name}"].group == group


def own(f: CellFunction) -> list[Arg]:
    return [a for a in f.args if isinstance(a, Arg)]


def asks(f: CellFunction) -> bool:
    return any(isinstance(a.shape, Rest) for a in own(f))


@every
def test_its_words_fit_the_wizard(f: CellFunction) -> None:
    assert re.fullmatch(r"RB_[A-Z][A-Z0-9_]*", f.name)
    assert re.fullmatch(r"[A-Z][^\n]*\.", f.line)
    assert len(f.line) <= 255
    assert len(hosts.function_help(f)) <= 255
    assert f.source.strip()
    for a in arguments_of(f):
        assert re.fullmatch(r"[A-Za-z][A-Za-z0-9_]*", a.name)
        assert re.fullmatch(r"\S.*[^.\s]", a.help)
        assert 3 <= len(hosts.argument_help(a)) <= 255
        assert a.shape.words().strip()
    for field in f.result.fields:
        assert field.name.strip()
        assert field.help.strip()


@every
def test_its_names_are_safe_in_vba(f: CellFunction) -> None:
    assert vba.problems(f.name, [a.name for a in arguments_of(f)]) == []


@every
def test_optional_arguments_come_last(f: CellFunction) -> None:
    optional = [a.optional for a in arguments_of(f)]
    assert optional == sorted(optional)


# With one optional argument alone, the others left out, these calls are refused on purpose.
REFUSED_ALONE = {
    ("RB_TENSOR", "Ixy"): "`products` must be given",
    ("RB_TENSOR", "Iyz"): "`products` must be given",
    ("RB_TENSOR", "Izx"): "`products` must be given",
    ("RB_AXIS_INERTIA", "mass"): "`offset` must be given too",
    ("RB_AXIS_INERTIA", "offset"): "`mass` must be given too",
    ("RB_ROLLUP", "about"): "a body's record is about its mass center",
    ("RB_ROLLUP", "unit"): "left out when all results are asked",
    ("RB_PLATE", "unit"): "left out when all results are asked",
    ("RB_MOVE", "unit"): "left out when all results are asked",
    ("RB_RESULTANT", "what crosses x"): "runs along the x axis",
    ("RB_RESULTANT", "unit"): "left out when all results are asked",
    ("RB_REACTIONS", "what alpha"): "must be a row of the result",
    ("RB_REACTIONS", "unit"): "left out when all rows are asked",
    ("RB_REACTIONS_3D", "what alpha"): "must be a row of the result",
    ("RB_REACTIONS_3D", "unit"): "left out when all rows are asked",
}


def refused_alone(case: HostCase) -> str:
    """Return the words of the refusal that a case must meet, empty when it must be answered."""
    hits = [
        text
        for (name, label), text in REFUSED_ALONE.items()
        if name == case.function and case.label.startswith(label)
    ]
    return hits[0] if hits else ""


def answered(f: CellFunction) -> Iterator[HostCase]:
    """Yield the good calls of a function that must be answered."""
    return (case for case in good(f) if not refused_alone(case))


@every
def test_its_samples_and_choices_are_answered(f: CellFunction) -> None:
    assert list(answered(f))
    for case in good(f):
        found, words = case.expected(), refused_alone(case)
        if words:
            assert isinstance(found, Refusal), f"{case.label} is answered"
            assert words in found.reason
        else:
            assert not isinstance(found, Refusal), f"{case.label}: {found}"


def test_no_excuse_is_idle() -> None:
    labels = {(f.name, case.label) for f in FUNCTIONS.values() for case in good(f)}
    for name, label in REFUSED_ALONE:
        assert any(n == name and text.startswith(label) for n, text in labels), (name, label)


# -- the examples, read as a spreadsheet reads a formula: texts, numbers, calls, {1,2;3,4}, omitted

TOKEN = re.compile(r'\s*(?:"((?:[^"]|"")*)"|([-+]?\d+\.?\d*(?:[eE][-+]?\d+)?)|(RB_\w+)\(|([(){},;]))')
Tokens = list[tuple[str, Any]]


def tokens(formula: str) -> Tokens | None:
    """Return the tokens of a formula, None when it holds references to other cells."""
    out: Tokens = []
    at = 1
    while at < len(formula.rstrip()):
        found = TOKEN.match(formula, at)
        if found is None:
            return None
        text, number, function, sign = found.groups()
        if text is not None:
            out.append(("value", text.replace('""', '"')))
        elif number is not None:
            out.append(("value", float(number)))
        else:
            out.append(("call", function) if function else ("sign", sign))
        at = found.end()
    return out


def evaluated(left: Tokens) -> Any:
    """Return the value that starts at the first token, taking its tokens away."""
    kind, value = left.pop(0)
    if kind == "value":
        return value
    if (kind, value) == ("sign", "{"):
        return braces(left)
    assert kind == "call", f"unexpected {value}"
    name, cells = value, arguments(left)
    found = call(name, cells)
    assert not isinstance(found, Refusal), f"{name}: {found}"
    return found


def arguments(left: Tokens) -> list[Any]:
    cells: list[Any] = []
    while True:
        if left[0] in (("sign", ","), ("sign", ")")):
            cells.append(OMITTED)
        else:
            cells.append(evaluated(left))
        if left.pop(0) == ("sign", ")"):
            return [] if cells == [OMITTED] else cells


def braces(left: Tokens) -> list[list[Any]]:
    rows: list[list[Any]] = [[]]
    while True:
        rows[-1].append(evaluated(left))
        _, sign = left.pop(0)
        if sign == "}":
            return rows
        if sign == ";":
            rows.append([])


def example_answers(f: CellFunction) -> Iterator[tuple[str, Any]]:
    for example in f.examples:
        left = tokens(example.formula)
        if left is not None:
            yield example.formula, evaluated(left)


@every
def test_its_examples_are_whole_and_answer(f: CellFunction) -> None:
    assert f.examples
    for example in f.examples:
        assert re.fullmatch(rf"={f.name}\(.*\)", example.formula)
        assert example.formula.count("(") == example.formula.count(")")
        assert re.fullmatch(r"[A-Z].*[.?]", example.says)
        assert len(example.says) <= 255
    for _, value in example_answers(f):
        assert value not in ("", [])


def test_most_examples_stand_alone() -> None:
    alone = [f.name for f in FUNCTIONS.values() if any(True for _ in example_answers(f))]
    assert len(alone) >= 0.75 * len(FUNCTIONS)


NUMBER = re.compile(r"[-+]?\d+\.?\d*(?:e[-+]?\d+)?")


def shows(lines: list[str], value: float) -> bool:
    """Say whether a number stands in some lines, to the digits written there."""
    for text in NUMBER.findall("\n".join(lines)):
        if math.isclose(float(text), value, rel_tol=6e-6, abs_tol=1e-12):
            return True
        if math.isclose(abs(float(text)), abs(value), rel_tol=6e-6) and value < 0:
            return True  # a minus sign that stands apart
    return False


@every
def test_its_working_ends_in_its_result(f: CellFunction) -> None:
    for case in answered(f):
        lines = working(f.name, case.plain_cells())
        assert not isinstance(lines, Refusal), lines
        assert lines
        assert all(line and len(line) <= 255 for line in lines)
        if asks(f):
            continue
        found = case.expected()
        flat = [v for row in found for v in row] if isinstance(found, list) else [found]
        numbers = [v for v in flat if isinstance(v, float)]
        if (
            f.result.open
            or (len(f.result.fields) > 1 and len(flat) > 9)
            or any(x.form is Form.TABLE for x in f.result.fields)
        ):
            numbers = numbers[:1]
        for v in numbers:
            assert v == 0.0 or shows(lines, v), f"{case.label}: {v} is not in {lines}"
        texts = [v for v in flat if isinstance(v, str)]
        if len(flat) == 1 and texts and case.label == "sample":
            assert all(word in "\n".join(lines) for word in texts[0].split(" or "))


@every
def test_its_working_is_written_for_a_person(f: CellFunction) -> None:
    for case in answered(f):
        lines = working(f.name, case.plain_cells())
        assert not isinstance(lines, Refusal)
        text = "\n".join(lines)
        assert not re.search(r"\bnan\b|\binf\b|array\(|None\b|\d\.\d{11}|\+ -\d|- -\d|\* ?-\d", text), text


@pytest.mark.parametrize("name", [f.name for f in FUNCTIONS.values() if not asks(f)])
def test_somebody_outside_agrees_with_it(name: str) -> None:
    """A published value, or a derivation from first principles, passes through the function."""
    rows = [
        row
        for path in sorted(PUBLISHED.glob("*.json"))
        for row in json.loads(path.read_text(encoding="utf-8"))
    ]
    assert [row for row in rows if name in row["functions"]], f"{name} has no row in tests/published"
