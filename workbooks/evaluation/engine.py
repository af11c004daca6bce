"""The evaluation engine behind the smallest interface: it computes and no more."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Any, Final, Protocol, TypeAlias

from rigidsheet.udf.cells import Block, Cell, CellError, Value

from ..errors import FileRefused

# Gets the arguments as cells; gives a value or a block. An error is a CellError.
Callback: TypeAlias = Callable[..., "Value | Block"]


class Sheets(Protocol):
    """A loaded workbook."""

    def put(self, sheet: str, row: int, column: int, value: float | str | bool) -> None:
        """Set an input cell."""

    def run(self) -> None:
        """Work out every formula."""

    def value(self, sheet: str, row: int, column: int) -> Value:
        """Return what a cell holds; an error of an unlawful kind comes as CellError('?kind')."""


class Engine(Protocol):
    """What works formulas out."""

    def knows(self, function: str) -> bool:
        """Tell whether a built-in function of this name exists."""

    def open(self, package: bytes, functions: Mapping[str, Callback], *, date1904: bool = False) -> Sheets:
        """Load a workbook whose formulas may call the given functions."""


KINDS: Final = {
    "Value": "#VALUE!",
    "Num": "#NUM!",
    "Na": "#N/A",
    "Div": "#DIV/0!",
    "Ref": "#REF!",
    "Name": "#NAME?",
    "Null": "#NULL!",
}
_BACK: Final = {text: {"type": "Error", "kind": kind} for kind, text in KINDS.items()}


def _from_engine(value: Any) -> Cell:
    """Return a value of the engine as a cell."""
    kind = type(value)
    if kind is float or kind is str or kind is bool or value is None:
        return value  # type: ignore[no-any-return]
    if kind is int:
        return float(value)
    if kind is dict:
        word = str(value.get("kind", ""))
        return CellError(KINDS.get(word, f"?{word}"))
    if kind is list:
        if len(value) == 1 and len(value[0]) == 1:
            return _from_engine(value[0][0])
        block: Any = [
            [item if type(item) is float or item is None else _from_engine(item) for item in row]
            for row in value
        ]
        return block  # type: ignore[no-any-return]
    raise FileRefused(f"the engine gave a value of an unknown kind ({kind.__name__})")


def _to_engine(value: Value | Block) -> Any:
    if isinstance(value, list):
        return [[_to_engine(item) for item in row] for row in value]
    if isinstance(value, CellError):
        return _BACK.get(value.text, _BACK["#VALUE!"])
    return value


class FormualizerSheets:
    """A workbook loaded into formualizer."""

    def __init__(self, workbook: Any) -> None:
        self._workbook = workbook

    def put(self, sheet: str, row: int, column: int, value: float | str | bool) -> None:
        """Set an input cell."""
        self._workbook.set_value(sheet, row, column, value)

    def run(self) -> None:
        """Work out every formula; refuse when the engine left anything of the file out."""
        left_out = self._workbook.name_import_diagnostics or self._workbook.sheet_import_diagnostics
        if left_out:
            raise FileRefused(f"the engine cannot read a part of the workbook: {str(left_out[0])[:120]}")
        try:
            self._workbook.evaluate_all()
        except Exception as error:  # the engine's own classes: a formula it cannot work out at all
            raise FileRefused(f"the engine cannot work the workbook out: {str(error)[:160]}") from None

    def value(self, sheet: str, row: int, column: int) -> Value:
        """Return what a cell holds."""
        value = _from_engine(self._workbook.get_value(sheet, row, column))
        if isinstance(value, list):
            return CellError("?Array")
        return value  # type: ignore[return-value]


class Formualizer:
    """The engine formualizer in single-thread mode."""

    def __init__(self) -> None:
        import formualizer

        self._library = formualizer
        self._known: dict[str, bool] = {}

    def knows(self, function: str) -> bool:
        """Tell whether a built-in function exists: its name cannot be registered again."""
        found = self._known.get(function)
        if found is None:
            try:
                self._library.Workbook().register_function(function, lambda *_: 0.0)
                found = False
            except Exception as error:
                found = "conflicts" in str(error)
            self._known[function] = found
        return found

    def open(
        self, package: bytes, functions: Mapping[str, Callback], *, date1904: bool = False
    ) -> FormualizerSheets:
        """Load a workbook whose formulas may call the given functions."""
        library = self._library
        settings = library.EvaluationConfig()
        settings.enable_parallel = False  # callbacks on the main thread, and several times faster
        if date1904:
            settings.date_system = "1904"
        try:
            workbook = library.Workbook.from_bytes(
                package, config=library.WorkbookConfig(eval_config=settings)
            )
        except Exception as error:
            raise FileRefused(f"the engine cannot load the workbook: {str(error)[:160]}") from None
        workbook.set_temporal_egress("serial")
        for name, function in functions.items():
            workbook.register_function(name, _adapted(function), min_args=0, max_args=None)
        return FormualizerSheets(workbook)


def _adapted(function: Callback) -> Callable[..., Any]:
    def called(*values: Any) -> Any:
        plain = _PLAIN.issuperset(map(type, values))
        answer = function(*values) if plain else function(*map(_from_engine, values))
        return answer if type(answer) in _PLAIN else _to_engine(answer)

    return called


_PLAIN: Final = frozenset({float, str})
