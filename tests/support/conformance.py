"""Formulas of built-in functions with values from outside: one table for every engine and host.

Where a value is not plain arithmetic, the expected value is worked out by Python's own `math`, `statistics`
and `datetime`, or is stated in the text of the OpenFormula standard or of ISO/IEC 29500 (from memory: the
meaning of MATCH with 1, of MOD with a negative divisor, of INT and ROUND below zero).
"""

from __future__ import annotations

import datetime
import math
import statistics
from dataclasses import dataclass

# The cells that the formulas read, on a sheet called Data. The formulas stand on a sheet called Formulas.
DATA: dict[str, str | float | bool] = {
    "A1": 3.0,
    "A2": 4.0,
    "A3": 12.0,
    "A4": -2.5,
    "A5": 0.0,
    "B1": "pin",
    "B2": "shaft",
    "B3": "drum",
    "B4": "gate",
    "B5": "stop",
    "C2": True,
    "C3": "  two   words ",
    "C4": "5",
    "D1": 1.0,
    "D2": 2.0,
    "D3": 4.0,
    "D4": 8.0,
    "D5": 16.0,
    "E1": "kg",
    "E2": 0.25,
}


@dataclass(frozen=True)
class Case:
    """A formula and what it gives.

    `engine` says why the headless engine refuses it; `calc` is what LibreOffice Calc 7.4 gives where it reads
    a boolean as the number 1 (read from a run of it).
    """

    formula: str
    value: float | str | bool
    engine: str = ""
    calc: float | str | bool | None = None


COLUMN = [3.0, 4.0, 12.0, -2.5, 0.0]
DAY = float((datetime.date(2024, 2, 29) - datetime.date(1899, 12, 30)).days)

CASES: tuple[Case, ...] = (
    # arithmetic and comparison
    Case("1+2*3^2", 19.0),
    Case("-2^2", 4.0),  # unary minus binds tighter than the power in spreadsheets
    Case("2^3^2", 64.0),  # powers from left to right
    Case("50%*Data!A3", 6.0),
    Case("(1+2)*-3", -9.0),
    Case('"a"&1&TRUE', "a1TRUE", calc="a11"),
    Case("Data!A1<=Data!A2", True),
    Case("Data!A1<>Data!A2", True),
    Case('"PIN"=Data!B1', True),  # comparison of texts ignores case
    Case("1=TRUE", False, calc=True),
    Case("Data!C1=0", True),  # a blank compares equal to zero
    Case('Data!C1=""', True),  # and to the empty text
    Case("Data!C1+1", 1.0),
    Case("1E3+.5", 1000.5),
    # numbers are compared and printed with 15 significant digits
    Case("(0.1+0.2)=0.3", True),
    Case("0.1+0.2>0.3", False),
    Case('IF(1.1*3<=3.3,"OK","FAIL")', "OK"),
    Case("1-0.9<>0.1", False),
    Case("1=1.0001", False),
    Case("1<2=TRUE", True),  # comparisons from left to right
    Case('(0.1+0.2)&" mm"', "0.3 mm"),
    Case('1/3&""', "0.333333333333333"),
    Case('0.00001&""', "0.00001"),
    Case('Data!C1&"x"&Data!E1', "xkg"),
    Case('1+2&3*4="312"', True),
    Case('2<"a"', True),  # numbers before texts
    Case('"a"<"B"', True),
    Case('SUMPRODUCT((Data!B1:B5="Drum")*(Data!A1:A5>=12)*Data!D1:D5)', 4.0),
    Case('SUMPRODUCT((Data!C1:C5="")*1)', 2.0),
    # choice
    Case("IF(Data!A1>2,1,2)", 1.0),
    Case("IF(Data!A1>5,1)", False),
    Case("IFERROR(1/Data!A5,7)", 7.0),
    Case('IFERROR(MATCH("x",Data!B1:B5,0),-1)', -1.0),
    Case("_xlfn.IFNA(NA(),3)", 3.0),
    Case('CHOOSE(2,"a","b","c")', "b"),
    Case("AND(TRUE,Data!A1>0,1)", True),
    Case("OR(FALSE,Data!A1>5)", False),
    Case("NOT(Data!A1>5)", True),
    Case("_xlfn.XOR(TRUE,TRUE,TRUE)", True),
    # look-up
    Case("INDEX(Data!A1:B5,3,2)", "drum"),
    Case("INDEX(Data!A1:A5,4)", -2.5),
    Case('MATCH("gate",Data!B1:B5,0)', 4.0),
    Case("MATCH(5,Data!D1:D5,1)", 3.0),
    Case('INDEX(Data!A1:A5,MATCH("DRUM",Data!B1:B5,0))', 12.0),
    Case("VLOOKUP(4,Data!A1:B5,2,FALSE)", "shaft"),
    Case("VLOOKUP(9,Data!D1:E5,1,TRUE)", 8.0),
    Case("LOOKUP(5,Data!D1:D5)", 4.0),
    Case("HLOOKUP(3,Data!A1:D2,2,FALSE)", 4.0),
    Case("SUM(OFFSET(Data!A1,1,0,2,1))", 16.0),
    Case('INDIRECT("Data!A"&3)', 12.0),
    Case("ROWS(Data!A1:B5)", 5.0),
    Case("ROW(Data!A3)", 3.0),
    Case("COLUMN(Data!B1)", 2.0),
    Case("TRUE()", True),
    Case("FALSE()", False),
    Case("COLUMNS(Data!A1:B5)", 2.0),
    # sums and counts
    Case("SUM(Data!A1:A5)", math.fsum(COLUMN)),
    Case("SUM(Data!C1:C5)", 0.0, calc=1.0),  # texts and booleans in ranges are skipped
    Case("SUM(Data!A:A)", math.fsum(COLUMN)),
    Case("SUMPRODUCT(Data!A1:A5,Data!D1:D5)", 3 + 8 + 48 - 20.0),
    Case("SUMPRODUCT((Data!A1:A5>0)*Data!D1:D5)", 7.0),
    Case("SUMPRODUCT(--(Data!A1:A5>0))", 3.0),
    Case("SUMSQ(Data!A1:A3)", 169.0),
    Case('SUMIF(Data!A1:A5,">0",Data!D1:D5)', 7.0),
    Case('COUNTIF(Data!A1:A5,">0")', 3.0),
    Case('SUMIFS(Data!D1:D5,Data!A1:A5,">0",Data!D1:D5,"<4")', 3.0),
    Case("PRODUCT(Data!A1:A3)", 144.0),
    Case("MAX(Data!A1:A5)", 12.0),
    Case("MIN(Data!A1:A5,-7)", -7.0),
    Case("LARGE(Data!A1:A5,2)", 4.0),
    Case("SMALL(Data!A1:A5,2)", 0.0),
    Case("AVERAGE(Data!A1:A5)", statistics.fmean(COLUMN)),
    Case("MEDIAN(Data!A1:A5)", 3.0),
    Case("STDEV(Data!A1:A5)", statistics.stdev(COLUMN)),
    Case("COUNT(Data!A1:C5)", 5.0, calc=6.0),
    Case("COUNTA(Data!C1:C5)", 3.0),
    Case("COUNTBLANK(Data!C1:C5)", 2.0),
    # rounding and elementary functions
    Case("ABS(Data!A4)", 2.5),
    Case("SIGN(Data!A4)", -1.0),
    Case("ROUND(2.345,2)", 2.35),  # half away from zero, on the decimal text
    Case("ROUND(-2.5,0)", -3.0),
    Case("ROUND(1234.5,-2)", 1200.0),
    Case("ROUNDUP(2.01,0)", 3.0),
    Case("ROUNDDOWN(-2.9,0)", -2.0),
    Case("INT(Data!A4)", -3.0),
    Case("TRUNC(Data!A4)", -2.0),
    Case("MOD(-7,3)", 2.0),
    Case("MOD(7,-3)", -2.0),
    Case("CEILING(7.1,0.5)", 7.5),
    Case("FLOOR(7.4,0.5)", 7.0),
    Case("SQRT(2)", math.sqrt(2)),
    Case("POWER(2,0.5)", math.sqrt(2)),
    Case("EXP(1.5)", math.exp(1.5)),
    Case("LN(10)", math.log(10)),
    Case("LOG10(2)", math.log10(2)),
    Case("LOG(8,2)", 3.0),
    Case("PI()", math.pi),
    Case("RADIANS(30)", math.radians(30)),
    Case("DEGREES(1)", math.degrees(1)),
    Case("SIN(0.7)", math.sin(0.7)),
    Case("COS(0.7)", math.cos(0.7)),
    Case("TAN(0.7)", math.tan(0.7)),
    Case("ASIN(0.5)", math.asin(0.5)),
    Case("ACOS(0.5)", math.acos(0.5)),
    Case("ATAN(2)", math.atan(2)),
    Case("ATAN2(3,-4)", math.atan2(-4, 3)),  # x first
    Case("SINH(1)", math.sinh(1)),
    Case("COSH(1)", math.cosh(1)),
    Case("TANH(1)", math.tanh(1)),
    # right in a spreadsheet, wrong or missing in the engine, and therefore refused
    Case("SUMPRODUCT(ABS(Data!A1:A5))", 21.5, "ABS is not worked out for each cell"),
    Case("SUMPRODUCT(ROUND(Data!A1:A5,0))", 16.0, "ROUND is not worked out for each cell"),
    Case("SUMPRODUCT(SQRT(Data!D1:D5))", 7 + 3 * math.sqrt(2), "SQRT is not worked out for each cell"),
    Case("SUMPRODUCT(EXP(Data!A5:A5*{1;1}))", 2.0, "EXP is not worked out for each cell"),
    Case("SUMPRODUCT(N(+Data!A1:A3))", 19.0, "N takes only the first cell"),
    Case("SUMPRODUCT(ROW(Data!A1:A3))", 6.0, "ROW takes only the first cell"),
    Case("SUMPRODUCT(--ISNUMBER(Data!A1:A5))", 5.0, "ISNUMBER looks at the block as a whole"),
    Case("SUM(ABS({-1,2}))", 3.0, "ABS is not worked out for each cell"),
    Case('TEXT(12345.678,"0.00E+00")', "1.23E+04", "not in this number format"),
    Case('TEXT(2.5,"# ?/?")', "2 1/2", "not in this number format"),
    Case('TEXT(2.5,"0."&"00")', "2.50", "not in a computed number format"),
    Case("SUMPRODUCT((Data!E:E>0)*(Data!A:A>0))", 2.0, "the whole of a column is not compared"),
    Case("_xlfn.AGGREGATE(14,6,Data!A1:A5,1)", 12.0, "not offered in every form"),
    Case("INDEX(MMULT({1,2},{3;4}),1,1)", 11.0, "unknown to the engine"),
    Case("MDETERM({1,2;3,4})", -2.0, "unknown to the engine"),
    # information and text
    Case("ISNUMBER(Data!A1)", True),
    Case("ISTEXT(Data!C4)", True),
    Case("ISBLANK(Data!C1)", True),
    Case("ISERROR(1/0)", True),
    Case("ISNA(NA())", True),
    Case("N(TRUE)", 1.0),
    Case("TRIM(Data!C3)", "two words"),
    Case("LEFT(Data!B2,2)", "sh"),
    Case("RIGHT(Data!B2,2)", "ft"),
    Case("MID(Data!B2,2,3)", "haf"),
    Case("LEN(Data!B2)", 5.0),
    Case("UPPER(Data!B2)", "SHAFT"),
    Case('CONCATENATE(Data!B1,"-",Data!E1)', "pin-kg"),
    Case('SUBSTITUTE("a.b.c",".",",")', "a,b,c"),
    Case('FIND("f",Data!B2)', 4.0),
    Case('SEARCH("FT",Data!B2)', 4.0),
    Case('TEXT(1234.567,"0.00")', "1234.57"),
    Case('TEXT(0.256,"0%")', "26%"),
    Case('TEXT(1234567,"#,##0")', "1,234,567"),
    Case('TEXT(-3.14159,"0.00")', "-3.14"),
    Case('TEXT(2.5,"0.000"" mm""")', "2.500 mm"),
    Case('TEXT(-0.5,"+0.0;-0.0")', "-0.5"),
    Case('TEXT(45351,"yyyy-mm-dd")', "2024-02-29"),
    Case("VALUE(Data!C4)", 5.0),
    Case('REPT("ab",3)', "ababab"),
    Case('EXACT("a","A")', False),
    Case("DATE(2024,2,29)", DAY),
    Case("YEAR(DATE(2024,2,29))", 2024.0),
    # an argument left out is zero for these
    Case("ROUND(1.5,)", 2.0),
    Case("IF(TRUE,,3)", 0.0),
)
