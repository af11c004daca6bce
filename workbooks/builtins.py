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
