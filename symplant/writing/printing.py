"""Printing with a memory: every formula that is written is remembered, so that it can be read back."""

from __future__ import annotations

from functools import cached_property
from typing import TYPE_CHECKING

from symplant.algebra.functions import build_ring
from symplant.checking.readback import Printed
from symplant.errors import InputError
from symplant.writing.conditions import condition
from symplant.writing.formula import FormulaWriter
from symplant.writing.spelling import Spelling

if TYPE_CHECKING:
    from symplant.algebra.expression import Node
    from symplant.algebra.ratio import Ratio
    from symplant.algebra.ring import Element, Ring
    from symplant.plant.model import Model

__all__ = ["Printer"]


class Printer:
    """Writes elements as LaTeX and keeps a list of what was written, with the value it stands for.

    What is remembered is the very text that is printed, layout and all.
    """

    def __init__(self, model: Model, ring: Ring) -> None:
        self.model, self.ring = model, ring
        self.spelling = Spelling(model)
        self.printed: list[Printed] = []
        #: Formulas that no reader takes (roots of negative numbers), each with the reason.
        self.unread: list[tuple[str, str]] = []

    @cached_property
    def formulas(self) -> FormulaWriter:
        """The formula writer of the ring."""
        return FormulaWriter(self.ring, self.spelling)

    def polynomial(self, what: str, lhs: str, element: Element, label: str | None = None) -> str:
        """A polynomial displayed by falling powers of the variable."""
        display = self.formulas.polynomial(lhs, element).display("equation", label)
        return self._remember(what, display, element)

    def factored(self, what: str, lhs: str, element: Element) -> str:
        """A polynomial displayed as a product; "" where that is no other than the sum."""
        whole, product = self.formulas.polynomial(lhs, element), self.formulas.factored(lhs, element)
        if product.whole == whole.whole:
            return ""
        return self._remember(f"{what}, factored", product.display("equation"), element)

    def inline(self, what: str, element: Element) -> str:
        """An element for running text, factored."""
        return self._remember(what, self.formulas.factored_latex(element), element)

    def condition(self, what: str, element: Element, relation: str = ">", label: str | None = None) -> str:
        """A condition displayed in the form that reads best; its two sides are remembered."""
        stated = condition(self.formulas, element, relation)
        display = stated.formula.display("equation", label)
        top, bottom = stated.difference
        self.printed.append(Printed(what, display, self.ring, top, bottom, two_sided=True))
        return display

    def vanishing(self, what: str, element: Element) -> str:
        """A display that says that an element is zero."""
        formula = self.formulas.factored("0", element)
        return self._remember(what, formula.display("equation"), element)

    def ratio(self, what: str, lhs: str, ratio: Ratio, relation: str = "=") -> str:
        """A quotient displayed behind a left side."""
        formula = self.formulas.ratio(lhs, ratio.numerator, ratio.denominator)
        display = formula.display("equation")
        # The left side is a name of ours; what is read back is what stands behind the relation.
        self.printed.append(Printed(what, formula.body, self.ring, ratio.numerator, ratio.denominator))
        return display.replace(f"{lhs} =", f"{lhs} {relation}").replace(f"{lhs} &=", f"{lhs} &{relation}")

    def tree(self, what: str, lhs: str, node: Node) -> str:
        """A tree displayed behind a left side; roots that the ring has not may stand in it."""
        formula = self.formulas.tree(lhs, node)
        self._remember_tree(what, formula.body, node)
        return formula.display("equation")

    def tree_inline(self, what: str, node: Node) -> str:
        """A tree for running text."""
        text = self.formulas.writer.text(node)
        self._remember_tree(what, text, node)
        return text

    def _remember_tree(self, what: str, latex: str, node: Node) -> None:
        try:
            # Without the box: a root may be imaginary for the signs declared and is a formula all the same.
            setting = build_ring(self.ring.variable, self.ring.letters, {what: node})
        except InputError as error:
            self.unread.append((what, error.faults[0].reason))
            return
        value = setting.converter().convert(node)
        self.printed.append(Printed(what, latex, setting.ring, value.numerator, value.denominator))

    def quotient(self, what: str, numerator: Element, denominator: Element) -> str:
        """A quotient for running text; without a denominator, factored."""
        if denominator.is_one():
            return self.inline(what, numerator)
        text = self.formulas.ratio_latex(numerator, denominator)
        self.printed.append(Printed(what, text, self.ring, numerator, denominator))
        return text

    def entry(self, what: str, tree: Node, value: Ratio) -> str:
        """A tree as it was given, an entry of a matrix say; `value` is what it amounts to."""
        text = self.formulas.writer.text(tree)
        self.printed.append(Printed(what, text, self.ring, value.numerator, value.denominator))
        return text

    def _remember(self, what: str, latex: str, element: Element) -> str:
        self.printed.append(Printed(what, latex, self.ring, element))
        return latex
