"""Values of ring elements, term by term: for polynomials too long to be read from their text."""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction
from typing import Any

from symplant.algebra.ring import Element, Ring
from symplant.checking.evaluation import Scalar
from symplant.checking.point import Point

__all__ = ["Terms", "element_value", "horner"]

#: Exponents are cut into blocks of this length; a long polynomial has few different blocks.
_WIDTH = 8


class Terms:
    """The terms of an element, taken apart once and evaluated at as many points as needed.

    >>> ring = Ring("s", ("k",))
    >>> terms = Terms(ring, 2 * ring.gen("k") * ring.gen("s") ** 2 + 1)
    >>> terms.coefficients(Point({"k": Fraction(1, 2), "s": Fraction(3)}))
    [Fraction(1, 1), Fraction(0, 1), Fraction(1, 1)]
    """

    def __init__(self, ring: Ring, element: Element) -> None:
        self.ring = ring
        self.place = ring.position[ring.variable]
        self.degrees = [max(int(degree), 0) for degree in element.degrees()]
        monomials = element.monoms()
        self._integers = [int(value) for value in element.coeffs()]
        self._powers = [int(exponents[self.place]) for exponents in monomials]
        self._starts: list[int] = []
        self._blocks: list[list[tuple[Any, ...]]] = []  # the different blocks at each start
        self._columns: list[list[int]] = []  # for each term the number of its block
        for cut in self._cuts():
            numbers: dict[tuple[Any, ...], int] = {}
            self._starts.append(cut.start)
            self._columns.append([numbers.setdefault(m[cut], len(numbers)) for m in monomials])
            self._blocks.append(list(numbers))

    def coefficients(self, point: Point) -> list[Any]:
        """Values of the coefficients in the variable at a point, ascending; at least one."""
        bases = {i: point.evaluate(self.ring.meanings[i]) for i in self._used()}
        if not point.exact:
            tables = {i: _powers(base, base**0, self.degrees[i]) for i, base in bases.items()}
            return self._summed(tables, point.arithmetic.number(Fraction(0)))
        # Everything over one common denominator, so that each term costs products of integers only.
        tables, bottom = {}, 1
        for i, base in bases.items():
            up = _powers(base.numerator, 1, self.degrees[i])
            down = _powers(base.denominator, 1, self.degrees[i])
            tables[i] = [p * q for p, q in zip(up, reversed(down), strict=True)]
            bottom *= down[-1]
        return [Fraction(total, bottom) for total in self._summed(tables, 0)]

    def residues(self, bases: Sequence[int], prime: int) -> list[int]:
        """Coefficients in the variable modulo a prime, from the residues of all generators."""
        tables = {}
        for i in self._used():
            tables[i] = [pow(bases[i], exponent, prime) for exponent in range(self.degrees[i] + 1)]
        return [total % prime for total in self._summed(tables, 0, prime)]

    def _used(self) -> list[int]:
        return [i for i, degree in enumerate(self.degrees) if degree and i != self.place]

    def _cuts(self) -> list[slice]:
        used = self._used()
        cuts: list[slice] = []
        for i in used:
            if not cuts or i >= cuts[-1].start + _WIDTH or cuts[-1].start < self.place < i:
                cuts.append(slice(i, min(i + _WIDTH, len(self.degrees))))
            if cuts[-1].start < self.place < cuts[-1].stop:
                cuts[-1] = slice(cuts[-1].start, self.place)
        return cuts

    def _summed(self, tables: dict[int, list[Any]], zero: Any, prime: int = 0) -> list[Any]:
        values: list[Any] = self._integers
        for start, blocks, column in zip(self._starts, self._blocks, self._columns, strict=True):
            products = []
            for exponents in blocks:
                product: Any = 1
                for offset, exponent in enumerate(exponents):
                    if table := tables.get(start + offset):
                        product = table[exponent] * product
                products.append(product % prime if prime else product)
            values = [products[number] * value for number, value in zip(column, values, strict=True)]
        totals = [zero] * (self.degrees[self.place] + 1)
        for power, value in zip(self._powers, values, strict=True):
            totals[power] = totals[power] + value
        return totals


def element_value(ring: Ring, element: Element, point: Point) -> Scalar:
    """The value of an element at a point.

    >>> ring = Ring("s", ("k",))
    >>> element_value(ring, ring.gen("k") * ring.gen("s") + 1, Point({"k": Fraction(1, 2), "s": Fraction(3)}))
    Fraction(5, 2)
    """
    value: Scalar = horner(Terms(ring, element).coefficients(point), point.scalars.get(ring.variable))
    return value


def _powers(base: Any, one: Any, degree: int) -> list[Any]:
    powers = [one]
    for _ in range(degree):
        powers.append(powers[-1] * base)
    return powers


def horner(coefficients: Sequence[Any], at: Any) -> Any:
    """The value of a polynomial from its ascending coefficients.

    >>> horner([1, 0, 2], 3)
    19
    """
    total = coefficients[-1]
    for coefficient in reversed(coefficients[:-1]):
        total = total * at + coefficient
    return total
