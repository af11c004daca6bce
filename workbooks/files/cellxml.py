"""One cell as XML text: values, errors, texts, the way spreadsheet programs write them."""

from __future__ import annotations

import math
import re
from typing import Final

from rigidsheet.udf.cells import CellError, Value

from ..errors import FileRefused

_CONTROL: Final = re.compile("[\x00-\x08\x0b\x0c\x0e-\x1f\ufffe\uffff]|_(?=x[0-9A-Fa-f]{4}_)")
_ESCAPED: Final = re.compile("_x([0-9A-Fa-f]{4})_")
_TYPE: Final = re.compile(rb"\s+t\s*=\s*(?:\"[^\"]*\"|'[^']*')")
_META: Final = re.compile(rb"\s+vm\s*=\s*(?:\"[^\"]*\"|'[^']*')")


def text_bytes(text: str) -> bytes:
    """Return a text as XML; characters that XML does not allow are written as _xHHHH_."""
    safe = _CONTROL.sub(lambda found: f"_x{ord(found[0]):04X}_", text)
    safe = safe.replace("&", "&amp;").replace("<", "&lt;").replace(">", "&gt;").replace("\r", "_x000D_")
    try:
        return safe.encode()
    except UnicodeEncodeError:
        raise FileRefused("a text holds half a character and cannot be written") from None


def plain_text(text: str) -> str:
    """Return the characters behind _xHHHH_ marks."""
    return _ESCAPED.sub(lambda found: chr(int(found[1], 16)), text) if "_x" in text else text


def number_text(value: float) -> str:
    """Return the shortest text that reads back as the same number."""
    if not math.isfinite(value):
        raise FileRefused("a number that is not finite cannot be written")
    text = repr(value)
    return text[:-2] if text.endswith(".0") else text.replace("e+", "E+").replace("e-", "E-")


def value_xml(value: Value, prefix: bytes) -> tuple[bytes, bytes]:
    """Return the cell's type (empty for numbers and blanks) and its value element."""
    if value is None:
        return b"", b""
    kind, space = b"", b""
    if isinstance(value, bool):
        kind, inner = b"b", b"1" if value else b"0"
    elif isinstance(value, CellError):
        kind, inner = b"e", value.text.encode()
    elif isinstance(value, str):
        kind, inner = b"str", text_bytes(value)
        if value[:1].isspace() or value[-1:].isspace() or "\n" in value:
            space = b' xml:space="preserve"'
    else:
        inner = number_text(value).encode()
    return kind, b"<%bv%b>%b</%bv>" % (prefix, space, inner, prefix)


def typed_tag(tag: bytes, kind: bytes) -> bytes:
    """Return a cell's start tag with another type, and without the metadata of the old value."""
    bare = _META.sub(b"", _TYPE.sub(b"", tag))
    if not kind:
        return bare
    cut = -2 if bare.endswith(b"/>") else -1
    return bare[:cut].rstrip() + b' t="' + kind + b'"' + bare[cut:]
