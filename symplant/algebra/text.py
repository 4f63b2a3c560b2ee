"""Expressions as text in Python arithmetic, readable by any computer-algebra system."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from fractions import Fraction

from symplant.algebra.expression import Call, Name, Node, Number, Power, Product, Quotient, Sum
from symplant.algebra.factors import factors as irreducible
from symplant.algebra.ratio import Ratio
from symplant.algebra.ring import Element, Ring, Term

__all__ = ["collected_text", "element_text", "factored_text", "node_text", "polynomial_text", "ratio_text"]

#: Elements of more terms than this are not factored for printing: the factorisation would cost more
#: than everything else, and nobody reads its outcome.
FACTOR_LIMIT = 2_000

_SUM, _PRODUCT, _POWER, _ATOM = range(4)


def node_text(node: Node) -> str:
    """A tree in Python arithmetic.

    >>> node_text(Quotient(Name("k"), Product((Name("m"), Power(Name("l"), 2)))))
    'k/(m*l**2)'
    >>> node_text(Sum((Name("a"), Product((Number(Fraction(-2)), Name("b"))))))
    'a - 2*b'
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
    coefficients = ring.coefficients(element)
    return collected_text(ring, coefficients, [element_text(ring, c) for c in coefficients])


def collected_text(ring: Ring, coefficients: Sequence[Element], texts: Sequence[str]) -> str:
    """A polynomial by falling powers from its ascending coefficients and their texts."""
    parts = []
    for power in range(len(coefficients) - 1, -1, -1):
        coefficient, text = coefficients[power], texts[power]
        if not coefficient:
            continue
        s = {0: "", 1: ring.variable}.get(power, f"{ring.variable}**{power}")
        if not power:
            parts.append(text)
        elif len(coefficient) > 1:
            parts.append(f"({text})*{s}")
        else:
            parts.append({"1": s, "-1": f"-{s}"}.get(text, f"{text}*{s}"))
    return _joined(parts)


def factored_text(ring: Ring, element: Element) -> str:
    """An element as a product of its irreducible factors, each collected in the variable.

    Elements above `FACTOR_LIMIT` terms are given collected instead.

    >>> ring = Ring("s", ("a", "k"))
    >>> s, a, k = (ring.gen(x) for x in "sak")
    >>> factored_text(ring, -2 * k * (s + a) ** 2)
    '-2*k*(s + a)**2'
    """
    if len(element) > FACTOR_LIMIT or not element:
        return polynomial_text(ring, element)
    content, found = irreducible(element)
    value, factors = int(content), []
    for factor, exponent in found:
        if ring.is_led_negative(factor):
            factor, value = -factor, value * (-1) ** int(exponent)
        factors.append((len(factor), ring.terms(factor), factor, int(exponent)))
    if len(factors) == 1 and factors[0][3] == 1 and abs(value) == 1:
        return polynomial_text(ring, element)
    # Single letters first, in the declared order; then sums, the shortest first.
    factors.sort(key=lambda item: (item[0] > 1, item[0], [-e for e in _exponent_row(ring, item[1][0])]))
    parts = []
    for size, _, factor, exponent in factors:
        text = polynomial_text(ring, factor)
        if size > 1 or (exponent > 1 and not _is_plain(text)):
            text = f"({text})"
        parts.append(text if exponent == 1 else f"{text}**{exponent}")
    if abs(value) != 1 or not parts:
        parts.insert(0, str(abs(value)))
    return ("-" if value < 0 else "") + "*".join(parts)


def ratio_text(ratio: Ratio) -> str:
    """A ratio, both parts factored.

    >>> ring = Ring("s", ("k", "m"))
    >>> ratio_text(Ratio.of(ring, ring.gen("k"), 2 * ring.gen("m")))
    'k/(2*m)'
    """
    top = factored_text(ratio.ring, ratio.numerator)
    if ratio.denominator.is_one():
        return top
    bottom = factored_text(ratio.ring, ratio.denominator)
    if len(ratio.numerator) > 1 and ("+" in top or " - " in top):
        top = top if top.endswith(")") and top.startswith("(") and top.count("(") == 1 else f"({top})"
    return f"{top}/{bottom if _is_plain(bottom) else f'({bottom})'}"


def _is_plain(text: str) -> bool:
    return text.isidentifier() or text.isdecimal()


def _exponent_row(ring: Ring, term: Term) -> list[int]:
    powers = dict(term[1])
    return [powers.get(place, 0) for place in ring.print_order]


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
    parts: list[str] = []
    for term in terms:
        if not parts:
            parts.append(term)
        elif term.startswith("-"):
            parts += [" - ", term[1:]]
        else:
            parts += [" + ", term]
    return "".join(parts) or "0"


def _written(node: Node) -> tuple[str, int]:
    """The text of a tree and how tightly it binds."""
    match node:
        case Number(value=value):
            return _number(value)
        case Name(name=name):
            return name, _ATOM
        case Sum(terms=terms):
            return _joined(_term_of_sum(term) for term in terms), _SUM
        case Product(factors=factors):
            return _product(factors)
        case Quotient(numerator=top, denominator=bottom):
            above, below = _written(top)[0], _within(bottom, _POWER)
            if above.startswith("-") and not isinstance(top, Sum):
                return f"{above}/{below}", _SUM  # a sign before a quotient is one before its numerator
            return f"{_within(top, _PRODUCT)}/{below}", _PRODUCT
        case Power(base=base, exponent=exponent):
            shown = str(exponent) if exponent >= 0 else f"({exponent})"
            return f"{_within(base, _ATOM)}**{shown}", _POWER
        case Call(function=function, argument=argument):
            return f"{function}({_written(argument)[0]})", _ATOM


def _term_of_sum(node: Node) -> str:
    """A term with its own sign in front; only a sum within the sum needs brackets."""
    text, _ = _written(node)
    return f"({text})" if isinstance(node, Sum) else text


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
