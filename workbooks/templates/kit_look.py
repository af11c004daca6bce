"""How a working sheet looks: type, lines, tints, number formats, and the cell styles made of them.

Every style has a name that starts with "RS" and is written into the workbook, so that a person who adds rows
finds the same styles in the spreadsheet's own list. Inputs are told apart without colour: a closed box of a
medium line around the value, and a mark in front of the row.
"""

from __future__ import annotations

from typing import Any, Final

from openpyxl.styles import Alignment, Border, Font, NamedStyle, PatternFill, Side

SANS, SERIF = "Arial", "Times New Roman"  # both have twins of the same widths where they are missing
INK, SOFT, RULE, HAIR = "1B1F1D", "5C6460", "2E4A3D", "BCC4BF"
TINT, BAND = "FFFBEA", "EEF2EF"  # inputs, table heads
MARK: Final = "►"

# Whole numbers from a thousand on, else three decimals: four digits or more of what a designer works with.
AUTO: Final = "[>=1000]#,##0;[<=-1000]-#,##0;0.000"
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


def _under(style: str = "hair", color: str = SOFT) -> Any:
    return Border(bottom=_side(style, color))


def _fill(color: str) -> Any:
    return PatternFill("solid", start_color=color, end_color=color)


_MIDDLE: Final[dict[str, Any]] = {"vertical": "center"}
LEFT = Alignment(horizontal="left", **_MIDDLE)
RIGHT = Alignment(horizontal="right", **_MIDDLE)
CENTER = Alignment(horizontal="center", **_MIDDLE)
WRAP = Alignment(horizontal="left", vertical="top", wrap_text=True)
HEAD = Alignment(horizontal="center", vertical="center", wrap_text=True)
INDENT = Alignment(horizontal="left", indent=1, **_MIDDLE)


def _styles() -> dict[str, dict[str, Any]]:
    input_box = _box("medium")
    return {
        "RS title": {"font": _font(17, bold=True, color=RULE), "alignment": LEFT},
        "RS line": {"font": _font(9, color=SOFT), "alignment": LEFT},
        "RS rule": {"font": _font(9), "border": Border(bottom=_side("medium", RULE))},
        "RS field name": {"font": _font(7, color=SOFT), "alignment": LEFT, "border": _under("hair", HAIR)},
        "RS field": {"font": _font(9), "alignment": LEFT, "fill": _fill(TINT), "border": input_box},
        "RS field shown": {"font": _font(9), "alignment": LEFT, "border": _under()},
        "RS heading": {
            "font": _font(10.5, bold=True, color=RULE),
            "alignment": LEFT,
            "border": _under("thin", RULE),
        },
        "RS column": {"font": _font(7.5, color=SOFT), "alignment": CENTER},
        "RS label": {"font": _font(), "alignment": LEFT},
        "RS mark": {"font": _font(7, color=RULE), "alignment": CENTER},
        "RS symbol": {"font": _font(10, italic=True, name=SERIF), "alignment": CENTER},
        "RS input": {
            "font": _font(9.5, bold=True),
            "alignment": RIGHT,
            "fill": _fill(TINT),
            "border": input_box,
        },
        "RS input text": {
            "font": _font(9.5, bold=True),
            "alignment": CENTER,
            "fill": _fill(TINT),
            "border": input_box,
        },
        "RS entry": {"font": _font(8.5), "alignment": RIGHT, "fill": _fill(TINT), "border": _box("thin")},
        "RS entry text": {"font": _font(8.5), "alignment": LEFT, "fill": _fill(TINT), "border": _box("thin")},
        "RS unit": {"font": _font(9), "alignment": CENTER, "border": _box("dotted", SOFT)},
        "RS unit fixed": {"font": _font(9, color=SOFT), "alignment": LEFT},
        "RS si": {"font": _font(8.5, color=SOFT), "alignment": RIGHT, "number_format": "General"},
        "RS note": {"font": _font(8, italic=True, color=SOFT), "alignment": INDENT},
        "RS value": {"font": _font(9), "alignment": RIGHT, "number_format": AUTO, "border": _under()},
        "RS result": {
            "font": _font(9.5, bold=True),
            "alignment": RIGHT,
            "number_format": AUTO,
            "border": Border(bottom=_side("thin")),
        },
        "RS text": {"font": _font(9), "alignment": LEFT, "border": _under()},
        "RS head": {
            "font": _font(8, bold=True),
            "alignment": HEAD,
            "fill": _fill(BAND),
            "border": Border(top=_side("thin", RULE), bottom=_side("thin", RULE)),
        },
        "RS number": {
            "font": _font(8.5),
            "alignment": RIGHT,
            "number_format": AUTO,
            "border": _under("hair", HAIR),
        },
        "RS verdict": {"font": _font(9.5, bold=True), "alignment": CENTER, "border": _box("thin")},
        "RS step": {"font": _font(8.5, name="Courier New"), "alignment": LEFT},
        "RS prose": {"font": _font(8.5), "alignment": WRAP},
        "RS status": {"font": _font(9, bold=True), "alignment": LEFT},
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
