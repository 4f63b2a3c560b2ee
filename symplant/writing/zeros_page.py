"""What `zeros` prints for people: where the zeros are, when they lie inside, and what moves them."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from typing import TYPE_CHECKING

from symplant.algebra.verdict import Check
from symplant.writing.along_page import AlongWriter
from symplant.writing.derive_page import add_checks, add_failures, add_head
from symplant.writing.page import Page
from symplant.writing.plain import PlainFormulas
from symplant.writing.stability_page import StabilityWriter
from symplant.writing.zeros_answer import monomial_tree

if TYPE_CHECKING:
    from symplant.algebra.scalings import Monomial, Scaling
    from symplant.derivation.zeros.closed_forms import ClosedForm
    from symplant.derivation.zeros.directions import ZeroDirection
    from symplant.derivation.zeros.influence import LetterInfluence
    from symplant.derivation.zeros.study import ZerosStudy

__all__ = ["numbered", "zeros_page", "zeros_part_page"]

_SUBSCRIPTS = str.maketrans("0123456789", "₀₁₂₃₄₅₆₇₈₉")
#: Directions of more characters than this are left to the machine answer.
LONGEST_DIRECTION = 600

VERDICTS = {
    "stable": ("MINIMUM PHASE for every admissible value of the parameters", "good"),
    "unstable": ("NOT minimum phase for any admissible value of the parameters", "bad"),
    "marginal": ("AT THE BOUNDARY of minimum phase for every admissible value of the parameters", "doubt"),
    "conditional": ("CONDITIONAL: minimum phase for some admissible values, not for others", "doubt"),
    "undecided": ("UNDECIDED over the whole parameter box", "doubt"),
}


def zeros_page(
    study: ZerosStudy, checks: Sequence[Check] = (), width: int = 100, unicode: bool = True
) -> Page:
    """The page of a study of the zeros."""
    page = Page(width)
    add_failures(page, checks)
    add_head(page, study.derivation.model)
    writer = _Writer(study, page, unicode)
    for part in writer.parts:
        writer.write(part)
    if checks:
        add_checks(page, checks)
    return page


def zeros_part_page(study: ZerosStudy, part: str, width: int = 100, unicode: bool = True) -> Page:
    """One part by itself, for work that was stopped before the rest was there."""
    page = Page(width)
    _Writer(study, page, unicode).write(part)
    return page


def numbered(letter: str, number: int, count: int, unicode: bool) -> str:
    """A letter with its number where there are several.

    >>> numbered("s", 2, 3, True), numbered("s", 1, 1, True)
    ('s₂', 's')
    """
    if count == 1:
        return letter
    return letter + (str(number).translate(_SUBSCRIPTS) if unicode else str(number))


class _Writer:
    """Writes the parts of one study to a page."""

    def __init__(self, study: ZerosStudy, page: Page, unicode: bool) -> None:
        self.study, self.page, self.unicode = study, page, unicode
        self.model = study.derivation.model
        self.variable = self.model.variable
        self.plain = PlainFormulas(study.polynomial.ring, page.width - 2, unicode)
        self.parts: Mapping[str, Callable[[], None]] = {
            "polynomial": self.polynomial,
            "forms": self.forms,
            "minimum_phase": self.phase,
            "influence": self.influence,
            "directions": self.directions,
            "along": self.along,
        }

    def write(self, part: str) -> None:
        """Write one part, named as the field of the study."""
        self.parts[part]()

    @property
    def _whose(self) -> str:
        outputs = [y.name for y in self.model.outputs] if self.study.output is None else [self.study.output]
        inputs = [u.name for u in self.model.inputs] if self.study.input is None else [self.study.input]
        if len(outputs) == len(inputs) == 1:
            return f"{outputs[0]} over {inputs[0]}"
        if self.study.output is None and self.study.input is None:
            return "the plant, all outputs and all inputs together"
        return f"{', '.join(outputs)} over {', '.join(inputs)} together"

    def polynomial(self) -> None:
        """The polynomial whose roots are meant."""
        self.page.heading(f"Zeros of {self._whose}")
        zeros = self.study.polynomial
        if self.study.kind == "invariant zeros":
            hint = "--output and --input choose a channel"
            text = f"the roots are the invariant zeros, for there is no determinant to take; {hint}"
            self.page.rows([("", text)], ["quiet"], indent=0)
        if zeros.is_zero:
            self.page.add("the transfer function is identically zero: every number is a zero", "doubt")
            return
        name = f"Z({self.variable})"
        whole = self.plain.polynomial(name, zeros.element)
        self.page.add(whole)
        product = self.plain.factored(name, zeros.element)
        if product != whole:
            self.page.add(product)
        if zeros.degree < 1:
            self.page.add(f"free of {self.variable}: no finite zeros for generic values", "quiet")

    def forms(self) -> None:
        """The roots in closed form."""
        forms = self.study.forms or ()
        if not forms:
            return
        self.page.heading("In closed form")
        count = sum(len(form.zeros) for form in forms)
        number = 0
        for form in forms:
            for zero in form.zeros:
                number += 1
                self.page.add(
                    self.plain.tree(numbered(self.variable, number, count, self.unicode), zero.tree)
                )
            self._about(form)

    def _about(self, form: ClosedForm) -> None:
        if not form.zeros:
            self.page.add(
                f"{form.factor.degree} zeros are the roots of this factor, which has no short closed form:",
                "quiet",
            )
            self.page.add(self.plain.polynomial("0", form.factor.element), "", 4)
        if form.multiplicity > 1:
            self.page.add(f"of multiplicity {form.multiplicity}", "quiet", 4)
        if form.when is not None:
            text = self.plain.text(form.when)
            self.page.rows(
                [("", f"for {text} not zero; where it is zero, a zero goes to infinity")], ["quiet"]
            )

    def phase(self) -> None:
        """Whether all zeros lie inside."""
        finding = self.study.minimum_phase
        if self.study.polynomial.degree < 1:
            return
        self.page.heading("Minimum phase")
        if finding is None:
            self.page.rows([("undecided", self.study.phase_note)], ["doubt"])
            return
        words, role = VERDICTS[finding.verdict]
        self.page.add(words, role)
        if finding.because and finding.verdict != "conditional":
            self.page.rows([("", finding.because)], indent=0)
        writer = StabilityWriter(finding, self.page, self.unicode, "minimum phase")
        writer.conditions()
        writer.crossings()
        writer.intervals()
        writer.special_cases()
        writer.witnesses()
        writer.dropped()
        writer.notes()
        if self.study.phase_note:
            self.page.rows([("", self.study.phase_note)], ["quiet"], indent=0)

    def influence(self) -> None:
        """Which letters move what."""
        found = self.study.influence
        if found is None or not found.letters:
            return
        self.page.heading("What the parameters do")
        groups: dict[str, list[str]] = {}
        for letter in found.letters:
            groups.setdefault(_effect(letter), []).append(letter.parameter)
        rows = [(words, ", ".join(names)) for words, names in groups.items()]
        gain = [letter.parameter for letter in found.letters if letter.scales_gain]
        if gain:
            rows.append(("change the high-frequency gain of a channel", ", ".join(gain)))
        open_ones = [letter.parameter for letter in found.letters if str(letter.verdict) != "proved"]
        self.page.rows(rows)
        if open_ones:
            self.page.rows([("not proved for", ", ".join(open_ones))], ["doubt"])
        self._groups("the zeros", found.zeros)
        self._groups("the poles", found.poles)

    def _groups(self, what: str, scaling: Scaling) -> None:
        used = {name for group in scaling.groups for name, _ in group}
        if not scaling.groups or len(scaling.groups) >= len(used):
            return
        besides = f"; {', '.join(scaling.frozen)} in any way besides" if scaling.frozen else ""
        texts = ", ".join(self._monomial(group) for group in scaling.groups)
        rows = [("", f"{what} depend on the parameters only through  {texts}{besides}")]
        self.page.rows(rows, indent=0)

    def _monomial(self, monomial: Monomial) -> str:
        return self.plain.writer.text(monomial_tree(monomial)).replace(" ", "\N{NO-BREAK SPACE}")

    def directions(self) -> None:
        """Initial states and inputs that hold the output at zero."""
        found = self.study.directions
        if found is None or not (found.directions or found.notes):
            return
        self.page.heading("Inputs that hold the output at zero")
        if found.directions:
            law = f"u0 {self.variable}**k" if self.model.discrete else f"u0 exp({self.variable} t)"
            text = f"from the initial state x0 the input {law} keeps every output here at zero"
            self.page.rows([("", f"{text}; a common factor of x0 and u0 is free")], ["quiet"], indent=0)
        for direction in found.directions:
            self._direction(direction)
        for note in found.notes:
            self.page.rows([("", note)], ["quiet"], indent=0)

    def _direction(self, direction: ZeroDirection) -> None:
        plain = PlainFormulas(direction.ring, self.page.width - 8, self.unicode)
        head = plain.ratio(f"at {self.variable}", direction.zero.numerator, direction.zero.denominator)
        self.page.add(head)
        entries = (*direction.state, *direction.input)
        if sum(len(plain.text(entry)) for entry in entries if entry) > LONGEST_DIRECTION:
            self.page.add("the direction is long: --json has it", "quiet", 4)
            return
        names = [f"x0: {state.name}" for state in self.model.states]
        chosen = [u.name for u in self.model.inputs if self.study.input in (None, u.name)]
        names += [f"u0: {name}" for name in chosen]
        for name, entry in zip(names, entries, strict=True):
            self.page.add(plain.polynomial(name, entry), "", 4)

    def along(self) -> None:
        """Events, sensitivities and limits along one parameter."""
        if self.study.along is not None:
            AlongWriter(self.study.along, self.page, self.unicode).write()


def _effect(letter: LetterInfluence) -> str:
    if letter.moves_zeros and letter.moves_poles:
        return "move zeros and poles"
    if letter.moves_zeros:
        return "move zeros, no poles"
    if letter.moves_poles:
        return "move poles, no zeros"
    return "change the gain alone" if letter.scales_gain else "have no influence at all"
