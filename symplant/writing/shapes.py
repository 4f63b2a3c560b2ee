"""The shape in which a ring element is written: what stands in brackets, and in which order."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from fractions import Fraction
from math import gcd
from typing import NamedTuple, TypeAlias

from symplant.algebra.expression import Call, Node, Number, Power, Product, Quotient, Sum, integer, names_in
from symplant.algebra.ring import Element, Ring, Term

__all__ = [
    "Bracket",
    "Powers",
    "Shape",
    "Summand",
    "by_first",
    "common",
    "led",
    "multiplied_out",
    "power_tree",
    "quotient",
    "shape_tree",
    "steady",
    "turned",
    "unsigned",
]

#: Generator positions with their exponents, in the order of `Ring.print_order`.
Powers: TypeAlias = "tuple[tuple[int, int], ...]"
#: A sum.
Shape: TypeAlias = "tuple[Summand, ...]"


class Summand(NamedTuple):
    """value * generators * brackets; `variable_first` puts the variable in front of the brackets."""

    value: int
    powers: Powers = ()
    brackets: tuple[Bracket, ...] = ()
    variable_first: bool = False


class Bracket(NamedTuple):
    """A sum in brackets, to a positive exponent."""

    inside: Shape
    exponent: int = 1


def multiplied_out(ring: Ring, shape: Shape) -> Element:
    """The element that a shape stands for, in normal form: the inverse of every choice of shape.

    >>> ring = Ring("s", ("a", "b"))
    >>> inside = (Summand(1, ((ring.position["a"], 1),)), Summand(1, ((ring.position["b"], 1),)))
    >>> multiplied_out(ring, (Summand(2, (), (Bracket(inside, 2),)),))
    2*a^2 + 4*a*b + 2*b^2
    """
    total = ring.zero
    for value, powers, brackets, _ in shape:
        product = ring.constant(value)
        for place, exponent in powers:
            product = product * ring.gen(ring.keys[place]) ** exponent
        for bracket in brackets:
            product = product * multiplied_out(ring, bracket.inside) ** bracket.exponent
        total = total + product
    return ring.reduce(total)


def common(terms: Iterable[tuple[int, dict[int, int]]]) -> tuple[int, Powers]:
    """The greatest common divisor of terms with their powers as dictionaries; the integer is positive."""
    first, *rest = terms
    value, least = abs(first[0]), first[1]
    for other, held in rest:
        value = gcd(value, other)
        if least:
            least = {p: min(e, held[p]) for p, e in least.items() if p in held}
    return value, tuple(least.items())


def quotient(term: Term, value: int, powers: Powers) -> Term:
    """A term over a monomial that divides it."""
    lowered = dict(powers)
    rest = tuple((p, e - lowered.get(p, 0)) for p, e in term[1] if e != lowered.get(p, 0))
    return term[0] // value, rest


def led(shape: Shape) -> Shape:
    """The shape with its first positive summand in front, if it has one."""
    first = next((i for i, summand in enumerate(shape) if summand.value > 0), 0)
    return shape if first == 0 else (shape[first], *shape[:first], *shape[first + 1 :])


def steady(shape: Shape) -> tuple[int, Shape]:
    """A sign and a shape without a minus in front whose product is the shape.

    >>> sign, shape = steady((Summand(-1, ((0, 1),)), Summand(-2)))
    >>> sign, [summand.value for summand in shape]
    (-1, [1, 2])
    """
    sign, same = unsigned(shape)
    return sign, led(same)


def unsigned(shape: Shape) -> tuple[int, Shape]:
    """A sign and a shape in the same order: a sum of negative terms gives its sign away."""
    if shape and all(summand.value < 0 for summand in shape):
        return -1, opposite(shape)
    return 1, shape


def opposite(shape: Shape) -> Shape:
    """Minus the shape, term by term."""
    return tuple(summand._replace(value=-summand.value) for summand in shape)


def turned(summand: Summand) -> Summand:
    """The summand without its minus sign, where a bracket of mixed signs can take it in: k (b - a)."""
    if summand.value > 0:
        return summand
    for i, (inside, exponent) in enumerate(summand.brackets):
        if exponent % 2 and any(part.value < 0 for part in inside):
            bracket = Bracket(led(opposite(inside)), exponent)
            brackets = (*summand.brackets[:i], bracket, *summand.brackets[i + 1 :])
            return summand._replace(value=-summand.value, brackets=brackets)
    return summand


def shape_tree(ring: Ring, shape: Shape) -> Node:
    """The tree of a shape; generators stand for their meanings.

    >>> ring = Ring("s", ("k",))
    >>> shape_tree(ring, (Summand(-2, ((ring.position["k"], 1),)),))
    Product(factors=(Number(value=Fraction(-2, 1), column=0), Name(name='k', column=0)), column=0)
    """
    return _Trees(ring).sum(shape)


class _Trees:
    """Builds trees; equal powers of generators are one object, so that they are written only once."""

    def __init__(self, ring: Ring) -> None:
        self.ring = ring
        self.variable = ring.position[ring.variable]
        self.known: dict[tuple[int, int], Node] = {}
        kinds = {function.key: function.kind for function in ring.functions}
        self.ranks = [self._rank(kinds.get(key, "letter"), i) for i, key in enumerate(ring.keys)]
        self.plain = not ring.functions  # then the order of printing is that of the ring

    def _rank(self, kind: str, place: int) -> float:
        """Where a generator stands in a term: constants, letters, (brackets are 3,) functions, variable."""
        if place == self.variable:
            return 6
        if kind == "constant":
            return 0
        if kind == "letter":
            return 2
        if not names_in(self.ring.meanings[place]):
            return 1
        # Roots and exponentials before the functions with a name, which need no brackets at the end.
        return 4 if kind in ("sqrt", "exp") else 5

    def sum(self, shape: Shape) -> Node:
        terms = [self.summand(summand) for summand in shape]
        if not terms:
            return integer(0)
        return terms[0] if len(terms) == 1 else Sum(tuple(terms))

    def summand(self, summand: Summand) -> Node:
        value, powers, brackets, variable_first = summand
        ranked = [(self.ranks[place], place, exponent) for place, exponent in powers]
        if variable_first:
            ranked = [(2.5 if rank == 6 else rank, place, exponent) for rank, place, exponent in ranked]
        if variable_first or not self.plain:
            ranked.sort(key=lambda item: item[0])
        factors = [self.power(place, exponent) for rank, place, exponent in ranked if rank < 3]
        for inside, exponent in brackets:
            held = self.sum(inside)
            factors.append(held if exponent == 1 else Power(held, exponent))
        factors += [self.power(place, exponent) for rank, place, exponent in ranked if rank > 3]
        if value != 1 or not factors:
            factors.insert(0, Number(Fraction(value)))
        return factors[0] if len(factors) == 1 else Product(tuple(factors))

    def power(self, place: int, exponent: int) -> Node:
        node = self.known.get((place, exponent))
        if node is None:
            meaning = self.ring.meanings[place]
            if exponent == 1:
                node = meaning
            elif isinstance(meaning, Call) and meaning.function == "exp":
                node = Call("exp", _times(meaning.argument, exponent))
            else:
                node = Power(meaning, exponent)
            self.known[place, exponent] = node
        return node


def power_tree(ring: Ring, place: int, exponent: int) -> Node:
    """The tree of a power of a generator."""
    return _Trees(ring).power(place, exponent)


def _times(node: Node, factor: int) -> Node:
    """A tree times an integer, without a bracket where there need be none."""
    match node:
        case Number(value=value):
            return Number(value * factor)
        case Product(factors=(Number(value=value), *rest)):
            return Product((Number(value * factor), *rest))
        case Quotient(numerator=top, denominator=Number(value=value)) if value.denominator == 1:
            shared = gcd(factor, value.numerator)
            above, below = _times(top, factor // shared), value / shared
            return above if below == 1 else Quotient(above, Number(below))
        case Quotient(numerator=top, denominator=bottom):
            return Quotient(_times(top, factor), bottom)
    return Product((integer(factor), node))


def by_first(parts: Sequence[tuple[int, Summand]]) -> Shape:
    """Summands in the order of the terms that they came from."""
    return tuple(summand for _, summand in sorted(parts, key=lambda part: part[0]))
