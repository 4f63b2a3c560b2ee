"""Trees and ring elements as SymPy expressions, for callers who go on working there.

This is the only place where results meet SymPy; it is loaded when a caller asks, never before.
"""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction
from typing import Any

from symplant.algebra.box import Box, Sign
from symplant.algebra.expression import Call, Name, Node, Number, Power, Product, Quotient, Sum, walk
from symplant.algebra.ratio import Ratio
from symplant.algebra.ring import Element, Ring

__all__ = ["element_to_sympy", "ratio_to_sympy", "symbol_table", "tree_to_sympy"]

#: SymPy's assumption for each sign; every letter is real.
_ASSUMPTIONS: dict[Sign, dict[str, bool]] = {
    Sign.POSITIVE: {"positive": True},
    Sign.NEGATIVE: {"negative": True},
    Sign.NONNEGATIVE: {"nonnegative": True},
    Sign.NONPOSITIVE: {"nonpositive": True},
    Sign.NONZERO: {"real": True, "nonzero": True},
    Sign.ZERO: {"zero": True},
    Sign.REAL: {"real": True},
}


def symbol_table(variable: str, box: Box) -> dict[str, Any]:
    """One SymPy symbol for the variable and each letter, with the assumptions the box allows.

    >>> symbol_table("s", Box())["s"]
    s
    """
    import sympy

    table: dict[str, Any] = {variable: sympy.Symbol(variable), "pi": sympy.pi}
    for letter in box:
        table[letter] = sympy.Symbol(letter, **_ASSUMPTIONS[box.sign(letter)])
    return table


def tree_to_sympy(node: Node, symbols: Mapping[str, Any]) -> Any:
    """A tree as a SymPy expression over the given symbols.

    >>> from symplant.algebra.box import Interval
    >>> tree_to_sympy(Power(Name("k"), 2), symbol_table("s", Box({"k": Interval()})))
    k**2
    """
    import sympy

    values: list[Any] = []
    for part in walk(node):
        match part:
            case Number(value=value):
                values.append(_rational(value))
            case Name(name=name):
                values.append(symbols[name])
            case Sum(terms=terms):
                values[-len(terms) :] = [sympy.Add(*values[-len(terms) :])]
            case Product(factors=factors):
                values[-len(factors) :] = [sympy.Mul(*values[-len(factors) :])]
            case Quotient():
                values[-2:] = [values[-2] / values[-1]]
            case Power(exponent=exponent):
                values[-1:] = [values[-1] ** exponent]
            case Call(function=function):
                values[-1:] = [getattr(sympy, function)(values[-1])]
    return values.pop()


def element_to_sympy(ring: Ring, element: Element, symbols: Mapping[str, Any]) -> Any:
    """A ring element as an expanded SymPy expression."""
    import sympy

    bases = [tree_to_sympy(meaning, symbols) for meaning in ring.meanings]
    return sympy.Add(
        *(
            sympy.Mul(sympy.Integer(value), *(bases[place] ** exponent for place, exponent in powers))
            for value, powers in ring.terms(element)
        )
    )


def ratio_to_sympy(ratio: Ratio, symbols: Mapping[str, Any]) -> Any:
    """A ratio as a SymPy expression."""
    top = element_to_sympy(ratio.ring, ratio.numerator, symbols)
    return top / element_to_sympy(ratio.ring, ratio.denominator, symbols)


def _rational(value: Fraction) -> Any:
    import sympy

    return sympy.Rational(value.numerator, value.denominator)
