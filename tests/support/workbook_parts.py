"""Packages built by hand, the way different programs write them, for tests of reading and writing."""

from __future__ import annotations

import io
import re
import zipfile
from collections.abc import Mapping, Sequence
from xml.sax.saxutils import escape, quoteattr

MAIN = "http://schemas.openxmlformats.org/spreadsheetml/2006/main"
STRICT = "http://purl.oclc.org/ooxml/spreadsheetml/main"
OFFICE = "http://schemas.openxmlformats.org/officeDocument/2006/relationships"
PACKAGE = "http://schemas.openxmlformats.org/package/2006"
SHEET_TYPE = "application/vnd.openxmlformats-officedocument.spreadsheetml.sheet.main+xml"


def rows(cells: Mapping[str, str]) -> str:
    """Return row elements from address: the whole cell element, or a number, or =formula, or text."""
    lines: dict[int, list[str]] = {}
    for ref, content in cells.items():
        number = int(re.sub("[A-Z]", "", ref))
        lines.setdefault(number, []).append(cell(ref, content))
    return "".join(f'<row r="{n}">{"".join(inner)}</row>' for n, inner in sorted(lines.items()))


def cell(ref: str, content: str | float | bool) -> str:
    """Return one cell element."""
    if isinstance(content, bool):
        return f'<c r="{ref}" t="b"><v>{int(content)}</v></c>'
    if isinstance(content, (int, float)):
        return f'<c r="{ref}"><v>{content!r}</v></c>'
    if content.startswith("<c "):
        return content
    if content.startswith("="):
        return f'<c r="{ref}"><f>{escape(content[1:])}</f></c>'
    return f'<c r="{ref}" t="inlineStr"><is><t xml:space="preserve">{escape(content)}</t></is></c>'


def sheet(inner: str, *, before: str = "", after: str = "", space: str = MAIN) -> str:
    """Return a sheet part round some row elements."""
    return (
        '<?xml version="1.0" encoding="UTF-8" standalone="yes"?>\n'
        f'<worksheet xmlns="{space}" xmlns:r="{OFFICE}">{before}<sheetData>{inner}</sheetData>{after}</worksheet>'
    )


def workbook(
    sheets: Mapping[str, str | Mapping[str, str]],
    *,
    names: Mapping[str, str] | Sequence[str] = (),
    calc: str = "",
    head: str = "",
    states: Mapping[str, str] | None = None,
    parts: Mapping[str, str | bytes] | None = None,
    relations: str = "",
    space: str = MAIN,
) -> bytes:
    """Return a package; `sheets` holds sheet parts, or cells for `rows`; `parts` adds or replaces parts."""
    files: dict[str, str | bytes] = {"[Content_Types].xml": _types(len(sheets)), "_rels/.rels": _root()}
    tabs, links = [], []
    for i, (name, content) in enumerate(sheets.items(), 1):
        state = (states or {}).get(name)
        shown = f' state="{state}"' if state else ""
        tabs.append(f'<sheet name={quoteattr(name)} sheetId="{i}"{shown} r:id="rId{i}"/>')
        links.append(
            f'<Relationship Id="rId{i}" Type="{OFFICE}/worksheet" Target="worksheets/sheet{i}.xml"/>'
        )
        text = content if isinstance(content, str) else sheet(rows(content))
        files[f"xl/worksheets/sheet{i}.xml"] = text
    if parts and "xl/sharedStrings.xml" in parts:
        links.append(f'<Relationship Id="rIdS" Type="{OFFICE}/sharedStrings" Target="sharedStrings.xml"/>')
    if parts and "xl/styles.xml" in parts:
        links.append(f'<Relationship Id="rIdT" Type="{OFFICE}/styles" Target="styles.xml"/>')
    if isinstance(names, Mapping):
        names = [f"<definedName name={quoteattr(n)}>{escape(t)}</definedName>" for n, t in names.items()]
    defined = f"<definedNames>{''.join(names)}</definedNames>" if names else ""
    files["xl/workbook.xml"] = (
        '<?xml version="1.0" encoding="UTF-8" standalone="yes"?>\n'
        f'<workbook xmlns="{space}" xmlns:r="{OFFICE}">{head}<sheets>{"".join(tabs)}</sheets>{defined}{calc}</workbook>'
    )
    files["xl/_rels/workbook.xml.rels"] = (
        f'<Relationships xmlns="{PACKAGE}/relationships">{"".join(links)}{relations}</Relationships>'
    )
    files.update(parts or {})
    return packed(files)


def packed(files: Mapping[str, str | bytes]) -> bytes:
    """Return a zip archive of some parts."""
    target = io.BytesIO()
    with zipfile.ZipFile(target, "w", zipfile.ZIP_DEFLATED) as archive:
        for name, content in files.items():
            part = zipfile.ZipInfo(name)  # of a fixed date: the same parts are the same bytes at any time
            part.compress_type = zipfile.ZIP_DEFLATED
            archive.writestr(part, content)
    return target.getvalue()


def unpacked(package: bytes) -> dict[str, bytes]:
    """Return every part of a package."""
    with zipfile.ZipFile(io.BytesIO(package)) as archive:
        return {name: archive.read(name) for name in archive.namelist()}


def repacked(package: bytes, changes: Mapping[str, str | bytes | None]) -> bytes:
    """Return a package with parts replaced, added, or left out where the content is None."""
    parts: dict[str, str | bytes | None] = {**unpacked(package), **changes}
    return packed({name: content for name, content in parts.items() if content is not None})


def _types(count: int) -> str:
    sheets = "".join(
        f'<Override PartName="/xl/worksheets/sheet{i}.xml" '
        'ContentType="application/vnd.openxmlformats-officedocument.spreadsheetml.worksheet+xml"/>'
        for i in range(1, count + 1)
    )
    return (
        f'<Types xmlns="{PACKAGE}/content-types">'
        '<Default Extension="rels" ContentType="application/vnd.openxmlformats-package.relationships+xml"/>'
        '<Default Extension="xml" ContentType="application/xml"/>'
        f'<Override PartName="/xl/workbook.xml" ContentType="{SHEET_TYPE}"/>{sheets}</Types>'
    )


def _root() -> str:
    link = f'<Relationship Id="rId1" Type="{OFFICE}/officeDocument" Target="xl/workbook.xml"/>'
    return f'<Relationships xmlns="{PACKAGE}/relationships">{link}</Relationships>'
