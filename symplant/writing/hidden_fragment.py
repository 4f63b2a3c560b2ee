"""What hides in a plant as LaTeX formulas, each remembered for the read-back."""

from __future__ import annotations

from typing import TYPE_CHECKING

from symplant.algebra.factored_tree import factored_ratio_tree
from symplant.algebra.ratio import Ratio
from symplant.algebra.verdict import Verdict
from symplant.derivation.zeros.case_response import case_responses
from symplant.writing.fragments import Fragment, head
from symplant.writing.hidden_page import KINDS, MODE_VERDICTS, warned
from symplant.writing.printing import Printer
from symplant.writing.tex_text import prose

if TYPE_CHECKING:
    from symplant.derivation.zeros.findings import PolynomialFinding
    from symplant.derivation.zeros.hidden_findings import HiddenCase, HiddenModes
    from symplant.plant.model import Model

__all__ = ["hidden_fragment"]


def hidden_fragment(modes: HiddenModes, model: Model) -> Fragment:
    """Warnings, zeros of all kinds, and the cases inside the box."""
    printer = Printer(model, modes.structure.invariant.polynomial.ring)
    writer = _Writer(modes, model, printer)
    parts = [*writer.warnings(), *writer.structure(), *writer.cases()]
    return Fragment("\n\n".join(part for part in [head(printer), *parts] if part) + "\n", printer)


class _Writer:
    """Writes the parts of one case book."""

    def __init__(self, modes: HiddenModes, model: Model, printer: Printer) -> None:
        self.modes, self.model, self.printer = modes, model, printer

    def warnings(self) -> list[str]:
        """What must not be overlooked."""
        return [rf"\textbf{{Warning.}} {self._warning(case)}" for case in warned(self.modes)]

    def _warning(self, case: HiddenCase) -> str:
        """The sentence of a case, with the names of the outputs as formulas."""
        spelling = self.printer.spelling
        text = prose(case.warning.partition("; it shows in")[0]).rstrip(".")
        if case.conditions:
            where = [f"${self.printer.inline('condition of a warning', c)} = 0$" for c in case.conditions]
            text += f" where {' and '.join(where)}"
        if case.visible_in:
            outputs = ", ".join(f"${spelling.signal(name)}$" for name in case.visible_in)
            text += f"; it shows in the response to initial conditions of {outputs}"
        return f"{text}."

    def structure(self) -> list[str]:
        """Zeros of all kinds for generic values."""
        found = self.modes.structure
        rank = found.normal_rank
        parts = [
            r"\paragraph{For generic values of the parameters}",
            f"The normal rank of the transfer matrix is {rank.value}.",
        ]
        for name, finding in (
            ("input-decoupling zeros (modes that no input reaches)", found.input_decoupling),
            ("output-decoupling zeros (modes that no output shows)", found.output_decoupling),
            ("invariant zeros", found.invariant),
            ("transmission zeros", found.transmission),
        ):
            parts += self._zeros(name, finding)
        return parts

    def _zeros(self, name: str, finding: PolynomialFinding) -> list[str]:
        doubt = "" if finding.verdict is Verdict.PROVED else " (undecided)"
        if finding.degree < 1:
            return [f"There are no {name}{doubt}."]
        display = self.printer.vanishing(name, finding.polynomial.element)
        return [f"The {name}{doubt} are the roots of", display]

    def cases(self) -> list[str]:
        """The cases that can happen."""
        shown = [case for case in self.modes.cases if case.inside_box.verdict is not Verdict.REFUTED]
        if not shown:
            return ["No mode is hidden within the signs and ranges of the parameters."]
        parts = []
        for case in shown:
            parts += self._case(case)
        return parts

    def _case(self, case: HiddenCase) -> list[str]:
        parts = [r"\paragraph{Hidden mode}"]
        for number, condition in enumerate(case.conditions):
            parts += ["and" if number else "Where", self.printer.vanishing("condition of a case", condition)]
        if case.always:
            parts.append("For all values of the parameters")
        if case.hidden_factor is not None:
            parts.append("the mode hides whose roots are those of")
            parts.append(self.printer.vanishing("hidden factor", case.hidden_factor.element))
        parts.append(f"{prose(KINDS[case.kind])} {prose(MODE_VERDICTS[case.stability.verdict][0])}")
        spelling = self.printer.spelling
        if case.reduced:
            parts.append("What is seen is" if case.always else "What is seen there is")
        for channel in case.reduced:
            ratio = Ratio.of(self.printer.ring, channel.numerator.element, channel.denominator.element)
            lhs = rf"\frac{{{spelling.signal(channel.output)}}}{{{spelling.signal(channel.input)}}}"
            parts.append(self.printer.ratio(f"reduced {channel.output}/{channel.input}", lhs, ratio))
        return [*parts, *self._responses(case)]

    def _responses(self, case: HiddenCase) -> list[str]:
        parts = []
        s, spelling = self.model.variable, self.printer.spelling
        for response in case_responses(case, self.modes.free_response):
            output = self.model.outputs[response.output].name
            if output not in case.visible_in:
                continue
            y = spelling.signal(output)
            parts.append(rf"The mode shows in the response of ${y}$ to the initial state, with the parts")
            for state, numerator in zip(self.model.states, response.numerators, strict=True):
                if numerator.is_zero:
                    continue
                ratio = Ratio.of(self.printer.ring, numerator.element, response.denominator.element)
                lhs = rf"\frac{{{y}({s})}}{{{spelling.signal(state.name)}(0)}}"
                tree = factored_ratio_tree(ratio)
                parts.append(self.printer.tree(f"free response of {output}", lhs, tree))
        return parts
