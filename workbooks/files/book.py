"""What a workbook package says about itself: sheets, defined names, calculation settings."""

from __future__ import annotations

import posixpath
from dataclasses import dataclass, field

from ..errors import FileRefused
from .package import Package
from .xmlparts import elements, truth


@dataclass(frozen=True)
class SheetPart:
    """A sheet with cells: its name as shown on the tab, and the part that holds it."""

    name: str
    part: str
    index: int  # place among all sheets of the file, chart sheets included
    hidden: bool = False


@dataclass(frozen=True)
class DefinedName:
    """A name and the text of what it stands for; `sheet` when it belongs to one sheet only."""

    name: str
    text: str
    sheet: str | None = None
    hidden: bool = False


@dataclass(frozen=True)
class Book:
    """A workbook as far as recalculation needs to know it."""

    package: Package
    part: str
    sheets: tuple[SheetPart, ...]
    names: tuple[DefinedName, ...]
    date1904: bool
    shared_strings: bytes | None
    styles: bytes | None
    lookup: dict[tuple[str | None, str], DefinedName] = field(default_factory=dict)

    def named(self, name: str, sheet: str | None) -> DefinedName | None:
        """Return the name as a formula on `sheet` sees it: the sheet's own one first, any case."""
        low = name.lower()
        return (self.lookup.get((sheet, low)) if sheet is not None else None) or self.lookup.get((None, low))


def describe(package: Package) -> Book:
    """Read the workbook part and its relations, or refuse the package with the reason."""
    main = _main_part(package)
    relations = _relations(package, main)
    sheets: list[SheetPart] = []
    order: list[str] = []
    names: list[tuple[str, str, str | None, bool]] = []
    date1904 = False
    for tag, attributes, text, _ in elements(_part(package, main), main):
        if tag == "sheet":
            name = attributes.get("name", "")
            kind, target = relations.get(_relation_id(attributes), ("", ""))
            if kind == "worksheet":
                hidden = attributes.get("state", "visible") != "visible"
                _part(package, target)
                sheets.append(SheetPart(name, target, len(order), hidden))
            order.append(name)
        elif tag == "definedName":
            names.append(
                (
                    attributes.get("name", ""),
                    text.strip(),
                    attributes.get("localSheetId"),
                    truth(attributes.get("hidden")),
                )
            )
        elif tag == "workbookPr":
            date1904 = truth(attributes.get("date1904"))
        elif tag == "calcPr":
            _settings(attributes)
    if not sheets:
        raise FileRefused("the workbook has no sheet with cells")
    if len({name.lower() for name in order}) != len(order):
        raise FileRefused("two sheets of the workbook have the same name")
    defined = tuple(_scoped(name, order) for name in names)
    lookup = {(name.sheet, name.name.lower()): name for name in defined}
    by_kind = dict(relations.values())
    return Book(
        package,
        main,
        tuple(sheets),
        defined,
        date1904,
        package.parts.get(by_kind.get("sharedStrings", "")),
        package.parts.get(by_kind.get("styles", "")),
        lookup,
    )


def _scoped(raw: tuple[str, str, str | None, bool], order: list[str]) -> DefinedName:
    name, text, local, hidden = raw
    if local is None:
        return DefinedName(name, text, None, hidden)
    if not local.isdigit() or int(local) >= len(order):
        raise FileRefused(f"the defined name {name} belongs to a sheet that is not there")
    return DefinedName(name, text, order[int(local)], hidden)


def _settings(attributes: dict[str, str]) -> None:
    """Refuse the calculation settings under which a cell would show another number than ours."""
    if truth(attributes.get("iterate")):
        raise FileRefused(
            "iterative calculation is switched on, so the result depends on how often it was run",
            remedy="Switch it off in the calculation options and solve the circle by a formula",
        )
    if not truth(attributes.get("fullPrecision"), True):
        raise FileRefused(
            "'precision as displayed' is switched on, so numbers are rounded to their format",
            remedy="Switch it off in the calculation options",
        )


def _relation_id(attributes: dict[str, str]) -> str:
    return next((text for key, text in attributes.items() if key.endswith("relationships|id")), "")


def _part(package: Package, name: str) -> bytes:
    data = package.parts.get(name)
    if data is None:
        raise FileRefused(f"the part {name[:80] or 'of the workbook'} is missing from the file")
    return data


def _relations(package: Package, part: str) -> dict[str, tuple[str, str]]:
    """Return id: (kind, part) of the relations of a part; links to outside are left out."""
    folder, _, name = part.rpartition("/")
    where = f"{folder}/_rels/{name}.rels" if folder else f"_rels/{name}.rels"
    found = {}
    data = package.parts.get(where)
    if data is None:
        return {}
    for tag, attributes, _, _ in elements(data, where):
        if tag == "Relationship" and attributes.get("TargetMode") != "External":
            target = attributes.get("Target", "")
            path = target[1:] if target.startswith("/") else posixpath.join(folder, target)
            kind = attributes.get("Type", "").rpartition("/")[2]
            found[attributes.get("Id", "")] = (kind, posixpath.normpath(path))
    return found


def _main_part(package: Package) -> str:
    """Return the path of the workbook part, or name the format that this really is."""
    if "[Content_Types].xml" not in package.parts:
        if b"opendocument" in package.parts.get("mimetype", b""):
            raise FileRefused("the file is an OpenDocument file", remedy="Save it as .xlsx")
        raise FileRefused("the file is a zip archive but not a workbook")
    for kind, target in _relations(package, "").values():
        if kind == "officeDocument":
            if target.endswith(".bin"):
                raise FileRefused("the file is a binary .xlsb workbook", remedy="Save it as .xlsx")
            root = next((tag for tag, _, _, _ in elements(_part(package, target), target)), "")
            if root != "workbook":
                raise FileRefused("the file is an office file but not a workbook", remedy="Save it as .xlsx")
            return target
    raise FileRefused("the file is an office file without a workbook inside")
