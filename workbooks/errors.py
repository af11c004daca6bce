"""Why a workbook is refused: classes that name the file, the sheet and the cell."""

from __future__ import annotations

from rigidsheet.core.errors import InputError


class FileRefused(InputError):
    """A file that cannot be recalculated or written safely; the file itself is left untouched."""

    def __init__(self, reason: str, *, remedy: str = "", where: str = "") -> None:
        super().__init__("", reason, remedy=remedy, where=where)


class FileChanged(FileRefused):
    """The file was changed by somebody else between reading and writing."""


class FormulaRefused(FileRefused):
    """A formula that cannot be worked out without the risk of a silently wrong number.

    Parameters
    ----------
    reason : str
        What is wrong, as a sentence.
    sheet, cell : str
        Where the formula stands.
    formula : str
        The formula as the file holds it, without the leading equals sign.
    remedy : str
        What to do instead.
    """

    def __init__(self, reason: str, *, sheet: str, cell: str, formula: str = "", remedy: str = "") -> None:
        self.sheet = sheet
        self.cell = cell
        self.formula = formula
        super().__init__(reason, remedy=remedy, where=address(sheet, cell))


class UnknownFunction(FormulaRefused):
    """A formula calls a function, or reads a name, that nobody here knows."""


class InputRefused(InputError):
    """An input that cannot be set: no such cell, a formula there, or a value that does not fit its unit."""


def address(sheet: str, cell: str) -> str:
    """Return the address as a person types it: Inputs!B3, 'Load cases'!B3."""
    plain = sheet.replace("_", "").isalnum() and not sheet[:1].isdigit()
    return f"{sheet}!{cell}" if plain else "'" + sheet.replace("'", "''") + f"'!{cell}"
