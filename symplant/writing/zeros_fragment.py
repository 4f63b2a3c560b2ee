"""The zeros of a plant as LaTeX formulas, each remembered for the read-back."""

from __future__ import annotations

from typing import TYPE_CHECKING

from symplant.algebra.trees import ratio_tree
from symplant.writing.along_answer import leading_term
from symplant.writing.along_page import EVENTS, motion_words, moving_factors, solved_trees
from symplant.writing.formula import FormulaWriter
from symplant.writing.fragments import Fragment, head
from symplant.writing.printing import Printer
from symplant.writing.tex_text import prose, tex_text
from symplant.writing.zeros_answer import monomial_tree

if TYPE_CHECKING:
    from symplant.algebra.scalings import Scaling
    from symplant.derivation.zeros.along import Along, Event
    from symplant.derivation.zeros.closed_forms import ClosedForm
    from symplant.derivation.zeros.directions import ZeroDirection
    from symplant.derivation.zeros.limits import RootLimit
    from symplant.derivation.zeros.study import ZerosStudy

__all__ = ["zeros_fragment"]

VERDICTS = {
    "stable": "All zeros lie inside the region of stability for every admissible value of the parameters: "
    "minimum phase.",
    "unstable": "For no admissible value of the parameters do all zeros lie inside the region of stability.",
    "marginal": "For every admissible value of the parameters a zero lies on the boundary of stability.",
    "conditional": "All zeros lie inside the region of stability for some admissible values of the "
    "parameters only.",
    "undecided": "Whether all zeros lie inside the region of stability could not be settled for all "
    "admissible values.",
}


def zeros_fragment(study: ZerosStudy) -> Fragment:
    """Zero polynomial, closed forms, minimum phase, influence, directions, and what happens along p."""
    printer = Printer(study.derivation.model, study.polynomial.ring)
    writer = _Writer(study, printer)
    parts = [*writer.polynomial(), *writer.forms(), *writer.phase(), *writer.influence()]
    parts += writer.directions()
    if study.along is not None:
        parts += writer.along(study.along)
    return Fragment("\n\n".join(part for part in [head(printer), *parts] if part) + "\n", printer)


class _Writer:
    """Writes the parts of one study."""

    def __init__(self, study: ZerosStudy, printer: Printer) -> None:
        self.study, self.printer = study, printer
        self.s = study.derivation.model.variable

    def polynomial(self) -> list[str]:
        """The polynomial whose roots are meant."""
        zeros, printer = self.study.polynomial, self.printer
        model, spelling = self.study.derivation.model, printer.spelling
        outputs = [y.name for y in model.outputs if self.study.output in (None, y.name)]
        inputs = [u.name for u in model.inputs if self.study.input in (None, u.name)]
        above, below = (
            ", ".join(f"${spelling.signal(name)}$" for name in names) for names in (outputs, inputs)
        )
        head = rf"\paragraph{{Zeros of {above} over {below}}}"
        if zeros.is_zero:
            return [head, "The transfer function is identically zero: every number is a zero."]
        lhs = f"Z({self.s})"
        parts = [head, printer.polynomial("zero polynomial", lhs, zeros.element, "eq:zeros")]
        parts.append(printer.factored("zero polynomial", lhs, zeros.element))
        if zeros.degree < 1:
            parts.append(f"It is free of ${self.s}$: for generic values there are no finite zeros.")
        return parts

    def forms(self) -> list[str]:
        """The roots in closed form."""
        forms, parts, number = self.study.forms or (), [], 0
        count = sum(len(form.zeros) for form in forms)
        for form in forms:
            for zero in form.zeros:
                number += 1
                lhs = f"{self.s}_{{{number}}}" if count > 1 else self.s
                parts.append(self.printer.tree(f"zero {number}", lhs, zero.tree))
            parts += self._about(form)
        return parts

    def _about(self, form: ClosedForm) -> list[str]:
        parts = []
        if not form.zeros:
            parts.append(f"{form.factor.degree} zeros are the roots of this factor:")
            parts.append(self.printer.vanishing("factor of the zero polynomial", form.factor.element))
        if form.multiplicity > 1:
            parts.append(f"This has the multiplicity {form.multiplicity}.")
        if form.when is not None:
            text = self.printer.inline("leading coefficient", form.when)
            parts.append(rf"Here ${text} \neq 0$; where it is zero, a zero goes to infinity.")
        return parts

    def phase(self) -> list[str]:
        """Whether all zeros lie inside, and the conditions for it."""
        finding = self.study.minimum_phase
        if finding is None or self.study.polynomial.degree < 1:
            return []
        parts = [r"\paragraph{Minimum phase}", VERDICTS[finding.verdict]]
        if finding.binding:
            parts.append("They do exactly where, within the ranges and signs of the parameters,")
        for number, condition in enumerate(finding.binding, 1):
            what, label = f"minimum phase: {condition.name}", f"eq:minimum-phase-{number}"
            parts.append(self.printer.condition(what, condition.element, condition.relation, label))
        return parts

    def influence(self) -> list[str]:
        """Which letters move the zeros, and through which monomials."""
        found = self.study.influence
        if found is None or not found.letters:
            return []
        rows = []
        for words, names in (
            ("move the zeros", [x.parameter for x in found.letters if x.moves_zeros]),
            ("do not move the zeros", [x.parameter for x in found.letters if not x.moves_zeros]),
        ):
            if names:
                rows.append(f"{', '.join(f'${self.printer.spelling[n]}$' for n in names)} {words}")
        return [r"\paragraph{Influence of the parameters}", "; ".join(rows) + ".", self._groups(found.zeros)]

    def _groups(self, scaling: Scaling) -> str:
        used = {name for group in scaling.groups for name, _ in group}
        if not scaling.groups or scaling.frozen or len(scaling.groups) >= len(used):
            return ""
        texts = [self.printer.tree_inline("group of parameters", monomial_tree(g)) for g in scaling.groups]
        listed = ", ".join(f"${text}$" for text in texts)
        return f"The zeros depend on the parameters only through {listed}."

    def directions(self) -> list[str]:
        """Initial state and input that hold the output at zero."""
        found = self.study.directions
        if found is None or not found.directions:
            return []
        time = rf"{self.s}^{{k}}" if self.study.derivation.model.discrete else rf"\mathrm{{e}}^{{{self.s} t}}"
        parts = [
            r"\paragraph{Inputs that hold the output at zero}",
            rf"From the initial state $\mathbf{{x}}_0$ the input $\mathbf{{u}}_0\,{time}$ holds the "
            "outputs at zero; a common factor is free, and entries that are not given are zero.",
        ]
        for number, direction in enumerate(found.directions, 1):
            parts += self._direction(f"zero direction {number}", direction)
        return parts

    def _direction(self, what: str, direction: ZeroDirection) -> list[str]:
        model, spelling = self.study.derivation.model, self.printer.spelling
        shapes = FormulaWriter(direction.ring, spelling).trees
        parts = ["For", self.printer.tree(what, self.s, ratio_tree(direction.zero))]
        names = [(rf"\left(\mathbf{{x}}_0\right)_{{{spelling.signal(x.name)}}}") for x in model.states]
        inputs = [u.name for u in model.inputs if self.study.input in (None, u.name)]
        names += [rf"\left(\mathbf{{u}}_0\right)_{{{spelling.signal(name)}}}" for name in inputs]
        for lhs, entry in zip(names, (*direction.state, *direction.input), strict=True):
            if entry:
                parts.append(self.printer.tree(what, lhs, shapes.polynomial(entry)))
        return parts

    def along(self, along: Along) -> list[str]:
        """Events, sensitivities and limits."""
        name = self.printer.spelling[along.parameter]
        parts = [rf"\paragraph{{\boldmath Along ${name}$}}"]
        if not along.events:
            parts.append("Nothing happens to the zeros: no equation was found that can hold.")
        for event in along.events:
            parts += self._event(event, along, name)
        for finding in moving_factors(along):
            formula = finding.formula
            what = f"sensitivity to {along.parameter}"
            lhs = rf"\frac{{\mathrm{{d}} {self.s}}}{{\mathrm{{d}} {name}}}"
            if len(moving_factors(along)) > 1:
                parts += ["At the roots of", self.printer.vanishing(what, formula.factor.element)]
            parts.append(self.printer.ratio(what, lhs, formula.derivative))
            if formula.motion is not None:
                parts.append(prose(motion_words(formula.motion, "@")).replace("@", f"${name}$"))
        for limit in along.limits:
            parts += self._limit(limit, along, name)
        return [*parts, *(prose(note) for note in along.notes)]

    def _event(self, event: Event, along: Along, name: str) -> list[str]:
        what = f"{event.event} along {along.parameter}"
        parts = [
            prose(f"{EVENTS[event.event]} where").rstrip("."),
            self.printer.vanishing(what, event.equation),
        ]
        for number, tree in enumerate(solved_trees(event, self.printer.ring.gen(along.parameter))):
            parts += ["or" if number else "that is,", self.printer.tree(what, name, tree)]
        if event.frequency_squared is not None:
            parts += ["with", self.printer.ratio(what, r"\omega^{2}", event.frequency_squared)]
        return parts

    def _limit(self, limit: RootLimit, along: Along, name: str) -> list[str]:
        end = "0" if limit.at == "0" else r"\infty"
        what = f"limit along {along.parameter}"
        trees = [zero.tree for form in limit.forms for zero in form.zeros]
        if not trees:
            return []
        text = tex_text("" if limit.within else " (beyond its range)")
        parts = [rf"For ${name} \to {end}$ {text}".rstrip()]
        for tree in trees:
            display = self.printer.tree(what, self.s, leading_term(tree, along.parameter, limit.exponent))
            parts.append(display.replace(f"{self.s} =", rf"{self.s} \sim", 1).replace("&=", r"&\sim", 1))
        return parts
