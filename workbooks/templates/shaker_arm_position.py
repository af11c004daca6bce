"""The shaker arm at one crank angle through the functions, along x and y, and how far the tables agree."""

from __future__ import annotations

from functools import partial
from typing import Final

from rigidsheet.udf.units import kinds

from . import shaker_arm_parts as parts
from .kit import Book
from .kit_look import LEFT
from .shaker_arm_inputs import CASES, Given
from .shaker_arm_parts import LOST
from .shaker_arm_tables import Table
from .shaker_arm_working import BESIDE, NOTES, Looked, Position, Work

VECTOR_WORDS: Final = {4: "size", 5: "unit", 6: "x", 7: "y", 8: "unit"}
HELD: Final = "arm held at this crank angle"
STILL, STEADY = '"(0, 0) m/s"', '"(0, 0) m/s^2"'  # velocity and acceleration of the crank shaft
SPINS: Final = (
    "sin φ = (e − r sin θ) / l,   ω_a = −r ω cos θ / (l cos φ),   "
    "α_a = (r (ω² sin θ − α cos θ) + l ω_a² sin φ) / (l cos φ)"
)
AT_REST: Final = "omega 0 rad/s; alpha 0 rad/s^2; center acceleration (0, 0) m/s^2; gravity down"


def position(book: Book, given: Given, work: Work, arm: Table, tray: Table) -> Looked:
    """Write one position through the functions, in sheet axes, and compare it with the tables."""
    page = work.page
    page.section("Position looked at", VECTOR_WORDS)
    page.prose((SPINS,))
    at = Position(book, given, work)
    _linkage(at)
    page.section("Sensor S", VECTOR_WORDS)
    functions, sensor = _sensor(at)
    page.section("Pusher P, while it slides out", VECTOR_WORDS)
    loads, pusher = _pusher(at)
    page.page_break()
    page.section("Tray on its two feet", VECTOR_WORDS)
    contact, reactions = _tray(at)
    _compare(at, arm, tray, {**functions, **loads, **contact})
    _steps(at, ((sensor, 6), (pusher, 7), (reactions, 9)))
    return at.looked


def _linkage(at: Position) -> None:
    g, angle, speed, rise = at.given, kinds.ANGLE, kinds.ANGULAR_VELOCITY, kinds.ANGULAR_ACCELERATION
    r, length, e = g["crank"].si, g["arm"].si, g["guide"].si
    theta = g["look_angle"].si
    first, last = at.work.speeds[0], at.work.speeds[-1].rpartition("!")[2]
    omega = at.scalar("omega", "Crank speed", "ω", f"INDEX({first}:{last},{at.number})", speed, "rad/s")
    first, last = at.work.accelerations[0], at.work.accelerations[-1].rpartition("!")[2]
    alpha = at.scalar(
        "alpha", "Crank acceleration", "α", f"INDEX({first}:{last},{at.number})", rise, "rad/s^2"
    )
    phi = f"ASIN(({e}-{r}*SIN({theta}))/{length})"
    phi = at.scalar("arm_angle", "Arm angle from x", "φ", phi, angle, "deg")
    at.looked.angle = phi
    turn = f"-{r}*{omega}*COS({theta})/({length}*COS({phi}))"
    turn = at.scalar("arm_omega", "Arm: angular velocity", "ω_a", turn, speed, "rad/s")
    spin = f"({r}*({omega}^2*SIN({theta})-{alpha}*COS({theta}))+{length}*{turn}^2*SIN({phi}))/({length}*COS({phi}))"
    at.scalar("arm_alpha", "Arm: angular acceleration", "α_a", spin, rise, "rad/s^2")
    move, quick, length_kind = kinds.VELOCITY, kinds.ACCELERATION, kinds.LENGTH
    pair = {key: at.scalars[key].pair for key in at.scalars}
    pin = at.vector(
        "pin",
        "Crank pin A, from the crank shaft",
        "r_A",
        (f"{r}*COS({theta})", f"{r}*SIN({theta})"),
        length_kind,
        "mm",
    )
    v = f"RB_VELOCITY_AT({STILL},{pair['omega']},{pin},{{unit}})"
    a = f'RB_ACCELERATION_AT({STEADY},{pair["omega"]},{pair["alpha"]},{pin},"total",{{unit}})'
    v = at.vector("pin_velocity", "Velocity of A", "v_A", v, move, "m/s", "RB_VELOCITY_AT")
    at.vector("pin_acceleration", "Acceleration of A", "a_A", a, quick, "m/s^2", "RB_ACCELERATION_AT")
    far = at.vector("far", "Far end B, from A", "r_{AB}", at.on_arm(length, "0"), length_kind, "mm")
    v = f"RB_VELOCITY_AT({v},{pair['arm_omega']},{far},{{unit}})"
    at.vector("far_velocity", "Velocity of B", "v_B", v, move, "m/s", "y must be 0: level guide")
    at.vector(
        "far_acceleration", "Acceleration of B", "a_B", at.acceleration(far), quick, "m/s^2", "y must be 0"
    )
    at.looked.residual = at.looked.vectors["far_acceleration"].y
    _center(at)


def _center(at: Position) -> None:
    """Write the instant center from A and the spin, and from A and B; there is none while the arm does not turn."""
    known, length = at.looked.vectors, kinds.LENGTH
    b = f"{known['pin'].x}+{known['far'].x}", f"{known['pin'].y}+{known['far'].y}"
    end = at.vector("far_place", "Far end B, from the crank shaft", "r_B", b, length, "mm")
    pin, v_a, v_b = (known[key].ref for key in ("pin", "pin_velocity", "far_velocity"))
    turns = f"ABS({at.scalars['arm_omega'].si})>1E-9*ABS({at.work.speeds[1]})"
    calls = (
        (
            "center",
            f"RB_INSTANT_CENTER({pin},{v_a},{at.scalars['arm_omega'].pair},{{unit}})",
            "RB_INSTANT_CENTER",
        ),
        ("center_2", f"RB_INSTANT_CENTER_2({pin},{v_a},{end},{v_b},{{unit}})", "from v_A and v_B"),
    )
    for key, call, note in calls:
        row = at.page.row
        at.vector(key, "Instant center of the arm", "C", call, length, "mm", note)
        for column in (4, 6, 7, *BESIDE):
            cell = at.page.sheet.cell(row, column)
            inner = at.book.unguarded(str(cell.value))
            cell.value = at.book.guarded(f'IF({turns},{inner},"none")')


def _sensor(at: Position) -> tuple[dict[str, str], str]:
    """Write the sensor's acceleration and what it reads; give the reading in g, and the call."""
    g, known, quick = at.given, at.looked.vectors, kinds.ACCELERATION
    place = at.on_arm(g["sensor_u"].si, g["sensor_v"].si)
    arm = at.vector("sensor", "Sensor S, from A", "r_{AS}", place, kinds.LENGTH, "mm")
    start = f"{known['pin_velocity'].ref},{at.scalars['arm_omega'].pair}"
    call, note = f"RB_VELOCITY_AT({start},{arm},{{unit}})", "v_A + ω_a × r_{AS}"
    at.vector("sensor_velocity", "Velocity of S", "v_S", call, kinds.VELOCITY, "m/s", note)
    for what, label, symbol, note in (
        ("tangential", "Tangential part, relative to A", "a_t", "α_a × r_{AS}"),
        ("centripetal", "Centripetal part, relative to A", "a_n", "−ω_a² r_{AS}"),
        ("total", "Acceleration of S", "a_S", "a_A + a_t + a_n"),
    ):
        key = "sensor_acceleration" if what == "total" else f"sensor_{what}"
        at.vector(key, label, symbol, at.acceleration(arm, what), quick, "m/s^2", note)
    total, gravity = known["sensor_acceleration"], at.work.gravity.si
    felt = f"IF({g['sensor_reads'].si}=1,{gravity},0)"
    note = "a_S, and g upward if it reads gravity"
    at.vector("reading", "What the sensor reads", "a_R", (total.x, f"{total.y}+{felt}"), quick, "g", note)
    size = f"SQRT({known['reading'].x}^2+{known['reading'].y}^2)/{gravity}"
    return {"sensor": size}, at.acceleration(arm).replace(",{unit})", "")


PARTS: Final = (
    ("tangential", "Tangential part, relative to A", "a_t", "α_a × r_{AP}"),
    ("centripetal", "Centripetal part, relative to A", "a_n", "−ω_a² r_{AP}"),
    ("coriolis", "Coriolis part", "a_C", "2 ω_a × w"),
    ("total", "Acceleration of P", "a_P", "a_A + a_t + a_n + b + a_C"),
)


def _pusher(at: Position) -> tuple[dict[str, str], str]:
    """Write the pusher's motion, sliding out; give side load and thrust, the larger of out and back; the call."""
    g, known, quick = at.given, at.looked.vectors, kinds.ACCELERATION
    pair = {key: place.pair for key, place in at.scalars.items()}
    place = at.on_arm(g["pusher_u"].si, g["pusher_v"].si)
    arm = at.vector("pusher", "Pusher P, from A", "r_{AP}", place, kinds.LENGTH, "mm")
    slides = [at.on_arm(g[name].si, "0") for name in ("slide_speed", "slide_rise")]
    w = at.vector("slide", "Slide velocity", "w", slides[0], kinds.VELOCITY, "m/s", "along the arm")
    b = at.vector("slide_rise", "Slide acceleration", "b", slides[1], quick, "m/s^2", "along the arm")
    call = f"RB_VELOCITY_SLIDING({known['pin_velocity'].ref},{pair['arm_omega']},{arm},{w},{{unit}})"
    at.vector(
        "pusher_velocity", "Velocity of P", "v_P", call, kinds.VELOCITY, "m/s", "v_A + ω_a × r_{AP} + w"
    )
    start = f"{known['pin_acceleration'].ref},{pair['arm_omega']},{pair['arm_alpha']},{arm},{w},{b}"
    for what, label, symbol, note in PARTS:
        key = "pusher_acceleration" if what == "total" else f"pusher_{what}"
        at.vector(
            key, label, symbol, f'RB_ACCELERATION_SLIDING({start},"{what}",{{unit}})', quick, "m/s^2", note
        )
    total, coriolis, slide = (known[key] for key in ("pusher_acceleration", "pusher_coriolis", "slide_rise"))
    out = at.along(total.x, f"{total.y}+{at.work.gravity.si}")
    change = at.along(f"2*({coriolis.x}+{slide.x})", f"2*({coriolis.y}+{slide.y})")
    loads = [f"{g['pusher_mass'].si}*MAX(ABS({o}),ABS({o}-{c}))" for o, c in zip(out, change, strict=True)]
    note = "m_P (a_P + g), worse of out, back"
    thrust = at.scalar("thrust", "Thrust along the arm", "F_T", loads[0], kinds.FORCE, "N", note)
    side = at.scalar(
        "side", "Side load of its guide, across the arm", "F_S", loads[1], kinds.FORCE, "N", note
    )
    return {"side": side, "thrust": thrust}, f"RB_ACCELERATION_SLIDING({start}"


def _tray(at: Position) -> tuple[dict[str, str], str]:
    """Write the tray's balance on its two feet and the mat; give what the tables hold, and the call."""
    page = at.page
    place = at.on_arm(at.given["tray_u"].si, at.given["tray_v"].si)
    arm = at.vector("tray", "Mass center G, from A", "r_{AG}", place, kinds.LENGTH, "mm")
    at.vector(
        "tray_acceleration", "Acceleration of G", "a_G", at.acceleration(arm), kinds.ACCELERATION, "m/s^2"
    )
    top = page.row
    body, motion, supports = _body(at, top), _motion(at, top), _supports(at, top + 5)
    page.row = top + 9
    moves = f'RB_REACTIONS({body},{motion},"none",{supports}'
    rests = f'RB_REACTIONS({body},"{AT_REST}","none",{supports}'
    rows = (
        ("Foot 1: force of the arm, moving", "N_1", moves, "foot 1", "foot_1", "RB_REACTIONS"),
        ("Foot 2: force of the arm, moving", "N_2", moves, "foot 2", "foot_2", ""),
        ("Mat: friction along the arm, moving", "F", moves, "mat", "mat", ""),
        ("Foot 1: force of the arm, at rest here", "N_{1,0}", rests, "foot 1", "foot_1_rest", HELD),
        ("Foot 2: force of the arm, at rest here", "N_{2,0}", rests, "foot 2", "foot_2_rest", ""),
    )
    force = []
    for label, symbol, ask, what, name, note in rows:
        call = f'{ask},"{what} force",{{unit}})'
        foot = page.result(label, symbol, call, kinds.FORCE, "N", f"look_{name}", note=note)
        force.append(foot.si)
    ask, note = f'{moves},"residual moment",{{unit}})', "must be next to nothing"
    page.result("Balance about a second point: residual moment", "", ask, kinds.TORQUE, "N*m", note=note)
    lifts = ",".join(f"IF({force[k + 3]}>0,MIN(1-{force[k]}/{force[k + 3]},{LOST}),{LOST})" for k in (0, 1))
    label, note = "Taken off the worse foot by the motion", "q = 1 − N / N_0; lifts off at 1"
    lift = at.scalar("lift", label, "q", f"MAX({lifts})", kinds.RATIO, "", note)
    slip = f"IF({force[0]}+{force[1]}>0,MIN(ABS({force[2]})/({force[0]}+{force[1]}),{LOST}),{LOST})"
    slip = at.scalar(
        "slip", "Friction coefficient that is needed", "μ_n", slip, kinds.RATIO, "", "|F| / (N_1 + N_2)"
    )
    return {"lift": lift, "slip": slip}, moves


def _record(at: Position, row: int, column: int, cells: tuple[str, ...]) -> None:
    """Write a row of a record: words in quotes, formulas as they are."""
    for k, formula in enumerate(cells):
        words = formula.startswith('"')
        text = formula.strip('"') if words else at.book.guarded(formula)
        cell = at.page.put(column + k, text, "RS text" if words else "RS number", row=row)
        if words:
            cell.alignment = LEFT


def _head(at: Position, row: int, words: dict[int, str]) -> None:
    for column in range(min(words), max(words) + 1):
        at.page.put(column, words.get(column), "RS head", row=row)


def _body(at: Position, top: int) -> str:
    """Write the tray as a body; give its range."""
    known = at.looked.vectors
    _head(at, top, {6: "tray", 7: "value", 8: "unit"})
    place = [f"{getattr(known['pin'], k)}+{getattr(known['tray'], k)}" for k in "xy"]
    mass, inertia = at.given["tray_mass"].si, at.work.inertia.si
    for i, (label, formula, unit) in enumerate(
        (("mass", mass, "kg"), ("x", place[0], "m"), ("y", place[1], "m"), ("Izz", inertia, "kg*m^2")), 1
    ):
        _record(at, top + i, 6, (f'"{label}"', formula, f'"{unit}"'))
    return at.page.span((top + 1, 6), (top + 4, 8))


def _motion(at: Position, top: int) -> str:
    """Write the motion of the tray; give its range."""
    _head(at, top, {2: "motion", 3: "x or value", 4: "y or unit", 5: "unit"})
    move = at.looked.vectors["tray_acceleration"]
    for i, cells in enumerate(
        (
            ('"omega"', at.scalars["arm_omega"].si, '"rad/s"'),
            ('"alpha"', at.scalars["arm_alpha"].si, '"rad/s^2"'),
            ('"center acceleration"', move.x, move.y, '"m/s^2"'),
            ('"gravity"', '"down"'),
        ),
        1,
    ):
        _record(at, top + i, 2, cells)
    return at.page.span((top + 1, 2), (top + 4, 5))


def _supports(at: Position, top: int) -> str:
    """Write the two feet and the mat; give their table."""
    _head(at, top, dict(enumerate(("support", "type", "x [m]", "y [m]", "angle [deg]"), 2)))
    g, pin = at.given, at.looked.vectors["pin"]
    for i, (name, foot, turn) in enumerate(
        (("foot 1", "foot_1", 90), ("foot 2", "foot_2", 90), ("mat", "foot_1", 0)), 1
    ):
        x, y = at.on_arm(g[foot].si, g["seat"].si)
        angle = f"DEGREES({at.looked.angle})+{turn}"
        _record(at, top + i, 2, (f'"{name}"', '"slot"', f"{pin.x}+{x}", f"{pin.y}+{y}", angle))
    return at.page.span((top, 2), (top + 3, 6))


def _compare(at: Position, arm: Table, tray: Table, functions: dict[str, str]) -> None:
    """Write what the functions give, along x and y, beside what the tables give, along and across the arm."""
    page = at.page
    page.section("The functions along x, y against the tables along and across the arm")
    _head(at, page.row, {2: "", 4: "functions", 5: "unit", 6: "tables", 7: "difference"})
    page.row += 1
    top = page.row
    rows = (
        ("sensor", "What the sensor reads", "g", arm),
        ("side", "Pusher: side load of its guide", "N", arm),
        ("thrust", "Pusher: thrust", "N", arm),
        ("lift", "Tray: share of a foot's weight taken off", "", tray),
        ("slip", "Tray: friction coefficient needed", "", tray),
    )
    for key, label, unit, table in rows:
        page.put(2, label, "RS label")
        page.put(4, at.book.guarded(functions[key]), "RS value")
        page.put(5, unit or None, "RS unit fixed")
        found = f"INDEX({table.looked(key)},1,{at.number})"
        page.put(6, at.book.guarded(found), "RS value")
        gap = f"ABS({page.at(4)}-{page.at(6)})/MAX(1E-6,ABS({page.at(6)}))"
        page.put(7, at.book.guarded(gap), "RS value", form="0.0000%")
        page.row += 1
    _over_the_turn(at, arm, tray)
    at.looked.gaps = page.span((top, 7), (page.row - 1, 7))


def _over_the_turn(at: Position, arm: Table, tray: Table) -> None:
    """Write how far the accelerations that the tables rest on are from the functions over the turn."""
    page, k = at.page, parts.COMPARED
    cells = {way: partial(tray.cell, way, k) for way in parts.WAYS}
    rows = range(arm.first, arm.last + 1)
    ours, theirs, gap = parts.compare(arm.page, at.given, at.work, rows, cells)
    page.put(2, f"S, P, G over the turn, {CASES[k]}", "RS label")
    for column, formula in ((4, ours), (6, theirs)):
        page.put(column, at.book.guarded(formula), "RS value")
    page.put(5, "m/s^2", "RS unit fixed")
    page.put(7, at.book.guarded(f"{gap}/MAX(1E-6,{page.at(4)})"), "RS value", form="0.0000%")
    page.put(NOTES, "each 30°: r.m.s.; largest gap", "RS note")
    page.row += 1


def _steps(at: Position, calls: tuple[tuple[str, int], ...]) -> None:
    """Write the workings, a step a row."""
    page = at.page
    page.section("Working of the functions for this position, in sheet axes")
    for call, count in calls:
        function, _, rest = call.partition("(")
        for k in range(1, count + 1):
            step = f'INDEX(RB_WORKING("{function}",{rest}),{k},1)'
            page.put(2, at.book.guarded(f'IFERROR({step},"")'), "RS step")
            page.sheet.merge_cells(
                start_row=page.row, start_column=2, end_row=page.row, end_column=page.columns
            )
            page.row += 1
        page.skip(height=6.0)
