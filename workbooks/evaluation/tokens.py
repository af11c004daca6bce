"""The tokens of a formula text: names of functions, references moved to another cell."""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator
from typing import Final, TypeAlias

from ..addresses import COLUMNS, ROWS, column_letters, column_number

# A function name as the file spells it -> the name of one of our functions, or None.
Resolver: TypeAlias = Callable[[str], str | None]

PREFIXES: Final = ("_XLFN.", "_XLWS.", "_XLUDF.", "_XLL.", "_XLPM.")
TOKEN: Final = re.compile(
    r"""
    (?P<string>"(?:[^"]|"")*")
  | (?P<space>\s+)
  | (?P<where>'(?:[^']|'')*'!|\[[^\]]*\][^\s'!(),;+\-*/&=<>^"{}]*!|[\w.?\\]+(?::[\w.?\\]+)?!)?
    (?: (?P<ref>\$?[A-Za-z]{1,3}\$?[1-9][0-9]{0,6}(?::\$?[A-Za-z]{1,3}\$?[1-9][0-9]{0,6})?(?![\w.(\\?])
          |\$?[A-Za-z]{1,3}:\$?[A-Za-z]{1,3}(?![\w.(\\?])
          |\$?[1-9][0-9]*:\$?[1-9][0-9]*(?![\w.]))
      | (?P<call>[A-Za-z_\\\u00a1-\U0010ffff][\w.\\?]*)(?P<gap>\s*)\(
      | (?P<name>[A-Za-z_\\\u00a1-\U0010ffff][\w.\\?]*)
      | (?P<error>\#(?:N/A|[A-Za-z0-9_/]+[!?]?)) )
  | (?P<number>[0-9]+(?:\.[0-9]*)?(?:[eE][+-]?[0-9]+)?|\.[0-9]+(?:[eE][+-]?[0-9]+)?)
  | (?P<array>\{(?:[^{}"]|"(?:[^"]|"")*")*\})
  | (?P<op><=|>=|<>|.)
    """,
    re.VERBOSE | re.DOTALL,
)


def canonical(name: str) -> str:
    """Return the upper-case name without the prefixes that files put before newer or loaded functions."""
    upper = name.upper()
    while upper.startswith(PREFIXES):
        upper = upper.partition(".")[2]
    return upper


def resolver(names: Iterator[str] | tuple[str, ...]) -> Resolver:
    """Return a reader of function names: any case, the prefixes of files, the long names of Calc."""
    known = {name.upper(): name for name in names}
    tight = {name.replace("_", ""): known[name] for name in known}

    def resolve(name: str) -> str | None:
        upper = canonical(name)
        found = known.get(upper)
        if found is None and "." in upper:
            last = upper.rpartition(".")[2]
            found = known.get(last) or tight.get(last.replace("_", ""))
        return found

    return resolve


def shifted(text: str, rows: int, columns: int) -> str:
    """Return the formula as it reads in a cell that many rows down and columns to the right."""

    def one(token: re.Match[str]) -> str:
        reference = token["ref"]
        if reference is None:
            return token[0]
        return (token["where"] or "") + _PIECE.sub(lambda piece: _moved(piece, rows, columns), reference)

    return TOKEN.sub(one, text)


_PIECE: Final = re.compile(r"(\$?)([A-Za-z]{1,3})?(?:(\$?)([1-9][0-9]*))?(?=:|$)")


def _moved(piece: re.Match[str], rows: int, columns: int) -> str:
    letters, digits = piece[2] or "", piece[4] or ""
    fixed_column, fixed_row = piece[1], piece[3] or ""
    if letters and not fixed_column:
        letters = column_letters((column_number(letters) + columns - 1) % COLUMNS + 1)
    row_is_fixed = fixed_row if letters else fixed_column
    if digits and not row_is_fixed:
        digits = str((int(digits) + rows - 1) % ROWS + 1)
    return fixed_column + letters + fixed_row + digits
