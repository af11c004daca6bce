"""Formula text: tokens, the functions and names it uses, and its rewriting for the engine."""

from __future__ import annotations

import re
from dataclasses import dataclass, field
from typing import Final, NamedTuple

from .builtins import (
    ARRAY_FUNCTIONS,
    BLOCKWISE_FUNCTIONS,
    ELEMENT_FUNCTIONS,
    PASSING_FUNCTIONS,
    SINGLE_FUNCTIONS,
)
from .operators import COMPARE, DIGITS
from .tokens import TOKEN, Resolver, canonical, resolver, shifted

__all__ = ["Analysis", "Argument", "Call", "Resolver", "Use", "analyse", "canonical", "resolver", "shifted"]

OMITTED_MARK: Final = "\ue0f7omitted\ue0f7"  # private-use characters: no text in a cell looks like this
NAME_MARK: Final = "\x02"  # round a defined name, which is replaced by what it stands for
CALLER_MARK: Final = "\x00"  # where sheet number, row and column of the calling cell belong


@dataclass(slots=True)
class Argument:
    """One argument of one of our functions, as far as the text alone tells what it is."""

    kind: str = "omitted"  # omitted, use, call, text, other
    text: str = ""
    use: Use | None = None
    call: Call | None = None


@dataclass(slots=True)
class Call:
    """A call of one of our functions inside a formula."""

    name: str
    arguments: list[Argument] = field(default_factory=list)


class Use(NamedTuple):
    """One appearance of a reference or a name."""

    named: bool  # a defined name, not an address
    where: str  # the sheet prefix as it stands, with its exclamation mark; empty for the own sheet
    text: str
    single: bool  # where one value is needed, in a formula that is no array formula
    element: str  # the function that would have to be worked out cell by cell, and that the engine cannot


@dataclass(slots=True)
class Analysis:
    """What one formula text uses."""

    functions: list[str] = field(default_factory=list)  # built-in or unknown names, upper case, no prefix
    uses: list[Use] = field(default_factory=list)
    collected: list[Use] = field(default_factory=list)  # those inside SUM and its like
    calls: list[Call] = field(default_factory=list)  # outermost calls of our functions
    nested: list[tuple[Call, int, Call]] = field(default_factory=list)  # outer call, argument, inner call
    whole: Call | None = None  # the formula is exactly this call
    refusal: str = ""
    engine: str = ""  # the text for the engine, still with the marks of names and of the calling cell


@dataclass(slots=True)
class _Frame:
    """An open parenthesis: of a function, or a plain one."""

    function: str
    ours: Call | None
    arrays: bool  # ranges are worked out as whole arrays in here
    scalar: bool  # a range standing alone as an argument is used as a single value
    outer: str  # the function whose argument this is, parentheses and IF left out
    index: int = 0  # number of the current argument
    pieces: int = 0  # tokens of the current argument
    start: int = 0  # where the current argument begins in the output
    part: int = 0  # where the current operand of & begins
    joins: bool = False  # the current side of a comparison has an &
    compares: bool = False  # the current argument has a comparison
    column: str = ""  # a whole column or row that stands in the current argument


class _Reader:
    """One walk over the tokens of a formula."""

    def __init__(self, resolve: Resolver) -> None:
        self.resolve = resolve
        self.result = Analysis()
        self.output: list[str] = []
        self.frames = [_Frame("", None, False, True, "")]
        self.value = False  # the token before ends a value
        self.operator = False  # the token before is an operator that takes single values
        self.last_use = -1  # index of the use that the token before ends, -1 when it is something else
        self.first: Call | None = None  # the call outside of all parentheses

    def read(self, text: str) -> Analysis:
        for token in TOKEN.finditer(text):
            kind = token.lastgroup
            if kind == "space":
                self.output.append(token[0])
            elif kind == "op":
                self._operator(token[0])
            elif token["call"]:
                self._open_call(token)
            else:
                self._operand(kind or "", token)
        if len(self.frames) != 1:
            self._refuse("the formula has an open parenthesis too many")
        self._end_argument()
        self.result.engine = "".join(self.output)
        top = self.frames[0]
        if top.pieces == 1:
            self.result.whole = self.first
        return self.result

    def _refuse(self, reason: str) -> None:
        self.result.refusal = self.result.refusal or reason

    def _argument(
        self, kind: str, text: str = "", *, use: Use | None = None, call: Call | None = None
    ) -> None:
        """Note a token of the current argument of one of our functions."""
        frame = self.frames[-1]
        frame.pieces += 1
        if frame.function == "TEXT" and frame.index == 1 and not (kind == "text" and _FORMAT.match(text)):
            self._refuse(f"the engine cannot write a number in the format {text!r}, or in a computed one")
        if frame.ours is not None:
            single = frame.pieces == 1
            frame.ours.arguments[-1] = Argument(kind, text, use, call) if single else Argument("other")

    def _open_call(self, token: re.Match[str]) -> None:
        name = token["call"]
        self._start_value()
        ours = self.resolve(name)
        outer = self.frames[-1]
        function = ours or canonical(name)
        call = Call(ours) if ours else None
        if call is not None:
            self._note_call(call)
            if len(self.frames) == 1:
                self.first = call
        else:
            self.result.functions.append(function)
        self._argument("call", function, call=call)
        if call is not None:
            call.arguments.append(Argument())
        passes = function in PASSING_FUNCTIONS
        self.frames.append(
            _Frame(
                function,
                call,
                outer.arrays or function in ARRAY_FUNCTIONS,
                outer.scalar if passes else function in ELEMENT_FUNCTIONS,
                outer.outer if passes else function,
            )
        )
        self.output.append(f"{function}({CALLER_MARK}" if ours else f"{function}(")
        self.operator = self.value = False
        self.last_use = -1

    def _note_call(self, call: Call) -> None:
        for frame in reversed(self.frames):
            if frame.ours is not None:
                self.result.nested.append((frame.ours, len(frame.ours.arguments) - 1, call))
                return
        self.result.calls.append(call)

    def _operand(self, kind: str, token: re.Match[str]) -> None:
        self._start_value()
        text = token[0]
        self.last_use = -1
        if kind == "ref" or kind == "name":
            text = self._use(kind == "name", token["where"] or "", token[kind], text)
        elif kind == "string":
            self._argument("text", text[1:-1].replace('""', '"'))
        else:
            self._argument("other")
            if kind == "array" and self._element():
                self._refuse(f"the engine cannot work out {self._element()} for each cell of a block")
            if kind == "error":
                text = token["error"]
        self.output.append(text)
        self.operator = False
        self.value = True

    def _use(self, named: bool, where: str, target: str, text: str) -> str:
        """Note a reference or a name; return its text for the engine."""
        if named and not where and target.upper() in ("TRUE", "FALSE"):
            self._argument("other")
            return text
        if named and target[:6].lower() == "_xlpm.":
            self._argument("other")
            return target[6:]
        if where == "[0]!":
            where, text = "", target
        elif where:
            self._check_where(where)
        block = named or ":" in target
        use = Use(named, where, target, self._scalar_use(), self._element() if block else "")
        self.last_use = len(self.result.uses)
        self.result.uses.append(use)
        self._argument("use", use=use)
        if not named and _WHOLE.match(target):
            self.frames[-1].column = target
        if self.frames[-1].outer in _COLLECTING:
            self.result.collected.append(use)
        return f"{NAME_MARK}{where}{NAME_MARK}{target}{NAME_MARK}" if named else text

    def _scalar_use(self) -> bool:
        frame = self.frames[-1]
        if frame.arrays:
            return False
        chooses = frame.index == 0 and frame.function in _CHOOSING
        return self.operator or frame.scalar or chooses

    def _element(self) -> str:
        """Return the function that a block standing here would be worked out through, if the engine can't."""
        for frame in reversed(self.frames):
            if frame.function == "CHOOSE" and frame.index == 0:
                return "CHOOSE"
            if not frame.function or frame.function in PASSING_FUNCTIONS:
                continue
            if frame.function in BLOCKWISE_FUNCTIONS:
                continue
            return frame.function if frame.function in ELEMENT_FUNCTIONS | SINGLE_FUNCTIONS else ""
        return ""

    def _check_where(self, where: str) -> None:
        inner = where[:-1].strip("'")
        if "[" in inner:
            self._refuse("the formula refers to another workbook")
        elif ":" in inner:
            self._refuse("the formula refers to the same cell of several sheets")

    def _start_value(self) -> None:
        if self.value:
            self._refuse("the formula has two values side by side with no operator between them")
        self._start_argument()

    def _start_argument(self) -> None:
        """Write the comma after the calling cell when the first argument of our function begins."""
        frame = self.frames[-1]
        if frame.pieces:
            return
        if frame.ours is not None and len(frame.ours.arguments) == 1:
            self.output.append(",")
        frame.start = frame.part = len(self.output)

    def _end_side(self) -> None:
        """Close the last operand of an & chain: numbers go into texts with 15 digits."""
        frame = self.frames[-1]
        if frame.joins:
            self.output.insert(frame.part, f"{DIGITS}(")
            self.output.append(")")
        frame.joins = False

    def _end_argument(self) -> None:
        """Close what the operators of the argument have opened."""
        self._end_side()
        frame = self.frames[-1]
        if frame.compares:
            self.output.append(")")
            if frame.column:  # the engine hands over only the part in use, which need not fit another one
                self._refuse(
                    f"the formula compares the whole of {frame.column}; name its cells, as in A1:A500"
                )
        frame.compares = False

    def _rewrite(self, sign: str) -> None:
        """Put & or a comparison into the engine's text."""
        frame = self.frames[-1]
        if sign == "&":
            frame.joins = True
            self._end_side()
            frame.joins = True
            self.output.append(sign)
        else:
            self._end_argument()
            self.output.insert(frame.start, f'{COMPARE}("{sign}",')
            self.output.append(",")
            frame.compares = True
        frame.part = len(self.output)

    def _operator(self, sign: str) -> None:
        frame = self.frames[-1]
        if sign == "(":
            self._start_value()
            self._argument("other")
            self.frames.append(_Frame("", None, frame.arrays, frame.scalar, frame.outer))
            self.output.append(sign)
            self.last_use = -1
            return
        if sign == ")":
            self._close()
            return
        if sign == ",":
            self._comma()
            return
        if sign in "[]@":
            self._refuse(
                "the formula refers to a table by its column names"
                if sign != "@"
                else "the formula holds an @ sign, which files do not use"
            )
        elif sign == "#":
            self._refuse("the formula refers to the whole result of a dynamic array (#)")
        elif sign in '"{}':
            self._refuse("the formula has a quotation mark or brace that is not closed")
        elif sign == ";":
            self._refuse("the formula separates arguments by semicolons, which files do not use")
        elif sign == ":":
            self._refuse("the formula builds a range with a colon between parts that are not plain addresses")
        self._start_argument()
        self._argument("other")
        if not frame.arrays and self.last_use >= 0:
            self.result.uses[self.last_use] = self.result.uses[self.last_use]._replace(single=True)
        if sign == "&" or sign in _COMPARISONS:
            self._rewrite(sign)
        else:
            self.output.append(sign)
        self.operator = sign != "%"
        self.value = sign == "%"
        self.last_use = -1

    def _comma(self) -> None:
        self._end_argument()
        frame = self.frames[-1]
        if frame.ours is not None:
            if frame.pieces == 0:
                lead = "," if len(frame.ours.arguments) == 1 else ""
                self.output.append(f'{lead}"{OMITTED_MARK}"')
            frame.ours.arguments.append(Argument())
        elif not frame.function:
            self._refuse("the formula joins several areas into one reference")
        frame.pieces = 0
        frame.column = ""
        frame.index += 1
        self.output.append(",")
        self.operator = self.value = False
        self.last_use = -1

    def _close(self) -> None:
        if len(self.frames) == 1:
            self._refuse("the formula has a closing parenthesis too many")
            return
        self._end_argument()
        frame = self.frames.pop()
        if frame.ours is not None:
            if frame.pieces == 0 and len(frame.ours.arguments) > 1:
                self.output.append(f'"{OMITTED_MARK}"')
            elif frame.pieces == 0:
                frame.ours.arguments.clear()
        self.output.append(")")
        if frame.function:
            self.last_use = -1
        if not frame.function or frame.function in BLOCKWISE_FUNCTIONS:
            self.frames[-1].column = self.frames[-1].column or frame.column
        self.operator = False
        self.value = True


_COLLECTING: Final = frozenset({"SUM", "AVERAGE", "MAX", "MIN", "PRODUCT", "SUMSQ", "SUBTOTAL"})
_WHOLE: Final = re.compile(r"(?:[A-Z$]+:[A-Z$]+|[0-9$]+:[0-9$]+)\Z", re.IGNORECASE)
_SECTION: Final = r'(?:"[^"]*"|[+\- ])*[#0,]*(?:\.[#0]*)?(?:"[^"]*"|[% ])*'
_FORMAT: Final = re.compile(
    rf"(?:{_SECTION}(?:;{_SECTION})?|\[h\]:mm|[ymdhs:/. -]+|General|@)\Z", re.IGNORECASE
)
_COMPARISONS: Final = frozenset({"=", "<>", "<", ">", "<=", ">="})
_CHOOSING: Final = frozenset({"IF", "IFS", "SWITCH", "CHOOSE"})


def analyse(text: str, resolve: Resolver) -> Analysis:
    """Read one formula, without the leading equals sign."""
    return _Reader(resolve).read(text)
