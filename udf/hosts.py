"""What every spreadsheet program shows of a declaration: category, help of a function and of an argument."""

from __future__ import annotations

from typing import Final

from . import results
from .compiling import short
from .declaration import Arg, CellFunction
from .reading.words import Rest

# The longest text a function wizard shows (Excel cuts there; Calc shows more).
MOST_HELP: Final = 255

REASON_HINT: Final = "RB_WHY says why it refuses, RB_WORKING shows the steps."
UNIT_HINT: Final = "A number alone is in the unit named; '400 mm' brings its own."


def category(f: CellFunction) -> str:
    """Return the category under which a program lists the function."""
    return f"Rigidsheet {f.group}"


def function_help(f: CellFunction) -> str:
    """Return the help of a function, the gist first, whole sentences, at most 255 characters."""
    text = short(f.line, MOST_HELP)
    asks = any(isinstance(a.shape, Rest) for a in f.args if isinstance(a, Arg))
    for sentence in (result_words(f), UNIT_HINT if takes_units(f) else "", "" if asks else REASON_HINT):
        longer = f"{text} {sentence}"
        if sentence and len(longer) <= MOST_HELP:
            text = longer
    return text


def result_words(f: CellFunction) -> str:
    """Word the unit of a single result; several results are listed with `what`."""
    fields = f.result.fields
    if len(fields) == 1 and not f.result.open:
        kind = fields[0].kind
        if kind is not None and results.dimensional(kind):
            return f"Result in {kind.si}."
    return ""


def takes_units(f: CellFunction) -> bool:
    """Say whether some argument is read as a quantity of one kind."""
    return any("[" in a.shape.words() for a in f.args if isinstance(a, Arg))


def argument_help(a: Arg) -> str:
    """Return the help of an argument, what it is first and then what to type, at most 255 characters."""
    form = a.shape.words()
    if a.limit is not None:
        form += f", {a.limit.words}"
    text = a.help if form == "text" or form in a.help else f"{a.help} ({form})"
    if a.optional and "omitted" not in a.help:
        text += "; may be left out"
    return short(text, MOST_HELP)
