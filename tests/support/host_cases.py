"""One table of calls that serves every host: what the cells hold, derived from the declarations and by hand.

The expected answer of a case is what `rigidsheet.udf.calling.call` gives for the cells as the host can see
them; each host's test says where it cannot see a difference (`as_calc_sees` for Calc).
"""

from __future__ import annotations

import dataclasses
import re
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

from rigidsheet.udf.calling import call
from rigidsheet.udf.catalogue import FUNCTIONS
from rigidsheet.udf.cells import OMITTED, Answer, CellError, Omitted, Refusal
from rigidsheet.udf.compiling import arguments_of
from rigidsheet.udf.declaration import CellFunction, Role
from rigidsheet.udf.reading.words import Choice, Rest


class Date(float):
    """A number in a cell with a date format; 44927 is 2023-01-01."""


DATE = Date(44927.0)


@dataclass(frozen=True)
class HostCase:
    """One call: the function and what its arguments hold."""

    label: str
    function: str
    cells: tuple[Any, ...]

    def plain_cells(self) -> list[Any]:
        """Return the cells as `call` takes them."""
        return [plain(c) for c in self.cells]

    def expected(self) -> Answer | Refusal:
        """Return the headless answer."""
        return call(self.function, self.plain_cells())


def plain(cell: Any) -> Any:
    """Return a cell without the marks of this table."""
    if isinstance(cell, list):
        return [[plain(v) for v in row] for row in cell]
    return float(cell) if isinstance(cell, Date) else cell


# What a user's cell may hold where something else was meant.
ODD_CELLS: tuple[tuple[str, Any], ...] = (
    ("blank", None),
    ("empty text", ""),
    ("true", True),
    ("false", False),
    ("division error", CellError("#DIV/0!")),
    ("not available", CellError("#N/A")),
    ("text number", "5"),
    ("text of another kind", "3 furlongs"),
    ("comma number", "0,4 m"),
    ("date", DATE),
    ("zero", 0.0),
)


def required(f: CellFunction) -> list[Any]:
    """Return a good cell for each argument up to the last that must be given."""
    arguments = arguments_of(f)
    return [a.shape.sample() for a in arguments if not a.optional]


def good(f: CellFunction) -> Iterator[HostCase]:
    """Yield the required arguments alone, then with each optional one, the others omitted."""
    base = required(f)
    yield HostCase("sample", f.name, tuple(base))
    arguments = arguments_of(f)
    for i, a in enumerate(arguments):
        if not a.optional or isinstance(a.shape, Rest):
            continue
        words = a.shape.options if isinstance(a.shape, Choice) else (a.shape.sample(),)
        for word in words:
            # OMITTED where an argument in the middle is left out
            cells = [b.shape.sample() if not b.optional else OMITTED for b in arguments[:i]] + [word]
            cells += [b.shape.sample() for b in arguments[i + 1 :] if not b.optional]
            yield HostCase(f"{a.name} {word}", f.name, tuple(cells))


def columns(f: CellFunction) -> Iterator[HostCase]:
    """Yield calls with three rows in one argument, and in all of them."""
    base = required(f)
    tall = {
        i: tripled(base[i])
        for i, a in enumerate([a for a in arguments_of(f) if not a.optional])
        if a.shape.role in (Role.SCALAR, Role.VECTOR, Role.SPIN)
    }
    for i, block in tall.items():
        yield HostCase(f"column in argument {i + 1}", f.name, (*base[:i], block, *base[i + 1 :]))
    if len(tall) > 1:
        yield HostCase("columns", f.name, tuple(tall.get(i, c) for i, c in enumerate(base)))


def tripled(cell: Any) -> Any:
    """Return three rows that differ, made of a sample."""
    row = cell[0] if isinstance(cell, list) else [cell]
    return [[v * factor if isinstance(v, float) else v for v in row] for factor in (1.0, 1.5, 0.5)]


def odd(f: CellFunction) -> Iterator[HostCase]:
    """Yield calls with an odd cell in the place of each argument, and inside its block."""
    base = required(f)
    for i, cell in enumerate(base):
        for label, value in ODD_CELLS:
            yield HostCase(f"{label} as argument {i + 1}", f.name, (*base[:i], value, *base[i + 1 :]))
            if isinstance(cell, list):
                block = [list(row) for row in cell]
                block[-1][-1] = value
            else:
                block = [[cell], [value]]
            yield HostCase(f"{label} inside argument {i + 1}", f.name, (*base[:i], block, *base[i + 1 :]))
    yield HostCase("too few arguments", f.name, tuple(base[:-1]))


_TOKEN = re.compile(r'"((?:[^"]|"")*)"|(-?\d+\.?\d*(?:[eE][-+]?\d+)?)(?=\s*[,)])|(?=[,)])')


def example_cells(formula: str) -> tuple[Any, ...] | None:
    """Return the cells of an example whose arguments are all texts and numbers, else None."""
    head = re.match(r"=RB_\w+\(", formula)
    assert head is not None, formula
    cells: list[Any] = []
    at = head.end()
    while True:
        at += len(formula[at:]) - len(formula[at:].lstrip())
        token = _TOKEN.match(formula, at)
        if token is None:
            return None
        if token[1] is not None:
            cells.append(token[1].replace('""', '"'))
        else:
            cells.append(float(token[2]) if token[2] else OMITTED)
        rest = formula[token.end() :].lstrip()
        if rest == ")":
            return tuple(cells)
        if not rest.startswith(","):
            return None
        at = len(formula) - len(rest) + 1


def examples(f: CellFunction) -> Iterator[HostCase]:
    """Yield the examples of a function that need no other cells."""
    for number, example in enumerate(f.examples, 1):
        cells = example_cells(example.formula)
        if cells is not None:
            yield HostCase(f"example {number}", f.name, cells)


def about(cases: list[HostCase]) -> Iterator[HostCase]:
    """Yield the questions about some calls: why they were refused, and their working."""
    for case in cases:
        for asking in ("RB_WHY", "RB_WORKING"):
            yield HostCase(f"{case.function}, {case.label}", asking, (case.function, *case.cells))


BY_HAND: tuple[HostCase, ...] = (
    HostCase("two cells", "RB_CONVERT", ([[400.0, "mm"]], "in")),
    HostCase("downward", "RB_CONVERT", ([[400.0], ["mm"]], "in")),
    HostCase("unit first", "RB_CONVERT", ([["mm", 400.0]], "in")),
    HostCase("unit cell blank", "RB_CONVERT", ([[400.0, None]], "in")),
    HostCase("Unicode unit", "RB_CONVERT", ("12 m²", "in^2")),
    HostCase("Unicode minus", "RB_CONVERT", ("−4 m", "mm")),
    HostCase("huge", "RB_CONVERT", ([[1e300, "km"]], "mm")),
    HostCase("tiny", "RB_CONVERT", ([[1e-290, "mm"]], "km")),
    HostCase("beyond 32 bits", "RB_CONVERT", ([[1e12, "m"]], "m")),
    HostCase("unknown unit", "RB_KIND", ("furlongs",)),
    HostCase("vector with unit", "RB_ARM", ([[120.0, 80.0, "mm"]], [[870.0, 500.0, "mm"]])),
    HostCase("upright vector", "RB_ARM", ([[120.0], [80.0], ["mm"]], [[870.0], [500.0], ["mm"]])),
    HostCase("own units", "RB_ARM", ([[400.0, "mm"], [0.25, "m"]], "(0, 0) m")),
    HostCase("blank in vector", "RB_ARM", ([[120.0, None, "mm"]], "(0, 0) m")),
    HostCase("true in vector", "RB_ARM", ([[120.0, True, "mm"]], "(0, 0) m")),
    HostCase("text number in vector", "RB_ARM", ([[120.0, "80", "mm"]], "(0, 0) m")),
    HostCase("unknown function", "RB_WHY", ("RB_TORK", 1.0)),
    HostCase("why with nothing", "RB_WHY", ("RB_ARM",)),
    HostCase("too many", "RB_WHY", ("RB_ARM", "(0, 0) m", "(1, 0) m", "m", 1.0, 2.0)),
)


def all_cases() -> list[HostCase]:
    """Return every case, labels made unique."""
    out: list[HostCase] = []
    asked: list[HostCase] = []
    for f in FUNCTIONS.values():
        own = [*good(f), *examples(f), *columns(f), *odd(f)]
        out += own
        if not any(isinstance(a.shape, Rest) for a in arguments_of(f)):
            asked += own[:2] + [c for c in own if "furlongs" in str(c.cells)][:2]
    out += [c for c in BY_HAND if c.function in FUNCTIONS]
    out += about(asked)
    return [dataclasses.replace(c, label=f"{i}: {c.function} {c.label}") for i, c in enumerate(out)]


def kind_of_error(cells: tuple[Any, ...]) -> str | None:
    """Return the first error that stands alone as an argument."""
    return next((c.text for c in cells if isinstance(c, CellError)), None)


def trimmed(cells: tuple[Any, ...]) -> tuple[Any, ...]:
    """Return the cells without the omitted ones at the end."""
    while cells and isinstance(cells[-1], Omitted):
        cells = cells[:-1]
    return cells
