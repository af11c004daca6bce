"""The frozen records that declare a cell function; everything a host needs is derived from them."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from enum import Enum
from typing import Any, Final, Protocol

from .cells import Cell
from .limits import Limit
from .units.kinds import Kind

Reader = Callable[[Cell], Any]


class Role(Enum):
    """How the frame of a call (planar or spatial, one row or many) treats what a reader returns."""

    SCALAR = "scalar"  # float or (n,)
    VECTOR = "vector"  # (2,), (3,), (n, 2) or (n, 3)
    SPACE = "space"  # always x y z
    SPIN = "spin"  # float or (n, 1) about z; (3,) or (n, 3)
    INERTIA = "inertia"  # float or (n,) about z; (3, 3)
    OFFSET = "offset"  # float, (3,) or (n, 3); a column of distances lies along x
    BUNDLE = "bundle"  # columns inside a record: amounts, sizes
    OTHER = "other"  # records, tables, words: left alone


class Shape(Protocol):
    """What an argument may look like: compiles into a reader, and words itself for the help."""

    @property
    def role(self) -> Role: ...

    def reader(self, argument: str, limit: Limit | None) -> Reader:
        """Return the closure that turns a cell into what the kernel takes."""

    def words(self) -> str:
        """Return what to type, short, for the function wizard."""

    def sample(self) -> Cell:
        """Return a good cell, for the sweeps over every function."""


class _Required:
    def __repr__(self) -> str:
        return "REQUIRED"


REQUIRED: Final = _Required()


@dataclass(frozen=True, slots=True)
class Arg:
    """One argument of a cell function.

    `default` is handed to the kernel as it stands when the argument is omitted.
    """

    name: str
    shape: Shape
    help: str
    limit: Limit | None = None
    default: Any = REQUIRED

    @property
    def optional(self) -> bool:
        return self.default is not REQUIRED


class Form(Enum):
    """The form in which one result leaves a function."""

    SCALAR = "scalar"  # one cell, or a column
    VECTOR = "vector"  # a row of x y z (x y when every vector came with two numbers)
    SPACE = "space"  # always x y z
    SPIN = "spin"  # about z as one cell when planar, else like a vector
    TENSOR = "tensor"  # three rows of three; about z as one cell when the inertia came as one number
    TEXT = "text"  # a word or a sentence
    TEXTS = "texts"  # one text a row
    TABLE = "table"  # rows of texts and numbers, header first


@dataclass(frozen=True, slots=True)
class Field:
    """One result: its name (a word for `what`), its kind and its form."""

    name: str
    kind: Kind | None
    help: str
    form: Form = Form.SCALAR
    in_record: bool = True


@dataclass(frozen=True, slots=True)
class Row:
    """One line of a result whose rows are only known when it is solved."""

    label: str
    value: Any
    kind: Kind | None


@dataclass(frozen=True, slots=True)
class Result:
    """What a function gives: one field, several to choose from with `what`, or open rows.

    With several fields the kernel returns an object whose attributes (blanks as underscores) carry them.
    `default` is the field given when `what` is omitted; None means the whole record.
    `gathers` means that columns go into one answer, not a row each.
    `open` means that the kernel returns a list of `Row`; `fields` then only document what can appear.
    """

    fields: tuple[Field, ...]
    default: str | None = None
    open: bool = False
    gathers: bool = False


# These stand in `args` where the derived argument goes when that is not the end.
WHAT: Final = "what"
UNIT: Final = "unit"


@dataclass(frozen=True, slots=True)
class Example:
    """A formula in the demo scenario and the sentence that says what it answers."""

    formula: str
    says: str


@dataclass(frozen=True, slots=True)
class CellFunction:
    """The one declaration of a cell function.

    `kernel` takes what the readers of `args` return, in order. `working` takes the same values as a tuple,
    and the kernel's answer, and gives the lines a reviewer follows.
    """

    name: str
    group: str
    line: str
    args: tuple[Arg | str, ...]
    result: Result
    kernel: Callable[..., Any]
    working: Callable[[tuple[Any, ...], Any], Sequence[str]]
    source: str
    examples: tuple[Example, ...]
