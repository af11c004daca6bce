"""The swing gate's checks, and the chart of its hinge loads."""

from __future__ import annotations

from typing import Final

from .kit import Book
from .kit_charts import bar_chart
from .kit_checks import CAPACITY, DEMAND, Check, Checks
from .kit_checks import COLUMNS as CHECK_COLUMNS
from .swing_gate_cases import COLUMN_OF, Cases
from .swing_gate_inputs import CASES, Inputs
from .swing_gate_working import Work

AGREEMENT: Final = 1e-6  # of the leaf's weight: function and pocket calculator
BARS: Final = (
    ("lower hinge, radial", "radial_1"),
    ("upper hinge, radial", "radial_2"),
    ("axial load of the thrust bearing", "axial"),
)


def checks(book: Book, given: Inputs, work: Work, cases: Cases, gaps: str) -> None:
    """Write checks and chart."""
    page = book.page("Checks", CHECK_COLUMNS, landscape=True)
    page.title_block()
    head = page.row
    page.sheet.row_dimensions[head].height = 20.0
    page.row += 1
    page.section("Hinge loads of each load case, on the leaf")
    sheet, first = cases.page.sheet, cases.first
    bar_chart(
        page,
        f"B{page.row}",
        (sheet, 2, first, first + len(CASES) - 1),
        [(name, COLUMN_OF[column]) for name, column in BARS],
        size=(290.0, 66.0),
        title="Hinge loads of each load case",
        y_title="N",
    )
    page.row += 14
    page.section("Checks")
    rows = Checks(book, page, "held by")
    limits, sums = _limits(given, work, cases), _calculation(given, work, cases, gaps)
    for check in (*_hinges(given, cases), *_holding(given, work, cases), *limits, *sums):
        rows.add(check)
        if check in sums:  # tiny numbers
            for column in (DEMAND, CAPACITY):
                page.sheet.cell(page.row - 1, column).number_format = "0.0E+00"
    verdict = f'=IF({book.ready_ref}=1,{rows.end()},"Not checked yet: inputs are missing or refused.")'
    page.put(2, verdict, "RS status", row=head)
    book.name("verdict", page.at(2, head))


def _largest(given: Inputs, cases: Cases, value: str, label: str, si: str, rating: str, **rest: str) -> Check:
    """Return the check of the largest size of a value over the cases against a rating."""
    governing = cases.governing(value)
    return Check.against(
        label, cases.envelope(value, "magnitude"), si, given[rating], rating, **governing, **rest
    )


def _hinges(given: Inputs, cases: Cases) -> list[Check]:
    factor = given["factor_hinges"].si
    return [
        _largest(given, cases, "radial_1", "Lower hinge: radial load", "N", "radial_1", required=factor),
        _largest(given, cases, "radial_2", "Upper hinge: radial load", "N", "radial_2", required=factor),
        _largest(given, cases, "axial", "Thrust bearing: axial load", "N", "axial", required=factor),
    ]


def _holding(given: Inputs, work: Work, cases: Cases) -> list[Check]:
    moved, brake, latch = given.si("factor_moved", "factor_brake", "factor_latch")
    drive = {"required": moved, "when": given.by_drive}
    hand = {"required": moved, "when": given.by_hand}
    turns = f"{work['speed'].si}*{given['ratio'].si}"
    return [
        _largest(given, cases, "gear", "Gearbox: torque at the hinge axis", "N*m", "gear_rating", **drive),
        _largest(given, cases, "motor", "Motor: torque", "N*m", "motor_rating", **drive),
        Check.against(
            "Motor: speed", turns, "rad/s", given["motor_speed"], "motor_speed", when=given.by_drive
        ),
        _largest(given, cases, "hand", "Hand: force", "N", "hand_rating", **hand),
        _largest(
            given, cases, "brake", "Brake: torque at the hinge axis", "N*m", "brake_rating", required=brake
        ),
        _largest(given, cases, "latch", "Latch: force", "N", "latch_rating", required=latch),
    ]


def _limits(given: Inputs, work: Work, cases: Cases) -> list[Check]:
    stop, unit = given["stop_angle"].si, given["leaf_length"].unit
    hand = f"IF({given.by_hand},{given['hand_x'].si},0)"
    farthest = f'MAX({work["center_x"].si},{given["latch_x"].si},{hand})*RB_CONVERT("1 m",{unit})'
    tip = f'{given.tip}*RB_CONVERT("1 m",{unit})'
    return [
        Check.against("Tip: speed", work["tip_speed"].si, "m/s", given["tip_limit"], "tip_speed"),
        Check.against(
            "Braking fits into the opening angle", stop, "rad", given["opening"], "stop_fits", plain=True
        ),
        Check("Mass center, latch and hand: on the leaf", farthest, unit, tip, "on_leaf", plain=True),
    ]


def _calculation(given: Inputs, work: Work, cases: Cases, gaps: str) -> list[Check]:
    """Return the checks of the calculation itself."""
    opening = cases.cards[[case.name for case in CASES].index("opening starts")]
    energy = f'RB_KINETIC_ENERGY({work.body},{opening.motion},"J")'
    stop = f"{work['inertia'].si}*{work['stop_alpha'].si}*{given['stop_angle'].si}"
    work_gap = f"100*ABS({stop}/{energy}-1)"
    rest = cases.envelope("residual", "magnitude")
    allowed = f"1E-9*{work['mass'].si}*{work['gravity'].si}*{given.tip}"
    gap = f"100*MAX({gaps})"
    return [
        Check(
            "Function against pocket calculator: gap",
            gap,
            '"%"',
            f"{100 * AGREEMENT}",
            "agreement",
            plain=True,
        ),
        Check("Balance about a second point: rest", rest, '"N*m"', allowed, "residual", plain=True),
        Check("Work of the brake against energy: gap", work_gap, '"%"', "1E-6", "energy", plain=True),
    ]
