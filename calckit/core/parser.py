"""Expression text to a checked Python syntax tree.

Knows which Python syntax an expression may use and how each refusal is worded. Must not know sympy, units or values:
the issuing process reads formulas through this module alone.
"""

from __future__ import annotations

import ast
import re
from dataclasses import dataclass
from functools import cache

from calckit.errors import ExpressionError, nearest_first

FUNCTIONS = {
    "sqrt": 1, "exp": 1, "log": 1, "sin": 1, "cos": 1, "tan": 1, "abs": 1, "min": None, "max": None,
    "total": 1, "above": 1, "below": 1, "level": 2,
}  # fmt: skip
"""Function name -> number of arguments (None: two or more).

`total(a)` sums over all levels, `above(a)` over a level and those above it, `below(a)` is the value one level down
(0 at the base), `level(a, "5")` the value at the named level.
"""

COMPARISONS = {ast.Lt: "<", ast.LtE: "<=", ast.Gt: ">", ast.GtE: ">=", ast.Eq: "==", ast.NotEq: "!="}
_OPERATORS = (ast.Add, ast.Sub, ast.Mult, ast.Div, ast.Pow)
_NUMERAL = re.compile(r"\d+(?:\.\d+)?")


@dataclass(frozen=True)
class Parsed:
    """A checked expression: its `text`, the syntax `tree` and the `names` it uses, in order of appearance."""

    text: str
    tree: ast.expr
    names: tuple[str, ...]

    def literal(self, node: ast.Constant) -> str:
        """The literal as it was typed."""
        return ast.get_source_segment(self.text, node) or str(node.value)


@cache
def parse(text: str) -> Parsed:
    """Read one expression.

    Raises ExpressionError, which shows the part that is not read and what to write instead.

    >>> parse("C_t*h_n**x").names
    ('C_t', 'h_n', 'x')
    """
    source = text.strip()
    try:
        tree = ast.parse(source, mode="eval").body
    except SyntaxError as error:
        raise ExpressionError(f"expression {text!r}: {error.msg} at character {error.offset}") from None
    names: dict[str, None] = {}
    _check(tree, source, names, relation=True)
    return Parsed(source, tree, tuple(names))


def dotted(node: ast.expr) -> str | None:
    """The name that a `Name` or `part.symbol` node spells, or None."""
    if isinstance(node, ast.Name):
        return node.id
    if isinstance(node, ast.Attribute) and isinstance(node.value, ast.Name):
        return f"{node.value.id}.{node.attr}"
    return None


def _check(node: ast.AST, text: str, names: dict[str, None], relation: bool = False) -> None:
    name = dotted(node) if isinstance(node, ast.expr) else None
    if name:
        names.setdefault(name)
        return
    match node:
        case ast.Constant(value=bool() | complex() | None) | ast.Constant(value=str()):
            raise _refused(node, text, "only numbers may stand as constants")
        case ast.Constant() if not _NUMERAL.fullmatch(ast.get_source_segment(text, node) or ""):
            raise _refused(node, text, "write numbers in plain digits, such as 1250 or 0.25")
        case ast.Constant():
            return
        case ast.BinOp(op=ast.BitXor()):
            raise _refused(node, text, "write ** for a power, not ^")
        case ast.BinOp(left=left, op=op, right=right) if isinstance(op, _OPERATORS):
            _check(left, text, names)
            _check(right, text, names)
        case ast.UnaryOp(op=ast.USub(), operand=operand):
            _check(operand, text, names)
        case ast.Compare() if not relation:
            raise _refused(node, text, "a comparison stands alone in a check, or between if and else")
        case ast.Compare(left=left, ops=[op], comparators=[right]) if type(op) in COMPARISONS:
            _check(left, text, names)
            _check(right, text, names)
        case ast.IfExp(test=ast.Compare() as test, body=body, orelse=orelse):
            for child in (body, test, orelse):
                _check(child, text, names, relation=child is test)
        case ast.Call(func=ast.Name(id=function), args=args, keywords=[]):
            _check_call(node, function, args, text, names)
        case _:
            raise _refused(node, text, "write numbers, names, + - * / **, comparisons, a if c else b and functions")


def _check_call(node: ast.Call, function: str, args: list[ast.expr], text: str, names: dict[str, None]) -> None:
    if function not in FUNCTIONS:
        raise _refused(node, text, f"functions are {', '.join(nearest_first(function, FUNCTIONS))}")
    count = FUNCTIONS[function]
    if len(args) != count if count else len(args) < 2:
        raise _refused(node, text, f"{function} takes {count or 'two or more'} argument{'' if count == 1 else 's'}")
    if function == "level":
        if not (isinstance(args[1], ast.Constant) and isinstance(args[1].value, str)):
            raise _refused(node, text, 'name the level in quotes, as in level(F_x, "5")')
        args = args[:1]
    for arg in args:
        _check(arg, text, names)


def _refused(node: ast.AST, text: str, cure: str) -> ExpressionError:
    segment = ast.get_source_segment(text, node) or text
    return ExpressionError(f"expression {text!r}: {segment!r} is not read; {cure}")
