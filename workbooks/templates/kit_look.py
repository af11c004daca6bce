"""How a working sheet looks: type, lines, tints, number formats, and the cell styles made of them.

Every style has a name that starts with "RS" and is written into the workbook, so that a person who adds rows
finds the same styles in the spreadsheet's own list. Inputs are told apart without colour: a closed box of a
medium line around the value, and a mark in front of the row.
"""

from __future__ import annotations

import re
from typing import Any, Final

from openpyxl.cell.rich_text import CellRichText, TextBlock
from openpyxl.cell.text import InlineFont
from openpyxl.styles import Alignment, Border, Font, NamedStyle, PatternFill, Side

SANS, SERIF = "Arial", "Times New Roman"  # both have twins of the same widths where they are missing
INK, SOFT, RULE, HAIR = "1B1F1D", "5C6460", "2E4A3D", "BCC4BF"
TINT, BAND = "FFFBEA", "EEF2EF"  # inputs, table heads
MARK: Final = "►"

# Conditions in a format can hide a minus sign in one program or the other, so there are none.
AUTO: Final = "#,##0.000"
PERCENT: Final = "0.00%"


def _font(
    size: float = 9.0, *, bold: bool = False, italic: bool = False, color: str = INK, name: str = SANS
) -> Any:
    return Font(name=name, size=size, bold=bold, italic=italic, color=color)


def _side(style: str = "thin", color: str = INK) -> Any:
    return Side(style=style, color=color)


def _box(style: str = "thin", color: str = INK) -> Any:
    side = _side(style, color)
    return Border(left=side, right=side, top=side, bottom=side)


def _under(style: str = "hair", color: str = HAIR) -> Any:
    return Border(bottom=_side(style, color))


def _fill(color: str) -> Any:
    return PatternFill("solid", start_color=color, end_color=color)


_MIDDLE: Final[dict[str, Any]] = {"vertical": "center"}
LEFT = Alignment(horizontal="left", **_MIDDLE)
RIGHT = Alignment(horizontal="right", **_MIDDLE)
INNER = Alignment(horizontal="right", indent=1, **_MIDDLE)  # keeps digits off the lines of a box
CENTER = Alignment(horizontal="center", **_MIDDLE)
HEAD = Alignment(horizontal="center", vertical="center", wrap_text=True)
WRAP = Alignment(horizontal="left", vertical="top", wrap_text=True)
FOOT = Alignment(horizontal="left", vertical="bottom")
INDENT = Alignment(horizontal="left", indent=1, **_MIDDLE)


def _styles() -> dict[str, dict[str, Any]]:
    return _page_styles() | _input_styles() | _result_styles()


def _page_styles() -> dict[str, dict[str, Any]]:
    """Titles, headings, labels and prose."""
    return {
        "RS title": {"font": _font(17, bold=True, color=RULE), "alignment": LEFT},
        "RS line": {"font": _font(9, color=SOFT), "alignment": LEFT},
        "RS rule": {"font": _font(9), "border": Border(bottom=_side("medium", RULE))},
        "RS field name": {"font": _font(7, color=SOFT), "alignment": FOOT},
        "RS field shown": {"font": _font(9), "alignment": LEFT, "border": _under()},
        "RS heading": {
            "font": _font(10.5, bold=True, color=RULE),
            "alignment": LEFT,
            "border": _under("thin", RULE),
        },
        "RS column": {"font": _font(7.5, color=SOFT), "alignment": CENTER},
        "RS head": {
            "font": _font(8, bold=True),
            "alignment": HEAD,
            "fill": _fill(BAND),
            "border": Border(top=_side("thin", RULE), bottom=_side("thin", RULE)),
        },
        "RS label": {"font": _font(), "alignment": LEFT},
        "RS mark": {"font": _font(7, color=RULE), "alignment": CENTER},
        "RS symbol": {"font": _font(10, italic=True, name=SERIF), "alignment": CENTER},
        "RS note": {"font": _font(8, italic=True, color=SOFT), "alignment": INDENT},
        "RS step": {"font": _font(8.5), "alignment": WRAP},
        "RS prose": {"font": _font(8.5), "alignment": LEFT},
        "RS status": {"font": _font(9, bold=True), "alignment": LEFT},
    }


def _input_styles() -> dict[str, dict[str, Any]]:
    """Cells that a person fills in."""
    input_box = _box("medium")
    return {
        "RS field": {"font": _font(9), "alignment": LEFT, "fill": _fill(TINT), "border": input_box},
        "RS input": {
            "font": _font(9.5, bold=True),
            "alignment": INNER,
            "fill": _fill(TINT),
            "border": input_box,
        },
        "RS input text": {
            "font": _font(9.5, bold=True),
            "alignment": CENTER,
            "fill": _fill(TINT),
            "border": input_box,
        },
        "RS entry": {"font": _font(8.5), "alignment": INNER, "fill": _fill(TINT), "border": _box("thin")},
        "RS entry text": {
            "font": _font(8.5),
            "alignment": INDENT,
            "fill": _fill(TINT),
            "border": _box("thin"),
        },
        "RS unit": {"font": _font(9), "alignment": CENTER, "border": _box("hair", SOFT)},
    }


def _result_styles() -> dict[str, dict[str, Any]]:
    """Cells that are worked out."""
    return {
        "RS unit fixed": {"font": _font(9, color=SOFT), "alignment": LEFT},
        "RS si": {"font": _font(8.5, color=SOFT), "alignment": RIGHT, "number_format": "General"},
        "RS value": {"font": _font(9), "alignment": RIGHT, "number_format": AUTO, "border": _under()},
        "RS result": {
            "font": _font(9.5, bold=True),
            "alignment": RIGHT,
            "number_format": AUTO,
            "border": Border(bottom=_side("thin")),
        },
        "RS text": {"font": _font(9), "alignment": LEFT, "border": _under()},
        "RS number": {
            "font": _font(8.5),
            "alignment": RIGHT,
            "number_format": AUTO,
            "border": _under(),
        },
        "RS total": {
            "font": _font(8.5, bold=True),
            "alignment": RIGHT,
            "number_format": AUTO,
            "border": Border(top=_side("thin", RULE)),
        },
        "RS verdict": {"font": _font(9.5, bold=True), "alignment": CENTER, "border": _box("thin")},
    }


def add_styles(book: Any) -> None:
    """Put the styles into a workbook, and make its standard type ours: column widths count in its digits."""
    normal = book._named_styles["Normal"]
    normal.font = Font(name=SANS, size=10)
    for name, parts in _styles().items():
        style = NamedStyle(name=name)
        for part, value in parts.items():
            setattr(style, part, value)
        book.add_named_style(style)


def rich(text: str, size: float = 9.0, *, italic: bool = False, serif: bool = False, color: str = INK) -> Any:
    """Return a text in which x_1 and x_{max} stand with an index; plain text stays plain."""
    if "_" not in text:
        return text

    def run(piece: str, low: bool) -> Any:
        font = InlineFont(rFont=SERIF if serif else SANS, sz=size, i=italic or None, color=color)
        font.vertAlign = "subscript" if low else None
        return TextBlock(font, piece)

    pieces = INDEX.split(text)
    return CellRichText([run(piece.strip("{}"), k % 2 == 1) for k, piece in enumerate(pieces) if piece])


# An index hangs on a single letter, so that names of functions stay as they are.
INDEX: Final = re.compile(r"(?<=\b\w)_(\{[^}]*\}|\w)")
