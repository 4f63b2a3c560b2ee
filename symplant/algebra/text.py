"""Expressions as text in Python arithmetic, readable by any computer-algebra system."""

from __future__ import annotations

from collections.abc import Iterable
from fractions import Fraction

from symplant.algebra.expression import Call, Name, Node, Number, Power, Product, Quotient, Sum
from symplant.algebra.ring import Element, Ring, Term

__all__ = ["element_text", "node_text", "polynomial_text"]

_SUM, _PRODUCT, _POWER, _ATOM = range(4)


def node_text(node: Node) -> str:
    """A tree in Python arithmetic.

    >>> node_text(Quotient(Name("k"), Product((Name("m"), Power(Name("l"), 2)))))
    'k/(m*l**2)'
    """
    return _written(node)[0]


def element_text(ring: Ring, element: Element) -> str:
    """An element, expanded, in Python arithmetic.

    >>> ring = Ring("s", ("m", "k"))
    >>> element_text(ring, ring.gen("k") - 2 * ring.gen("m") * ring.gen("s") ** 2)
    '-2*m*s**2 + k'
    """
    return _joined(term_text(ring, term) for term in ring.terms(element))


def polynomial_text(ring: Ring, element: Element) -> str:
    """An element collected in the variable, falling powers.

    >>> ring = Ring("s", ("m", "k", "q"))
    >>> s = ring.gen("s")
    >>> polynomial_text(ring, ring.gen("m") * s**2 - (ring.gen("k") + ring.gen("q")) * s)
    'm*s**2 + (-k - q)*s'
    """
    parts = []
    coefficients = ring.coefficients(element)
    for power in range(len(coefficients) - 1, -1, -1):
        coefficient = coefficients[power]
        if not coefficient:
            continue
        s = {0: "", 1: ring.variable}.get(power, f"{ring.variable}**{power}")
        if len(coefficient) > 1 and power:
            parts.append(f"({element_text(ring, coefficient)})*{s}")
        elif not power:
            parts.append(element_text(ring, coefficient))
        else:
            ((_, exponents),) = ring.terms(coefficient)
            value = int(coefficient.leading_coefficient())
            place = ring.position[ring.variable]
            parts.append(term_text(ring, (value, (*exponents, (place, power)))))
    return _joined(parts)


def term_text(ring: Ring, term: Term) -> str:
    """One term of an element."""
    value, powers = term
    factors = []
    for place, exponent in powers:
        base, level = _written(ring.meanings[place])
        if exponent == 1:
            factors.append(base if level >= _PRODUCT else f"({base})")
        else:
            factors.append(f"{base if level == _ATOM else f'({base})'}**{exponent}")
    if not factors:
        return str(value)
    if value in (1, -1):
        return ("-" if value < 0 else "") + "*".join(factors)
    return "*".join([str(value), *factors])


def _joined(terms: Iterable[str]) -> str:
    text = ""
    for term in terms:
        if not text:
            text = term
        elif term.startswith("-"):
            text += f" - {term[1:]}"
        else:
            text += f" + {term}"
    return text or "0"


def _written(node: Node) -> tuple[str, int]:
    """The text of a tree and how tightly it binds."""
    match node:
        case Number(value=value):
            return _number(value)
        case Name(name=name):
            return name, _ATOM
        case Sum(terms=terms):
            return _joined(_within(term, _PRODUCT) for term in terms), _SUM
        case Product(factors=factors):
            return _product(factors)
        case Quotient(numerator=top, denominator=bottom):
            return f"{_within(top, _PRODUCT)}/{_within(bottom, _POWER)}", _PRODUCT
        case Power(base=base, exponent=exponent):
            shown = str(exponent) if exponent >= 0 else f"({exponent})"
            return f"{_within(base, _ATOM)}**{shown}", _POWER
        case Call(function=function, argument=argument):
            return f"{function}({_written(argument)[0]})", _ATOM


def _number(value: Fraction) -> tuple[str, int]:
    if value.denominator == 1:
        return str(value), _ATOM if value >= 0 else _SUM
    return str(value), _PRODUCT if value >= 0 else _SUM


def _product(factors: tuple[Node, ...]) -> tuple[str, int]:
    if isinstance(factors[0], Number) and factors[0].value == -1:
        rest = factors[1:]
        inner = _within(rest[0], _PRODUCT) if len(rest) == 1 else _product(rest)[0]
        return f"-{inner}" if not inner.startswith("-") else f"-({inner})", _SUM
    head = _within(factors[0], _PRODUCT)
    if isinstance(factors[0], Number) and factors[0].value < 0:
        head = str(factors[0].value)
        return "*".join([head, *(_within(f, _POWER) for f in factors[1:])]), _SUM
    return "*".join([head, *(_within(factor, _POWER) for factor in factors[1:])]), _PRODUCT


def _within(node: Node, level: int) -> str:
    text, own = _written(node)
    return text if own >= level else f"({text})"
