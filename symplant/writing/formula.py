r"""Ring elements as LaTeX formulas in the shape an author would give them."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

from symplant.algebra.expression import Node
from symplant.algebra.ring import Element, Ring
from symplant.writing.display import LINE, Formula, set_formula
from symplant.writing.element_trees import ElementTrees
from symplant.writing.latex_tree import LatexWriter
from symplant.writing.spelling import Spelling

__all__ = ["FormulaWriter"]


@dataclass(frozen=True)
class FormulaWriter:
    r"""Writes the elements of one ring; `room` is the width of the text in em.

    >>> ring = Ring("s", ("m", "c", "k"))
    >>> s, m, c, k = (ring.gen(x) for x in "smck")
    >>> writer = FormulaWriter(ring, Spelling.of("s", {"m": "m", "c": "c", "k": "k"}))
    >>> writer.polynomial(r"\Delta(s)", m * s**2 + c * s + k).inline()
    '\\Delta(s) = m s^{2} + c s + k'
    >>> writer.factored_latex(m * s**3 + k * s), writer.ratio_latex(-k, m * s + c)
    ('s \\left(m s^{2} + k\\right)', '-\\frac{k}{m s + c}')
    """

    ring: Ring
    spelling: Spelling
    room: float = LINE

    @cached_property
    def writer(self) -> LatexWriter:
        """The notation."""
        return LatexWriter(self.spelling)

    @cached_property
    def trees(self) -> ElementTrees:
        """The elements as trees in their shapes."""
        return ElementTrees(self.ring, self.writer, self.room)

    def polynomial(self, lhs: str, element: Element) -> Formula:
        """By falling powers of the variable, every coefficient in its shortest shape."""
        return self._formula(lhs, self.trees.polynomial(element), element)

    def factored(self, lhs: str, element: Element) -> Formula:
        """As a product of irreducible factors, with a power of the variable in front."""
        return self._formula(lhs, self.trees.factored(element), element)

    def ratio(self, lhs: str, numerator: Element, denominator: Element) -> Formula:
        """As a fraction; where it is wider than a line, as a division with a slash, in lines."""
        return self._formula(lhs, self.trees.ratio(numerator, denominator), numerator, denominator)

    def tree(self, lhs: str, node: Node) -> Formula:
        """A tree as it is written."""
        return self._formula(lhs, node)

    def latex(self, element: Element) -> str:
        """An element on one line, by falling powers of the variable."""
        return self.writer.text(self.trees.polynomial(element))

    def factored_latex(self, element: Element) -> str:
        """An element on one line, factored."""
        return self.writer.text(self.trees.factored(element))

    def ratio_latex(self, numerator: Element, denominator: Element) -> str:
        """A quotient on one line."""
        return self.writer.text(self.trees.ratio(numerator, denominator))

    def _formula(
        self, lhs: str, node: Node, element: Element | None = None, divisor: Element | None = None
    ) -> Formula:
        return set_formula(lhs, node, self.writer, self.room, "=", element, self.ring, divisor)
