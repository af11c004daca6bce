"""Files that are refused with the reason, and left as they were."""

from __future__ import annotations

import io
import random
import struct
import zipfile
from pathlib import Path

import pytest
import workbook_parts as parts

from rigidsheet.core.errors import RigidsheetError
from rigidsheet.workbooks import recalculate
from rigidsheet.workbooks.errors import FileRefused

GOOD = parts.workbook({"S": {"A1": "=1+1"}})
OLE = b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1" + b"\0" * 600


def changed(name: str, old: bytes, new: bytes) -> bytes:
    data = parts.unpacked(GOOD)[name]
    assert old in data
    return parts.repacked(GOOD, {name: data.replace(old, new)})


def with_member(name: str, data: bytes = b"x") -> bytes:
    target = io.BytesIO(GOOD)
    with zipfile.ZipFile(target, "a") as archive:
        archive.writestr(zipfile.ZipInfo(name), data)
    return target.getvalue()


def twice(name: str) -> bytes:
    target = io.BytesIO(GOOD)
    with pytest.warns(UserWarning, match="Duplicate"), zipfile.ZipFile(target, "a") as archive:
        archive.writestr(name, b"<other/>")
    return target.getvalue()


def encrypted() -> bytes:
    """Return the good file with the encryption flag set in every central directory entry."""
    data = bytearray(GOOD)
    at = data.find(b"PK\x01\x02")
    while at >= 0:
        data[at + 8] |= 1
        at = data.find(b"PK\x01\x02", at + 4)
    return bytes(data)


def bomb() -> bytes:
    return parts.repacked(GOOD, {"xl/media/image1.png": b"\0" * 20_000_000})


def many() -> bytes:
    return parts.packed({f"p{i}": b"" for i in range(10_001)})


def lying_size() -> bytes:
    """Return a file whose sheet unpacks to more than its directory says."""
    data = bytearray(parts.repacked(GOOD, {"xl/media/a.bin": b"\0" * 100_000}))
    at = data.rfind(b"xl/media/a.bin") - 46
    assert data[at : at + 4] == b"PK\x01\x02"
    data[at + 24 : at + 28] = struct.pack("<I", 10)
    return bytes(data)


DOCTYPE = b'<!DOCTYPE x [<!ENTITY e SYSTEM "file:///etc/hostname">]>'
SHEET = "xl/worksheets/sheet1.xml"
BOOK = "xl/workbook.xml"
HEAD = b'standalone="yes"?>\n'

CASES = {
    "empty": (b"", "the file is empty"),
    "text": (b"a;b;c\n1;2;3\n", "not an .xlsx workbook"),
    "cut short": (GOOD[:-200], "the file is damaged"),
    "one byte wrong": (GOOD[:80] + bytes([GOOD[80] ^ 255]) + GOOD[81:], "the file is damaged"),
    "password": (OLE + "EncryptedPackage".encode("utf-16-le"), "protected by a password"),
    "xls": (OLE + "Workbook".encode("utf-16-le"), r"old \.xls workbook"),
    "ods": (parts.packed({"mimetype": "application/vnd.oasis.opendocument.spreadsheet"}), "OpenDocument"),
    "zip": (parts.packed({"a.txt": "x"}), "not a workbook"),
    "xlsb": (changed("_rels/.rels", b"xl/workbook.xml", b"xl/workbook.bin"), r"binary \.xlsb"),
    "docx": (
        parts.repacked(changed("_rels/.rels", b"xl/workbook.xml", b"word/d.xml"), {"word/d.xml": "<document/>"}),
        "not a workbook",
    ),
    "bomb": (bomb(), "unpacks to more than 250 times"),
    "many parts": (many(), "holds 10001 parts"),
    "lying size": (lying_size(), "damaged"),
    "doctype in a sheet": (changed(SHEET, HEAD, HEAD + DOCTYPE), "document type declaration"),
    "doctype in the book": (changed(BOOK, HEAD, HEAD + DOCTYPE), "document type declaration"),
    "doctype in a theme": (with_member("xl/theme/t.xml", DOCTYPE + b"<t/>"), "document type declaration"),
    "utf-16 sheet": (
        parts.repacked(GOOD, {SHEET: parts.unpacked(GOOD)[SHEET].decode().replace("UTF-8", "UTF-16").encode("utf-16")}),
        "written in UTF-16",
    ),
    "latin-1 sheet": (changed(SHEET, b'encoding="UTF-8"', b'encoding="ISO-8859-1"'), "written in ISO-8859-1"),
    "broken xml": (changed(SHEET, b"</sheetData>", b"</sheetDat>"), r"sheet1\.xml is damaged"),
    "parent path": (with_member("../evil.xml"), "odd path"),
    "inner parent path": (with_member("xl/../../evil.xml"), "odd path"),
    "absolute path": (with_member("/etc/evil"), "odd path"),
    "drive path": (with_member("C:/evil"), "odd path"),
    "backslash path": (with_member("xl\\evil.xml"), "odd path"),
    "duplicate": (twice(SHEET), "occurs twice"),
    "duplicate but for case": (with_member("XL/Workbook.xml"), "occurs twice"),
    "encrypted": (encrypted(), "is encrypted"),
    "sheet missing": (parts.repacked(GOOD, {SHEET: None}), "is missing"),
    "no sheets": (parts.workbook({}), "no sheet with cells"),
    "iteration": (parts.workbook({"S": {"A1": "=A1+1"}}, calc='<calcPr iterate="1"/>'), "iterative calculation"),
    "date as text": (
        parts.workbook({"S": {"A1": '<c r="A1" t="d"><v>2026-04-01</v></c>', "A2": "=SUM(A1:A1)"}}),
        "a date is kept as text",
    ),
    "as displayed": (parts.workbook({"S": {"A1": "=1/3"}}, calc='<calcPr fullPrecision="0"/>'), "as displayed"),
    "data table": (
        parts.workbook({"S": {"A1": '<c r="A1"><f t="dataTable" ref="A1:A2" r1="B1"/><v>1</v></c>'}}),
        "what-if data table",
    ),
    "cell twice": (parts.workbook({"S": parts.sheet('<row r="1"><c r="A1"/><c r="A1"/></row>')}), "cell twice"),
    "sheet twice": (changed(BOOK, b"</sheets>", b'<sheet name="s" sheetId="9"/></sheets>'), "the same name"),
}  # fmt: skip


@pytest.mark.parametrize("case", CASES)
def test_file_is_refused_with_the_reason_and_left_alone(case: str, tmp_path: Path) -> None:
    data, reason = CASES[case]
    path = tmp_path / "book.xlsx"
    path.write_bytes(data)
    with pytest.raises(FileRefused, match=reason) as caught:
        recalculate(path, functions={})
    assert path.read_bytes() == data
    assert [p.name for p in tmp_path.iterdir()] == ["book.xlsx"]
    assert "\n" not in str(caught.value)
    assert "book.xlsx" in str(caught.value) or "S!A1" in str(caught.value)


@pytest.mark.parametrize("place", range(0, len(GOOD), 37))
def test_a_damaged_byte_never_gives_anything_but_a_refusal_or_the_right_value(place: int) -> None:
    data = GOOD[:place] + bytes([GOOD[place] ^ 0x55]) + GOOD[place + 1 :]
    try:
        result = recalculate(data, functions={})
    except RigidsheetError:
        return
    assert dict(result.values) == {("S", "A1"): 2.0}


def test_macros_are_kept_and_signed_files_are_written_only_to_another_file(tmp_path: Path) -> None:
    macros = parts.repacked(GOOD, {"xl/vbaProject.bin": b"\x01\x02"})
    path = tmp_path / "book.xlsm"
    path.write_bytes(macros)
    assert parts.unpacked(recalculate(path, functions={}).package)["xl/vbaProject.bin"] == b"\x01\x02"
    signed = parts.repacked(GOOD, {"_xmlsignatures/origin.sigs": b""})
    path.write_bytes(signed)
    with pytest.raises(FileRefused, match="digital signature"):
        recalculate(path, functions={})
    assert path.read_bytes() == signed
    result = recalculate(path, to=tmp_path / "copy.xlsm", functions={})
    assert [warning.kind for warning in result.warnings] == ["signature"]
    assert path.read_bytes() == signed
    assert recalculate(path, write=False, functions={}).path is None


def busy_book() -> dict[str, bytes]:
    """Return the parts of a small workbook that uses most of what is read."""
    cells = {
        "A1": '<c r="A1" t="s" s="1"><v>0</v></c>', "B1": '<c r="B1"><v>2</v></c>',
        "C1": '<c r="C1"><f>SUM(A1:B1)*arm</f><v>1</v></c>',
        "C2": '<c r="C2"><f t="array" ref="C2:D3">{1,2;3,4}</f></c>',
        "E1": '<c r="E1"><f t="shared" ref="E1:E2" si="0">RB_X(B1)</f></c>',
        "E2": '<c r="E2"><f t="shared" si="0"/></c>',
    }  # fmt: skip
    strings = f'<sst xmlns="{parts.MAIN}"><si><t>4 kg</t></si></sst>'
    styles = f'<styleSheet xmlns="{parts.MAIN}"><cellXfs><xf numFmtId="0"/><xf numFmtId="14"/></cellXfs></styleSheet>'
    extra = {"xl/sharedStrings.xml": strings, "xl/styles.xml": styles}
    return parts.unpacked(
        parts.workbook({"S": cells}, names={"arm": "S!$B$1"}, parts=extra, calc='<calcPr calcId="1"/>')
    )


@pytest.mark.parametrize(
    "part", [SHEET, BOOK, "xl/sharedStrings.xml", "xl/styles.xml", "xl/_rels/workbook.xml.rels"]
)
def test_changed_characters_inside_a_part_end_in_a_result_or_a_refusal(part: str) -> None:
    dice = random.Random(part)
    good = busy_book()
    refused = 0
    for _ in range(250):
        data = bytearray(good[part])
        for _ in range(dice.randint(1, 3)):
            data[dice.randrange(len(data))] = dice.choice(b'0129ABCZ:$"<>/= x&;,')
        try:
            recalculate(parts.packed({**good, part: bytes(data)}), functions={"RB_X": lambda x: 1.0})
        except RigidsheetError:
            refused += 1
    assert 20 < refused <= 250
