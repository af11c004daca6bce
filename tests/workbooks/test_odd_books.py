"""Workbooks that are lawful but unusual."""

from __future__ import annotations

import io
import random
import re
from typing import Any
from xml.sax.saxutils import escape

import openpyxl
import pytest
import workbook_parts as parts
from hypothesis import given, settings
from hypothesis import strategies as st

from rigidsheet.workbooks import recalculate
from rigidsheet.workbooks.errors import FormulaRefused, address
from rigidsheet.workbooks.evaluation.formulas import analyse, resolver, shifted

FUNCTIONS: dict[str, Any] = {"RB_X": lambda x=0.0, *_: x if isinstance(x, float) else 0.5}
SHEETS = [
    "Load cases",
    "O'Neil & sons <1>",
    "Prüfung Ω",
    "2024",
    "A1",
    "R1C1",
    "x.y",
    "TRUE",
    "a-b",
    "💡",
    'say "hi"',
]


def values(package: bytes, **inputs: object) -> dict[tuple[str, str], Any]:
    return dict(recalculate(package, inputs=inputs, functions=FUNCTIONS).values)


def reference(sheet: str) -> str:
    return "'" + sheet.replace("'", "''") + "'!"


@pytest.mark.parametrize("name", SHEETS)
def test_any_sheet_name(name: str) -> None:
    first = f"={reference(name)}B1*2+RB_X({reference(name)}B1)+SUM({reference(name)}$B$1:$B$2)+arm"
    book = parts.workbook(
        {"Main": {"A1": first}, name: {"A1": "=B1+1", "B1": '<c r="B1"><v>3</v></c>', "C1": "=RB_X(nope)"}},
        names={"arm": f"{reference(name)}$B$1", "nope": f"{reference(name)}$A$1"},
    )
    result = recalculate(book, functions=FUNCTIONS)
    assert dict(result.values) == {("Main", "A1"): 15.0, (name, "A1"): 4.0, (name, "C1"): 4.0}
    assert openpyxl.load_workbook(io.BytesIO(result.package), data_only=True)[name]["C1"].value == 4
    assert values(book, **{f"{reference(name)}B1": 5.0})[name, "A1"] == 6.0
    assert values(book, **{address(name, "B1"): 5.0})["Main", "A1"] == 25.0
    assert [r.sheet for r in result.results] == [name]


def test_sheets_in_another_order_than_their_parts_with_a_chart_sheet_between() -> None:
    names = [
        f'<definedName name="loc" localSheetId="{i}">Hidden!$A${r}</definedName>' for i, r in ((0, 1), (3, 2))
    ]
    book = parts.workbook(
        {"Third": {"A1": "=First!A1+loc"}, "Hidden": {f"A{r}": f'<c r="A{r}"><v>{r}0</v></c>' for r in (1, 2)},
         "Chart": "<chartsheet/>", "First": {"A1": "=1+loc"}},
        names=names, states={"Hidden": "veryHidden"},
    )  # fmt: skip
    files = parts.unpacked(book)
    tabs = re.findall(rb"<sheet .*?/>", files["xl/workbook.xml"])
    turned = files["xl/workbook.xml"].replace(b"".join(tabs), b"".join(reversed(tabs)))
    link = files["xl/_rels/workbook.xml.rels"].replace(
        b'/worksheet" Target="worksheets/sheet3.xml"', b'/chartsheet" Target="worksheets/sheet3.xml"'
    )
    none = f'<Relationships xmlns="{parts.PACKAGE}/relationships"/>'
    book = parts.repacked(
        book,
        {
            "xl/workbook.xml": turned,
            "xl/_rels/workbook.xml.rels": link,
            "xl/worksheets/_rels/sheet3.xml.rels": none,
        },
    )
    assert openpyxl.load_workbook(io.BytesIO(book)).sheetnames == ["First", "Chart", "Hidden", "Third"]
    result = recalculate(book, functions=FUNCTIONS)
    assert dict(result.values) == {("First", "A1"): 11.0, ("Third", "A1"): 31.0}
    assert openpyxl.load_workbook(io.BytesIO(result.package), data_only=True)["Third"]["A1"].value == 31


def test_relations_with_absolute_targets_and_parts_elsewhere() -> None:
    files: dict[str, str | bytes] = dict(parts.unpacked(parts.workbook({"S": {"A1": "=1+1"}})))
    files["book/s.xml"] = files.pop("xl/worksheets/sheet1.xml")
    files["book/w.xml"] = files.pop("xl/workbook.xml")
    rels = files.pop("xl/_rels/workbook.xml.rels")
    assert isinstance(rels, bytes)
    files["book/_rels/w.xml.rels"] = rels.replace(b"worksheets/sheet1.xml", b"/book/s.xml")
    root = files["_rels/.rels"]
    assert isinstance(root, bytes)
    files["_rels/.rels"] = root.replace(b'"xl/workbook.xml"', b'"/book/w.xml"')
    assert values(parts.packed(files)) == {("S", "A1"): 2.0}


def test_an_empty_workbook_and_empty_sheets_give_nothing_and_change_nothing() -> None:
    blank = parts.workbook({"S": parts.sheet("").replace("<sheetData></sheetData>", "<sheetData/>"), "T": {}})
    result = recalculate(blank, functions=FUNCTIONS)
    assert (dict(result.values), result.errors, result.results, result.checks) == ({}, (), (), ())
    assert not result.changed
    assert result.package == blank


def test_an_input_goes_into_an_empty_sheet() -> None:
    book = parts.workbook({"S": {"A1": "=T!B2*2"}, "T": {"C9": "x"}})
    assert values(book, **{"T!B2": 4.0}) == {("S", "A1"): 8.0}
    empty = parts.workbook(
        {"S": {"A1": "=T!B2*2"}, "T": parts.sheet("").replace("<sheetData></sheetData>", "<sheetData/>")}
    )
    assert values(empty, **{"T!B2": 4.0}) == {("S", "A1"): 8.0}


def test_parts_that_formulas_do_not_use_do_not_matter() -> None:
    extra = {
        "xl/externalLinks/externalLink1.xml": "<externalLink/>",
        "xl/pivotTables/p.xml": "<pivot/>",
        "xl/tables/table1.xml": "<table/>",
        "customXml/item1.xml": "<a>note</a>".encode("utf-16"),
        "docProps/empty.xml": b"",
        "xl/": b"",
    }
    relation = (
        f'<Relationship Id="x1" Type="{parts.OFFICE}/externalLink" Target="externalLinks/externalLink1.xml"/>'
    )
    far = f'<Relationship Id="x2" Type="{parts.OFFICE}/hyperlink" Target="file:///etc/passwd" TargetMode="External"/>'
    names = {"rates": "[1]Other!$A$1", "rows": "OFFSET(S!$A$1,0,0,COUNTA(S!$A:$A),1)"}
    book = parts.workbook({"S": {"A1": "=2*3"}}, parts=extra, relations=relation + far, names=names)
    result = recalculate(book, functions=FUNCTIONS)
    assert dict(result.values) == {("S", "A1"): 6.0}
    new = parts.unpacked(result.package)
    assert all(new[name] == data for name, data in parts.unpacked(book).items() if "sheet1" not in name)


@pytest.mark.parametrize(
    ("formula", "expected"),
    [
        ("\n 1 +\t2\n", 3.0),
        ("+A2", 4.0),
        ("sum(a1:A3, $a$2)", 13.0),
        ("if(1=1,Rb_X(2),0)", 2.0),
        ("RB_X(RB_X(RB_X(3)))*RB_X(2)", 6.0),
        ("-RB_X(3)^2", 9.0),
        ('"RB_X("&RB_X(1)&")"', "RB_X(1)"),
        ("SUM(1:3)-SUM(A1:A3)", 0.0),
        ("1" + "+1" * 100, 101.0),
        ("(" * 40 + "1" + ")" * 40, 1.0),
        ("TRUE+FALSE", 1.0),
        ("INDEX(A1:A3,2)+INDEX({5;6},2)", 10.0),
        ("10%+5", 5.1),
        ("A1=A2", False),
        ('A1&""', "3"),
    ],
)
def test_odd_formula_texts(formula: str, expected: object) -> None:
    data = {f"A{i}": f'<c r="A{i}"><v>{v}</v></c>' for i, v in ((1, 3), (2, 4), (3, 2))}
    found = values(parts.workbook({"S": {**data, "C5" if "1:3" in formula else "C1": f"={formula}"}}))
    assert list(found.values()) == [expected]


def test_a_formula_with_preserved_space_and_attributes() -> None:
    cell = '<c r="A1"><f ca="1" xml:space="preserve"> RB_X( 2 ) </f></c>'
    assert values(parts.workbook({"S": {"A1": cell}})) == {("S", "A1"): 2.0}


def test_a_formula_without_text_is_refused() -> None:
    for formula in ("<f/>", "<f></f>", '<f t="shared" si="9"/>'):
        with pytest.raises(FormulaRefused, match="formula without text"):
            values(parts.workbook({"S": {"A1": f'<c r="A1">{formula}<v>1</v></c>'}}))


def test_overlapping_array_formulas_are_refused() -> None:
    one = '<c r="A1"><f t="array" ref="A1:B2">{1,2;3,4}</f></c>'
    two = '<c r="B2"><f>1+1</f></c>'
    with pytest.raises(FormulaRefused, match="overlaps the formula of B2"):
        values(parts.workbook({"S": {"A1": one, "B2": two}}))


@pytest.mark.parametrize(
    ("formula", "moved"),
    [
        ("A1+$A1+A$1+$A$1", "C4+$A4+C$1+$A$1"),
        ("SUM(B2:C3)*'A1'!B2", "SUM(D5:E6)*'A1'!D5"),
        ('"A1"&LOG10(A1)&arm_1', '"A1"&LOG10(C4)&arm_1'),
        ("A:A+1:2+$A:B", "C:C+4:5+$A:D"),
        ("{1,2}+Z26", "{1,2}+AB29"),
        ("XFD1048576", "B3"),  # round the edge of the sheet, as spreadsheets do
    ],
)
def test_shared_formulas_are_moved(formula: str, moved: str) -> None:
    assert shifted(formula, 3, 2) == moved


@pytest.mark.parametrize(
    "formula",
    ["'Case A1'!A1+1", "'Case A1'!$A1", '"A1"&A1', "SUM('Case A1'!A1:B2)", "LOG10(A1)", "Other!A1*2", "A1%+1E3+A1^2"]
)  # fmt: skip
def test_a_shared_formula_gives_what_the_same_plain_formulas_give(formula: str) -> None:
    numbers = {f"{c}{r}": f'<c r="{c}{r}"><v>{r * 7 + ord(c)}</v></c>' for r in range(1, 6) for c in "ABC"}

    def found(texts: dict[str, str]) -> dict[tuple[str, str], Any]:
        cells = {ref: f'<c r="{ref}">{text}</c>' for ref, text in texts.items()}
        return values(parts.workbook({"S": {**numbers, **cells}, "Other": numbers, "Case A1": numbers}))

    shared = dict.fromkeys(("F1", "G1", "F2", "G2"), '<f t="shared" si="0"/>')
    shared["F1"] = f'<f t="shared" si="0" ref="F1:G2">{escape(formula)}</f>'
    plain = {"F1": (0, 0), "G1": (0, 1), "F2": (1, 0), "G2": (1, 1)}
    assert found(shared) == found(
        {ref: f"<f>{escape(shifted(formula, *by))}</f>" for ref, by in plain.items()}
    )
    assert len(set(found(shared).values())) > 1


@settings(max_examples=300, deadline=None)
@given(st.text(alphabet="AB1$:!'\"(),;{}[]#@&+-*/^%<>=. \n_xRÄ", max_size=40))
def test_any_text_is_read_without_a_failure(text: str) -> None:
    found = analyse(text, resolver(("RB_X",)))
    assert found.engine or not text or found.refusal
    shifted(text, 3, 2)


def test_random_formula_texts_give_a_value_or_a_refusal() -> None:
    dice = random.Random(5)
    pieces = [
        "A1",
        "$B$2",
        "A1:A3",
        "RB_X(",
        "SUM(",
        "IF(",
        "1.5",
        '"a"',
        "+",
        "-",
        "*",
        "/",
        "^",
        "%",
        ",",
        ")",
        "&",
        "=",
    ]
    pieces += ["TRUE", "arm", "S!A2", "{1,2}", " ", "#N/A", "'S'!", "ABS("]
    outcomes = {"value": 0, "refusal": 0}
    for _ in range(600):
        text = "".join(dice.choices(pieces, k=dice.randint(1, 9)))
        cells = {"A1": '<c r="A1"><v>2</v></c>', "D9": f"={text}" if text.strip() else "=1"}
        try:
            values(parts.workbook({"S": cells}, names={"arm": "S!$A$1"}))
            outcomes["value"] += 1
        except FormulaRefused as refused:
            outcomes["refusal"] += refused.cell == "D9"
    assert sum(outcomes.values()) == 600
    assert min(outcomes.values()) > 30
