"""Drives: inertia and torque seen through a gearbox."""

from __future__ import annotations

from typing import Any

from ...core import drives
from ..declaration import UNIT, Arg, CellFunction, Example, Field, Result
from ..limits import FRACTION, NONZERO, NOT_NEGATIVE
from ..reading.arguments import Scalar
from ..units import kinds
from ..working import num

GROUP = "Forces"
SIZING = "Common practice in drive sizing; definition of efficiency"


def reflected_working(values: tuple[Any, ...], answer: Any) -> list[str]:
    inertia, ratio = values
    return [
        "Inertia of the load as the motor sees it",
        f"J' = J / i^2 = {num(inertia)} / {num(ratio)}^2 = {num(answer)} kg*m^2",
    ]


def motor_torque(torque: Any, ratio: Any, efficiency: Any, load_speed: Any) -> Any:
    # Without a speed the motor is taken to drive, which asks more of it.
    return drives.motor_torque(torque, ratio, efficiency, torque if load_speed is None else load_speed)


def motor_working(values: tuple[Any, ...], answer: Any) -> list[str]:
    torque, ratio, efficiency, speed = values
    driving = speed is None or torque * speed >= 0
    if driving:
        how = (
            "speed not told: the motor is taken to drive"
            if speed is None
            else "torque and speed of one sign: the motor drives"
        )
        sum_ = f"T / (i eta) = {num(torque)} / ({num(ratio)}*{num(efficiency)})"
    else:
        how = "torque against speed: the load drives, losses help"
        sum_ = f"T eta / i = {num(torque)}*{num(efficiency)} / {num(ratio)}"
    return [f"Motor torque behind a gear; {how}", f"T_motor = {sum_} = {num(answer)} N*m"]


RATIO = Arg("ratio", Scalar(kinds.RATIO), "motor speed over load speed; negative when it reverses", NONZERO)

FUNCTIONS = (
    CellFunction(
        name="RB_REFLECTED_INERTIA",
        group=GROUP,
        line="Inertia of a load as the motor sees it through a gear: J / ratio^2.",
        args=(Arg("inertia", Scalar(kinds.INERTIA), "of the load about its axis", NOT_NEGATIVE), RATIO),
        result=Result((Field("inertia", kinds.INERTIA, "at the motor's shaft"),)),
        kernel=drives.reflected_inertia,
        working=reflected_working,
        source=SIZING,
        examples=(Example('=RB_REFLECTED_INERTIA("85 kg*m^2", 180)', "The tipper as its motor sees it."),),
    ),
    CellFunction(
        name="RB_MOTOR_TORQUE",
        group=GROUP,
        line="Motor torque behind a gear, losses counted by the direction of power.",
        args=(
            Arg("torque", Scalar(kinds.TORQUE), "of the drive on the load"),
            RATIO,
            Arg("efficiency", Scalar(kinds.RATIO), "power out over power in", FRACTION),
            UNIT,
            Arg(
                "load_speed",
                Scalar(kinds.ANGULAR_VELOCITY),
                "speed of the load, only its sign counts; the motor drives when omitted",
                default=None,
            ),
        ),
        result=Result((Field("torque", kinds.TORQUE, "at the motor's shaft"),)),
        kernel=motor_torque,
        working=motor_working,
        source=SIZING,
        examples=(
            Example(
                '=RB_MOTOR_TORQUE("2.4 kN*m", 180, 0.86)', "What the tipper's motor must give while lifting."
            ),
        ),
    ),
)
