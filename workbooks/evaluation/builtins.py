"""Which built-in functions take ranges, which take single values: needed to see what a plain cell means."""

from __future__ import annotations

from typing import Final

# Work out their arguments as whole arrays also in a plain cell.
ARRAY_FUNCTIONS: Final = frozenset(
    {"SUMPRODUCT", "MMULT", "MDETERM", "MINVERSE", "LOOKUP", "FREQUENCY", "AGGREGATE", "FILTER"}
    | {"SORT", "SORTBY", "UNIQUE", "XLOOKUP", "XMATCH", "LET", "BYROW", "BYCOL", "MAP", "REDUCE", "SCAN"}
)

# Hand the reference that they choose on to the function around them.
PASSING_FUNCTIONS: Final = frozenset({"IF", "IFERROR", "IFNA", "CHOOSE", "IFS", "SWITCH"})

# Take single values: a range in a plain cell means the one cell in the same row or column.
ELEMENT_FUNCTIONS: Final = frozenset(
    {"ABS", "ACOS", "ACOSH", "ASIN", "ASINH", "ATAN", "ATAN2", "ATANH", "CEILING", "COS", "COSH"}
    | {"DEGREES", "EVEN", "EXP", "FACT", "FLOOR", "INT", "LN", "LOG", "LOG10", "MOD", "ODD", "POWER"}
    | {"QUOTIENT", "RADIANS", "ROUND", "ROUNDDOWN", "ROUNDUP", "MROUND", "SIGN", "SIN", "SINH", "SQRT"}
    | {"TAN", "TANH", "TRUNC", "NOT", "ISNUMBER", "ISTEXT", "ISBLANK", "ISERROR", "ISNA", "ISERR"}
    | {"ISLOGICAL", "LEFT", "RIGHT", "MID", "LEN", "TRIM", "UPPER", "LOWER", "PROPER", "TEXT", "VALUE"}
    | {"FIND", "SEARCH", "SUBSTITUTE", "REPLACE", "REPT", "EXACT", "CHAR", "CODE", "CLEAN", "FIXED"}
    | {"DATE", "YEAR", "MONTH", "DAY", "HOUR", "MINUTE", "SECOND", "WEEKDAY", "TIME", "CONVERT", "N", "T"}
)

# Functions of single values that the engine works out for each cell of a block, as tried one by one.
BLOCKWISE_FUNCTIONS: Final = frozenset(
    {"ATAN2", "CODE", "COS", "FIND", "ISBLANK", "ISERR", "ISERROR", "ISLOGICAL", "ISNA", "ISTEXT"}
    | {"LEFT", "LEN", "MID", "SEARCH", "SIN", "T", "TAN"}
)

# The engine takes only the first cell of a block here, though a spreadsheet would go on with all of them.
SINGLE_FUNCTIONS: Final = frozenset({"ROW", "COLUMN", "ISEVEN", "ISODD", "CONCATENATE"})

# Known to the engine by name, but not in every form, or with another meaning.
WEAK_FUNCTIONS: Final = frozenset(
    {"AGGREGATE", "ANCHORARRAY", "BYCOL", "BYROW", "CELL", "LAMBDA", "MAKEARRAY", "MAP", "REDUCE", "SCAN"}
)

# Built-ins whose results are compared with values from outside; a test compares this list with its table.
VERIFIED_FUNCTIONS: Final = frozenset(
    {"ABS", "ACOS", "AND", "ASIN", "ATAN", "ATAN2", "AVERAGE", "CEILING"}
    | {"CHOOSE", "COLUMN", "COLUMNS", "CONCATENATE", "COS", "COSH", "COUNT", "COUNTA"}
    | {"COUNTBLANK", "COUNTIF", "DATE", "DEGREES", "EXACT", "EXP", "FALSE", "FIND"}
    | {"FLOOR", "HLOOKUP", "IF", "IFERROR", "IFNA", "INDEX", "INDIRECT", "INT"}
    | {"ISBLANK", "ISERROR", "ISNA", "ISNUMBER", "ISTEXT", "LARGE", "LEFT", "LEN"}
    | {"LN", "LOG", "LOG10", "LOOKUP", "MATCH", "MAX", "MEDIAN", "MID"}
    | {"MIN", "MOD", "N", "NA", "NOT", "OFFSET", "OR", "PI"}
    | {"POWER", "PRODUCT", "RADIANS", "REPT", "RIGHT", "ROUND", "ROUNDDOWN", "ROUNDUP"}
    | {"ROW", "ROWS", "SEARCH", "SIGN", "SIN", "SINH", "SMALL", "SQRT"}
    | {"STDEV", "SUBSTITUTE", "SUM", "SUMIF", "SUMIFS", "SUMPRODUCT", "SUMSQ", "TAN"}
    | {"TANH", "TEXT", "TRIM", "TRUE", "TRUNC", "UPPER", "VALUE", "VLOOKUP"}
    | {"XOR", "YEAR"}
)
