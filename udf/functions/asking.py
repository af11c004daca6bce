"""Questions about another function: why it refused, and how it came to its answer."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import Any

from ...core.errors import InputError
from ..cells import Refusal
from ..compiling import Compiled, answered, worked
from ..declaration import Arg, CellFunction, Example, Field, Form, Result
from ..reading.words import Rest, Text

Find = Callable[[str], Compiled]


def functions(find: Find) -> tuple[CellFunction, ...]:
    """Return the declarations, which look other functions up through `find`."""
    asked = Arg("of_function", Text(example="RB_TORQUE"), "name of the function, like RB_TORQUE")
    rest = Arg("arguments", Rest(), "the same arguments as in the cell that is asked about", default=())

    def target(of_function: str) -> Compiled:
        ready = find(of_function)
        if ready.rest:
            raise InputError("of_function", "a function that computes something", of_function)
        return ready

    def why(of_function: str, cells: Sequence[Any]) -> str:
        answer = answered(target(of_function), cells[0] if cells else ())
        return answer.reason if isinstance(answer, Refusal) else "Not refused: the call has an answer."

    def lines(of_function: str, cells: Sequence[Any]) -> list[str]:
        told = worked(target(of_function), cells[0] if cells else ())
        if isinstance(told, Refusal):
            return [f"Refused with {told.error}", told.reason]
        return told

    def why_working(values: tuple[Any, ...], answer: Any) -> list[str]:
        return [f"{values[0]} was called with the same arguments; its reason:", str(answer)]

    def lines_working(values: tuple[Any, ...], answer: Any) -> list[str]:
        return list(answer)

    return (
        CellFunction(
            name="RB_WHY",
            group="Review",
            line="The sentence that says why a function refused these arguments.",
            args=(asked, rest),
            result=Result((Field("reason", None, "the reason", Form.TEXT),)),
            kernel=why,
            working=why_working,
            source="Rigidsheet's own rules for cells",
            examples=(
                Example(
                    '=RB_WHY("RB_TORQUE", "85 kg", "0.4 rad/s^2")', "Why the torque of the bin was refused."
                ),
            ),
        ),
        CellFunction(
            name="RB_WORKING",
            group="Review",
            line="The working of a function: equation, numbers with units, result; one text, or steps down the rows.",
            args=(asked, rest),
            result=Result((Field("working", None, "the steps", Form.TEXTS),)),
            kernel=lines,
            working=lines_working,
            source="The source of the function that is asked about",
            examples=(
                Example(
                    '=RB_WORKING("RB_TORQUE", "85 kg*m^2", "0.4 rad/s^2")',
                    "How the torque of the bin was found, for the reviewer.",
                ),
            ),
        ),
    )
