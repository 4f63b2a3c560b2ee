"""What happens to the zeros along one parameter, for people."""

from __future__ import annotations

from typing import TYPE_CHECKING

from symplant.algebra.box import Sign
from symplant.algebra.expression import Call, Node, names_in, walk
from symplant.algebra.text import node_text
from symplant.algebra.verdict import Verdict
from symplant.writing.along_answer import is_real, leading_term
from symplant.writing.enclosures import complex_text, enclosure_text
from symplant.writing.page import GLUE, Page
from symplant.writing.plain import PlainFormulas

if TYPE_CHECKING:
    from symplant.algebra.ring import Element
    from symplant.derivation.zeros.along import Along, Event, SensitivityFinding
    from symplant.derivation.zeros.event_values import EventValue
    from symplant.derivation.zeros.limits import RootLimit
    from symplant.derivation.zeros.sensitivities import Motion

__all__ = ["EVENTS", "AlongWriter", "motion_words", "moving_factors", "solved_trees"]

EVENTS = {
    "crosses at origin": "a zero crosses the origin",
    "crosses on imaginary axis": "a pair of zeros crosses the imaginary axis",
    "crosses at z = 1": "a zero crosses the unit circle at z = 1",
    "crosses at z = -1": "a zero crosses the unit circle at z = -1",
    "crosses on unit circle": "a pair of zeros crosses the unit circle",
    "goes to infinity": "a zero goes to infinity",
    "zeros meet": "two zeros meet",
    "cancels a pole": "a zero cancels a pole",
}


def motion_words(motion: Motion, letter: str) -> str:
    """Which way a zero moves, as a sentence."""
    subject = (
        "the zero"
        if motion.of == "zero"
        else "the mean of the two zeros (their real part where they are complex)"
    )
    if motion.verdict is Verdict.REFUTED:
        return f"{subject} moves either way as {letter} grows, depending on the values"
    if motion.verdict is Verdict.UNDECIDED:
        return f"which way {subject} moves as {letter} grows is undecided"
    where = {
        Sign.POSITIVE: "to the right",
        Sign.NEGATIVE: "to the left",
        Sign.NONNEGATIVE: "to the right, or stays,",
        Sign.NONPOSITIVE: "to the left, or stays,",
        Sign.ZERO: "",
    }[motion.sign]
    if not where:
        return f"{subject} does not move with {letter}"
    return f"{subject} moves {where} as {letter} grows, for every admissible value of the parameters"


def solved_trees(event: Event, letter: Element) -> list[Node]:
    """The values of the parameter that are worth printing: real ones, and not what the equation says."""
    trees = [] if event.equation == letter else [tree for tree, _ in event.values]
    return [tree for tree in trees if not any(_is_imaginary(part) for part in walk(tree))]


def _is_imaginary(node: Node) -> bool:
    if not isinstance(node, Call) or node.function != "sqrt" or names_in(node.argument):
        return False
    return node_text(node.argument).startswith("-")


class AlongWriter:
    """Writes events, sensitivities and limits to a page."""

    def __init__(self, along: Along, page: Page, unicode: bool) -> None:
        self.found, self.page, self.unicode = along, page, unicode
        self.letter, self.ring = along.parameter, along.zeros.ring
        self.plain = PlainFormulas(self.ring, page.width - 4, unicode)
        self.name = self.plain.text(self.ring.gen(self.letter))

    def write(self) -> None:
        """All parts, in order."""
        self.page.heading(f"What happens along {self.name}")
        if not self.found.events:
            self.page.add("nothing happens: no equation was found that can hold", "quiet")
        for event in self.found.events:
            self._event(event)
        for note in self.found.notes:
            self.page.rows([("", note)], ["doubt"], indent=0)
        moving = [f for f in self.found.sensitivities if f.formula.derivative]
        if moving:
            self.page.heading(f"How fast the zeros move with {self.name}")
        for finding in moving:
            self._sensitivity(finding)
        if self.found.limits:
            self.page.heading(f"Where the zeros go at the ends of {self.name}")
        for limit in self.found.limits:
            self._limit(limit)

    def _event(self, event: Event) -> None:
        self.page.add(f"{EVENTS[event.event]} where", "label")
        self.page.add(f"{self.plain.factored('', event.equation)} = 0", "", 4)
        if event.at_nominal:
            self.page.add("(all other parameters at their nominal values)", "quiet", 4)
        for number, tree in enumerate(solved_trees(event, self.ring.gen(self.letter))):
            lead = "or" if number else "that is,"
            self.page.add(self.plain.tree(f"{lead} {self.name}", tree), "", 4)
        if event.frequency_squared is not None:
            ratio = event.frequency_squared
            omega = "ω²" if self.unicode else "omega^2"
            self.page.add(self.plain.ratio(f"with {omega}", ratio.numerator, ratio.denominator), "", 4)
        rows = [("at nominal:", self._value(value)) for value in event.nominal.values]
        if event.nominal.note:
            rows.append(("at nominal:", event.nominal.note))
        elif not rows:
            rows.append(("at nominal:", "for no real value"))
        self.page.rows(rows, ["quiet"] * len(rows), 4)

    def _value(self, value: EventValue) -> str:
        text = f"{self.name}{GLUE}{enclosure_text((value.lower, value.upper), self.unicode)}"
        text += ", inside its range" if value.inside else ", outside its range"
        if value.happens is Verdict.REFUTED:
            return f"{text}; nothing crosses there (two real zeros of opposite sign)"
        return text if value.happens is Verdict.PROVED else f"{text}; whether it happens is undecided"

    def _sensitivity(self, finding: SensitivityFinding) -> None:
        formula, variable = finding.formula, self.ring.variable
        if len(moving_factors(self.found)) > 1:
            self.page.add(
                self.plain.polynomial(f"at the roots {variable} of 0", formula.factor.element), "quiet"
            )
        rate = f"d{variable}/d{self.name}"
        self.page.add(
            self.plain.ratio(rate, formula.derivative.numerator, formula.derivative.denominator), "", 4
        )
        if formula.motion is not None:
            motion = formula.motion
            role = "good" if motion.verdict is Verdict.PROVED else ""
            self.page.rows([("", motion_words(motion, self.letter))], [role])
        for at in finding.nominal:
            real = is_real(at)
            parts = [(variable, at.zero), (rate, at.derivative)]
            parts.append((f"({self.name}/{variable}) {rate}", at.relative))
            texts = [
                f"{label} {complex_text(ball, real, self.unicode)}".replace(" ", GLUE)
                for label, ball in parts
                if ball is not None
            ]
            self.page.rows([("at nominal:", ",  ".join(texts))], ["quiet"], 4)
        if finding.note:
            self.page.rows([("at nominal:", finding.note)], ["quiet"], 4)

    def _limit(self, limit: RootLimit) -> None:
        variable = self.ring.variable
        end = {"0": "0", "infinity": "∞" if self.unicode else "infinity"}[limit.at]
        arrow = "→" if self.unicode else "->"
        count = "one zero goes" if limit.count == 1 else f"{limit.count} zeros go"
        beyond = "" if limit.within else " (beyond its range)"
        where = {"origin": "to the origin", "infinity": "to infinity", "a finite value": "to a finite value"}
        head = f"{self.name} {arrow} {end}{beyond}: {count} {where[limit.goes_to]}, like"
        self.page.add(head, "" if limit.within else "quiet")
        for form in limit.forms:
            for zero in form.zeros:
                tree = leading_term(zero.tree, self.letter, limit.exponent)
                self.page.add(self.plain.tree(variable, tree), "", 4)
            if not form.zeros:
                power = f"{self.name}^({limit.exponent})" if limit.exponent else "1"
                self.page.add(f"g times {power}, where g runs through the roots {variable} of", "", 4)
                self.page.add(self.plain.polynomial("0", form.factor.element), "", 4)


def moving_factors(along: Along) -> list[SensitivityFinding]:
    """The factors of the zero polynomial that depend on the parameter."""
    return [finding for finding in along.sensitivities if finding.formula.derivative]
