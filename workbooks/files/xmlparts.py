"""Small readers for the XML parts of a package: no DOCTYPE, no other encodings, no document tree."""

from __future__ import annotations

from collections.abc import Iterator
from xml.parsers import expat

from ..errors import FileRefused

SHEET_SPACES = (
    "http://schemas.openxmlformats.org/spreadsheetml/2006/main",
    "http://purl.oclc.org/ooxml/spreadsheetml/main",
)


def parser(part: str) -> expat.XMLParserType:
    """Return a parser that splits names into 'space|name' and refuses whatever could reach outside."""
    reader = expat.ParserCreate(namespace_separator="|")

    def doctype(*_: object) -> None:
        raise FileRefused(f"the part {part} has a document type declaration, which no workbook needs")

    def declaration(version: str, encoding: str | None, standalone: int) -> None:
        if encoding is not None and encoding.upper() not in ("UTF-8", "UTF8", "US-ASCII", "ASCII"):
            raise FileRefused(f"the part {part} is written in {encoding}, not in UTF-8")

    reader.StartDoctypeDeclHandler = doctype
    reader.XmlDeclHandler = declaration
    return reader


def parse(reader: expat.XMLParserType, data: bytes, part: str) -> None:
    """Run `reader` over a whole part."""
    if data[:2] in (b"\xff\xfe", b"\xfe\xff") or data[:4].count(b"\0") >= 2:
        raise FileRefused(f"the part {part} is written in UTF-16, not in UTF-8")
    try:
        reader.Parse(data, True)
    except (expat.ExpatError, UnicodeDecodeError) as error:
        raise FileRefused(f"the part {part} is damaged: {error}") from None


def elements(data: bytes, part: str) -> Iterator[tuple[str, dict[str, str], str, int]]:
    """Yield (local name, attributes, direct text, depth) of every element, in order of their start."""
    found: list[tuple[str, dict[str, str], list[str], int]] = []
    open_: list[list[str]] = []
    reader = parser(part)
    reader.buffer_text = True

    def start(name: str, attributes: dict[str, str]) -> None:
        text: list[str] = []
        found.append((name.rpartition("|")[2], attributes, text, len(open_)))
        open_.append(text)

    def end(_: str) -> None:
        open_.pop()

    def characters(text: str) -> None:
        if open_:
            open_[-1].append(text)

    reader.StartElementHandler = start
    reader.EndElementHandler = end
    reader.CharacterDataHandler = characters
    parse(reader, data, part)
    for name, attributes, texts, depth in found:
        yield name, attributes, "".join(texts), depth


def truth(text: str | None, default: bool = False) -> bool:
    """Return an XML boolean attribute as a bool."""
    return default if text is None else text.strip().lower() in ("1", "true", "on")


def whole(text: str) -> int:
    """Return a whole number that an attribute holds."""
    if not (text.isascii() and text.isdigit()):
        raise FileRefused(f"the file holds {text[:20]!r} where a whole number belongs")
    return int(text)
