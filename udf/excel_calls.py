"""Excel through xlwings: what its cells are, what they are given back, and the functions it imports.

What xlwings hands over with `ndim=2, err_to_str=True` is a list of rows for every argument that was given
and the bare default for one that was left out. So None is an omitted argument, [[None]] a blank cell.
A cell that holds the text #N/A and a cell that holds that error look the same here: both count as the error.
"""

from __future__ import annotations

import datetime as dt
import inspect
from collections.abc import Callable, Mapping
from decimal import Decimal
from types import MappingProxyType
from typing import Any, Final

import xlwings

from . import hosts
from .calling import call
from .catalogue import FUNCTIONS
from .cells import OMITTED, Answer, Cell, CellError, Refusal, Value
from .compiling import arguments_of, short
from .declaration import Arg, CellFunction
from .reading.words import Rest

# The number behind each error of Excel. The last seven exist in newer versions only, where alone they occur.
ERROR_NUMBERS: Final = MappingProxyType(
    {
        "#NULL!": 2000,
        "#DIV/0!": 2007,
        "#VALUE!": 2015,
        "#REF!": 2023,
        "#NAME?": 2029,
        "#NUM!": 2036,
        "#N/A": 2042,
        "#GETTING_DATA": 2043,
        "#SPILL!": 2045,
        "#CONNECT!": 2046,
        "#BLOCKED!": 2047,
        "#UNKNOWN!": 2048,
        "#FIELD!": 2049,
        "#CALC!": 2050,
    }
)
# An error arrives as this number plus its own when xlwings has no text for it.
ERROR_BASE: Final = -2146828288
ERROR_RANGE: Final = range(ERROR_BASE + 1988, ERROR_BASE + 2089)
ERROR_OF_NUMBER: Final = MappingProxyType({ERROR_BASE + n: text for text, n in ERROR_NUMBERS.items()})

# Day zero of Excel's serial numbers, as they count from March 1900 on.
DAY_ZERO: Final = dt.datetime(1899, 12, 30)

MOST_TEXT: Final = 255  # in a cell of an array; longer ones turn the array into an error
MOST_TEXT_ALONE: Final = 32767


def serial(moment: dt.datetime) -> float:
    """Return the number that stands in a cell with a date format."""
    return (moment.replace(tzinfo=None) - DAY_ZERO) / dt.timedelta(days=1)


def value(given: object) -> Value:
    """Return one cell as the functions take it."""
    if given is None or type(given) is float or type(given) is bool:
        return given
    if isinstance(given, str):
        return CellError(given) if given in ERROR_NUMBERS else given
    if isinstance(given, int):
        # numbers of cells are floats; a whole number comes from other code, or is an error
        if given in ERROR_RANGE:
            return CellError(ERROR_OF_NUMBER.get(given, "#VALUE!"))
        return float(given)
    if isinstance(given, (Decimal, float)):
        return float(given)
    if isinstance(given, dt.datetime):
        return serial(given)
    if isinstance(given, dt.date):
        return serial(dt.datetime(given.year, given.month, given.day))
    return CellError("#VALUE!")


def normalise(given: object) -> Cell:
    """Return one argument as the functions take it: omitted, one value, or rows of them."""
    if given is None:
        return OMITTED
    if not isinstance(given, (list, tuple)):
        return value(given)
    if not given:
        return None
    if not isinstance(given[0], (list, tuple)):
        given = [given]  # an array constant of one row
    if len(given) == 1 and len(given[0]) == 1:
        return value(given[0][0])
    return [[value(v) for v in row] for row in given]


def express(answer: Answer | Refusal) -> float | str | list[list[float | str]]:
    """Return what the cell is given: the answer, or the error as a text, which the VBA module makes real."""
    if isinstance(answer, Refusal):
        return answer.error
    if isinstance(answer, list):
        return [[short(v, MOST_TEXT) if isinstance(v, str) else v for v in row] for row in answer]
    return short(answer, MOST_TEXT_ALONE) if isinstance(answer, str) else answer


def parameters(f: CellFunction) -> list[inspect.Parameter]:
    """Return the parameters of the function as Excel sees them; None stands for one left out."""
    listed = []
    for a in arguments_of(f):
        if isinstance(a.shape, Rest):
            listed.append(inspect.Parameter(a.name, inspect.Parameter.VAR_POSITIONAL))
        else:
            default = None if a.optional else inspect.Parameter.empty
            listed.append(inspect.Parameter(a.name, inspect.Parameter.POSITIONAL_OR_KEYWORD, default=default))
    return listed


def exported_function(f: CellFunction, module: str) -> Callable[..., Any]:
    """Return the function that xlwings imports: named, described and decorated after the declaration."""
    name = f.name

    def cell_function(*cells: object) -> object:
        return express(call(name, [normalise(c) for c in cells]))

    # xlwings reads name and signature while it decorates, and takes annotations for converters
    cell_function.__name__ = cell_function.__qualname__ = name
    cell_function.__module__ = module
    cell_function.__doc__ = hosts.function_help(f)
    cell_function.__annotations__ = {}
    cell_function.__signature__ = inspect.Signature(parameters(f))  # type: ignore[attr-defined]
    return decorated(cell_function, f, arguments_of(f))


def decorated(plain: Callable[..., Any], f: CellFunction, arguments: tuple[Arg, ...]) -> Callable[..., Any]:
    """Decorate a function with what both the desktop and the server runtime of xlwings understand."""
    out: Any = plain
    for a in arguments:
        out = xlwings.arg(a.name, ndim=2, err_to_str=True, doc=hosts.argument_help(a))(out)
    out = xlwings.ret()(out)
    # last, because the other two set the category back
    decorate: Any = xlwings.func(name=f.name, namespace="", category=hosts.category(f), volatile=False)
    return decorate(out)  # type: ignore[no-any-return]


def exported(module: str) -> Mapping[str, Callable[..., Any]]:
    """Return every function of the list under its name, for the module that xlwings imports."""
    return {name: exported_function(f, module) for name, f in FUNCTIONS.items()}
