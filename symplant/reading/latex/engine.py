"""The LaTeX parser behind the gate: latex2sympy2, trusted with the arithmetic of one term and nothing else.

It is given shapes, in which every operand and exponent is a numbered `\\variable{p0q}`; each number must come
back exactly as often as it went in, once, so nothing can cancel, merge or vanish unseen.
"""

from __future__ import annotations

import re
import sys
import types
import typing
import warnings
from collections.abc import Mapping, Sequence
from functools import cache, lru_cache
from typing import TYPE_CHECKING, Any, TypeAlias

from symplant.algebra.expression import Call, Node, Power, Product, Quotient
from symplant.errors import SymplantError

if TYPE_CHECKING:
    from collections.abc import Callable

__all__ = ["assembled"]

#: The place of an operand or exponent in a shape.
SLOT = "@"

#: A shape as read: a slot's number, or a tuple that begins with "*", "/", "^" or "sqrt".
Template: TypeAlias = "int | tuple[Any, ...]"

_PLACEHOLDER = re.compile(r"p([0-9]+)q[0-9a-f]{32}")  # the package adds a digest to the names of variables


def assembled(shape: str, leaves: Sequence[Node | int], columns: Mapping[int, int], column: int) -> Node:
    r"""The tree of a shape with `leaves` in its slots; exponents are integers, all else are trees.

    `columns` holds the column of the division sign in front of a slot, `column` that of the whole.
    Raises `SymplantError` if the package is missing or reads the shape in any other way than it is written.

    >>> from symplant.algebra.expression import Name
    >>> assembled(r"\frac{@}{@}", [Name("k"), Name("k")], {}, 1) == Quotient(Name("k"), Name("k"))
    True
    """

    def tree(template: Template) -> Node:
        if isinstance(template, int):
            leaf = leaves[template]
            assert not isinstance(leaf, int)
            return leaf
        match template:
            case ("*", *factors):
                return Product(tuple(tree(factor) for factor in factors), column)
            case ("/", top, bottom):
                return Quotient(tree(top), tree(bottom), columns.get(_first(bottom), column))
            case ("^", base, int(slot)):
                exponent = leaves[slot]
                assert isinstance(exponent, int)
                return Power(tree(base), exponent, column)
            case (_, argument):
                return Call("sqrt", tree(argument), column)
        raise AssertionError(template)

    return tree(_template(shape))


def _first(template: Template) -> int:
    while not isinstance(template, int):
        template = template[1]
    return template


@lru_cache(maxsize=8192)
def _template(shape: str) -> Template:
    """The shape as the package reads it, checked slot by slot."""
    pieces = shape.split(SLOT)
    slots = len(pieces) - 1
    text = "".join(piece + rf"\variable{{p{i}q}}" for i, piece in enumerate(pieces[:-1])) + pieces[-1]
    parse = _parser()
    try:
        template = _understood(parse(text))
    except Exception as error:
        raise SymplantError(f"the LaTeX parser failed on a term of the shape {shape}: {error}") from error
    if _slots(template) != list(range(slots)):
        raise SymplantError(f"the LaTeX parser lost, moved or doubled a part of a term of the shape {shape}")
    return template


def _slots(template: Template) -> list[int]:
    if isinstance(template, int):
        return [template]
    return [slot for part in template[1:] for slot in _slots(part)]


def _understood(value: Any) -> Template:
    """A SymPy value, built without evaluation, as a template."""
    if value.is_Symbol:
        found = _PLACEHOLDER.fullmatch(value.name)
        if found is None:
            raise ValueError(f"a foreign name {value.name}")
        return int(found[1])
    if value.is_Pow:
        base, exponent = value.args
        if exponent.is_Rational and (exponent.p, exponent.q) == (1, 2):
            return ("sqrt", _understood(base))
        if exponent.is_Symbol:
            return ("^", _understood(base), _understood(exponent))
    if value.is_Mul:
        factors: list[Template] = []
        for part in value.args:
            if part.is_Pow and part.args[1] == -1 and factors:
                top = factors[0] if len(factors) == 1 else ("*", *factors)
                factors = [("/", top, _understood(part.args[0]))]
            else:
                factors.append(_understood(part))
        return factors[0] if len(factors) == 1 else ("*", *factors)
    raise ValueError(f"an unexpected {type(value).__name__}")


@cache
def _parser() -> Callable[[str], Any]:
    """The package's own lexer, parser and converter; imported at the first use, which takes half a second."""
    package = _package()
    from antlr4 import CommonTokenStream, InputStream, Token
    from antlr4.atn.PredictionMode import PredictionMode

    def parse(text: str) -> Any:
        listener = package.MathErrorListener(text)
        lexer = package.PSLexer(InputStream(text))
        parser = package.PSParser(CommonTokenStream(lexer))
        for part in (lexer, parser):
            part.removeErrorListeners()
            part.addErrorListener(listener)
        # SLL either gives the tree that full LL prediction gives or an error, many times faster.
        parser._interp.predictionMode = PredictionMode.SLL
        tree = parser.expr()
        if parser.getTokenStream().LA(1) != Token.EOF:
            raise ValueError("the end of the term was not reached")
        return package.convert_expr(tree)

    return parse


def _package() -> Any:
    """latex2sympy2; its antlr4 runtime 4.7.2 asks for `typing.io`, which Python 3.13 no longer has."""
    lent = "typing.io" not in sys.modules and sys.version_info >= (3, 13)
    if lent:
        stand_in = types.ModuleType("typing.io")
        stand_in.TextIO = typing.TextIO  # type: ignore[attr-defined]
        sys.modules["typing.io"] = stand_in
    try:
        with warnings.catch_warnings():
            warnings.simplefilter("ignore")
            import latex2sympy2
    except Exception as error:  # another antlr4 runtime fails in its own ways
        reason = f"LaTeX input needs the package latex2sympy2 1.9.1, which does not load: {error}"
        raise SymplantError(reason) from error
    finally:
        if lent:
            del sys.modules["typing.io"]
    return latex2sympy2
