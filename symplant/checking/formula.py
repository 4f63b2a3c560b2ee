"""Results as they are printed, read again and evaluated; very long ones term by term."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from symplant.algebra.expression import Node
from symplant.algebra.ring import Element, Ring
from symplant.algebra.text import polynomial_text
from symplant.checking.point import Point
from symplant.checking.termwise import Terms, horner
from symplant.errors import InputError
from symplant.reading.arithmetic import MAX_LENGTH, read_arithmetic
from symplant.reading.exponents import MAX_EXPONENT

__all__ = ["MAX_TERMS", "Formula", "Formulas", "is_readable"]

#: A polynomial with more terms is not read from its text.
MAX_TERMS = 400
_MAX_BITS = 1200  # the reader takes numbers of up to 400 digits


class Formula:
    """An element and its printed text (`text` makes it), with values at points.

    `from_text` tells which of the two is evaluated; `unreadable` holds what the reader found wrong
    with the text, else "".

    >>> ring = Ring("s", ("k",))
    >>> from fractions import Fraction
    >>> formula = Formula(ring, ring.gen("k") * ring.gen("s") + 1)
    >>> formula.from_text, formula.value(Point({"k": Fraction(1, 2), "s": Fraction(3)}))
    (True, Fraction(5, 2))
    """

    def __init__(
        self, ring: Ring, element: Element, text: Callable[[Ring, Element], str] = polynomial_text
    ) -> None:
        self.ring, self.element = ring, element
        self.unreadable = ""
        self._tree: Node | None = None
        self._terms: Terms | None = None
        self._values: list[tuple[Point, Any]] = []
        if is_readable(element):
            written = text(ring, element)
            if len(written) <= MAX_LENGTH:
                self._read(written)

    def _read(self, written: str) -> None:
        try:
            self._tree = read_arithmetic(written, (self.ring.variable, *self.ring.letters))
        except InputError as error:
            self.unreadable = f"the text {written[:60]!r} cannot be read: {error.faults[0]}"

    @property
    def from_text(self) -> bool:
        """Whether values come from the printed text (else from the terms of the element)."""
        return self._tree is not None

    @property
    def terms(self) -> Terms:
        """The element taken apart."""
        if self._terms is None:
            self._terms = Terms(self.ring, self.element)
        return self._terms

    def value(self, point: Point) -> Any:
        """The value at a point, worked out once; see `evaluation.evaluate` for the errors."""
        for known, value in self._values:
            if known is point:
                return value
        self._values.append((point, self._evaluated(point)))
        return self._values[-1][1]

    def _evaluated(self, point: Point) -> Any:
        if self._tree is not None:
            return point.evaluate(self._tree)
        return horner(self.terms.coefficients(point), point.scalars.get(self.ring.variable))


class Formulas:
    """The formulas of one derivation, each read and taken apart once."""

    def __init__(self, ring: Ring) -> None:
        self.ring = ring
        self._known: list[Formula] = []

    def of(self, element: Element) -> Formula:
        """The formula of an element."""
        for formula in self._known:
            if formula.element == element:
                return formula
        self._known.append(Formula(self.ring, element))
        return self._known[-1]


def is_readable(element: Element, max_terms: int = MAX_TERMS) -> bool:
    """Whether the readers take the text of an element: its length, its exponents, its numbers."""
    if len(element) > max_terms or any(degree > MAX_EXPONENT for degree in element.degrees()):
        return False
    return all(abs(int(value)).bit_length() <= _MAX_BITS for value in element.coeffs())
