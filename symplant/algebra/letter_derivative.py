"""Derivatives of elements with respect to a letter, through the functions that contain it."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field

from symplant.algebra.expression import Node, names_in
from symplant.algebra.ratio import Ratio
from symplant.algebra.ring import Element, Generator, Ring

__all__ = ["LetterDerivative"]

_PARTNERS = {"sin": "cos", "cos": "sin", "sinh": "cosh", "cosh": "sinh"}


@dataclass
class LetterDerivative:
    """d/d(letter) over one ring; `convert` turns the argument of a function into a ratio of the ring.

    >>> ring = Ring("s", ("k", "m"))
    >>> slope = LetterDerivative(ring, "k")
    >>> slope.element(ring.gen("k") ** 2 * ring.gen("m")).numerator
    2*k*m
    """

    ring: Ring
    letter: str
    convert: Callable[[Node], Ratio] | None = None
    _known: dict[str, Ratio] = field(default_factory=dict)

    def element(self, element: Element) -> Ratio:
        """The derivative of an element."""
        ring = self.ring
        total = Ratio.of(ring, ring.zero)
        for key in sorted(ring.used([element]), key=lambda k: ring.position[k]):
            inner = self.generator(key)
            if inner:
                total = total + Ratio.of(ring, element.derivative(key)) * inner
        return total

    def ratio(self, ratio: Ratio) -> Ratio:
        """The derivative of a ratio."""
        top, bottom = self.element(ratio.numerator), self.element(ratio.denominator)
        ring = self.ring
        whole = top * Ratio.of(ring, ratio.denominator) + -(bottom * Ratio.of(ring, ratio.numerator))
        return whole / Ratio.of(ring, ratio.denominator**2)

    def generator(self, key: str) -> Ratio:
        """The derivative of a generator."""
        if key not in self._known:
            self._known[key] = self._generator(key)
        return self._known[key]

    def _generator(self, key: str) -> Ratio:
        ring = self.ring
        zero, one = Ratio.of(ring, ring.zero), Ratio.of(ring, ring.one)
        function = next((f for f in ring.functions if f.key == key), None)
        if function is None:
            return one if key == self.letter else zero
        if function.argument is None and function.square is None:
            return zero  # a constant
        if self.letter not in names_in(function.meaning):
            return zero
        if function.kind in _PARTNERS or function.square is None:
            return self._outer(function) * self._argument(function)
        # g**2 = D gives g' = D'/(2 g) = D' g/(2 D).
        square = ring.reduce(ring.gen(key) ** 2)
        return self.element(square) * Ratio.of(ring, ring.gen(key), 2 * square)

    def _argument(self, function: Generator) -> Ratio:
        if self.convert is None or function.argument is None:
            raise ValueError(f"the argument of {function.kind} cannot be converted")
        return self.ratio(self.convert(function.argument))

    def _outer(self, function: Generator) -> Ratio:
        ring = self.ring
        own = Ratio.of(ring, ring.gen(function.key))
        if function.kind == "exp":
            return own
        if function.kind in ("log", "atan"):
            assert self.convert is not None and function.argument is not None
            inner = self.convert(function.argument)
            one = Ratio.of(ring, ring.one)
            return one / inner if function.kind == "log" else one / (one + inner * inner)
        partner = next(
            f
            for f in ring.functions
            if f.kind == _PARTNERS[function.kind] and f.argument == function.argument
        )
        other = Ratio.of(ring, ring.gen(partner.key))
        return -other if function.kind == "cos" else other
