"""Printing with a memory: every formula that is written is remembered, so that it can be read back."""

from __future__ import annotations

from functools import cached_property
from typing import TYPE_CHECKING

from symplant.checking.readback import Printed
from symplant.writing.conditions import Condition, condition
from symplant.writing.formula import FormulaWriter
from symplant.writing.spelling import Spelling

if TYPE_CHECKING:
    from symplant.algebra.expression import Node
    from symplant.algebra.ratio import Ratio
    from symplant.algebra.ring import Element, Ring
    from symplant.plant.model import Model

__all__ = ["Printer"]


class Printer:
    """Writes elements as LaTeX and keeps a list of what was written, with the value it stands for."""

    def __init__(self, model: Model, ring: Ring) -> None:
        self.model, self.ring = model, ring
        self.spelling = Spelling(model)
        self.printed: list[Printed] = []

    @cached_property
    def formulas(self) -> FormulaWriter:
        """The formula writer of the ring."""
        return FormulaWriter(self.ring, self.spelling)

    def polynomial(self, what: str, lhs: str, element: Element, label: str | None = None) -> str:
        """A polynomial displayed by falling powers of the variable."""
        formula = self.formulas.polynomial(lhs, element)
        self._remember(what, formula.body, element)
        return formula.display("equation", label)

    def factored(self, what: str, lhs: str, element: Element) -> str:
        """A polynomial displayed as a product; "" where that is no other than the sum."""
        whole, product = self.formulas.polynomial(lhs, element), self.formulas.factored(lhs, element)
        if product.whole == whole.whole:
            return ""
        self._remember(f"{what}, factored", product.body, element)
        return product.display("equation")

    def inline(self, what: str, element: Element) -> str:
        """An element for running text, factored."""
        text = self.formulas.factored_latex(element)
        self._remember(what, text, element)
        return text

    def condition(self, what: str, element: Element, relation: str = ">") -> Condition:
        """A condition in the form that reads best; both of its sides are remembered."""
        stated = condition(self.formulas, element, relation)
        top, bottom = stated.difference
        # Both sides were printed; their difference is what the condition is about.
        shown = rf"{stated.left} - \left( {stated.right} \right)"
        self.printed.append(Printed(what, shown, self.ring, top, bottom))
        return stated

    def ratio(self, what: str, ratio: Ratio) -> str:
        """A quotient for running text."""
        text = self.formulas.ratio_latex(ratio.numerator, ratio.denominator)
        self.printed.append(Printed(what, text, self.ring, ratio.numerator, ratio.denominator))
        return text

    def entry(self, what: str, tree: Node, value: Ratio) -> str:
        """An entry of a matrix as it was given; `value` is what the tree amounts to."""
        text = self.formulas.writer.text(tree)
        self.printed.append(Printed(what, text, self.ring, value.numerator, value.denominator))
        return text

    def _remember(self, what: str, latex: str, element: Element) -> None:
        self.printed.append(Printed(what, latex, self.ring, element))
