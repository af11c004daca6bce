"""Arbitrary cells into every declared function: an answer or a sentence, never NaN, never a Python error."""

from __future__ import annotations

import math
import random
import re
from collections import defaultdict
from collections.abc import Callable
from typing import Any

import pytest
from host_cases import example_cells, good
from hypothesis import given
from hypothesis import strategies as st

from rigidsheet.udf.calling import call, working
from rigidsheet.udf.catalogue import FUNCTIONS
from rigidsheet.udf.cells import ERRORS, OMITTED, CellError, Refusal
from rigidsheet.udf.compiling import arguments_of
from rigidsheet.udf.declaration import Arg, CellFunction

CALLS = 20_000  # over all functions together
SEED = 20_240_517

NUMBERS: tuple[float, ...] = (
    *(
        0.0,
        -0.0,
        1.0,
        -1.0,
        0.5,
        2.0,
        3.0,
        7.0,
        45.0,
        90.0,
        360.0,
        1e-9,
        -1e-9,
        1e9,
        -1e9,
        44927.0,
        0.1 + 0.2,
    ),
    *(
        1e-308,
        5e-324,
        1e150,
        -1e200,
        1e308,
        -1.7e308,
        math.nan,
        math.inf,
        -math.inf,
        9.80665,
        1e16,
        2**53 + 0.0,
    ),
)
TEXTS: tuple[str, ...] = (
    *("", " ", "\t", "0.4", "400 mm", "1450 rpm", "−4 m", "0,4", "0,4 m", "1 250", "1 1/2", "2**3", "1e400"),
    *("nan", "inf", "-inf m", "kg", "m", "mm", "[mm]", "N*m", "kg/m s", "deg", "30 deg", "1/s", "1/min", "%"),
    *(
        "5 %",
        "true",
        "TRUE",
        "none",
        "all",
        "unknown",
        "down",
        "origin",
        "mass center",
        "integrals",
        "x",
        "z",
    ),
    *(
        "(0.4, 0.25) m",
        "(1, 2, 3)",
        "(1, 2",
        "(,)",
        "()",
        "(1, nan) m",
        "(1 mm, 2 m)",
        "400 mm long",
        "±4 mm",
    ),
    *(
        "OD 114.3 mm; L 520 mm",
        "OD 10 mm; ID 20 mm; L 5 mm",
        "OD; L",
        ";;",
        "=",
        "omega 12 deg/s; gravity down",
    ),
    *("tube", "box", "point", "sphere", "disk", "RB_TORQUE", "RB_WHY", "RB_NOTHING", "pin", "roller", "#N/A"),
    *(
        "\u00b5m",
        "µ",
        "Ⅷ",
        "٣",
        "１２ mm",
        "\x00",
        "'",
        '"',
        "`",
        "a" * 500,
        "9" * 400,
        "x" * 30 + "\n",
        "{}",
        "%s",
    ),
    *(
        "total",
        "part",
        "mass [kg]",
        "mass",
        "x [mm]",
        "x",
        "row",
        "label",
        "m/s^2",
        "kg*m^2",
        "lb*in^2",
        "G",
        "°",
    ),
)
OTHERS: tuple[Any, ...] = (None, True, False, OMITTED, *(CellError(e) for e in ERRORS))


def any_cell(rng: random.Random) -> Any:
    """Return one cell out of the pool, mostly numbers and texts."""
    draw = rng.random()
    if draw < 0.45:
        return rng.choice(NUMBERS) if rng.random() < 0.7 else rng.uniform(-10.0, 10.0)
    if draw < 0.9:
        return rng.choice(TEXTS)
    return rng.choice(OTHERS[:4]) if rng.random() < 0.8 else rng.choice(OTHERS)


def any_block(rng: random.Random) -> list[list[Any]]:
    """Return a block of up to five by five cells."""
    rows, columns = rng.randint(1, 5), rng.randint(1, 5)
    calm = rng.random() < 0.6  # mostly numbers, so that more than the first cell is looked at
    return [
        [
            rng.uniform(-5.0, 5.0) if calm and rng.random() < 0.85 else inside(any_cell(rng))
            for _ in range(columns)
        ]
        for _ in range(rows)
    ]


def inside(cell: Any) -> Any:
    """Return what can stand inside a block: nothing there is left out."""
    return None if cell is OMITTED else cell


def noise(f: CellFunction, rng: random.Random) -> list[Any]:
    """Return arbitrary arguments, sometimes too few or too many."""
    count = max(0, len(arguments_of(f)) + rng.choice((0, 0, 0, 0, -1, -2, 1)))
    return [any_cell(rng) if rng.random() < 0.6 else any_block(rng) for _ in range(count)]


def copied(cell: Any) -> Any:
    return [list(row) for row in cell] if isinstance(cell, list) else cell


def variants(a: Arg) -> list[Any]:
    """Return good cells for an argument in several forms: a cell, a unit cell, columns."""
    sample = a.shape.sample()
    out = [sample]
    kind = getattr(a.shape, "kind", None)
    if kind is not None:
        out += [
            f"2.5 {kind.si}",
            [[2.5, kind.si]],
            [[1.5], [kind.si]],
            [[1.0], [2.0], [3.0]],
            [[1.0], [2.0], [kind.si]],
        ]
        out += [
            [[0.3, 0.4, 0.0, kind.si]],
            [[0.3, 0.4]],
            [[0.1, 0.2], [0.3, 0.4]],
            [[0.1, 0.2, 0.3], [0.3, 0.4, 0.1]],
        ]
        out += [[[2.0, 0.0, 0.0], [0.0, 2.0, 0.0], [0.0, 0.0, 2.0]], f"(0.4, -0.2) {kind.si}"]
    out += list(getattr(a.shape, "options", ())) + list(getattr(a.shape, "words_for", ()))
    return out


def good_calls(f: CellFunction) -> list[list[Any]]:
    """Return calls that are meant to be answered."""
    out = [list(case.cells) for case in good(f)]
    out += [list(cells) for e in f.examples if (cells := example_cells(e.formula)) is not None]
    return out


def damaged(cells: list[Any], f: CellFunction, rng: random.Random) -> list[Any]:
    """Return a good call with one thing wrong, or merely unusual, in one of its cells."""
    cells = [copied(c) for c in cells]
    if not cells:
        return cells
    for i, a in enumerate(arguments_of(f)[: len(cells)]):
        if rng.random() < 0.3:
            cells[i] = copied(rng.choice(variants(a)))
    i = rng.randrange(len(cells))
    if not isinstance(cells[i], list) or rng.random() < 0.15:
        cells[i] = twisted(cells[i], rng)
    else:
        cells[i] = rng.choice(DAMAGES)(cells[i], rng)
    return cells


def twisted(cell: Any, rng: random.Random) -> Any:
    """Return another cell: from the pool, or the same with a change."""
    draw = rng.random()
    if isinstance(cell, float) and draw < 0.5:
        return cell * rng.choice((0.0, -1.0, 1e-12, 1e12, 1e160, 1e-200, 1e300))
    if isinstance(cell, str) and draw < 0.5:
        at = rng.randrange(len(cell) + 1)
        return rng.choice(
            (cell[:at], cell[at:], cell[:at] + rng.choice("x 0-;,.[]()=") + cell[at:], cell.upper())
        )
    return any_cell(rng)


def one_cell(block: list[list[Any]], rng: random.Random) -> list[list[Any]]:
    row = rng.choice(block)
    j = rng.randrange(len(row))
    row[j] = inside(twisted(row[j], rng))
    return block


def two_cells(block: list[list[Any]], rng: random.Random) -> list[list[Any]]:
    return one_cell(one_cell(block, rng), rng)


def swapped(block: list[list[Any]], rng: random.Random) -> list[list[Any]]:
    one, other = rng.choice(block), rng.choice(block)
    i, j = rng.randrange(len(one)), rng.randrange(len(other))
    one[i], other[j] = other[j], one[i]
    return block


def without_row(block: list[list[Any]], rng: random.Random) -> list[list[Any]]:
    block.pop(rng.randrange(len(block)))
    return block or [[None]]


def without_column(block: list[list[Any]], rng: random.Random) -> list[list[Any]]:
    j = rng.randrange(len(block[0]))
    return [row[:j] + row[j + 1 :] or [None] for row in block]


def row_again(block: list[list[Any]], rng: random.Random) -> list[list[Any]]:
    block.insert(rng.randrange(len(block) + 1), list(rng.choice(block)))
    return block


def column_again(block: list[list[Any]], rng: random.Random) -> list[list[Any]]:
    j = rng.randrange(len(block[0]))
    return [[*row, row[j]] for row in block]


def blank_row(block: list[list[Any]], rng: random.Random) -> list[list[Any]]:
    block.insert(rng.randrange(len(block) + 1), [None] * len(block[0]))
    return block


def blank_column(block: list[list[Any]], rng: random.Random) -> list[list[Any]]:
    j = rng.randrange(len(block[0]) + 1)
    return [[*row[:j], None, *row[j:]] for row in block]


def transposed(block: list[list[Any]], rng: random.Random) -> list[list[Any]]:
    return [list(row) for row in zip(*block, strict=True)]


DAMAGES: tuple[Callable[[list[list[Any]], random.Random], list[list[Any]]], ...] = (
    *(one_cell, one_cell, one_cell, two_cells, swapped, without_row, without_column),
    *(row_again, column_again, blank_row, blank_column, transposed),
)

UNFORESEEN = "could not answer these cells"
# What only a programmer reads; what the user typed is quoted and may be anything.
INTERNAL = re.compile(r"array\(|dtype|Traceback|None\b|NoneType|object at 0x|\bnan\b|\binf\b|OMITTED|<class")
QUOTED = re.compile(r"'.*'", re.DOTALL)


def fault(answer: Any) -> str:
    """Return what is wrong with an answer, empty when nothing is."""
    if isinstance(answer, Refusal):
        return sentence_fault(answer)
    if isinstance(answer, list):
        if not answer or not all(isinstance(row, list) and row for row in answer):
            return "an empty block or row"
        if len({len(row) for row in answer}) != 1:
            return "not rectangular"
        return next((found for row in answer for v in row if (found := value_fault(v))), "")
    return value_fault(answer)


def value_fault(value: Any) -> str:
    if type(value) is float:
        return "" if math.isfinite(value) else f"{value} left the function"
    if type(value) is str:
        return "" if UNFORESEEN not in value else value
    return f"a {type(value).__name__} left the function"


def sentence_fault(refusal: Refusal) -> str:
    text = refusal.reason
    if UNFORESEEN in text:
        return text
    if refusal.error not in ERRORS:
        return f"unknown error {refusal.error}"
    if not (10 <= len(text) <= 255):
        return f"a reason of {len(text)} characters"
    if INTERNAL.search(QUOTED.sub("", text)):
        return f"no sentence for a person: {text}"
    return ""


def texts_of(cells: Any) -> list[str]:
    """Return every text among some cells, the longest first."""
    flat = [v for c in cells for v in ([v for row in c for v in row] if isinstance(c, list) else [c])]
    return sorted((v.strip() for v in flat if isinstance(v, str) and v.strip()), key=len, reverse=True)


def lines_fault(told: Any, cells: Any) -> str:
    if isinstance(told, Refusal):
        return sentence_fault(told)
    if not told or not all(type(line) is str and line for line in told):
        return "a working without lines"
    if any(len(line) > 255 for line in told):
        return "a line of working too long for a cell"
    text = "\n".join(told)
    for typed in texts_of(cells):
        text = text.replace(typed[:40], "")
    if UNFORESEEN in text or INTERNAL.search(QUOTED.sub("", text)):
        return f"no working for a person: {text[:120]}"
    return ""


def swept(f: CellFunction, calls: int) -> dict[str, tuple[int, Any]]:
    """Return each fault found, with how often and one call that shows it."""
    rng = random.Random(f"{SEED} {f.name}")
    base = good_calls(f)
    found: dict[str, tuple[int, Any]] = defaultdict(lambda: (0, None))
    for k in range(calls):
        cells = noise(f, rng) if k % 4 == 0 else damaged(rng.choice(base), f, rng)
        answer = call(f.name, cells)
        for wrong in (fault(answer), lines_fault(working(f.name, cells), cells)):
            if wrong:
                key = re.sub(r"[0-9.]+(e[+-]?\d+)?", "0", wrong)[:150]
                found[key] = (found[key][0] + 1, cells)
    return dict(found)


@pytest.mark.parametrize("name", FUNCTIONS)
def test_arbitrary_and_damaged_cells_end_in_numbers_texts_or_a_sentence(name: str) -> None:
    found = swept(FUNCTIONS[name], -(-CALLS // len(FUNCTIONS)))
    assert not found, "\n".join(
        f"{count} x {wrong}\n    {name}{cells}" for wrong, (count, cells) in found.items()
    )


CELLS = st.one_of(
    st.floats(),
    st.text(max_size=30),
    st.sampled_from([c for c in OTHERS if c is not OMITTED]),
    st.builds(
        lambda number, unit: f"{number} {unit}",
        st.floats(),
        st.sampled_from(["mm", "kg", "deg", "N*m", "1/s"]),
    ),
)
BLOCKS = st.integers(1, 4).flatmap(
    lambda width: st.lists(st.lists(CELLS, min_size=width, max_size=width), min_size=1, max_size=4)
)


@given(name=st.sampled_from(list(FUNCTIONS)), cells=st.lists(CELLS | BLOCKS, max_size=6))
def test_any_text_and_any_float_end_in_numbers_texts_or_a_sentence(name: str, cells: list[Any]) -> None:
    assert fault(call(name, cells)) == ""
    assert lines_fault(working(name, cells), cells) == ""
