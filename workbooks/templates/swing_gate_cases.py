"""The swing gate's load cases: what is handed to RB_REACTIONS_3D for each, and what comes back."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

from .kit import Book, Page
from .swing_gate_inputs import CASES, LOWER, UPPER, Case, Inputs

if TYPE_CHECKING:
    from .swing_gate_working import Work

CASE_COLUMNS: Final = (
    *(2.0, 18.0, 19.0, 7.5, 1.5),
    *(10.0, 8.5, 8.5, 8.5, 7.5, 7.5, 7.5, 1.5),
    *(12.5, 13.5, 7.0, 7.0, 7.0, 7.0, 7.0, 7.0),
)
MOTION_AT, LOADS_AT, SUPPORTS_AT = 2, 6, 14
LOAD_HEADS: Final = ("load", "Fy [N]", "Fz [N]", "Mz [N*m]", "x [m]", "y [m]", "z [m]")
SUPPORT_HEADS: Final = ("support", "type", "x [m]", "y [m]", "z [m]", "along x", "along y", "along z")
GRAVITY_VECTOR: Final = "(0, 0, -9.80665) m/s^2"
CARD_ROWS: Final = 5
FIRST_PAGE: Final = 5  # so many cases stand on the first printed page
FORCE: Final = "#,##0.0;-#,##0.0"
NUMBER: Final = "0.000;-0.000;0"
Put = Callable[..., None]
TURN: Final = "turn"  # name of the support that holds or moves the gate about its axis

# What is solved: column of the table, head, what of RB_REACTIONS_3D ({axial}: the hinge with the thrust bearing).
SOLVED: Final = (
    ("x1", 6, "Lower, along x [N]", f'"{LOWER} fx"'),
    ("y1", 7, "Lower, along y [N]", f'"{LOWER} fy"'),
    ("x2", 8, "Upper, along x [N]", f'"{UPPER} fx"'),
    ("y2", 9, "Upper, along y [N]", f'"{UPPER} fy"'),
    ("axial", 10, "Axial [N]", 'IF({below},"lower hinge fz","upper hinge fz")'),
    ("radial_1", 11, "Lower, radial [N]", 'IF({below},"lower hinge radial","lower hinge force")'),
    ("radial_2", 12, "Upper, radial [N]", 'IF({below},"upper hinge force","upper hinge radial")'),
    ("hold", 14, "Turn held with", f'IF({{couple}},"{TURN} torque","{TURN} force")'),
    ("residual", 21, "Rest [N*m]", '"residual moment"'),
)
HOLD_UNIT: Final = 15
# What each thing that holds the turn must give: its column and its head.
GIVEN: Final = (
    ("gear", 16, "Gear- box [N*m]"),
    ("motor", 17, "Motor [N*m]"),
    ("hand", 18, "Hand [N]"),
    ("brake", 19, "Brake [N*m]"),
    ("latch", 20, "Latch [N]"),
)


COLUMN_OF: Final = {name: column for name, column, *_ in (*SOLVED, *GIVEN)}


@dataclass(frozen=True, slots=True)
class Card:
    """One load case as the functions read it: its cells by name, and the three ranges."""

    cells: Mapping[str, str]
    motion: str
    loads: str
    supports: str

    def call(self, body: str) -> str:
        """Return RB_REACTIONS_3D without its last argument and parenthesis."""
        return f"RB_REACTIONS_3D({body},{self.motion},{self.loads},{self.supports}"


@dataclass(frozen=True, slots=True)
class Cases:
    """The cards, and for each the cells of what was solved."""

    cards: tuple[Card, ...]
    solved: tuple[Mapping[str, str], ...]
    looked: Card  # the one that a person chose to look at
    page: Page
    first: int  # row of the first case in the table of what was solved

    def chosen(self, number: str, name: str) -> str:
        """Return the formula of a solved value of the case with a number."""
        return f"CHOOSE({number},{','.join(values[name] for values in self.solved)})"

    def envelope(self, name: str, what: str) -> str:
        """Return RB_ENVELOPE of a value over the cases: "magnitude", "governing", ..."""
        return f'RB_ENVELOPE({self._block(COLUMN_OF[name])},"{what}")'

    def governing(self, name: str) -> dict[str, str]:
        """Return the name of the governing case and what holds the turn in it."""
        case = self.envelope(name, "governing")
        names, held = (self._block(column, column) for column in (2, 3))
        return {"case": case, "at": f"INDEX({held},MATCH({case},{names},0))"}

    def _block(self, last: int, first: int = 2) -> str:
        return self.page.span((self.first, first), (self.first + len(CASES) - 1, last))


def cases(book: Book, given: Inputs, work: Work) -> Cases:
    """Write the sheet of load cases."""
    page = book.page("Cases", CASE_COLUMNS, landscape=True)
    page.title_block()
    page.section("Forces on the leaf, from RB_REACTIONS_3D")
    table = page.row
    _table_heads(page, table)
    page.row += 1 + len(CASES)
    page.prose(
        (
            "x along the leaf to the tip, y square to it, z up; forces and couples on the leaf. "
            "The turn is held with a couple of gearmotor "
            "or brake, or with a force of hand or latch along y.",
            "Motor: torque / (i η) while it drives, torque η / i while the gate drives it, and "
            "J i α for its rotor. "
            "Brake: with J i² α for the rotor. Rest: moment left over in the balance about a second point.",
        )
    )
    page.section("What the functions read: motion, loads and supports of each case")
    cards = []
    for i, case in enumerate(CASES):
        if i == FIRST_PAGE:
            page.page_break()
        cards.append(card(page, given, case.name, sources(case, given, work)))
    number = given["look_case"].si
    looked = card(page, given, "looked at", chosen_sources(cards, number))
    solved = [_results(page, given, work, table + 1 + i, case, cards[i]) for i, case in enumerate(CASES)]
    return Cases(tuple(cards), tuple(solved), looked, page, table + 1)


def chosen_sources(cards: Sequence[Card], number: str) -> dict[str, str]:
    """Return the sources of one more card: of the case with a number."""
    same = {name: name for name in ("omega", "alpha", "wind", "person", "friction")}
    turn = {"type": "type", "x": "0", "z": "2", "along_y": "4", "along_z": "5"}
    names = same | {name: f"{TURN} {cell}" for name, cell in turn.items()}
    return {
        name: f"CHOOSE({number},{','.join(one.cells[cell] for one in cards)})" for name, cell in names.items()
    }


def _table_heads(page: Page, row: int) -> None:
    for column in range(2, page.columns + 1):
        page.put(column, None, "RS head", row=row)
    for column, word in ((2, "Load case"), (3, "Turn held by"), (HOLD_UNIT, "")):
        page.put(column, word or None, "RS head", row=row)
    for _, column, word, *_ in (*SOLVED, *GIVEN):
        page.put(column, word, "RS head", row=row)
    page.sheet.row_dimensions[row].height = 36.0


def held_by(case: Case, given: Inputs) -> str:
    """Return the formula of the word for what holds the turn."""
    return given["moved_by"].ref if case.turn == "move" else f'"{case.turn}"'


def sources(case: Case, given: Inputs, work: Work) -> dict[str, str]:
    """Return the formulas of what differs between load cases, in SI."""
    alpha = work["alpha" if case.turn == "move" else "stop_alpha"].si
    wind = f"{case.storm}*{work['storm_force'].si}" if case.storm else f"{case.wind}*{work['wind_force'].si}"
    speeds_up = case.turn == "move" and case.speed * case.alpha > 0
    friction = -case.speed if speeds_up else 0  # left out where it would help
    if case.turn == "move":
        couple, x, z = given.by_drive, given["hand_x"].si, given["hand_z"].si
    else:
        couple, x, z = (
            ("1", "0", "0") if case.turn == "brake" else ("0", given["latch_x"].si, given["latch_z"].si)
        )
    return {
        "omega": f"{case.speed}*{work['speed'].si}",
        "alpha": f"{case.alpha}*{alpha}",
        "wind": wind,
        "person": f"-{case.person}*{work['person_force'].si}",
        "friction": f"{friction}*{given['friction'].si}",
        "type": f'IF({couple},"drive","slot")',
        "x": f"IF({couple},0,{x})",
        "z": f"IF({couple},0,{z})",
        "along_y": f"IF({couple},0,1)",
        "along_z": f"IF({couple},1,0)",
    }


def card(page: Page, given: Inputs, title: str, source: Mapping[str, str]) -> Card:
    """Write the three tables of one load case side by side."""
    top, motion, loads, supports = page.row, MOTION_AT, LOADS_AT, SUPPORTS_AT
    page.row += CARD_ROWS
    cells: dict[str, str] = {}

    def put(name: str, row: int, column: int, formula: str, form: str = NUMBER) -> None:
        page.put(column, page.book.guarded(formula), "RS number", row=row, form=form)
        cells[name] = page.at(column, row)

    _heads(page, top, motion, (title, "", ""))
    for i, (label, unit) in enumerate((("omega", "rad/s"), ("alpha", "rad/s^2")), 1):
        page.put(motion, label, "RS label", row=top + i)
        put(label, top + i, motion + 1, source[label], "0.0000;-0.0000;0")
        page.put(motion + 2, unit, "RS unit fixed", row=top + i)
    for i, (label, text) in enumerate((("gravity", GRAVITY_VECTOR), ("fixed point", "(0, 0, 0) m")), 3):
        page.put(motion, label, "RS label", row=top + i)
        page.put(motion + 1, text, "RS number", row=top + i)
    _heads(page, top, loads, LOAD_HEADS)
    _load_rows(page, given, source, top, loads, put)
    _heads(page, top, supports, SUPPORT_HEADS)
    _support_rows(page, given, source, top, supports, put)
    return Card(
        cells,
        page.span((top + 1, motion), (top + 4, motion + 2)),
        page.span((top, loads), (top + 3, loads + 6)),
        page.span((top, supports), (top + 3, supports + 7)),
    )


def _heads(page: Page, row: int, column: int, words: tuple[str, ...]) -> None:
    for i, word in enumerate(words):
        page.put(column + i, word or None, "RS head", row=row)


def _load_rows(page: Page, given: Inputs, source: Mapping[str, str], top: int, column: int, put: Put) -> None:
    wind_z = f"{given['clearance'].si}+{given['leaf_height'].si}/2"
    rows = (
        ("wind", 1, source["wind"], (f"{given['edge'].si}+{given['leaf_length'].si}/2", "0", wind_z)),
        ("person", 2, source["person"], (given.tip, given["person_y"].si, given.top)),
        ("friction", 3, source["friction"], ("", "", "")),
    )
    for i, (name, part, amount, point) in enumerate(rows, 1):
        page.put(column, name, "RS text", row=top + i)
        for k in (1, 2, 3):
            page.put(column + k, None, "RS number", row=top + i)
        put(name, top + i, column + part, amount, "#,##0.0;-#,##0.0;0")
        for k, formula in enumerate(point, 4):
            if formula:
                put(f"{name} {'xyz'[k - 4]}", top + i, column + k, formula)
            else:
                page.put(column + k, None, "RS number", row=top + i)


def _support_rows(
    page: Page, given: Inputs, source: Mapping[str, str], top: int, column: int, put: Put
) -> None:
    below = given.axial_below
    rows = (
        (LOWER, f'IF({below},"thrust bearing","bearing")', ("0", "0", given["hinge_1_z"].si, "0", "0", "1")),
        (UPPER, f'IF({below},"bearing","thrust bearing")', ("0", "0", given["hinge_2_z"].si, "0", "0", "1")),
        (TURN, source["type"], (source["x"], "0", source["z"], "0", source["along_y"], source["along_z"])),
    )
    for i, (name, kind, numbers) in enumerate(rows, 1):
        page.put(column, name, "RS text", row=top + i)
        put(f"{name} type", top + i, column + 1, kind)
        page.sheet.cell(top + i, column + 1).style = "RS text"
        for k, formula in enumerate(numbers):
            put(f"{name} {k}", top + i, column + 2 + k, formula)


def _results(page: Page, given: Inputs, work: Work, row: int, case: Case, card: Card) -> dict[str, str]:
    """Write what RB_REACTIONS_3D gives for a case, and what drive, hand, brake and latch must "
    "give for it."""
    page.put(2, case.name, "RS text", row=row)
    page.put(3, page.book.guarded(held_by(case, given)), "RS text", row=row)
    for column in (4, 5, 13):
        page.put(column, None, "RS text", row=row)
    couple = given.by_drive if case.turn == "move" else ("1" if case.turn == "brake" else "0")
    for name, column, _, what in SOLVED:
        asked = what.format(below=given.axial_below, couple=couple)
        form = "0.0E+00" if name == "residual" else FORCE
        page.put(
            column, page.book.guarded(f"{card.call(work.body)},{asked})"), "RS number", row=row, form=form
        )
    page.put(HOLD_UNIT, page.book.guarded(f'IF({couple},"N*m","N")'), "RS text", row=row)
    at = {name: page.at(column, row) for name, column, *_ in (*SOLVED, *GIVEN)}
    amounts = _given(given, work, case, at["hold"], card)
    for name, column, _ in GIVEN:
        form = ("0.000;-0.000" if name == "motor" else FORCE) + ';"–"'
        page.put(column, page.book.guarded(amounts[name]), "RS number", row=row, form=form)
    return at


def _given(given: Inputs, work: Work, case: Case, hold: str, card: Card) -> dict[str, str]:
    """Return the formulas of what gearbox, motor, hand, brake and latch give; 0 where they do nothing."""
    out = dict.fromkeys((name for name, *_ in GIVEN), "0")
    omega, alpha = card.cells["omega"], card.cells["alpha"]
    if case.turn == "move":
        ratio, efficiency, rotor = given.si("ratio", "efficiency", "rotor")
        motor = f'RB_MOTOR_TORQUE({hold},{ratio},{efficiency},"N*m",{omega})+{rotor}*{ratio}*{alpha}'
        out["gear"] = f"IF({given.by_drive},{hold},0)"
        out["motor"] = f"IF({given.by_drive},{motor},0)"
        out["hand"] = f"IF({given.by_hand},{hold},0)"
    elif case.turn == "brake":
        out["brake"] = f"{hold}+{work['rotor_inertia'].si}*{alpha}"
    else:
        out["latch"] = hold
    return out
