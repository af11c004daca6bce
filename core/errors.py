"""The error classes of the project: one root, one sentence form."""

from __future__ import annotations


class RigidsheetError(Exception):
    """A refused input or an unanswerable question, worded for the person who typed it.

    Parameters
    ----------
    argument : str
        Name of the argument that was refused; empty when the whole input is meant.
    rule : str
        What it must be, worded to follow "must be"; a whole sentence when `argument` is empty.
    value : object
        What was found instead; None when there is nothing to quote.
    remedy : str
        What to type instead; empty when there is none.
    where : str
        Row, part, support or cell where it was found; empty when obvious.
    """

    def __init__(
        self, argument: str, rule: str, value: object = None, *, remedy: str = "", where: str = ""
    ) -> None:
        self.argument = argument
        self.rule = rule
        self.value = value
        self.remedy = remedy
        self.where = where
        super().__init__(self.sentence())

    def sentence(self) -> str:
        """Return the reason as one readable text, without ever quoting a whole array."""
        text = f"`{self.argument}` must be {self.rule}" if self.argument else self.rule
        if self.value is not None:
            text += f"; got {quote(self.value)}"
        text = stopped(text)
        if self.remedy:
            text += f" {stopped(self.remedy)}"
        if self.where:
            text += f" ({self.where})"
        return text


class InputError(RigidsheetError, ValueError):
    """An input that is not allowed: a wrong number, a missing row, an unknown word."""


class KindError(RigidsheetError, TypeError):
    """An input of the wrong kind: a mass where a length is asked, a text where a number is asked."""


class PhysicsError(RigidsheetError, ValueError):
    """Inputs that are fine each by itself, but for which the mechanics has no answer."""


class AbsentError(RigidsheetError, ValueError):
    """A question about something that is not there: an unknown function or result name."""


def stopped(text: str) -> str:
    """Return a sentence with exactly one mark at its end."""
    if text.endswith("..."):
        return text
    text = text.rstrip(".")
    return text if text.endswith(("?", "!")) else text + "."


def quote(value: object) -> str:
    """Return `value` as it is shown in a message: short, numbers to 6 digits, never an array."""
    if isinstance(value, bool):
        return "TRUE" if value else "FALSE"
    if isinstance(value, float):
        return f"{value:.6g}"
    if isinstance(value, str):
        text = value if len(value) <= 40 else value[:37] + "..."
        return f"'{text}'" if not text.startswith(("'", "a ", "an ", "no ")) else text
    if isinstance(value, int):
        return str(value)
    return str(value) if len(str(value)) <= 60 else "a block of cells"
