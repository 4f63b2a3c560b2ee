"""The LaTeX notation of one plant, for whichever ring its results live in."""

from __future__ import annotations

from functools import cached_property
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from symplant.algebra.ring import Element, Ring
    from symplant.plant.model import Model
    from symplant.writing.formula import FormulaWriter
    from symplant.writing.spelling import Spelling

__all__ = ["Notation"]

#: The LaTeX of elements of so many terms is kept.
LONG = 500


class Notation:
    """Spellings of a plant's names, and formula writers that share them.

    Nothing is loaded before the first formula is written: pages for the terminal do without LaTeX.
    """

    def __init__(self, model: Model) -> None:
        self._model = model
        self._writers: dict[int, FormulaWriter] = {}
        self._long: list[tuple[Element, str]] = []

    @cached_property
    def spelling(self) -> Spelling:
        """The LaTeX spellings; InputError where two names have the same one."""
        from symplant.writing.spelling import Spelling

        return Spelling(self._model)

    def formulas(self, ring: Ring) -> FormulaWriter:
        """The formula writer of a ring."""
        from symplant.writing.formula import FormulaWriter

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
