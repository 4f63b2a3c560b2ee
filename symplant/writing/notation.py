"""The LaTeX notation of one plant, for whichever ring its results live in."""

from __future__ import annotations

from typing import TYPE_CHECKING

from symplant.writing.formula import FormulaWriter
from symplant.writing.spelling import Spelling

if TYPE_CHECKING:
    from symplant.algebra.ring import Element, Ring
    from symplant.plant.model import Model

__all__ = ["Notation"]

#: The LaTeX of elements of so many terms is kept.
LONG = 500


class Notation:
    """Spellings of a plant's names, and formula writers that share them.

    Errors: InputError where two names have the same spelling.
    """

    def __init__(self, model: Model) -> None:
        self.spelling = Spelling(model)
        self._writers: dict[int, FormulaWriter] = {}
        self._long: list[tuple[Element, str]] = []

    def formulas(self, ring: Ring) -> FormulaWriter:
        """The formula writer of a ring."""
        return self._writers.setdefault(id(ring), FormulaWriter(ring, self.spelling))

    def latex(self, ring: Ring, element: Element) -> str:
        """An element on one line of LaTeX, by falling powers of the variable."""
        if len(element) < LONG:
            return self.formulas(ring).latex(element)
        # Elements cannot be hashed; there are few long ones, and they come again.
        for known, text in self._long:
            if known == element:
                return text
        self._long.append((element, self.formulas(ring).latex(element)))
        return self._long[-1][1]
