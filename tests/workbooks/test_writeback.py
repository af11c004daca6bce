"""Values go back into files of every make, and nothing else changes."""

from __future__ import annotations

import io
import re
import zipfile
from typing import Any

import openpyxl
import pytest
import workbook_parts as parts
from openpyxl.chart import LineChart, Reference
from openpyxl.comments import Comment
from openpyxl.formatting.rule import CellIsRule
from openpyxl.styles import Font
from openpyxl.worksheet.datavalidation import DataValidation
from openpyxl.worksheet.formula import ArrayFormula

from rigidsheet.udf.cells import CellError, Refusal
from rigidsheet.workbooks import Recalculation, recalculate
from rigidsheet.workbooks.files.writeback import CALC_VERSION

FUNCTIONS: dict[str, Any] = {
    "RB_X": lambda *cells: 1.5,
    "RB_TEXT": lambda text: text,
    "RB_TRUE": lambda: True,
    "RB_FAIL": lambda: Refusal("#NUM!", "no"),
    "RB_PAIR": lambda: [[1.0, "two"], [3.0, 4.0]],
}
VALUE = re.compile(rb"<(?:\w+:)?v(?:\s[^>]*)?>[^<]*</(?:\w+:)?v>|<(?:\w+:)?v\s*/>")
TYPE = re.compile(rb"""(<(?:\w+:)?c\b[^>]*?)\s+(?:t|vm)\s*=\s*(?:"[^"]*"|'[^']*')""")


def again(package: bytes) -> Recalculation:
    return recalculate(package, functions=FUNCTIONS)


def bare(sheet: bytes) -> bytes:
    """Return a sheet part without the values and types of its cells."""
    without = VALUE.sub(b"", sheet)
    previous = b""
    while previous != without:
        previous, without = without, TYPE.sub(rb"\1", without)
    return re.sub(rb"<((?:\w+:)?)c( [^>]*?)\s*/>", rb"<\1c\2></\1c>", without)


def check_only_values_change(before: bytes, inserted: tuple[str, ...] = ()) -> Recalculation:
    """Recalculate twice; every part but the sheets and the load flag must keep its content."""
    result = again(before)
    old, new = parts.unpacked(before), parts.unpacked(result.package)
    assert list(old) == list(new)
    for name, data in old.items():
        if name == "xl/workbook.xml":
            data = re.sub(rb'\s+fullCalcOnLoad="(1|true)"', b"", data)
            data = re.sub(rb'calcId="\d+"', b'calcId="%d"' % CALC_VERSION, data)
            assert re.sub(rb'calcId="\d+"', b'calcId="%d"' % CALC_VERSION, new[name]) == data
        elif "/worksheets/sheet" in name:
            now = bare(new[name])
            for ref in inserted:
                now = now.replace(f'<c r="{ref}"></c>'.encode(), b"", 1)
            assert now == bare(data)
        else:
            assert new[name] == data
    with (
        zipfile.ZipFile(io.BytesIO(before)) as one,
        zipfile.ZipFile(io.BytesIO(result.package)) as other,
    ):
        for a, b in zip(one.infolist(), other.infolist(), strict=True):
            assert (a.filename, a.date_time, a.compress_type) == (b.filename, b.date_time, b.compress_type)
            assert (a.external_attr, a.create_system, a.comment) == (
                b.external_attr,
                b.create_system,
                b.comment,
            )
    second = again(result.package)
    assert second.package is result.package or second.package == result.package
    assert not second.changed
    assert second.values == result.values
    return result


def saved(book: openpyxl.Workbook) -> bytes:
    target = io.BytesIO()
    book.save(target)
    return target.getvalue()


def rich_book() -> bytes:
    """Return a workbook with most of what a file can hold besides cells."""
    book = openpyxl.Workbook()
    sheet = book.active
    sheet.title = "Inputs & results"
    sheet["A1"], sheet["B1"] = "arm <m>", 0.4
    sheet["A2"], sheet["B2"] = "torque", "=RB_X(B1)*2"
    sheet["A3"], sheet["B3"] = "note", '=RB_TEXT(" a<b> & ""c"" ")'
    sheet["B4"], sheet["B5"], sheet["B6"] = "=RB_TRUE()", "=RB_FAIL()", '=""'
    sheet["C1"] = ArrayFormula("C1:D2", "=RB_PAIR()")
    sheet["B2"].font = Font(bold=True)
    sheet["B2"].comment = Comment("checked twice", "designer")
    sheet.conditional_formatting.add("B2", CellIsRule(operator="greaterThan", formula=["B1*2"]))
    validation = DataValidation(type="decimal", operator="greaterThan", formula1="0")
    validation.add("B1")
    sheet.add_data_validation(validation)
    sheet.merge_cells("A9:B9")
    chart = LineChart()
    chart.add_data(Reference(sheet, min_col=2, min_row=1, max_row=2))
    sheet.add_chart(chart, "F2")
    sheet.freeze_panes = "A2"
    book.create_sheet("Second")["A1"] = "='Inputs & results'!B2+1"
    return saved(book)


def test_an_openpyxl_file_keeps_everything_else() -> None:
    result = check_only_values_change(rich_book(), inserted=("D1", "C2", "D2"))
    book = openpyxl.load_workbook(io.BytesIO(result.package), data_only=True)
    sheet = book["Inputs & results"]
    column = [sheet[ref].value for ref in ("B1", "B2", "B3", "B4", "B5")]
    assert column == [0.4, 3.0, ' a<b> & "c" ', True, "#NUM!"]
    assert [[c.value for c in row] for row in sheet["C1:D2"]] == [[1, "two"], [3, 4]]
    assert book["Second"]["A1"].value == 4.0
    assert result.values["Inputs & results", "B6"] == ""


def test_the_order_to_recalculate_on_load_goes_and_the_version_is_raised() -> None:
    old = '<calcPr calcId="124519" fullCalcOnLoad="1" calcMode="manual"/>'
    book = parts.workbook({"S": {"A1": '<c r="A1"><f>1+1</f><v>2</v></c>'}}, calc=old)
    result = again(book)
    text = parts.unpacked(result.package)["xl/workbook.xml"].decode()
    assert f'<calcPr calcId="{CALC_VERSION}" calcMode="manual"/>' in text
    assert not again(result.package).changed
    new = f'<calcPr calcId="{CALC_VERSION + 5}"/>'
    assert not again(parts.workbook({"S": {"A1": '<c r="A1"><f>1+1</f><v>2</v></c>'}}, calc=new)).changed


EXCEL_SHEET = (
    '<row r="1" spans="1:4" x14ac:dyDescent="0.25">'
    '<c r="A1" s="1" t="s"><v>1</v></c><c r="B1"><v>0.40000000000000002</v></c>'
    '<c r="C1" t="str"><f>_xll.RB_TEXT(A1)</f><v>old</v></c>'
    '<c r="D1" s="2"><f t="shared" ref="D1:D3" si="0">[1]!RB_X(B1)*B1</f><v>7</v></c></row>'
    '<row r="2"><c r="B2"><v>2E-3</v></c><c r="C2" t="e"><f>\'book.xlam\'!RB_X()</f><v>#NAME?</v></c>'
    '<c r="D2"><f t="shared" si="0"/><v>8</v></c></row>'
    '<row r="3"><c r="B3"><v>3</v></c><c r="C3" t="b"><f>B3&gt;2</f><v>0</v></c>'
    '<c r="D3" t="str"><f t="shared" si="0"/><v></v></c></row>'
    '<row r="4"><c r="A4" cm="1"><f t="array" ref="A4:A5">B2:B3*2</f><v>1</v></c>'
    '<c r="B4" vm="3"><f>B3</f><v>0</v></c></row>'
    '<row r="5"><c r="A5" s="1"><v>1</v></c><c r="C5" s="4"/></row>'
)
STRINGS = (
    f'<sst xmlns="{parts.MAIN}" count="2" uniqueCount="2"><si><t>other</t></si>'
    '<si><r><t xml:space="preserve">drum </t></r><r><rPr><b/></rPr><t xml:space="preserve">A &amp; B</t></r>'
    '<rPh sb="0" eb="1"><t>phonetic</t></rPh></si></sst>'
)


def excel_like(space: str = parts.MAIN) -> bytes:
    sheet = parts.sheet(
        EXCEL_SHEET,
        before='<dimension ref="A1:D5"/>',
        after='<extLst><ext uri="{78C0}"><x14:y xmlns:x14="x"><xm:f xmlns:xm="m">A1&gt;2</xm:f></x14:y></ext></extLst>',
        space=space,
    ).replace(
        "<worksheet ", '<worksheet xmlns:x14ac="http://schemas.microsoft.com/office/spreadsheetml/2009/9/ac" '
    )
    chain = f'<calcChain xmlns="{parts.MAIN}"><c r="C1" i="1"/></calcChain>'
    macro = b"\x00macro\xff" * 50
    return parts.workbook(
        {"S": sheet},
        calc='<calcPr calcId="191029"/>',
        parts={"xl/sharedStrings.xml": STRINGS, "xl/calcChain.xml": chain, "xl/vbaProject.bin": macro},
        space=space,
    )


@pytest.mark.parametrize("space", [parts.MAIN, parts.STRICT])
def test_a_file_written_the_way_excel_writes_it(space: str) -> None:
    result = check_only_values_change(excel_like(space))
    assert dict(result.values) == {
        ("S", "C1"): "drum A & B",
        ("S", "D1"): 1.5 * 0.4,
        ("S", "C2"): 1.5,
        ("S", "D2"): 1.5 * 0.002,
        ("S", "C3"): True,
        ("S", "D3"): 4.5,
        ("S", "A4"): 0.004,
        ("S", "A5"): 6.0,
        ("S", "B4"): 3.0,
    }
    sheet = parts.unpacked(result.package)["xl/worksheets/sheet1.xml"].decode()
    assert '<c r="C1" t="str"><f>_xll.RB_TEXT(A1)</f><v>drum A &amp; B</v></c>' in sheet
    assert "<c r=\"C2\"><f>'book.xlam'!RB_X()</f><v>1.5</v></c>" in sheet
    assert '<c r="D2"><f t="shared" si="0"/><v>0.003</v></c>' in sheet
    assert '<c r="D3"><f t="shared" si="0"/><v>4.5</v></c>' in sheet
    assert '<c r="B4"><f>B3</f><v>3</v></c>' in sheet  # value metadata of the old value is gone
    assert '<c r="A4" cm="1"><f t="array" ref="A4:A5">B2:B3*2</f><v>0.004</v></c>' in sheet


LIBRE_SHEET = (
    '<row r="1" customFormat="false" ht="12.8" hidden="false"><c r="A1" s="0" t="n"><v>2</v></c>'
    '<c r="B1" s="0" t="n"><f aca="false">A1*3</f><v>0</v></c>'
    '<c r="C1" s="0" t="e"><f aca="false">org.rigidsheet.addin.rbx(A1)</f><v>#NAME?</v></c>'
    '<c r="D1" s="0" t="str"><f aca="false">ORG.RIGIDSHEET.ADDIN.RBTEXT("a")</f><v></v></c></row>'
    '<row r="2"><c r="A2" t="n"><f t="array" ref="A2:B2" aca="false">A1*{1,2}</f><v>0</v></c>'
    '<c r="B2" t="n"><v>0</v></c></row>'
)


def test_a_file_written_the_way_libreoffice_writes_it() -> None:
    calc = '<calcPr iterateCount="100" refMode="A1" iterate="false" iterateDelta="0.001"/>'
    result = check_only_values_change(parts.workbook({"S": parts.sheet(LIBRE_SHEET)}, calc=calc))
    assert list(result.values.values()) == [6.0, 1.5, "a", 2.0, 4.0]
    sheet = parts.unpacked(result.package)["xl/worksheets/sheet1.xml"].decode()
    assert '<c r="B1" s="0" t="n"><f aca="false">A1*3</f><v>6</v></c>' in sheet


def test_prefixed_elements_and_other_odd_but_lawful_xml() -> None:
    sheet = (
        f"<?xml version='1.0' encoding='utf-8'?><!-- > <c> --><x:worksheet xmlns:x='{parts.MAIN}'><x:sheetData>"
        "<x:row r='1'><x:c r='A1' t = 'n' ><x:v>2</x:v></x:c><!-- <x:c r='Z9'> --><x:c r='B1'  t='str' ph='a>b'>"
        "<x:f>A1*2</x:f><x:v/></x:c><x:c r='C1'><x:f>RB_TEXT(&quot;&#233;&#xE9;&quot;)</x:f></x:c></x:row>"
        "<x:row r='2'><x:c r='A2'><x:f t='array' ref='A2:B3'>A1*{1,2;3,4}</x:f><x:v>9</x:v></x:c></x:row>"
        "<x:row r='5'/></x:sheetData></x:worksheet>"
    )
    result = again(parts.workbook({"S": sheet}))
    found = parts.unpacked(result.package)["xl/worksheets/sheet1.xml"].decode()
    assert "<x:c r='B1' ph='a>b'><x:f>A1*2</x:f><x:v>4</x:v></x:c>" in re.sub(" +", " ", found)
    assert "</x:f><x:v>éé</x:v></x:c></x:row>" in found
    assert '<x:v>2</x:v></x:c><x:c r="B2"><x:v>4</x:v></x:c></x:row>' in found
    assert (
        '<x:row r="3"><x:c r="A3"><x:v>6</x:v></x:c><x:c r="B3"><x:v>8</x:v></x:c></x:row><x:row r=\'5\'/>'
        in found
    )
    assert found.startswith("<?xml version='1.0' encoding='utf-8'?><!-- > <c> -->")
    assert not again(result.package).changed


def test_cells_of_an_array_go_in_between_the_others() -> None:
    rows = (
        '<row r="1"><c r="B1"><f t="array" ref="B1:C3">{1,2;3,4;5,6}</f></c>'
        '<c r="D1" t="inlineStr"><is><t>d</t></is></c></row>'
        '<row r="2"><c r="A2" t="inlineStr"><is><t>a</t></is></c><c r="D2"><v>9</v></c></row><row r="3" ht="20"/>'
    )
    result = again(parts.workbook({"S": parts.sheet(rows)}))
    book = openpyxl.load_workbook(io.BytesIO(result.package), data_only=True)
    assert list(book["S"].iter_rows(values_only=True)) == [
        (None, 1, 2, "d"),
        ("a", 3, 4, 9),
        (None, 5, 6, None),
    ]
    order = re.findall(r' r="([A-Z]\d)"', parts.unpacked(result.package)["xl/worksheets/sheet1.xml"].decode())
    assert order == ["B1", "C1", "D1", "A2", "B2", "C2", "D2", "B3", "C3"]


@pytest.mark.parametrize(
    "text",
    [
        "",
        " lead and trail ",
        "a&b<c>d\"e'f",
        "tab\tline\nreturn\r",
        "\x01\x1f control",
        "_x0041_ literal",
        "_x005F_",
        *("Ω µ · − ü 漢 😀", "]]>", "  ", "\n", "x" * 32_767),
    ],
)
def test_texts_come_back_as_they_were(text: str) -> None:
    result = recalculate(parts.workbook({"S": {"A1": "=RB_T()"}}), functions={"RB_T": lambda: text})
    assert result.values["S", "A1"] == text
    second = recalculate(result.package, functions={"RB_T": lambda: text})
    assert not second.changed
    element = parts.unpacked(result.package)["xl/worksheets/sheet1.xml"]
    assert b'<c r="A1" t="str">' in element
    if "\r" not in text and "_x00" not in text and "\x01" not in text:
        found = openpyxl.load_workbook(io.BytesIO(result.package), data_only=True)["S"]["A1"].value
        assert (found or "") == text


@pytest.mark.parametrize("value", [0.1, 1e300, 5e-324, -0.0, 123456789012345.6, 1e22, 3.0, 2 / 3])
def test_numbers_are_written_to_the_last_digit(value: float) -> None:
    result = recalculate(parts.workbook({"S": {"A1": "=RB_N()"}}), functions={"RB_N": lambda: value})
    sheet = parts.unpacked(result.package)["xl/worksheets/sheet1.xml"].decode()
    found = re.search("<v>(.*)</v>", sheet)
    assert found is not None
    assert float(found[1]) == value
    assert not recalculate(result.package, functions={"RB_N": lambda: value}).changed


@pytest.mark.parametrize("kind", ['t="s"', 't="str"', 't="b"', 't="e"', 't="n"', "", 't="d"'])
def test_any_old_type_gives_way_to_the_new_one(kind: str) -> None:
    cell = f'<c r="A1" {kind}><f>RB_X()</f><v>1</v></c>'
    result = again(parts.workbook({"S": {"A1": cell}}, parts={"xl/sharedStrings.xml": STRINGS}))
    assert openpyxl.load_workbook(io.BytesIO(result.package), data_only=True)["S"]["A1"].value == 1.5


def test_a_formula_cell_with_an_inline_text_gets_a_value() -> None:
    cell = '<c r="A1" t="inlineStr"><f>RB_X()</f><is><t>old</t></is></c>'
    result = again(parts.workbook({"S": {"A1": cell}}))
    assert (
        b'<c r="A1"><f>RB_X()</f><v>1.5</v></c>' in parts.unpacked(result.package)["xl/worksheets/sheet1.xml"]
    )


def test_cells_without_an_address_are_counted_from_the_left() -> None:
    rows = "<row><c><v>2</v></c><c><f>A1*2</f></c></row><row><c><f>B1+1</f></c></row>"
    result = again(parts.workbook({"S": parts.sheet(rows)}))
    assert dict(result.values) == {("S", "B1"): 4.0, ("S", "A2"): 5.0}


def test_dynamic_arrays_are_written_while_they_keep_their_size() -> None:
    book = {"S": {"A1": '<c r="A1" cm="1"><f t="array" ref="A1:B2">RB_PAIR()</f><v>0</v></c>'}}
    assert check_dynamic(book)["S", "B2"] == 4.0
    book["S"]["A1"] = book["S"]["A1"].replace("A1:B2", "A1:B3")
    with pytest.raises(Exception, match="result has changed its size to 2 x 2 cells"):
        check_dynamic(book)


def check_dynamic(sheets: dict[str, dict[str, str]]) -> Any:
    return again(parts.workbook(sheets)).values


def test_an_error_in_an_array_formula_reaches_every_cell() -> None:
    cells = {"A1": '<c r="A1"><f t="array" ref="A1:A2">RB_PAIR()+SQRT(-1)</f></c>'}
    assert set(again(parts.workbook({"S": cells})).values.values()) == {CellError("#NUM!")}


def test_a_byte_order_mark_does_not_shift_the_places() -> None:
    sheet = parts.sheet(parts.rows({"A1": "=1+1"}))
    book = parts.repacked(
        parts.workbook({"S": sheet}), {"xl/worksheets/sheet1.xml": "\ufeff".encode() + sheet.encode()}
    )
    result = again(book)
    assert b'<c r="A1"><f>1+1</f><v>2</v></c>' in parts.unpacked(result.package)["xl/worksheets/sheet1.xml"]
