"""Published values through the cell functions: data rows with source, printed digits and origin.

A row is a chain of steps. A step calls a function with cells or does plain arithmetic; a text that starts with
`=` is arithmetic on the results of earlier steps, `$omitted` is an argument left out. Each of the row's
`values` is compared with what the source prints, within half a unit of its last printed digit ("exact": a
definition or a fraction). `also_holds` are relations inside the row; they are no published values and don't
count. Origin: read in the source or a retyped copy of it, from memory, or a printed formula evaluated by us.
"""

from __future__ import annotations

import ast
import json
import math
import operator
import re
from collections import Counter
from pathlib import Path
from typing import Any

import pytest

from rigidsheet.udf.calling import call
from rigidsheet.udf.catalogue import FUNCTIONS
from rigidsheet.udf.cells import OMITTED, Refusal

HERE = Path(__file__).parent
READ, MEMORY, EVALUATED = "read", "memory", "formula evaluated by us"
EXACT = "exact"
# They speak about other functions or about texts, so no published number can pass through them.
WITHOUT_NUMBERS = {"RB_WHY", "RB_WORKING"}

FILES = sorted(p for p in HERE.glob("*.json") if p.stem != "derivations")
DERIVED = json.loads((HERE / "derivations.json").read_text(encoding="utf-8"))
ROWS = [row for path in FILES for row in json.loads(path.read_text(encoding="utf-8"))]

OPERATORS: dict[type, Any] = {
    ast.Add: operator.add,
    ast.Sub: operator.sub,
    ast.Mult: operator.mul,
    ast.Div: operator.truediv,
    ast.Pow: operator.pow,
}
NAMES = ("sqrt", "sin", "cos", "tan", "atan2", "hypot", "radians", "degrees")


def arithmetic(text: str, known: dict[str, Any]) -> Any:
    """Return the value of an expression of numbers, earlier results, + - * / **, lists and a few functions."""

    def value(node: ast.expr) -> Any:
        match node:
            case ast.Constant(value=int() | float() as number):
                return float(number)
            case ast.Name(id=name):
                return math.pi if name == "pi" else known[name]
            case ast.BinOp(left=left, op=op, right=right):
                return OPERATORS[type(op)](value(left), value(right))
            case ast.UnaryOp(op=ast.USub(), operand=operand):
                return -value(operand)
            case ast.List(elts=elements):
                return [value(e) for e in elements]
            case ast.Subscript(value=of, slice=ast.Constant(value=int() as index)):
                whole = value(of)
                return (whole[0] if len(whole) == 1 else whole)[index]
            case ast.Call(func=ast.Name(id="abs"), args=[argument]):
                return abs(value(argument))
            case ast.Call(func=ast.Name(id=name), args=arguments) if name in NAMES:
                return getattr(math, name)(*map(value, arguments))
        raise ValueError(f"{ast.unparse(node)} is more than plain arithmetic")

    return value(ast.parse(text.removeprefix("="), mode="eval").body)


def cell_of(cell: Any, known: dict[str, Any]) -> Any:
    """Return what a cell holds."""
    if isinstance(cell, list):
        # a vector in the place of a row is the row
        rows = [row if isinstance(row, list) else cell_of(row, known)[0] for row in cell]
        return [[cell_of(v, known) for v in row] for row in rows]
    if cell == "$omitted":
        return OMITTED
    if isinstance(cell, str) and cell.startswith("="):
        return arithmetic(cell, known)
    return float(cell) if isinstance(cell, int) else cell


def run(row: dict[str, Any]) -> dict[str, Any]:
    """Return the results of the steps of a row by name."""
    known: dict[str, Any] = {}
    for step in row["steps"]:
        if "arithmetic" in step:
            known[step["name"]] = arithmetic(step["arithmetic"], known)
            continue
        answer = call(step["call"], [cell_of(c, known) for c in step["cells"]])
        assert not isinstance(answer, Refusal), (
            f"{row['id']}, {row['source']}: {step['call']}: {answer.reason}"
        )
        known[step["name"]] = answer
    return known


def printed_number(text: str) -> float:
    """Return a printed number; fractions are written with a slash."""
    over, _, under = text.partition("/")
    return float(over) / float(under or 1)


def tolerance(printed: str, digits: int | str) -> float:
    """Return half a unit of the last printed digit, or next to nothing for an exact value."""
    number = abs(printed_number(printed))
    if digits == EXACT:
        return 1e-12 * number
    assert isinstance(digits, int)
    return 0.5 * 10.0 ** (math.floor(math.log10(number)) - digits + 1) * (1 + 1e-9)


@pytest.mark.parametrize("row", ROWS, ids=[row["id"] for row in ROWS])
def test_published(row):
    known = run(row)
    for entry in row["values"]:
        got = arithmetic(entry["value"], known)
        printed = entry["printed"]
        assert abs(got - printed_number(printed)) <= tolerance(printed, entry["digits"]), (
            f"{row['id']}: {row['source']} ({row['origin']}) prints {printed} {entry['unit']} for {entry['value']}; "
            f"got {got:.10g}. {row['note']}"
        )
        if "formula" in entry:
            assert got == pytest.approx(arithmetic(entry["formula"], {}), rel=1e-12), row["source"]
    for entry in row.get("also_holds", ()):
        expected = arithmetic(entry["equals"], known)
        assert arithmetic(entry["value"], known) == pytest.approx(expected, rel=1e-9, abs=1e-12), (
            f"{row['id']}: {row['source']}"
        )
    verdicts = [known[s["name"]] for s in row["steps"] if s.get("call") == "RB_TENSOR_CHECK"]
    assert all(verdict == "OK" for verdict in verdicts), f"{row['id']}: {verdicts}"


def test_rows_are_complete():
    for row in ROWS:
        where = str(row["id"])
        assert row["source"].strip(), where
        assert row["origin"] in (READ, MEMORY, EVALUATED), where
        assert row["values"], where
        called = [s["call"] for s in row["steps"] if "call" in s]
        assert row["functions"] == list(dict.fromkeys(called)), where
        for entry in row["values"]:
            assert entry["unit"], where
            assert (row["origin"] == EVALUATED) == ("formula" in entry), where
            assert digits_fit(entry["printed"], entry["digits"]), f"{where}: {entry}"
            assert names_in(entry["value"]) & from_cells(row), (
                f"{where}: {entry} is arithmetic without a function"
            )


def names_in(cell: Any) -> set[str]:
    """Return the names of earlier results in a cell or an expression."""
    if isinstance(cell, list):
        return set().union(*map(names_in, cell))
    if isinstance(cell, str) and cell.startswith("="):
        return {n.id for n in ast.walk(ast.parse(cell[1:], mode="eval")) if isinstance(n, ast.Name)}
    return set()


def from_cells(row: dict[str, Any]) -> set[str]:
    """Return the results of a row that come from a function, directly or through arithmetic."""
    out: set[str] = set()
    for step in row["steps"]:
        if "call" in step or names_in(step["arithmetic"]) & out:
            out.add(step["name"])
    return out


def digits_fit(printed: str, digits: int | str) -> bool:
    """Whether the count of digits is what is printed; only trailing zeros of whole numbers may not count."""
    if digits == EXACT:
        return True
    mantissa = printed.lower().partition("e")[0].lstrip("+-")
    shown = mantissa.replace(".", "").lstrip("0")
    least = len(shown) if "." in mantissa else len(shown.rstrip("0"))
    return isinstance(digits, int) and max(1, least) <= digits <= max(1, len(shown))


def test_identifiers_are_unique():
    counted = Counter(row["id"] for row in ROWS)
    assert [name for name, n in counted.items() if n > 1] == []


def test_enough_published_values():
    counted = Counter({READ: 0, MEMORY: 0, EVALUATED: 0})
    for row in ROWS:
        counted[row["origin"]] += len(row["values"])
    print("published values through cells:", dict(counted), "in all", counted.total())
    assert counted.total() >= 150
    assert counted[EVALUATED] <= counted.total() / 2
    # enough without those, too
    assert counted[READ] + counted[MEMORY] >= 150


def test_every_function_has_an_outside_check():
    named = {name for row in [*ROWS, *DERIVED] for name in row["functions"]}
    assert named <= set(FUNCTIONS)
    assert set(FUNCTIONS) - named - WITHOUT_NUMBERS == set()


@pytest.mark.parametrize("row", DERIVED, ids=["-".join(row["functions"]) for row in DERIVED])
def test_derivations_exist(row):
    path, _, name = row["test"].partition("::")
    source = (HERE.parents[1] / path).read_text(encoding="utf-8")
    assert row["against"].strip()
    body = re.search(rf"^def {name}\(.*?(?=^\S|\Z)", source, re.MULTILINE | re.DOTALL)
    assert body is not None, f"no test {name} in {path}"
    for function in row["functions"]:
        assert f'"{function}"' in body[0], f"{row['test']} does not call {function}"


@pytest.mark.parametrize("text", ["__import__('os')", "known['a']", "'a'*2", "a.b", "max(1, 2)"])
def test_arithmetic_is_plain(text):
    with pytest.raises(ValueError, match="more than plain arithmetic"):
        arithmetic(text, {"a": 1.0, "known": 2.0})


def test_a_wrong_value_is_noticed():
    assert tolerance("12.50", 4) == pytest.approx(0.005)
    assert tolerance("3310", 3) == pytest.approx(5)
    assert tolerance("7/36", EXACT) == pytest.approx(1e-12 * 7 / 36)
    off = {**ROWS[0], "values": [{**ROWS[0]["values"][0], "printed": "1.355819", "digits": 7}]}
    with pytest.raises(AssertionError, match=r"prints 1\.355819"):
        test_published(off)
