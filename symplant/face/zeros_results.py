"""Result objects of `Plant.zeros` and `Plant.hidden`, named as in the machine answers."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from symplant.algebra.expression import Node
from symplant.algebra.text import factored_text, node_text
from symplant.algebra.trees import ratio_tree, tree_of
from symplant.algebra.verdict import Check
from symplant.face.results import (
    ConditionView,
    CrossingView,
    PolynomialView,
    Writing,
    checked_latex,
    json_text,
)

if TYPE_CHECKING:
    from symplant.algebra.ring import Ring
    from symplant.derivation.stability.finding import StabilityFinding
    from symplant.derivation.zeros.directions import ZeroDirection
    from symplant.derivation.zeros.hidden_findings import HiddenCase
    from symplant.face.zeros_work import HiddenWork, ZerosWork

__all__ = ["DirectionView", "HiddenResult", "ZeroView", "ZerosResult"]


class ExpressionView:
    """An expression: text in Python arithmetic, LaTeX, or SymPy, whichever is asked for."""

    def __init__(self, tree: Node, writing: Writing) -> None:
        self._tree, self._writing = tree, writing

    @property
    def expression(self) -> str:
        """The text in Python arithmetic."""
        return node_text(self._tree)

    @property
    def latex(self) -> str:
        """The whole on one line of LaTeX."""
        from symplant.writing.latex_tree import node_latex

        return node_latex(self._tree, self._writing.notation.spelling)

    def sympy(self) -> Any:
        """The expression over `Plant.symbols`."""
        from symplant.algebra.sympy_form import tree_to_sympy

        return tree_to_sympy(self._tree, self._writing.symbols)

    def __str__(self) -> str:
        return self.expression

    def __repr__(self) -> str:
        return f"<expression {self.expression}>"

    def _repr_latex_(self) -> str:
        return f"${self.latex}$"


class ZeroView(ExpressionView):
    """One zero in closed form; where `when` is zero (None: nowhere) it goes to infinity."""

    def __init__(self, tree: Node, multiplicity: int, when: str | None, writing: Writing) -> None:
        super().__init__(tree, writing)
        self.multiplicity, self.when = multiplicity, when


class DirectionView:
    """Initial state and input that hold the output at zero; a common factor is free."""

    def __init__(self, direction: ZeroDirection, writing: Writing) -> None:
        def view(tree: Node) -> ExpressionView:
            return ExpressionView(tree, writing)

        self.zero = view(ratio_tree(direction.zero))
        self.state = [view(tree_of(direction.ring, entry)) for entry in direction.state]
        self.input = [view(tree_of(direction.ring, entry)) for entry in direction.input]
        self.verdict = str(direction.verdict)

    def __repr__(self) -> str:
        return f"<direction at {self.zero}: state {self.state}, input {self.input}>"


class MinimumPhaseView:
    """Stability of the zeros: "stable" says that all of them lie inside."""

    def __init__(self, finding: StabilityFinding | None, note: str, writing: Writing) -> None:
        self.verdict = "undecided" if finding is None else str(finding.verdict)
        self.because = note if finding is None else finding.because
        self.conditions = (
            [] if finding is None else [ConditionView(c, finding.ring, writing) for c in finding.conditions]
        )
        self.crossings = [] if finding is None else [CrossingView(c, finding.ring) for c in finding.crossings]
        self.witnesses = {"stable": None, "unstable": None} if finding is None else finding.witnesses
        self.intervals = () if finding is None else finding.intervals

    def __repr__(self) -> str:
        return f"<minimum phase: {self.verdict}>"


class ZerosResult:
    """What `Plant.zeros` returns; the attributes are named as in the machine answer.

    `influence` and `along` hold the findings themselves (see `derivation.zeros`).
    """

    def __init__(self, work: ZerosWork, writing: Writing) -> None:
        self._work, self._writing = work, writing
        study = work.study
        ring = study.polynomial.ring
        self.zero_polynomial = PolynomialView(study.polynomial, writing)
        self.closed_forms = [
            ZeroView(
                zero.tree,
                form.multiplicity,
                None if form.when is None else factored_text(ring, form.when),
                writing,
            )
            for form in study.forms or ()
            for zero in form.zeros
        ]
        found = study.directions
        self.directions = [DirectionView(d, writing) for d in found.directions] if found else []
        self.minimum_phase = MinimumPhaseView(study.minimum_phase, study.phase_note, writing)
        self.influence = study.influence.letters if study.influence else ()
        self.groups = study.influence
        self.along = study.along
        self.checks: tuple[Check, ...] = work.checks

    @property
    def passed(self) -> bool:
        """Whether no check found anything wrong."""
        return self._work.passed

    def answer(self) -> dict[str, Any]:
        """The machine answer as plain data."""
        from symplant.writing.zeros_answer import zeros_answer

        return zeros_answer(self._work.study, self.checks, self._writing.notation.latex)

    def to_json(self) -> str:
        """The machine answer as text."""
        return json_text(self.answer())

    def latex(self) -> str:
        """Displayed LaTeX formulas, to be pasted or \\input; CheckError if they do not read back."""
        from symplant.writing.zeros_fragment import zeros_fragment

        return checked_latex(zeros_fragment(self._work.study), self._work.derived)

    def _repr_latex_(self) -> str:
        return self.zero_polynomial._repr_latex_()

    def __str__(self) -> str:
        from symplant.writing.zeros_page import zeros_page

        return zeros_page(self._work.study, self.checks).plain()


class CaseView:
    """One way in which a mode hides: where all `conditions` are zero (none: always)."""

    def __init__(self, case: HiddenCase, ring: Ring, writing: Writing) -> None:
        self.conditions = [factored_text(ring, condition) for condition in case.conditions]
        self.condition = self.conditions[0] if self.conditions else "0"
        factor = case.hidden_factor
        self.hidden_factor = None if factor is None else PolynomialView(factor, writing)
        self.kind, self.warning = str(case.kind), case.warning
        self.verdict, self.because = str(case.stability.verdict), case.stability.because
        self.inside_box = str(case.inside_box.verdict)
        self.visible_in = list(case.visible_in)
        self.reduced = {
            (channel.output, channel.input): (
                PolynomialView(channel.numerator, writing),
                PolynomialView(channel.denominator, writing),
            )
            for channel in case.reduced
        }

    def __repr__(self) -> str:
        where = " and ".join(f"{c} = 0" for c in self.conditions) or "always"
        return f"<hidden mode ({self.kind}), {where}: {self.hidden_factor}, {self.verdict}>"


class HiddenResult:
    """What `Plant.hidden` returns; the attributes are named as in the machine answer."""

    def __init__(self, work: HiddenWork, writing: Writing) -> None:
        self._work, self._writing = work, writing
        structure = work.modes.structure
        self.input_decoupling = PolynomialView(structure.input_decoupling.polynomial, writing)
        self.output_decoupling = PolynomialView(structure.output_decoupling.polynomial, writing)
        self.invariant = PolynomialView(structure.invariant.polynomial, writing)
        self.transmission = PolynomialView(structure.transmission.polynomial, writing)
        self.normal_rank = structure.normal_rank.value
        ring = structure.invariant.polynomial.ring
        self.cases = [CaseView(case, ring, writing) for case in work.modes.cases]
        self.complete, self.notes = str(work.modes.complete), work.modes.notes
        self.checks: tuple[Check, ...] = work.checks

    @property
    def passed(self) -> bool:
        """Whether no check found anything wrong."""
        return self._work.passed

    @property
    def warnings(self) -> list[str]:
        """A sentence for each hidden mode that can be unstable."""
        return [case.warning for case in self.cases if case.warning]

    def answer(self) -> dict[str, Any]:
        """The machine answer as plain data."""
        from symplant.writing.hidden_answer import hidden_answer

        return hidden_answer(self._work.modes, self._writing.model, self.checks, self._writing.notation.latex)

    def to_json(self) -> str:
        """The machine answer as text."""
        return json_text(self.answer())

    def latex(self) -> str:
        """Displayed LaTeX formulas, to be pasted or \\input; CheckError if they do not read back."""
        from symplant.writing.hidden_fragment import hidden_fragment

        return checked_latex(hidden_fragment(self._work.modes, self._writing.model), self._work.derived)

    def _repr_latex_(self) -> str:
        return self.latex()

    def __str__(self) -> str:
        from symplant.writing.hidden_page import hidden_page

        return hidden_page(self._work.modes, self._writing.model, self.checks).plain()
