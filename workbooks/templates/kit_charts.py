"""Native charts of the working sheets: curves over an input, and the sketch that is a drawing.

A `Curve` names two ranges (x and y) and how its line looks. `line_chart` is for results over a position or a
time, `bar_chart` for load cases; `sketch_chart` draws points of equal scale in both directions between -1 and 1,
so its points are given as parts of the largest reach. Curves differ by dashes and width, bars by how dark they
are, so that they can be told apart without colour.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any, Final

from openpyxl.chart import BarChart, Reference, ScatterChart, Series
from openpyxl.chart.data_source import StrRef
from openpyxl.chart.label import DataLabelList
from openpyxl.chart.layout import Layout, ManualLayout
from openpyxl.chart.marker import Marker
from openpyxl.chart.series import SeriesLabel
from openpyxl.chart.shapes import GraphicalProperties
from openpyxl.chart.text import RichText, Text
from openpyxl.chart.title import Title
from openpyxl.drawing.line import LineProperties
from openpyxl.drawing.text import (
    CharacterProperties,
    Font,
    Paragraph,
    ParagraphProperties,
    RegularTextRun,
)

from .kit_look import INK, SANS, SOFT

# Dash, width in points and colour of the curves of a chart, in order.
LINES: Final = (
    ("solid", 1.0, "7A9484"),
    ("sysDash", 1.25, "7A9484"),
    ("solid", 2.0, "2E4A3D"),
    ("dash", 1.25, "2E4A3D"),
    ("sysDot", 1.75, "A5622A"),
    ("lgDashDot", 1.25, "A5622A"),
)
# Fills of bars that stand side by side, dark to light.
SHADES: Final = ("2E4A3D", "A9BDB2", "FFFFFF", "5C6460")


@dataclass(frozen=True, slots=True)
class Curve:
    """A line through points; x and y are (sheet, column, first row, last row)."""

    name: str
    x: tuple[Any, int, int, int]
    y: tuple[Any, int, int, int]
    dash: str = "solid"
    width: float = 1.25
    color: str = INK
    marker: str = ""
    size: int = 6
    label: str = ""  # cell like Inputs!$R$6 whose text stands beside the first point
    side: str = "r"  # of the point: r, l, t, b


def _text(size: float, *, bold: bool = False, color: str = INK) -> CharacterProperties:
    return CharacterProperties(
        sz=int(size * 100), b=bold, solidFill=color, latin=Font(typeface=SANS), ea=Font(typeface=SANS)
    )


def _rich(size: float, *, color: str = INK) -> RichText:
    style = ParagraphProperties(defRPr=_text(size, color=color))
    return RichText(p=[Paragraph(pPr=style, endParaRPr=_text(size, color=color))])


def _title(text: str, size: float, *, bold: bool = False) -> Title:
    run = RegularTextRun(rPr=_text(size, bold=bold), t=text)
    paragraph = Paragraph(pPr=ParagraphProperties(defRPr=_text(size, bold=bold)), r=[run])
    return Title(tx=Text(rich=RichText(p=[paragraph])), overlay=False)


def _line(dash: str, width: float, color: str) -> LineProperties:
    line = LineProperties(w=int(width * 12700), solidFill=color, cap="flat")
    line.prstDash = dash
    return line


def _reference(place: tuple[Any, int, int, int]) -> Reference:
    sheet, column, first, last = place
    return Reference(sheet, min_col=column, min_row=first, max_row=last)


def _series(curve: Curve) -> Series:
    series = Series(_reference(curve.y), _reference(curve.x), title=curve.name)
    series.smooth = False
    properties = GraphicalProperties()
    if curve.width > 0.0:
        properties.line = _line(curve.dash, curve.width, curve.color)
    else:
        properties.line = LineProperties(noFill=True)
    series.graphicalProperties = properties
    series.marker = Marker(symbol=curve.marker or "none")
    if curve.marker:
        series.marker.size = curve.size
        series.marker.graphicalProperties = GraphicalProperties(solidFill=curve.color)
        series.marker.graphicalProperties.line = _line("solid", 0.75, curve.color)
    if curve.label:
        series.tx = SeriesLabel(strRef=StrRef(curve.label))
        series.dLbls = DataLabelList(dLblPos=curve.side, showSerName=True, showVal=False)
        series.dLbls.showCatName = series.dLbls.showLegendKey = series.dLbls.showPercent = False
        series.dLbls.txPr = _rich(8, color=curve.color)
    return series


def _plain(chart: Any, width: float, height: float) -> None:
    """Size a chart in mm, without a frame, with quiet axes and lines across only."""
    chart.width, chart.height = width / 10.0, height / 10.0
    frame = GraphicalProperties(noFill=True)
    frame.line = LineProperties(noFill=True)
    chart.graphical_properties = frame
    chart.roundedCorners = False
    chart.display_blanks = "gap"
    for axis in (chart.x_axis, chart.y_axis):
        axis.delete = False
        axis.graphicalProperties = GraphicalProperties(ln=_line("solid", 0.75, SOFT))
        axis.txPr = _rich(8, color=INK)
        axis.majorTickMark = "out"
    chart.y_axis.majorGridlines.spPr = GraphicalProperties(ln=_line("solid", 0.5, "E1E5E2"))
    chart.x_axis.majorGridlines = None


def _bare_chart(width: float, height: float) -> ScatterChart:
    chart = ScatterChart()
    chart.style, chart.scatterStyle = 2, "lineMarker"
    _plain(chart, width, height)
    return chart


def line_chart(
    page: Any,
    anchor: str,
    curves: Sequence[Curve],
    *,
    size: tuple[float, float],
    title: str,
    x_title: str,
    y_title: str,
) -> ScatterChart:
    """Put curves over one axis into a page; size in mm."""
    chart = _bare_chart(*size)
    chart.title = _title(title, 9.5, bold=True)
    chart.x_axis.title, chart.y_axis.title = _title(x_title, 8), _title(y_title, 8)
    chart.x_axis.number_format, chart.y_axis.number_format = "0", "#,##0"
    chart.x_axis.numFmt.sourceLinked = chart.y_axis.numFmt.sourceLinked = False
    chart.x_axis.tickLblPos = chart.y_axis.tickLblPos = "low"
    chart.legend.position = "r"
    chart.legend.txPr = _rich(8)
    for curve in curves:
        chart.series.append(_series(curve))
    page.sheet.add_chart(chart, anchor)
    return chart


def sketch_chart(
    page: Any,
    anchor: str,
    curves: Sequence[Curve],
    *,
    width: float,
    title: str,
    window: tuple[float, float, float, float] = (-1.05, 1.05, -0.65, 1.05),
) -> ScatterChart:
    """Put a drawing of equal scale into a page: `width` in mm for the window (left, right, low, high)."""
    left, right, low, high = window
    drawn, head = width * (high - low) / (right - left), 7.0
    chart = _bare_chart(width, drawn + head)
    chart.title = _title(title, 9.5, bold=True)
    chart.legend = None
    share = drawn / (drawn + head)
    chart.layout = Layout(
        manualLayout=ManualLayout(
            layoutTarget="inner",
            xMode="edge",
            yMode="edge",
            x=0.01,
            y=0.99 - share * 0.98,
            w=0.98,
            h=share * 0.98,
        )
    )
    for axis, lowest, highest in ((chart.x_axis, left, right), (chart.y_axis, low, high)):
        axis.scaling.min, axis.scaling.max = lowest, highest
        axis.delete = True
        axis.majorGridlines = None
    for curve in curves:
        chart.series.append(_series(curve))
    page.sheet.add_chart(chart, anchor)
    return chart


def bar_chart(
    page: Any,
    anchor: str,
    names: tuple[Any, int, int, int],
    groups: Sequence[tuple[str, int]],
    *,
    size: tuple[float, float],
    title: str,
    y_title: str,
) -> BarChart:
    """Put bars side by side for each name: `names` is (sheet, column, first row, last row), as in a `Curve`.

    Each group is its name and its column in the same rows; groups differ by how dark they are, with an outline.
    """
    sheet, _, first, last = names
    chart = BarChart()
    chart.type, chart.grouping, chart.style, chart.gapWidth, chart.overlap = "col", "clustered", 2, 60, 0
    _plain(chart, *size)
    chart.title = _title(title, 9.5, bold=True)
    chart.y_axis.title = _title(y_title, 8)
    chart.y_axis.number_format = "#,##0"
    chart.y_axis.numFmt.sourceLinked = False
    chart.x_axis.tickLblPos = chart.y_axis.tickLblPos = "low"
    chart.legend.position = "t"
    chart.legend.txPr = _rich(8)
    for (name, column), shade in zip(groups, SHADES, strict=False):
        series = Series(_reference((sheet, column, first, last)), title=name)
        series.graphicalProperties = GraphicalProperties(solidFill=shade)
        series.graphicalProperties.line = _line("solid", 0.75, INK)
        chart.series.append(series)
    chart.set_categories(_reference(names))
    page.sheet.add_chart(chart, anchor)
    return chart
