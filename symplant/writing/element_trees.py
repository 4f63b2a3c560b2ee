"""Ring elements as trees in the shape in which they will be written."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

from symplant.algebra.expression import Node, Product, Quotient, integer
from symplant.algebra.ring import Element, Ring
from symplant.writing.grouping import ShapeFinder
from symplant.writing.shapes import shape_tree, unsigned
from symplant.writing.written import TreeWriter

__all__ = ["ElementTrees"]


@dataclass(frozen=True)
class ElementTrees:
    """Shapes for the elements of one ring, by their width in one notation; `room` is that of a line."""

    ring: Ring
    writer: TreeWriter
    room: float

    @cached_property
    def shapes(self) -> ShapeFinder:
        """What chooses between expanded, factored and grouped."""
        return ShapeFinder(self.ring, self.writer, self.room)

    def polynomial(self, element: Element) -> Node:
        """By falling powers of the variable, every coefficient in its shortest shape."""
        return shape_tree(self.ring, self.shapes.polynomial(element))

    def factored(self, element: Element) -> Node:
        """As a product of irreducible factors, a power of the variable in front; or as a polynomial."""
        shape = self.shapes.factored(element)
        return self.polynomial(element) if shape is None else shape_tree(self.ring, shape)

    def shortest(self, element: Element) -> Node:
        """As a polynomial or as a product, whichever is narrower."""
        found = (self.polynomial(element), self.factored(element))
        return min(found, key=lambda node: self.writer.write(node).width)

    def ratio(self, numerator: Element, denominator: Element) -> Node:
        """A quotient; a minus that belongs to the whole stands in front."""
        if denominator.is_one():
            return self.polynomial(numerator)
        above, top = unsigned(self.shapes.drawn(numerator))
        below, bottom = unsigned(self.shapes.drawn(denominator))
        node = Quotient(shape_tree(self.ring, top), shape_tree(self.ring, bottom))
        return node if above * below > 0 else Product((integer(-1), node))
