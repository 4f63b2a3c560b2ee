"""From expression trees to ratios of ring elements, with every divisor remembered."""

from __future__ import annotations

from collections.abc import Mapping
from typing import TypeAlias

from symplant.algebra.expression import (
    Call,
    Name,
    Node,
    Number,
    Power,
    Product,
    Quotient,
    Sum,
    walk,
)
from symplant.algebra.ratio import Ratio
from symplant.algebra.ring import Element, Ring
from symplant.errors import Fault, InputError

__all__ = ["CallKey", "CallTable", "Converter", "call_key", "ratio_key"]

#: A canonical, hashable form of an argument.
RatioKey: TypeAlias = "tuple[frozenset[tuple[object, ...]], frozenset[tuple[object, ...]]]"
CallKey: TypeAlias = "tuple[str, RatioKey]"
CallTable: TypeAlias = "Mapping[CallKey, Ratio]"


def ratio_key(ratio: Ratio) -> RatioKey:
    """Canonical form of a ratio in terms of generator names, the same in every larger ring."""
    return _element_key(ratio.ring, ratio.numerator), _element_key(ratio.ring, ratio.denominator)


def call_key(function: str, argument: Ratio) -> CallKey:
    """Under which the value of a function is found in a `CallTable`."""
    return function, ratio_key(argument)


def _element_key(ring: Ring, element: Element) -> frozenset[tuple[object, ...]]:
    return frozenset(
        (int(value), *((ring.keys[i], int(e)) for i, e in enumerate(exponents) if e))
        for exponents, value in element.terms()
    )


class Converter:
    """Evaluates trees in a ring; `divisors` collects every expression that was divided by.

    Errors: InputError with "column N" as place for a division by what is identically zero.

    >>> ring = Ring("s", ("k", "m"))
    >>> converter = Converter(ring)
    >>> half = converter.convert(Quotient(Name("k"), Product((Name("m"), Name("m")))))
    >>> half.denominator, converter.divisors
    (m^2, [m^2])
    """

    def __init__(self, ring: Ring, calls: CallTable | None = None) -> None:
        self.ring = ring
        self.calls = calls or {}
        self.divisors: list[Element] = []

    def convert(self, node: Node) -> Ratio:
        """The value of a tree, in lowest terms."""
        values: list[Ratio] = []
        for part in walk(node):
            values.append(self._combine(part, values))
        return values.pop()

    def _combine(self, node: Node, values: list[Ratio]) -> Ratio:
        """The value of a node whose parts' values lie on top of the stack, taking them off it."""
        ring = self.ring
        match node:
            case Number(value=value):
                return Ratio.of(ring, ring.constant(value.numerator), ring.constant(value.denominator))
            case Name(name=name):
                return Ratio.of(ring, ring.gen(name))
            case Sum(terms=terms):
                return _added(ring, _take(values, len(terms)))
            case Product(factors=factors):
                product = Ratio.of(ring, ring.one)
                for factor in _take(values, len(factors)):
                    product = product * factor
                return product
            case Quotient():
                top, bottom = _take(values, 2)
                self._divide_by(bottom, node)
                return top / bottom
            case Power(exponent=exponent):
                (base,) = _take(values, 1)
                if exponent < 0:
                    self._divide_by(base, node)
                return base**exponent
            case Call(function=function):
                (argument,) = _take(values, 1)
                return self._call(node, function, argument)

    def _divide_by(self, divisor: Ratio, node: Node) -> None:
        if not divisor:
            where = f"column {node.column}" if node.column else ""
            raise InputError(
                [
                    Fault(
                        where,
                        "division by an expression that is identically zero",
                        "check the letters in the denominator",
                    )
                ]
            )
        self.divisors.append(divisor.numerator)

    def _call(self, node: Call, function: str, argument: Ratio) -> Ratio:
        if function == "tan":
            cosine = self.calls[call_key("cos", argument)]
            self._divide_by(cosine, node)
            return self.calls[call_key("sin", argument)] / cosine
        return self.calls[call_key(function, argument)]


def _take(values: list[Ratio], count: int) -> list[Ratio]:
    taken = values[-count:]
    del values[-count:]
    return taken


def _added(ring: Ring, parts: list[Ratio]) -> Ratio:
    """Sum of many ratios; those over one are added first, so that long polynomials stay cheap."""
    whole = ring.zero
    total = Ratio.of(ring, ring.zero)
    for part in parts:
        if part.denominator.is_one():
            whole = whole + part.numerator
        else:
            total = total + part
    return total + Ratio.of(ring, whole)
