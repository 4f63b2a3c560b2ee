"""What `hidden` prints for people: warnings first, then what hides and where."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from fractions import Fraction
from typing import TYPE_CHECKING

from symplant.algebra.expression import Sum
from symplant.algebra.verdict import Check, Verdict
from symplant.derivation.zeros.case_response import case_responses
from symplant.writing.derive_page import add_checks, add_failures, add_head
from symplant.writing.hidden_answer import case_witnesses
from symplant.writing.numbers import number_text
from symplant.writing.page import GLUE, Page
from symplant.writing.plain import PlainFormulas
from symplant.writing.plain_tree import columns

if TYPE_CHECKING:
    from symplant.algebra.polynomial import Polynomial
    from symplant.derivation.zeros.findings import PolynomialFinding
    from symplant.derivation.zeros.hidden_findings import HiddenCase, HiddenModes, ReducedChannel
    from symplant.plant.model import Model

__all__ = ["KINDS", "MODE_VERDICTS", "hidden_page", "warned"]

#: Responses and transfer functions of more terms than this are left to the machine answer.
LONGEST = 60

KINDS = {
    "uncontrollable": "no input reaches this mode",
    "unobservable": "no output shows this mode",
    "both": "no input reaches this mode and no output shows it",
}

MODE_VERDICTS = {
    "stable": ("it decays", "good"),
    "unstable": ("it does NOT decay, for any admissible value of the parameters", "bad"),
    "marginal": ("it neither decays nor grows", "bad"),
    "conditional": ("it decays for some admissible values and not for others", "bad"),
    "undecided": ("whether it decays is undecided", "bad"),
}


def hidden_page(
    modes: HiddenModes, model: Model, checks: Sequence[Check] = (), width: int = 100, unicode: bool = True
) -> Page:
    """The page of the case book."""
    page = Page(width)
    add_failures(page, checks)
    writer = _Writer(modes, model, page, unicode)
    writer.warnings()
    add_head(page, model)
    writer.structure()
    writer.cases()
    writer.notes()
    if checks:
        add_checks(page, checks)
    return page


def warned(modes: HiddenModes) -> list[HiddenCase]:
    """The cases with a warning; those that hide always first."""
    return sorted((case for case in modes.cases if case.warning), key=lambda case: not case.always)


class _Writer:
    """Writes the parts of one case book."""

    def __init__(self, modes: HiddenModes, model: Model, page: Page, unicode: bool) -> None:
        self.modes, self.model, self.page, self.unicode = modes, model, page, unicode
        self.ring = modes.structure.invariant.polynomial.ring
        self.plain = PlainFormulas(self.ring, page.width - 6, unicode)

    def warnings(self) -> None:
        """One loud line for each case that can be unstable."""
        cases = warned(self.modes)
        for case in cases:
            where = "" if case.always else f"where {self._conditions(case)}: "
            self.page.rows([("WARNING:", f"{where}{case.warning}")], ["bad"], indent=0)
        if cases:
            self.page.add("", indent=0)

    def structure(self) -> None:
        """Zeros of all kinds and the normal rank."""
        found = self.modes.structure
        self.page.heading("For generic values of the parameters")
        rank = found.normal_rank
        words = "full" if rank.value == rank.full else f"less than {rank.full}, that is, not full"
        self.page.rows([("normal rank of the transfer matrix", f"{rank.value} ({words})")])
        for name, finding in (
            ("input-decoupling zeros (modes that no input reaches)", found.input_decoupling),
            ("output-decoupling zeros (modes that no output shows)", found.output_decoupling),
            ("invariant zeros", found.invariant),
            ("transmission zeros", found.transmission),
        ):
            self._zeros(name, finding)

    def _zeros(self, name: str, finding: PolynomialFinding) -> None:
        doubt = "" if finding.verdict is Verdict.PROVED else f" (undecided: {finding.reason})"
        if finding.degree < 1:
            self.page.rows([(f"{name}:", f"none{doubt}")], ["doubt"] if doubt else [])
            return
        self.page.add(f"{name}: the roots of{doubt}", "doubt" if doubt else "")
        self.page.add(self.plain.factored("0", finding.polynomial.element), "", 4)

    def cases(self) -> None:
        """The case book in three parts: always, inside the ranges, outside of them."""
        refuted = Verdict.REFUTED
        parts = (
            ("Hidden for all values", [c for c in self.modes.cases if c.always]),
            (
                "Hidden at special values, within the signs and ranges declared",
                [c for c in self.modes.cases if not c.always and c.inside_box.verdict is not refuted],
            ),
            (
                "Outside the signs and ranges declared (these cannot happen)",
                [c for c in self.modes.cases if not c.always and c.inside_box.verdict is refuted],
            ),
        )
        if not any(cases for _, cases in parts[:2]):
            self.page.heading("Hidden modes")
            self.page.add("none within the signs and ranges declared", "good")
        for heading, cases in parts:
            if not cases:
                continue
            self.page.heading(heading)
            for number, case in enumerate(cases):
                if number:
                    self.page.add("", indent=0)
                self._case(case, brief=case.inside_box.verdict is refuted)

    def _case(self, case: HiddenCase, brief: bool) -> None:
        for number, condition in enumerate(case.conditions):
            joined = "and " if number else ""
            self.page.add(f"{joined}{self.plain.factored('', condition)} = 0", "label")
        if case.hidden_factor is not None:
            self.page.add("the mode: the roots of", "", 4)
            self.page.add(self.plain.factored("0", case.hidden_factor.element), "", 6)
        self.page.add(KINDS[case.kind], "", 4)
        if brief:
            return
        words, role = MODE_VERDICTS[case.stability.verdict]
        self.page.rows([("", words)], [role])
        if case.stability.verdict not in ("conditional", "stable"):
            self.page.rows([("", case.stability.because)], ["quiet"], indent=4)
        self._evidence(case)
        if case.verdict is not Verdict.PROVED:
            self.page.rows([("", f"undecided: {case.reason}")], ["doubt"])
        for channel in case.reduced:
            self._reduced(channel, "" if case.always else "there ")
        self._response(case)

    def _evidence(self, case: HiddenCase) -> None:
        rows = []
        inside = case.inside_box
        if inside.verdict is Verdict.UNDECIDED:
            rows.append(("may lie outside the ranges:", inside.reason))
        elif inside.witness and not case.always and not any(case_witnesses(case).values()):
            rows.append(("for example at", _values(inside.witness)))
        elif inside.between:
            rows.append(
                ("somewhere between", f"{_values(inside.between[0])} and {_values(inside.between[1])}")
            )
        for side, point in case_witnesses(case).items():
            if point:
                rows.append((f"it {'decays' if side == 'stable' else 'does not decay'} at", _values(point)))
        self.page.rows(rows, ["quiet"] * len(rows), indent=4)

    def _reduced(self, channel: ReducedChannel, there: str) -> None:
        name = f"{channel.output}/{channel.input}"
        size = len(channel.numerator.element) + len(channel.denominator.element)
        if channel.numerator.is_zero:
            self.page.add(f"{there}{name} is identically zero", "", 4)
        elif size > LONGEST:
            self.page.add(f"{there}{name} is long: --json has it", "quiet", 4)
        else:
            shown = self.plain.ratio(f"{there}{name}", channel.numerator.element, channel.denominator.element)
            self.page.add(shown, "", 4)

    def _response(self, case: HiddenCase) -> None:
        """The response to initial conditions of the outputs in which the mode shows."""
        for response in case_responses(case, self.modes.free_response):
            output = self.model.outputs[response.output].name
            if output not in case.visible_in:
                continue
            self.page.add(
                f"it shows in the response of {output} to the initial state: {output} = N/D, where", "", 4
            )
            parts = (*response.numerators, response.denominator)
            if sum(len(part.element) for part in parts) > 3 * LONGEST:
                self.page.add("(long: --json has it)", "quiet", 6)
                continue
            for line in self._sum(response.numerators):
                self.page.add(line, "", 6)
            self.page.add(self.plain.factored("D", response.denominator.element), "", 6)

    def _sum(self, numerators: Sequence[Polynomial]) -> list[str]:
        """N as a sum over the states, a line each."""
        lines: list[str] = []
        for state, numerator in zip(self.model.states, numerators, strict=True):
            if numerator.is_zero:
                continue
            written = self.plain.writer.write(self.plain.trees.factored(numerator.element))
            text, minus = self.plain.writer.text(written.node), "−" if self.unicode else "-"
            if isinstance(written.node, Sum):
                text = f"({text})"
            negative = text.startswith(minus)
            text = text.removeprefix(minus)
            head = f"  {minus if negative else '+'} " if lines else f"N = {minus if negative else ''}"
            line = f"{head}{'' if text == '1' else f'{text} '}{state.name}(0)"
            if columns(line) > self.plain.columns:
                head = f"  + {state.name}(0) times" if lines else f"N = {state.name}(0) times"
                line = self.plain.tree(head, written.node, relation="")
            lines.append(line)
        return lines or ["N = 0"]

    def _conditions(self, case: HiddenCase) -> str:
        texts = [f"{self.plain.writer.text(self.plain.trees.factored(c))} = 0" for c in case.conditions]
        text = " and ".join(texts)
        return text if len(text) <= LONGEST * 2 else "an equation holds that stands below"

    def notes(self) -> None:
        """What else should be known."""
        if self.modes.complete is not Verdict.PROVED or self.modes.notes:
            self.page.heading("Notes")
        if self.modes.complete is not Verdict.PROVED:
            self.page.add("this list of cases may not be complete", "doubt")
        for note in self.modes.notes:
            self.page.rows([("", note)], indent=0)


def _values(point: Mapping[str, Fraction]) -> str:
    return ", ".join(f"{name}{GLUE}={GLUE}{number_text(value)}" for name, value in point.items()) or (
        "any values"
    )
