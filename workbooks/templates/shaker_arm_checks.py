"""The shaker arm's load cases, checks and charts."""

from __future__ import annotations

from typing import Any, Final

from .kit import Book, Page
from .kit_charts import LINES, Curve, line_chart
from .kit_checks import COLUMNS as CHECK_COLUMNS
from .kit_checks import CaseTable, Check, Checks
from .shaker_arm_inputs import CASES, Given
from .shaker_arm_tables import ANGLE, Table
from .shaker_arm_working import Looked, Work

# Columns of the table of load cases; the crank angle of each value stands right of it.
COLUMN: Final = {"sensor": 4, "lift": 6, "slip": 8, "side": 10, "thrust": 12}
HEADS: Final = (
    "Sensor [g]",
    "Taken off a foot [-]",
    "Friction needed [-]",
    "Pusher: side [N]",
    "Pusher: thrust [N]",
)


def checks(book: Book, given: Given, work: Work, arm: Table, tray: Table, looked: Looked) -> None:
    """Write load cases, checks and charts."""
    page = book.page("Checks", CHECK_COLUMNS, landscape=True)
    page.title_block()
    head = page.row
    page.sheet.row_dimensions[head].height = 20.0
    page.row += 1
    page.section("Load cases: largest over one turn of the crank")
    cases = _load_cases(book, page, work, arm, tray)
    page.section("Checks")
    table = Checks(book, page, "at crank angle [deg]")
    for check in (*_machine(given, work, cases), *_calculation(given, work, looked)):
        table.add(check)
    missing = "Not checked yet: inputs are missing or refused."
    page.put(2, f'=IF({book.ready_ref}=1,{table.end()},"{missing}")', "RS status", row=head)
    book.name("verdict", page.at(2, head))
    page.section("Over one turn of the crank")
    _charts(page, given, work, arm, tray)


def _load_cases(book: Book, page: Page, work: Work, arm: Table, tray: Table) -> CaseTable:
    at = "at θ [deg]"
    heads = [word for head in HEADS for word in (head, at)]
    table = CaseTable(book, page, ("Load case", "Crank", *heads), height=25.0)
    for k, case in enumerate(CASES):
        values: list[tuple[str, str]] = []
        for key in COLUMN:
            source = tray if key in tray.starts else arm
            cells, here = source.case(key, k), page.at(4 + len(values))
            values.append((f"MAX({cells})", "0.0" if key in ("side", "thrust") else "0.000"))
            values.append((f"INDEX({source.column(ANGLE)},MATCH({here},{cells},0))", "0"))
        speed = f'ROUND({work.speeds[k]}*30/PI(),1)&" rpm"'
        slows = f'IF({work.accelerations[k]}=0,""," "&ROUND({work.accelerations[k]},0)&" rad/s²")'
        table.add(case, book.guarded(f"{speed}&{slows}"), values)
    return table


def _machine(given: Given, work: Work, cases: CaseTable) -> list[Check]:
    def found(key: str) -> dict[str, Any]:
        column = COLUMN[key]
        names = {
            "case": cases.envelope(column, "governing"),
            "at": cases.beside(column, "governing", column + 1),
        }
        return {"demand": cases.envelope(column, "magnitude"), **names}

    gravity = work.gravity.si
    sensor, side, thrust = found("sensor"), found("side"), found("thrust")
    sensor["demand"] += f"*{gravity}"
    factor = {key: given[f"factor_{key}"].si for key in ("sensor", "lift", "slip", "pusher")}
    return [
        Check.against(
            "Sensor: acceleration within its range",
            si="m/s^2", capacity=given["sensor_limit"], name="sensor", required=factor["sensor"], **sensor,
        ),
        Check(
            "Tray feet: weight taken off, lifts off at 1",
            capacity="1", name="lift", required=factor["lift"], unit="", **found("lift"),
        ),
        Check(
            "Tray: friction needed against that of the mat",
            capacity=given["friction"].si, name="slip", required=factor["slip"], unit="", **found("slip"),
        ),
        Check.against(
            "Pusher: side load of its guide",
            si="N", capacity=given["guide_rating"], name="side", required=factor["pusher"], **side,
        ),
        Check.against(
            "Pusher: thrust of its cylinder",
            si="N", capacity=given["thrust_rating"], name="thrust", required=factor["pusher"], **thrust,
        ),
        Check.against(
            "Crank turns right round: r + |e| within l",
            f"{given['crank'].si}+ABS({given['guide'].si})", "m", given["arm"], "turns",
        ),
    ]  # fmt: skip


def _calculation(given: Given, work: Work, looked: Looked) -> list[Check]:
    """Return the checks of the calculation itself."""
    size = f"({given['crank'].si}*({work.speeds[1]}^2+ABS({work.accelerations[-1]})))"
    stray = f"100*ABS({looked.residual})/{size}"
    return [
        Check("Far end keeps to its guide: stray acceleration", stray, '"%"', "0.001", "guide", plain=True),
        Check(
            "Tables against the functions: gap",
            f"100*MAX({looked.gaps})",
            '"%"',
            "0.001",
            "agreement",
            plain=True,
        ),
    ]


def _charts(page: Page, given: Given, work: Work, arm: Table, tray: Table) -> None:
    """Draw what the sensor reads, and below it what keeps the tray down and in its place."""
    limit = f"{given['sensor_limit'].si}/{work.gravity.si}"
    words = ("What the sensor reads, against its range", "g", "rated range")
    _chart(page, arm, "sensor", limit, words, f"B{page.row}", (284.0, 62.0))
    page.skip(14)
    page.page_break()
    page.section("Over one turn of the crank: the tray")
    words = ("Share of its weight that the motion takes off the worse foot", "share", "lifts off")
    _chart(page, tray, "lift", "1", words, f"B{page.row}", (284.0, 80.0))
    words = ("Friction coefficient that the tray needs", "coefficient", "friction of the mat")
    _chart(page, tray, "slip", given["friction"].si, words, f"B{page.row + 17}", (284.0, 80.0))
    page.row += 34


def _chart(
    page: Page,
    table: Table,
    key: str,
    limit: str,
    words: tuple[str, str, str],
    corner: str,
    size: tuple[float, float],
) -> None:
    sheet, first = table.page.sheet, table.first
    beside = table.page.columns + 2 + 3 * list(table.starts).index(key)  # right of the printed part
    for row, angle in ((first, 0), (first + 1, 360)):
        table.page.put(beside, angle, "RS si", row=row)
        table.page.put(beside + 1, page.book.guarded(limit), "RS si", row=row)
    turn = (sheet, ANGLE, first, table.last)
    curves = [
        Curve(case, turn, (sheet, table.starts[key] + k, first, table.last), *LINES[k])
        for k, case in enumerate(CASES)
    ]
    line_x, line_y = ((sheet, column, first, first + 1) for column in (beside, beside + 1))
    curves.append(Curve(words[2], line_x, line_y, width=2.5))
    chart = line_chart(
        page, corner, curves, size=size, title=words[0], x_title="crank angle [deg]", y_title=words[1]
    )
    chart.x_axis.scaling.min, chart.x_axis.scaling.max, chart.x_axis.majorUnit = 0, 360, 60
    chart.y_axis.number_format = "0.0"
