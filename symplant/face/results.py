"""Result objects: the names of the machine answers as attributes, SymPy on demand, LaTeX for notebooks."""

from __future__ import annotations

import json
from collections.abc import Mapping
from functools import cached_property
from typing import TYPE_CHECKING, Any

from symplant.algebra.text import element_text, factored_text, polynomial_text, ratio_text
from symplant.algebra.verdict import Check
from symplant.errors import CheckError

if TYPE_CHECKING:
    from symplant.algebra.polynomial import Polynomial
    from symplant.algebra.ring import Ring
    from symplant.derivation.derive import Channel, Scaled
    from symplant.derivation.stability import Condition, Crossing
    from symplant.face.work import Derived, Stabilised
    from symplant.plant.model import Model
    from symplant.writing.fragments import Fragment
    from symplant.writing.notation import Notation

__all__ = [
    "ChannelView",
    "ConditionView",
    "CrossingView",
    "DerivationResult",
    "PolynomialView",
    "StabilityResult",
    "Writing",
    "checked_latex",
    "json_text",
]


class Writing:
    """How the results of one plant are written: LaTeX notation and SymPy symbols."""

    def __init__(self, model: Model, symbols: Mapping[str, Any] | None = None) -> None:
        self.model = model
        self._given = symbols or {}

    @cached_property
    def notation(self) -> Notation:
        """The LaTeX notation."""
        from symplant.writing.notation import Notation

        return Notation(self.model)

    @cached_property
    def symbols(self) -> dict[str, Any]:
        """One SymPy symbol for each name: the caller's own where the plant was given in symbols."""
        from symplant.algebra.sympy_form import symbol_table

        return {**symbol_table(self.model.variable, self.model.box), **self._given}


class PolynomialView:
    """A polynomial in s (or z): text, LaTeX, or SymPy, whichever is asked for."""

    def __init__(self, polynomial: Polynomial, writing: Writing) -> None:
        self._polynomial, self._writing = polynomial, writing

    @property
    def variable(self) -> str:
        """The polynomial variable."""
        return self._polynomial.ring.variable

    @property
    def degree(self) -> int:
        """Degree for generic letters; -1 for the zero polynomial."""
        return self._polynomial.degree

    @property
    def coefficients(self) -> list[str]:
        """Ascending coefficients in Python arithmetic."""
        return [element_text(self._polynomial.ring, c) for c in self._polynomial.coefficients] or ["0"]

    @property
    def expression(self) -> str:
        """The whole in Python arithmetic, by falling powers."""
        return polynomial_text(self._polynomial.ring, self._polynomial.element)

    @property
    def factored(self) -> str:
        """The product of the irreducible factors in Python arithmetic."""
        return factored_text(self._polynomial.ring, self._polynomial.element)

    @property
    def latex(self) -> str:
        """The whole on one line of LaTeX."""
        return self._writing.notation.latex(self._polynomial.ring, self._polynomial.element)

    def sympy(self) -> Any:
        """The polynomial as a SymPy expression over `Plant.symbols`."""
        from symplant.algebra.sympy_form import element_to_sympy

        return element_to_sympy(self._polynomial.ring, self._polynomial.element, self._writing.symbols)

    def __str__(self) -> str:
        return self.expression

    def __repr__(self) -> str:
        return f"<polynomial {self.expression}>"

    def _repr_latex_(self) -> str:
        return f"${self.latex}$"


class ChannelView:
    """One output over one input."""

    def __init__(self, channel: Channel, writing: Writing) -> None:
        self._channel, self._writing = channel, writing
        self.output, self.input = channel.output.name, channel.input.name
        self.numerator = PolynomialView(channel.numerator, writing)
        self.denominator = PolynomialView(channel.denominator, writing)
        self.common_factor = PolynomialView(channel.common_factor, writing)
        self.relative_degree = channel.relative_degree

    @property
    def latex(self) -> str:
        """The transfer function as a fraction, nothing cancelled."""
        ring = self._channel.numerator.ring
        return self._writing.notation.formulas(ring).ratio_latex(
            self._channel.numerator.element, self._channel.denominator.element
        )

    def sympy(self) -> Any:
        """Numerator over denominator as a SymPy expression (SymPy may cancel a common factor)."""
        return self.numerator.sympy() / self.denominator.sympy()

    def __repr__(self) -> str:
        return f"<channel {self.output}/{self.input}: ({self.numerator})/({self.denominator})>"

    def _repr_latex_(self) -> str:
        return f"${self.latex}$"


class DerivationResult:
    """What `Plant.derive` returns; the attributes are named as in the machine answer."""

    def __init__(self, derived: Derived, writing: Writing) -> None:
        self._derived, self._writing = derived, writing
        derivation = derived.derivation
        self.characteristic_polynomial = PolynomialView(
            derivation.characteristic_polynomial.polynomial, writing
        )
        self.channels = [ChannelView(channel, writing) for channel in derivation.channels]
        zero: Scaled | None = derivation.zero_polynomial
        self.zero_polynomial = None if zero is None else PolynomialView(zero.polynomial, writing)
        self.zero_polynomial_note = derivation.zero_polynomial_note
        self.assumed_nonzero = [polynomial_text(derivation.ring, e) for e in derivation.assumed_nonzero]
        self.checks: tuple[Check, ...] = derived.checks

    def channel(self, output: str, input: str) -> ChannelView:
        """The channel with these names; KeyError if there is none."""
        for channel in self.channels:
            if (channel.output, channel.input) == (output, input):
                return channel
        raise KeyError(f"{output}/{input}")

    @property
    def passed(self) -> bool:
        """Whether no check found anything wrong."""
        return self._derived.passed

    def answer(self) -> dict[str, Any]:
        """The machine answer as plain data."""
        from symplant.writing.answer import derive_answer

        return derive_answer(self._derived.derivation, self.checks, self._writing.notation.latex)

    def to_json(self) -> str:
        """The machine answer as text."""
        return json_text(self.answer())

    def latex(self) -> str:
        """Displayed LaTeX formulas, to be pasted or \\input; CheckError if they do not read back."""
        from symplant.writing.fragments import derive_fragment

        return checked_latex(derive_fragment(self._derived.derivation), self._derived)

    def _repr_latex_(self) -> str:
        return self.characteristic_polynomial._repr_latex_()

    def __str__(self) -> str:
        from symplant.writing.derive_page import derive_page

        return derive_page(self._derived.derivation, self.checks).plain()


class ConditionView:
    """One stability condition: `expression` relation 0, with its status and the reason."""

    def __init__(self, condition: Condition, ring: Ring, writing: Writing) -> None:
        self._condition, self._ring, self._writing = condition, ring, writing
        self.relation, self.status, self.because = condition.relation, condition.status, condition.because
        self.name = condition.name

    @property
    def expression(self) -> str:
        """The left side in Python arithmetic, factored."""
        return factored_text(self._ring, self._condition.element)

    def sympy(self) -> Any:
        """The left side as a SymPy expression."""
        from symplant.algebra.sympy_form import element_to_sympy

        return element_to_sympy(self._ring, self._condition.element, self._writing.symbols)

    def __repr__(self) -> str:
        return f"<condition {self.expression} {self.relation} 0: {self.status}>"


class CrossingView:
    """Where a root reaches the boundary: `expression` is zero there."""

    def __init__(self, crossing: Crossing, ring: Ring) -> None:
        self._crossing, self._ring = crossing, ring
        self.at = crossing.at

    @property
    def expression(self) -> str:
        """What vanishes at the crossing, factored."""
        return factored_text(self._ring, self._crossing.element)

    @property
    def frequency_squared(self) -> str | None:
        """The square of the frequency of an imaginary pair, where it has a closed form."""
        value = self._crossing.frequency_squared
        return None if value is None else ratio_text(value)

    def __repr__(self) -> str:
        return f"<crossing at {self.at}: {self.expression} = 0>"


class StabilityResult:
    """What `Plant.stability` returns; the attributes are named as in the machine answer."""

    def __init__(self, stabilised: Stabilised, writing: Writing) -> None:
        self._stabilised, self._writing = stabilised, writing
        finding, ring = stabilised.finding, stabilised.finding.polynomial.ring
        self.verdict = str(finding.verdict)
        self.because = finding.because
        self.conditions = [ConditionView(c, ring, writing) for c in finding.conditions]
        self.crossings = [CrossingView(c, ring) for c in finding.crossings]
        self.witnesses = finding.witnesses
        self.intervals = finding.intervals
        self.checks: tuple[Check, ...] = stabilised.checks

    def answer(self) -> dict[str, Any]:
        """The machine answer as plain data."""
        from symplant.writing.answer import stability_answer

        return stability_answer(
            self._stabilised.finding, self._writing.model, self.checks, self._writing.notation.latex
        )

    def to_json(self) -> str:
        """The machine answer as text."""
        return json_text(self.answer())

    def latex(self) -> str:
        """Displayed LaTeX formulas, to be pasted or \\input; CheckError if they do not read back."""
        from symplant.writing.fragments import stability_fragment

        fragment = stability_fragment(self._stabilised.finding, self._writing.model)
        return checked_latex(fragment, self._stabilised.derived)

    def _repr_latex_(self) -> str:
        return self.latex()

    def __str__(self) -> str:
        from symplant.writing.stability_page import stability_page

        return stability_page(self._stabilised.finding, self._writing.model).plain()


def json_text(answer: dict[str, Any]) -> str:
    """A machine answer as text."""
    return json.dumps(answer, indent=2, ensure_ascii=False) + "\n"


def checked_latex(fragment: Fragment, derived: Derived) -> str:
    failed = [check for check in fragment.read_back(derived.substitution.points) if not check.passed]
    if failed:
        raise CheckError(tuple(failed))
    return fragment.text
