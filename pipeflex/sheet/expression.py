"""A formula as it is printed: in symbols, and with numbers and units in their place; as text and as HTML.

One visitor walks the parsed text of a formula and writes both forms at once. HTML has fractions in CSS,
subscripts, and a root sign drawn as inline SVG; the plain form of the same expression stands in `aria-label`.
"""

import ast
import re
from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass
from html import escape
from typing import Final

from pipeflex import present
from pipeflex.present import UnitSystem
from pipeflex.quantities import SYMBOLS
from pipeflex.trace import Condition, Formula

_OR, _AND, _COMPARE, _SIGNED, _SUM, _PRODUCT, _UNITED, _POWER, _ATOM = range(9)

_ROOT_SIGN: Final = (
    '<svg class="rs" viewBox="0 0 12 20" preserveAspectRatio="none" aria-hidden="true">'
    '<path d="M0 12L3 10.5L6.5 19L11.5 .6" fill="none" stroke="currentColor" stroke-width="1.1"'
    ' vector-effect="non-scaling-stroke"/></svg>'
)
_SUPERSCRIPT: Final = str.maketrans("0123456789-\u2212", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻⁻")
_COMPARED: Final[dict[type[ast.cmpop], tuple[str, str]]] = {
    ast.Gt: (">", "≤"),
    ast.GtE: ("≥", "<"),
    ast.Lt: ("<", "≥"),
    ast.LtE: ("≤", ">"),
    ast.Eq: ("=", "≠"),
    ast.NotEq: ("≠", "="),
}


@dataclass(frozen=True, slots=True)
class Expression:
    """One printed expression in both forms."""

    text: str
    html: str

    def __str__(self) -> str:
        return self.text

    @property
    def math(self) -> str:
        """The HTML form with its plain form as label."""
        return f'<span class="math" role="math" aria-label="{escape(self.text)}">{self.html}</span>'

    @staticmethod
    def plain(text: str) -> "Expression":
        """Words as an expression."""
        return Expression(text, escape(text))

    @staticmethod
    def joined(separator: str, parts: "Iterable[Expression]") -> "Expression":
        parts = tuple(parts)
        return Expression(separator.join(p.text for p in parts), escape(separator).join(p.html for p in parts))


@dataclass(frozen=True, slots=True)
class _Piece:
    """An expression and how tightly it holds together, in text and in HTML."""

    text: str
    html: str
    level: int
    html_level: int

    @staticmethod
    def both(text: str, html: str, level: int) -> "_Piece":
        return _Piece(text, html, level, level)

    def within(self, level: int) -> "_Piece":
        """In parentheses where it holds less tightly than `level`."""
        text = self.text if self.level >= level else f"({self.text})"
        html = self.html if self.html_level >= level else f"({self.html})"
        return _Piece(text, html, max(self.level, level), max(self.html_level, level))


Leaf = Callable[[str], _Piece]


def _letters(glyph: str) -> _Piece:
    """Italic letter and upright subscript of one glyph; a quotient of two glyphs is a fraction."""
    over, slash, under = glyph.partition("/")
    if slash:
        a, b = _letters(over), _letters(under)
        return _Piece(f"{a.text}/{b.text}", _fraction(a.html, b.html), _PRODUCT, _UNITED)
    letter, _, subscript = glyph.partition("_")
    html = f"<i>{escape(letter)}</i>" + (f"<sub>{escape(subscript)}</sub>" if subscript else "")
    return _Piece.both(glyph, html, _ATOM)


def _fraction(over: str, under: str) -> str:
    return f'<span class="fr"><span>{over}</span><span class="un">{under}</span></span>'


def _number(value: float, kind: str, units: UnitSystem, decimals: int | None = None) -> _Piece:
    body = present.text(value, kind, units, decimals)
    unit = bool(present.display(kind, units).unit)
    level = _SIGNED if body.startswith("\u2212") else _UNITED if unit else _ATOM
    return _Piece.both(body, escape(body), level)


class _Printer:
    """Prints a tree; `leaf` says what stands for a name, `times` and `over` what stands between factors."""

    def __init__(self, source: str, leaf: Leaf, *, numbers: bool) -> None:
        self.source, self.leaf = source, leaf
        self.times, self.over = (" × ", " / ") if numbers else ("·", "/")
        self.inline = False

    def visit(self, node: ast.expr) -> _Piece:
        """The piece of a node, by its kind."""
        visitor: Callable[[ast.expr], _Piece] = getattr(self, f"visit_{type(node).__name__}", self._unknown)
        return visitor(node)

    def _unknown(self, node: ast.expr) -> _Piece:
        raise TypeError(f"no printed form for {ast.unparse(node)!r}")

    def visit_Name(self, node: ast.Name) -> _Piece:
        return _Piece.both("π", "π", _ATOM) if node.id == "pi" else self.leaf(node.id)

    def visit_Constant(self, node: ast.Constant) -> _Piece:
        printed = ast.get_source_segment(self.source, node) or str(node.value)
        return _Piece.both(printed, escape(printed), _ATOM)

    def visit_UnaryOp(self, node: ast.UnaryOp) -> _Piece:
        if isinstance(node.op, (ast.Not, ast.Invert)):
            inner = self.visit(node.operand).within(_ATOM)
            return _Piece.both(f"not {inner.text}", f"not {inner.html}", _AND)
        inner = self.visit(node.operand).within(_PRODUCT)
        return _Piece.both(f"\u2212{inner.text}", f"\u2212{inner.html}", _SIGNED)

    def visit_BinOp(self, node: ast.BinOp) -> _Piece:
        if isinstance(node.op, ast.Pow):
            return self._power(node)
        left, right = self.visit(node.left), self.visit(node.right)
        if isinstance(node.op, (ast.BitAnd, ast.BitOr)):
            word, level = (" and ", _AND) if isinstance(node.op, ast.BitAnd) else (" or ", _OR)
            return self._between(left.within(level), word, right.within(level), level)
        if isinstance(node.op, (ast.Add, ast.Sub)):
            sign = " + " if isinstance(node.op, ast.Add) else " \u2212 "
            first = left if left.level == _SIGNED else left.within(_SUM)
            return self._between(first, sign, right.within(_SUM + isinstance(node.op, ast.Sub)), _SUM)
        if isinstance(node.op, ast.Mult):
            return self._between(left.within(_PRODUCT), self.times, right.within(_PRODUCT), _PRODUCT)
        if isinstance(node.op, ast.Div):
            over = "/" if self.inline else self.over
            line = self._between(left.within(_PRODUCT), over, right.within(_POWER), _PRODUCT)
            if self.inline:
                return line
            return _Piece(line.text, _fraction(left.html, right.html), _PRODUCT, _UNITED)
        return self._unknown(node)

    @staticmethod
    def _between(left: _Piece, sign: str, right: _Piece, level: int) -> _Piece:
        return _Piece.both(left.text + sign + right.text, left.html + escape(sign) + right.html, level)

    def _power(self, node: ast.BinOp) -> _Piece:
        base = self.visit(node.left).within(_ATOM)
        outer, self.inline = self.inline, True
        exponent = self.visit(node.right)
        self.inline = outer
        if exponent.text.lstrip("\u2212").isdecimal():
            raised = exponent.text.translate(_SUPERSCRIPT)
        else:
            raised = "^" + exponent.within(_ATOM).text
        return _Piece.both(base.text + raised, f"{base.html}<sup>{exponent.html}</sup>", _POWER)

    def visit_Call(self, node: ast.Call) -> _Piece:
        name = node.func.id if isinstance(node.func, ast.Name) else ast.unparse(node.func)
        args = [self.visit(a) for a in node.args]
        text, html = ", ".join(a.text for a in args), ", ".join(a.html for a in args)
        if name == "sqrt":
            root = f'<span class="rt">{_ROOT_SIGN}<span class="rd">{html}</span></span>'
            return _Piece.both(f"√({text})", root, _ATOM)
        if name == "abs":
            return _Piece.both(f"|{text}|", f"|{html}|", _ATOM)
        return _Piece.both(f"{name}({text})", f"{escape(name)}({html})", _ATOM)

    def visit_Compare(self, node: ast.Compare) -> _Piece:
        piece = self.visit(node.left).within(_SIGNED)
        for op, side in zip(node.ops, node.comparators, strict=True):
            sign = f" {_COMPARED[type(op)][0]} "
            piece = self._between(piece, sign, self.visit(side).within(_SIGNED), _COMPARE)
        return piece

    def visit_BoolOp(self, node: ast.BoolOp) -> _Piece:
        word, level = (" and ", _AND) if isinstance(node.op, ast.And) else (" or ", _OR)
        piece, *rest = (self.visit(v).within(level) for v in node.values)
        for other in rest:
            piece = self._between(piece, word, other, level)
        return piece


def _printed(tree: ast.expr, source: str, leaf: Leaf, *, numbers: bool) -> Expression:
    piece = _Printer(source, leaf, numbers=numbers).visit(tree)
    return Expression(piece.text, piece.html)


def glyph(symbol: str) -> Expression:
    """A symbol as printed."""
    piece = _letters(SYMBOLS[symbol].glyph)
    return Expression(piece.text, piece.html)


def head(text: str) -> Expression:
    """The head of a column: a letter with its subscript as a symbol, words as they are."""
    if not re.fullmatch(r"\w(_\w+)?", text):
        return Expression.plain(text)
    piece = _letters(text)
    return Expression(piece.text, piece.html)


def quantity(value: float, symbol: str, units: UnitSystem = "metric") -> Expression:
    """The number of a symbol with its unit."""
    return Expression.plain(present.text(value, SYMBOLS[symbol].kind, units))


def symbolic(formula: Formula, shown: Mapping[str, str] | None = None) -> Expression:
    """The right side of a formula in symbols; `shown` names the symbol printed for a parameter."""
    shown = shown or {}
    return _printed(
        formula.tree,
        formula.text,
        lambda name: _letters(SYMBOLS[shown.get(name, name)].glyph),
        numbers=False,
    )


def substituted(formula: Formula, args: Iterable[tuple[str, str, float]], units: UnitSystem = "metric") -> Expression:
    """The right side of a formula with every number and its unit; `args`: parameter, symbol shown, SI number."""
    pieces = {name: _number(value, SYMBOLS[symbol].kind, units) for name, symbol, value in args}
    return _printed(formula.tree, formula.text, pieces.__getitem__, numbers=True)


def written(equation: str) -> Expression:
    """An equation in letters of its own ("X = solve(C, X_d)"), each side printed; a side in words stays as it is."""
    return Expression.joined(" = ", (_side(side.strip()) for side in equation.split("=")))


def _side(text: str) -> Expression:
    try:
        tree = ast.parse(text, mode="eval").body
    except SyntaxError:
        return Expression.plain(text)
    return _printed(tree, text, _letters, numbers=False)


def condition(asked: Condition, units: UnitSystem = "metric") -> tuple[Expression, Expression]:
    """What held, in symbols and with its numbers.

    A comparison that did not hold is printed as its opposite; decimals are added until the printed numbers
    differ as the numbers do.
    """
    choice = asked.choice
    tree = choice.tree
    if isinstance(tree, ast.Compare) and len(tree.ops) == 1 and not asked.holds:
        opposite = {sign: kind for kind, (sign, _) in _COMPARED.items()}[_COMPARED[type(tree.ops[0])][1]]
        tree = ast.Compare(left=tree.left, ops=[opposite()], comparators=tree.comparators)
    elif not asked.holds:
        tree = ast.UnaryOp(op=ast.Not(), operand=tree)
    in_symbols = _printed(tree, choice.condition, lambda name: _letters(SYMBOLS[name].glyph), numbers=False)
    values = dict(asked.args)
    kinds = {v: SYMBOLS[name].kind for name, v in asked.args}
    constants = [n.value for n in ast.walk(tree) if isinstance(n, ast.Constant)]
    kinds |= {v: "ratio" for v in constants if isinstance(v, (int, float)) and v not in kinds}

    def number(name: str) -> _Piece:
        kind, decimals = SYMBOLS[name].kind, None
        for more in range(7):
            decimals = present.display(kind, units).decimals + more if more else None
            if len({present.number(v, k, units, decimals) for v, k in kinds.items()}) == len(kinds):
                break
        return _number(values[name], kind, units, decimals)

    return in_symbols, _printed(tree, choice.condition, number, numbers=True)
