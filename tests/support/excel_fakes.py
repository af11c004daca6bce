"""The real xlwings over a small stand-in for pywin32: decorators, import of functions, and calls.

What runs is xlwings' own code: the decorators, the writer of VBA, the COM server's CallUDF, the conversion of
values, the Windows engine's cleaning of cells. What is made up is the layer below: COM objects, a range, a
book.
Not run: the last step, in which pywin32 turns a Python object into a VARIANT; tests assert the types instead.
"""

from __future__ import annotations

import atexit
import ctypes
import datetime as dt
import importlib
import re
import sys
from collections.abc import Iterator, Sequence
from contextlib import ExitStack, contextmanager
from types import ModuleType, SimpleNamespace
from typing import Any
from unittest import mock

EXPORTED = "rigidsheet.udf.excel"
MISSING = -2147352572  # how an argument left out arrives: the scode "parameter not found" as a whole number
NOT_THERE = -2147352565
XLWINGS_PARTS = ("xlwings.udfs", "xlwings.com_server", "xlwings._xlwindows", "xlwings._win32patch")


class ComError(Exception):
    """pywintypes.com_error: four arguments, the first one the code."""

    def __init__(self, *args: Any) -> None:
        super().__init__(*args)
        self.hresult = args[0] if args else None


class ComTime(dt.datetime):
    """pywintypes.TimeType, a datetime with a class of its own."""


def not_wrapped(_: Any) -> Any:
    raise ComError(NOT_THERE, "not one of ours", None, None)


def same(thing: Any = None, *_: Any, **__: Any) -> Any:
    return thing


def plain_class(name: str) -> type:
    return type(name, (), {})


def stand_ins() -> dict[str, ModuleType]:
    """Make the modules of pywin32, each with the few names xlwings looks up."""
    dispatch = plain_class("PyIDispatch")
    contents: dict[str, dict[str, Any]] = {
        "pywintypes": {"com_error": ComError, "error": OSError, "TimeType": ComTime, "IID": str},
        "pythoncom": {
            "CoInitialize": same,
            "__file__": "pythoncom",
            "com_error": ComError,
            "IID_IDispatch": "dispatch",
            "IID_IEnumVARIANT": "enumeration",
            "TypeIIDs": {"dispatch": dispatch},
            "VT_NULL": 1,
        },
        "win32api": {},
        "win32con": {},
        "win32event": {},
        "win32gui": {},
        "win32process": {"GetWindowThreadProcessId": lambda window: (1, 1)},
        "win32timezone": {"TimeZoneInfo": SimpleNamespace(utc=lambda: dt.UTC)},
        "win32com": {"__path__": []},
        "win32com.client": {
            "CDispatch": plain_class("CDispatch"),
            "CoClassBaseClass": plain_class("CoClassBaseClass"),
            "DispatchBaseClass": plain_class("DispatchBaseClass"),
            "Dispatch": same,
            "DispatchEx": same,
        },
        "win32com.server": {"__path__": []},
        "win32com.server.dispatcher": {},
        "win32com.server.exception": {"COMException": ComError},
        "win32com.server.policy": {"DefaultPolicy": plain_class("DefaultPolicy")},
        "win32com.server.util": {"wrap": same, "unwrap": not_wrapped},
    }
    made: dict[str, ModuleType] = {}
    for name, content in contents.items():
        made[name] = ModuleType(name)
        vars(made[name]).update(content)
        package, _, last = name.rpartition(".")
        if package:
            setattr(made[package], last, made[name])
    return made


class FakeRange:
    """A range as xlwings sees it: Value is one value, or a tuple of rows."""

    def __init__(self, rows: Sequence[Sequence[Any]]) -> None:
        block = tuple(map(tuple, rows))
        self.Value = block[0][0] if len(block) == len(block[0]) == 1 else block
        self.Row = self.Column = 1
        self.Rows = SimpleNamespace(Count=len(block))
        self.Columns = SimpleNamespace(Count=len(block[0]))
        self.Worksheet = SimpleNamespace(Parent=SimpleNamespace(Application=SimpleNamespace(Hwnd=1)))
        described = SimpleNamespace(iid="{00020846-0000-0000-C000-000000000046}")  # the interface Range
        self._oleobj_ = SimpleNamespace(GetTypeInfo=lambda: SimpleNamespace(GetTypeAttr=lambda: described))


class FakeBook:
    """A workbook into which xlwings imports: keeps the module and what the wizard is told."""

    def __init__(self, name: str) -> None:
        self.Name = name
        self.Worksheets: list[Any] = []
        self.module = ""
        self.wizard: dict[str, dict[str, Any]] = {}
        self.VBProject = SimpleNamespace(VBComponents=self)
        self.Application = SimpleNamespace(Version="16.0", MacroOptions=self._describe)

    def __call__(self, name: str) -> Any:
        raise ComError(NOT_THERE, f"no component {name}", None, None)

    def Remove(self, component: Any) -> None:
        raise AssertionError("there is no earlier module to remove")

    def Import(self, path: str) -> None:
        with open(path, encoding="utf-8") as file:
            self.module = file.read()

    def _describe(self, macro: str, **told: Any) -> None:
        self.wizard[macro.rpartition("!")[2]] = told


class FakeExcel:
    """What a test asks: call a function as a cell does, or import all of them into a book."""

    def __init__(self, udfs: ModuleType, server: Any) -> None:
        self.udfs = udfs
        self.server = server
        self.module = importlib.import_module(EXPORTED)

    def call(self, function: str, *arguments: Any) -> Any:
        """Call as the wrapper in VBA does; ranges as FakeRange, or their values, MISSING where left out."""
        return self.server.CallUDF(EXPORTED, function, arguments)

    def cell(self, function: str, *cells: Any) -> list[list[Any]]:
        """Call with rows or single values as ranges, as xlwings' own wrapper does; give rows back."""
        passed = [c if c is MISSING else FakeRange(c if isinstance(c, list) else [[c]]) for c in cells]
        return rows_of(self.call(function, *passed))

    def imported(self, book: str = "Sheet.xlsm") -> FakeBook:
        """Import the functions into a book, as the button of xlwings does."""
        made = FakeBook(book)
        self.udfs.import_udfs(EXPORTED, made)
        return made


TOKEN = re.compile(r'\s*("(?:[^"]|"")*"|TRUE|FALSE|-?\d+(?:\.\d+)?(?:[eE][-+]?\d+)?|)\s*([,)])')


def literal_call(formula: str) -> tuple[str, list[Any]] | None:
    """Return name and cells of a formula whose arguments are all constants; None for any other."""
    name, _, rest = formula.lstrip("=").partition("(")
    cells: list[Any] = []
    position = 0
    while position < len(rest):
        found = TOKEN.match(rest, position)
        if found is None:
            return None
        text, mark = found.groups()
        if text.startswith('"'):
            cells.append(text[1:-1].replace('""', '"'))
        else:
            cells.append(
                MISSING if not text else text == "TRUE" if text in ("TRUE", "FALSE") else float(text)
            )
        position = found.end()
        if mark == ")":
            return (name, cells) if position == len(rest) else None
    return None


def rows_of(answer: Any) -> list[list[Any]]:
    """Return what CallUDF gave as rows: it unpacks a single cell and a single row."""
    if not isinstance(answer, list):
        return [[answer]]
    if not isinstance(answer[0], list):
        return [answer]
    return answer


@contextmanager
def fake_excel() -> Iterator[FakeExcel]:
    """Give a FakeExcel; afterwards every module and attribute is as it was before."""
    import xlwings

    with ExitStack() as undo:
        # one by one: putting the whole table of modules back would drop what other code imports meanwhile
        made = stand_ins()
        for name in (*made, *XLWINGS_PARTS, EXPORTED):
            undo.callback(forget, name, sys.modules.pop(name, None))
        sys.modules.update(made)
        with mock.patch.multiple(
            ctypes, windll=mock.MagicMock(), oledll=mock.MagicMock(), PyDLL=mock.MagicMock(), create=True
        ):
            windows = importlib.import_module("xlwings._xlwindows")
        atexit.unregister(windows.cleanup)  # it would look for programs of Windows
        udfs = importlib.import_module("xlwings.udfs")
        server = importlib.import_module("xlwings.com_server")
        undo.callback(server.loop.close)
        undo.enter_context(
            mock.patch.multiple(xlwings, func=udfs.xlfunc, arg=udfs.xlarg, ret=udfs.xlret, create=True)
        )
        engines = xlwings.engines
        undo.enter_context(mock.patch.object(engines, "engines", list(engines.engines)))
        undo.enter_context(mock.patch.object(engines, "engines_by_name", dict(engines.engines_by_name)))
        engines.add(xlwings.Engine(impl=windows.engine))
        yield FakeExcel(udfs, server.XLPython())


def forget(name: str, before: ModuleType | None) -> None:
    """Take a module away again, or put back the one that was there."""
    package, _, last = name.rpartition(".")
    parent = sys.modules.get(package)
    if before is not None:
        sys.modules[name] = before
        if parent is not None:
            setattr(parent, last, before)
        return
    sys.modules.pop(name, None)
    if parent is not None and hasattr(parent, last):
        delattr(parent, last)
