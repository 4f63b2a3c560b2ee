"""Formulas for a terminal: ring elements in the shape of the report's formulas, in lines of text."""

from __future__ import annotations

from functools import cached_property

from symplant.algebra.expression import Node, Quotient
from symplant.algebra.ring import Element, Ring
from symplant.writing.conditions import statement
from symplant.writing.element_trees import ElementTrees
from symplant.writing.lines import broken
from symplant.writing.plain_tree import AsciiWriter, UnicodeWriter, columns, terminal_names
from symplant.writing.written import Written

__all__ = ["PlainFormulas"]

_RELATIONS = {">=": "≥", "<=": "≤", "!=": "≠"}
#: Fractions narrower than this stay on one line.
SHORT = 12


class PlainFormulas:
    """Writes elements of one ring as text of at most `columns` columns, in Unicode or in Python arithmetic.

    Where a name alone is wider than the page, the line is as wide as the name.

    >>> ring = Ring("s", ("m", "c", "k"))
    >>> s, m, c, k = (ring.gen(x) for x in "smck")
    >>> PlainFormulas(ring).text(m * s**2 + c * s + k)
    'm s² + c s + k'
    >>> print(PlainFormulas(ring).ratio("G(s)", k + c, m * s**2 + c * s + k))
               c + k
    G(s) = ──────────────
           m s² + c s + k
    """

    def __init__(self, ring: Ring, columns: int = 100, unicode: bool = True) -> None:
        self.ring, self.columns, self.unicode = ring, columns, unicode

    @cached_property
    def writer(self) -> UnicodeWriter:
        """The notation."""
        if not self.unicode:
            return AsciiWriter({})
        return UnicodeWriter(terminal_names([*self.ring.letters, self.ring.variable, "pi"]))

    @cached_property
    def trees(self) -> ElementTrees:
        """The elements as trees in their shapes."""
        return ElementTrees(self.ring, self.writer, float(self.columns))

    def text(self, element: Element) -> str:
        """An element on one line, by falling powers of the variable."""
        return self.writer.text(self.trees.polynomial(element))

    def polynomial(self, lhs: str, element: Element) -> str:
        """An element by falling powers of the variable, in lines; `lhs` may be empty."""
        return self.tree(lhs, self.trees.polynomial(element))

    def factored(self, lhs: str, element: Element) -> str:
        """An element as a product, in lines."""
        return self.tree(lhs, self.trees.factored(element))

    def ratio(self, lhs: str, numerator: Element, denominator: Element) -> str:
        """A quotient in two storeys, or on one line where it is short, or in lines where it is long."""
        return self.tree(lhs, self.trees.ratio(numerator, denominator))

    def condition(self, element: Element, relation: str = ">", isolate: str | None = None) -> str:
        """The condition `element relation 0` in the form that reads best, in lines."""
        found = statement(self.trees, element, relation, isolate)
        sign = _RELATIONS.get(found.relation, found.relation) if self.unicode else found.relation
        left, right = self.writer.text(found.left), self.writer.text(found.right)
        if columns(left) + columns(right) + len(sign) + 2 <= self.columns:
            return f"{left} {sign} {right}"
        return f"{self.tree('', found.left)}\n{self.tree(sign, found.right, relation='')}"

    def tree(self, lhs: str, node: Node, relation: str = "=") -> str:
        """A tree in lines; those after the first are indented to stand behind the relation."""
        head = f"{lhs} {relation} ".replace("  ", " ") if lhs else ""
        room = self.columns - columns(head)
        written = self.writer.write(node)
        storeys = self._storeys(written, head, room)
        if storeys:
            return storeys
        margin = columns(head)
        if room < self.columns / 2:
            head, margin, room = head.rstrip() + "\n    ", 4, self.columns - 4
        lines = broken(self.writer, written, float(room), step=2.0)
        first = f"{head}{lines[0].text}"
        rest = [" " * (margin + 2 * line.indent) + line.text for line in lines[1:]]
        return "\n".join([first, *rest])

    def _storeys(self, written: Written, head: str, room: int) -> str:
        """The lines of a fraction that fits in two storeys, "" for anything else."""
        if not isinstance(written.node, Quotient) or written.width < SHORT:
            return ""
        sign = self.writer.sign[0] + " " if written.negative else ""
        parts = [self.writer.write(part) for part in (written.node.numerator, written.node.denominator)]
        top, bottom = (
            self.writer.signed((part.inside or part)._replace(negative=False))[0] for part in parts
        )
        width = max(columns(top), columns(bottom))
        if width > room - len(sign):
            return ""
        margin = columns(head) + len(sign)
        bar = ("─" if self.unicode else "-") * width
        rows = (
            " " * margin + _centred(top, width),
            head + sign + bar,
            " " * margin + _centred(bottom, width),
        )
        return "\n".join(row.rstrip() for row in rows)


def _centred(text: str, width: int) -> str:
    return " " * ((width - columns(text)) // 2) + text
