"""Short forms for tests of the cell boundary: an answer that must be there, a refusal that must say why."""

from __future__ import annotations

import re
from typing import Any

from rigidsheet.udf.calling import call
from rigidsheet.udf.cells import Refusal


def answer(name: str, *cells: Any) -> Any:
    """Return the answer to a call that must not be refused."""
    found = call(name, list(cells))
    assert not isinstance(found, Refusal), found.reason
    return found


def flat(name: str, *cells: Any) -> list[Any]:
    """Return the cells of an answer one after the other."""
    found = answer(name, *cells)
    return [v for row in found for v in row] if isinstance(found, list) else [found]


def refused(name: str, cells: list[Any], *says: str, error: str = "#VALUE!") -> str:
    """Return the reason of a call that must be refused with `error` and every text of `says`."""
    found = call(name, cells)
    assert isinstance(found, Refusal), f"{name}{cells} gave {found}"
    assert found.error == error, found
    for text in says:
        assert text in found.reason, f"{text!r} is not in: {found.reason}"
    assert one_form(found.reason), found.reason
    assert len(found.reason) <= 255, found.reason
    return found.reason


# `argument` must be RULE; got VALUE. Remedy. (where) -- or a whole sentence, then remedy and place.
FORM = re.compile(
    r"(`[\w ]+` (must be|holds) \S.*|[A-Z][^`].*)[.?!](\.\.)?( \([^()]*(\([^()]*\)[^()]*)*\))?\Z", re.DOTALL
)


def one_form(reason: str) -> bool:
    """Say whether a reason has the one form of all sentences."""
    return FORM.match(reason) is not None and "  " not in reason and ".." not in reason.replace("...", "")
