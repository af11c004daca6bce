"""Puts the functions' names right in a document that was loaded from .xlsx.

Calc keeps RB_ARM in such a file as an unknown name. Adding a named range makes it read every formula with
an unknown name again, and by then it knows the add-in's names. Runs in the Python of the office.
"""

from __future__ import annotations

import re
from typing import Any

import uno

_TEXT = re.compile(r'"(?:[^"]|"")*"' + r"|'(?:[^']|'')*'" + r"|\{[^}]*\}|,")


def repair(document: Any, names: frozenset[str]) -> None:
    """Let Calc resolve `names` (lower case) in formulas, named expressions and conditional formats."""
    modified = document.isModified()
    ranges = document.NamedRanges
    for i in range(ranges.Count):
        named = ranges.getByIndex(i)
        if mentions(named.Content, names):
            named.setContent(named.Content)
    reread_formulas(ranges)
    for i in range(document.Sheets.Count):
        reread_conditions(document.Sheets.getByIndex(i), names)
    if not modified:
        document.setModified(False)


def mentions(text: str, names: frozenset[str]) -> bool:
    """Say whether a formula text calls one of the functions."""
    return any(word in names for word in re.findall(r"([\w.]+)\s*\(", text.lower()))


def reread_formulas(ranges: Any) -> None:
    """Make Calc read every formula that holds an unknown name again."""
    name = "rigidsheet_reading"
    while ranges.hasByName(name):
        name += "_"
    ranges.addNewByName(name, "0", uno.createUnoStruct("com.sun.star.table.CellAddress"), 0)
    ranges.removeByName(name)


def reread_conditions(sheet: Any, names: frozenset[str]) -> None:
    """Enter the formulas of conditional formats again; they keep a text of their own."""
    for conditions in sheet.ConditionalFormats.getConditionalFormats():
        for k in range(conditions.getCount()):
            entry = conditions.getByIndex(k)
            for attribute in ("Formula1", "Formula2"):
                text = getattr(entry, attribute, None)
                if isinstance(text, str) and mentions(text, names):
                    setattr(entry, attribute, with_semicolons(text))


def with_semicolons(text: str) -> str:
    """Return a formula as Calc reads it: semicolons between arguments, texts and arrays left alone."""
    return _TEXT.sub(lambda m: ";" if m[0] == "," else m[0], text)
