"""The Calc add-in: runs in the Python of the office and hands every call to the worker process."""

from __future__ import annotations

import json
import os
import struct
from typing import Any

import uno
import unohelper
from com.sun.star.lang import XServiceInfo, XServiceName
from com.sun.star.sheet import ResultEvent, XVolatileResult
from com.sun.star.task import XJob
from org.rigidsheet.cells import XFunctions
from rigidsheet_channel import Channel, WorkerLost
from rigidsheet_repair import repair
from rigidsheet_sight import Sight

with open(os.path.join(os.path.dirname(os.path.abspath(__file__)), "config.json"), encoding="utf-8") as _file:
    CONFIG: dict[str, Any] = json.load(_file)

KEPT = 50_000  # answers
KEPT_ROWS = 40  # rows of an argument; looking a long one up would cost more than asking again
REMEMBERED = 1000  # lost calls whose reason is kept for RB_WHY, and blocks


def error_number(code: int) -> float:
    """Return the number that Calc reads as an error: its code in the low word of a quiet NaN."""
    return struct.unpack("<d", struct.pack("<Q", 0x7FF8000000000000 | code))[0]  # type: ignore[no-any-return]


ERRORS = {
    text: ((error_number(code),),)
    for text, code in (
        ("#VALUE!", 519),
        ("#NUM!", 503),
        ("#N/A", 32767),
        ("#DIV/0!", 532),
        ("#REF!", 524),
        ("#NAME?", 525),
        ("#NULL!", 521),
    )
}

CHANNEL = Channel(
    [os.environ.get("RIGIDSHEET_PYTHON") or CONFIG["python"], *CONFIG["arguments"]],
    CONFIG["fingerprint"],
    float(os.environ.get("RIGIDSHEET_TIMEOUT") or CONFIG["timeout"]),
)

# What was lost with the worker, by function and arguments: asking the worker would only lose it again.
LOST: dict[Any, str] = {}


SIGHT: list[Sight] = []  # one, made with the first service


class Known:
    """Answers already given by the running worker; the functions have no memory, so they stay true.

    Sheets ask the same again and again: a unit turned for each row, a table read for each of its results.
    """

    def __init__(self) -> None:
        self._answers: dict[Any, Any] = {}
        self._worker: Any = None

    def get(self, name: str, arguments: tuple[Any, ...]) -> Any:
        """Return the answer given to the same call, or None."""
        if self._worker is not CHANNEL.process:
            self._answers.clear()
            self._worker = CHANNEL.process
            return None
        return self._answers.get((name, arguments))

    def keep(self, name: str, arguments: tuple[Any, ...], found: Any) -> None:
        """Note an answer, unless its arguments are long."""
        if any(type(a) is tuple and len(a) > KEPT_ROWS for a in arguments):
            return
        if self._worker is not CHANNEL.process or len(self._answers) >= KEPT:
            self._answers.clear()
            self._worker = CHANNEL.process
        self._answers[name, arguments] = found


KNOWN = Known()


def answer(name: str, method: str, given: tuple[Any, ...]) -> Any:
    """Return what the cell shows: rows of numbers and texts, or an error."""
    arguments = SIGHT[0].restored(method, given)
    if name == "RB_WHY" and LOST:
        reason = LOST.get(asked_about(arguments))
        if reason is not None:
            return ((reason,),)
    plain = arguments is given  # else they may hold TRUE, which is equal to 1 as a key
    if plain:
        found = KNOWN.get(name, arguments)
        if found is not None:
            return found
    try:
        reply = CHANNEL.ask((name, arguments))
    except WorkerLost as lost:
        if name == "RB_WHY":
            return ((str(lost)[:255],),)
        while len(LOST) >= REMEMBERED:
            del LOST[next(iter(LOST))]
        LOST[(name, arguments)] = str(lost)[:255]
        return ERRORS["#VALUE!"]
    if LOST:
        LOST.pop((name, arguments), None)
    found = reply if type(reply) is tuple else ERRORS.get(reply, ERRORS["#VALUE!"])
    if plain:
        KNOWN.keep(name, arguments, found)
    return found


def asked_about(arguments: tuple[Any, ...]) -> tuple[str, tuple[Any, ...]]:
    """Return the call that the arguments of RB_WHY speak of."""
    first = arguments[0] if arguments else ""
    while isinstance(first, tuple) and first:
        first = first[0]
    return str(first).strip().upper(), arguments[1:]


class Functions(unohelper.Base, XFunctions, XServiceInfo, XServiceName):
    """The service whose methods are the functions; they are added below from the configuration."""

    def __init__(self, context: Any) -> None:
        self.context = context
        if not SIGHT:
            SIGHT.append(Sight(context, CONFIG["service"]))

    def getServiceName(self) -> str:
        return CONFIG["service"]  # type: ignore[no-any-return]

    def getImplementationName(self) -> str:
        return CONFIG["service"]  # type: ignore[no-any-return]

    def supportsService(self, name: str) -> bool:
        return name in self.getSupportedServiceNames()

    def getSupportedServiceNames(self) -> tuple[str, ...]:
        return (CONFIG["service"], "com.sun.star.sheet.AddIn")


class Block(unohelper.Base, XVolatileResult):
    """A block of cells as the answer of a method that may also answer with one cell.

    As `any` Calc takes no block from Python; the value of a result that could change later it does take.
    """

    def __init__(self, rows: Any) -> None:
        self._rows = rows

    def addResultListener(self, listener: Any) -> None:
        event = ResultEvent()
        event.Source = self
        event.Value = uno.Any("[][]any", self._rows)
        listener.modified(event)

    def removeResultListener(self, listener: Any) -> None:
        """Nothing is kept: the value never changes."""


# Calc keeps what belongs to a block until the document is closed, so the same answer is the same block.
BLOCKS: dict[Any, Block] = {}


def block_of(rows: Any) -> Block:
    """Return the block with these rows."""
    found = BLOCKS.get(rows)
    if found is None:
        while len(BLOCKS) >= REMEMBERED:
            del BLOCKS[next(iter(BLOCKS))]
        found = BLOCKS[rows] = Block(rows)
    return found


def method_of(name: str, own: str, one_cell: bool) -> Any:
    """Return the method behind a function; arguments omitted at the end are dropped."""

    def method(self: Functions, *arguments: Any) -> Any:
        while arguments and arguments[-1] is None:
            arguments = arguments[:-1]
        return answer(name, own, arguments)

    def single_method(self: Functions, *arguments: Any) -> Any:
        rows = method(self, *arguments)
        return rows[0][0] if len(rows) == 1 and len(rows[0]) == 1 else block_of(rows)

    return single_method if one_cell else method


for _name, (_method, _one_cell) in CONFIG["functions"].items():
    setattr(Functions, _method, method_of(_name, _method, _one_cell))

NAMES = frozenset(name.lower() for name in CONFIG["functions"]) | frozenset(
    f"{CONFIG['service']}.{method}".lower() for method, _ in CONFIG["functions"].values()
)


class Loaded(unohelper.Base, XJob, XServiceInfo):
    """The job that runs when a document has been loaded."""

    def __init__(self, context: Any) -> None:
        self.context = context

    def getImplementationName(self) -> str:
        return CONFIG["job"]  # type: ignore[no-any-return]

    def supportsService(self, name: str) -> bool:
        return bool(name == CONFIG["job"])

    def getSupportedServiceNames(self) -> tuple[str, ...]:
        return (CONFIG["job"],)

    def execute(self, arguments: Any) -> None:
        document = None
        for argument in arguments:
            if argument.Name == "Environment":
                document = next((v.Value for v in argument.Value if v.Name == "Model"), None)
        if document is None or not document.supportsService("com.sun.star.sheet.SpreadsheetDocument"):
            return
        repair(document, NAMES)
        if os.environ.get("RIGIDSHEET_RECALCULATE"):  # set for an office that only converts
            document.calculateAll()


g_ImplementationHelper = unohelper.ImplementationHelper()
g_ImplementationHelper.addImplementation(
    Functions, CONFIG["service"], (CONFIG["service"], "com.sun.star.sheet.AddIn")
)
g_ImplementationHelper.addImplementation(Loaded, CONFIG["job"], (CONFIG["job"],))
