"""What `stability` prints for people: the verdict, the conditions that bind, where stability is lost."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

from symplant.algebra.verdict import Check
from symplant.derivation.stability.finding import (
    Bound,
    Condition,
    Crossing,
    Endpoint,
    SettledCondition,
    StabilityFinding,
    StabilityInterval,
)
from symplant.writing.crossing_words import crossing_words
from symplant.writing.derive_page import add_checks, add_failures, add_head
from symplant.writing.numbers import number_text
from symplant.writing.page import GLUE, Page
from symplant.writing.plain import PlainFormulas
from symplant.writing.routh_rows import routh_rows

if TYPE_CHECKING:
    from symplant.algebra.ring import Element
    from symplant.derivation.stability.finding import Point
    from symplant.plant.model import Model

__all__ = ["StabilityWriter", "endpoint_text", "settled_page", "stability_page"]

#: A condition of more terms is not spelled on the page, which nobody could read; the machine answer has it.
LONGEST = 1500

#: What stands above the conditions, the crossings, the intervals, and other words for the verdicts.
_HEADINGS: dict[str, tuple[str, str, str, dict[str, str]]] = {
    "stability": (
        "Asymptotically stable exactly where, within the ranges and signs declared,",
        "Stability is lost where",
        "Along ",
        {},
    ),
    "minimum phase": (
        "Minimum phase exactly where, within the ranges and signs declared,",
        "A zero reaches the boundary where",
        "Minimum phase along ",
        {"stable": "minimum phase", "unstable": "not minimum phase", "marginal": "at the boundary"},
    ),
    "margin": (
        "The margin is kept exactly where, within the ranges and signs declared,",
        "The margin is lost where",
        "The margin along ",
        {"stable": "kept", "unstable": "not kept", "marginal": "at the margin"},
    ),
}

#: The verdicts where a margin was asked for.
MARGIN = {
    "stable": "THE MARGIN IS KEPT for every admissible value of the parameters",
    "unstable": "THE MARGIN IS NOT KEPT for any admissible value of the parameters",
    "marginal": "AT THE MARGIN for every admissible value of the parameters",
    "conditional": "CONDITIONAL: the margin is kept for some admissible values, not for others",
    "undecided": "UNDECIDED over the whole parameter box",
}

VERDICTS = {
    "stable": ("STABLE for every admissible value of the parameters", "good"),
    "unstable": ("NOT asymptotically stable for any admissible value of the parameters", "bad"),
    "marginal": ("MARGINAL: at the boundary of stability for every admissible value", "doubt"),
    "conditional": ("CONDITIONAL: stable for some admissible values, not for others", "doubt"),
    "undecided": ("UNDECIDED over the whole parameter box", "doubt"),
}


def stability_page(
    finding: StabilityFinding,
    model: Model,
    checks: Sequence[Check] = (),
    width: int = 100,
    unicode: bool = True,
    routh: bool = False,
) -> Page:
    """The page of a stability finding."""
    page = Page(width)
    add_failures(page, checks)
    add_head(page, model)
    page.heading("Verdict")
    words, role = VERDICTS[finding.verdict]
    if finding.asked:
        page.add(f"asked: {finding.asked}")
        words = MARGIN[finding.verdict]
    page.add(words, role)
    if finding.because:
        page.rows([("", finding.because)], indent=0)
    writer = StabilityWriter(finding, page, unicode, "margin" if finding.asked else "stability")
    writer.conditions()
    writer.crossings()
    writer.intervals()
    writer.special_cases()
    writer.witnesses()
    if routh:
        writer.array()
    writer.dropped()
    writer.notes()
    if checks:
        add_checks(page, checks)
    return page


def settled_page(settled: SettledCondition, width: int = 100, unicode: bool = True) -> Page:
    """One condition by itself, for work that was stopped before the others were known."""
    page, condition = Page(width), settled.condition
    plain = PlainFormulas(settled.ring, width - 4, unicode)
    if len(condition.element) > LONGEST:
        page.add(f"({_too_long(condition.element)}) > 0")
    else:
        page.add(plain.condition(condition.element, condition.relation))
    page.rows([("", f"{condition.name}: {condition.status}: {condition.because}")], ["quiet"], indent=4)
    return page


def endpoint_text(end: Endpoint | None, infinite: str) -> str:
    """An end of an interval: exact, or the digits that are certain."""
    if end is None:
        return infinite
    if end.exact is not None:
        return str(end.exact)
    common = ""
    for low, high in zip(end.lower, end.upper, strict=False):
        if low != high:
            break
        common += low
    return f"{common}..." if len(common) > 3 else f"[{end.lower}, {end.upper}]"


class StabilityWriter:
    """Writes the parts of one finding to a page; `what` is what the conditions are for."""

    def __init__(self, finding: StabilityFinding, page: Page, unicode: bool, what: str = "stability") -> None:
        self.finding, self.page, self.unicode = finding, page, unicode
        self.exactly, self.lost, self.before, self.words = _HEADINGS[what]
        self.plain = PlainFormulas(finding.ring, page.width - 4, unicode)

    def conditions(self) -> None:
        """The conditions that bind, each also solved for a letter where that is possible."""
        never = [c for c in self.finding.conditions if c.status == "never"]
        if never:
            self.page.heading("Cannot be met")
            for condition in never:
                self._condition(condition)
        if not self.finding.binding:
            return
        self.page.heading(self.exactly if not never else "The other conditions")
        for condition in self.finding.binding:
            self._condition(condition)

    def _condition(self, condition: Condition) -> None:
        if len(condition.element) > LONGEST:
            self.page.add(f"({_too_long(condition.element)}) > 0")
            self.page.rows([("", f"{condition.name}: {condition.because}")], ["quiet"], indent=4)
            return
        stated = self.plain.condition(condition.element, condition.relation)
        self.page.add(stated)
        for bound in condition.solved:
            if self._bound(bound) != stated:
                self.page.add(self._bound(bound), "", 6)
        detail = (
            condition.name if condition.status == "required" else f"{condition.name}: {condition.because}"
        )
        self.page.rows([("", detail)], ["doubt" if condition.status == "undecided" else "quiet"], indent=4)

    def _bound(self, bound: Bound) -> str:
        value = self.plain.ratio("", bound.value.numerator, bound.value.denominator)
        head = f"{self.plain.text(self.finding.ring.gen(bound.letter))} {bound.relation} "
        lines = value.split("\n")
        if len(lines) == 1:
            return head + value
        middle = 1 if len(lines) == 3 else 0
        return "\n".join((head if i == middle else " " * len(head)) + line for i, line in enumerate(lines))

    def crossings(self) -> None:
        """Where the boundary of stability is reached."""
        if not self.finding.crossings:
            return
        self.page.heading(self.lost)
        for crossing in self.finding.crossings:
            self._crossing(crossing)

    def _crossing(self, crossing: Crossing) -> None:
        whole = crossing.element
        left = f"({_too_long(whole)})" if len(whole) > LONGEST else self.plain.factored("", whole)
        self.page.add(f"{left} = 0")
        self.page.add(crossing_words(crossing, bool(self.finding.asked)), "quiet", 4)
        ratio = crossing.frequency_squared
        if ratio is not None and len(ratio.numerator) + len(ratio.denominator) <= LONGEST:
            name = "ω²" if self.unicode else "omega^2"
            self.page.add(
                self.plain.ratio(f"at the frequency {name}", ratio.numerator, ratio.denominator), "", 4
            )

    def intervals(self) -> None:
        """The stability intervals of one letter."""
        if not self.finding.intervals:
            return
        letter = self.finding.along or "the parameter"
        self.page.heading(f"{self.before}{letter}")
        rows = [
            (self._interval(letter, i), self.words.get(i.verdict, i.verdict)) for i in self.finding.intervals
        ]
        self.page.rows(rows)

    def _interval(self, letter: str, interval: StabilityInterval) -> str:
        infinity = "∞" if self.unicode else "infinity"
        low = endpoint_text(interval.start, f"-{infinity}")
        return f"{low} < {letter} < {endpoint_text(interval.end, infinity)}"

    def special_cases(self) -> None:
        """Where another polynomial decides."""
        for case in self.finding.special_cases:
            self.page.heading(f"Where {self.plain.text(case.where)} = 0")
            words, role = VERDICTS[case.finding.verdict]
            self.page.add(words, role)
            for condition in case.finding.binding:
                self._condition(condition)

    def witnesses(self) -> None:
        """Exact values that show stability and instability."""
        rows = []
        for side, point in self.finding.witnesses.items():
            if point:
                words = self.words.get(side, "stable" if side == "stable" else "not stable")
                rows.append((f"{words} at", _values(point)))
        if rows:
            self.page.heading("Witnesses")
            self.page.rows(rows)

    def array(self) -> None:
        """Routh's array, row by row."""
        self.page.heading("Routh array" + (" (after z = (1 + w)/(1 - w))" if self.finding.discrete else ""))
        for text in routh_rows(self.finding, self.plain):
            self.page.add(text)

    def dropped(self) -> None:
        """The conditions that need no attention, with the reason."""
        dropped = [c for c in self.finding.conditions if c.status in ("always", "implied")]
        if dropped:
            self.page.heading("Conditions that need no attention")
            self.page.rows([(c.name, f"{c.status}: {c.because}") for c in dropped])

    def notes(self) -> None:
        """What else should be known."""
        if self.finding.notes:
            self.page.heading("Notes")
            for note in self.finding.notes:
                self.page.rows([("", note)], indent=0)


def _too_long(element: Element) -> str:
    return f"a polynomial of {len(element)} terms, spelled out by --json"


def _values(point: Point) -> str:
    return ", ".join(f"{name}{GLUE}={GLUE}{number_text(value)}" for name, value in point.items()) or (
        "(no parameters)"
    )
