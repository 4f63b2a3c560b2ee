"""The part of a report on stability: verdict, conditions, where stability is lost, what was set aside."""

from __future__ import annotations

from typing import TYPE_CHECKING

from symplant.writing.crossing_words import crossing_words
from symplant.writing.tex_text import number_latex, prose, tex_text

if TYPE_CHECKING:
    from symplant.algebra.ring import Element
    from symplant.derivation.stability.finding import Condition, Crossing, Point, StabilityFinding
    from symplant.writing.printing import Printer

__all__ = ["stability_section"]

VERDICTS = {
    "stable": "The plant is asymptotically stable for every admissible value of its parameters.",
    "unstable": "The plant is asymptotically stable for no admissible value of its parameters.",
    "marginal": "The plant is at the boundary of stability for every admissible value of its parameters.",
    "conditional": "The plant is asymptotically stable for some admissible values of its parameters only.",
    "undecided": "Whether the plant is asymptotically stable could not be settled for all admissible values.",
}


def stability_section(finding: StabilityFinding, printer: Printer) -> str:
    """The section; conditions carry the labels eq:condition-1, eq:condition-2 and so on."""
    writer = _Writer(finding, printer)
    parts = [VERDICTS[finding.verdict]]
    if finding.because:
        parts.append(prose(finding.because))
    parts += writer.conditions()
    parts += writer.special_cases()
    parts += writer.crossings()
    parts += writer.witnesses()
    parts += writer.dropped()
    parts += [prose(note) for note in finding.notes]
    return "\n\n".join(part for part in parts if part)


class _Writer:
    """Writes the parts of one finding."""

    def __init__(self, finding: StabilityFinding, printer: Printer) -> None:
        self.finding, self.printer = finding, printer
        self.labels: list[tuple[Condition, str]] = []

    def conditions(self) -> list[str]:
        """The conditions that can fail, each solved for a letter where that is possible."""
        never = [c for c in self.finding.conditions if c.status == "never"]
        parts: list[str] = []
        if never:
            parts.append("This can hold nowhere within the ranges of the parameters:")
            parts += [self._condition(condition) for condition in never]
        if not self.finding.binding:
            return parts
        parts.append(
            "The other conditions are"
            if never
            else "It is asymptotically stable exactly where, within the ranges and signs of the parameters,"
        )
        parts += [self._condition(condition) for condition in self.finding.binding]
        open_ones = [c for c in self.finding.binding if c.status == "undecided"]
        if open_ones:
            parts.append(
                "Whether each of these can fail could not be settled; leaving them in is on the safe side: "
                + " ".join(prose(f"{c.name}: {c.because}") for c in open_ones)
            )
        return parts

    def _condition(self, condition: Condition) -> str:
        label = f"eq:condition-{len(self.labels) + 1}"
        self.labels.append((condition, label))
        what = f"condition on the {condition.name}"
        display = self.printer.condition(what, condition.element, condition.relation, label)
        parts = [display]
        for bound in condition.solved:
            lhs = self.printer.spelling[bound.letter]
            solved = self.printer.ratio(what, lhs, bound.value, bound.relation)
            if _core(solved) not in _core(display):
                parts.append(f"that is,\n{solved}")
        return "\n".join(parts)

    def special_cases(self) -> list[str]:
        """Where a leading coefficient is zero."""
        parts = []
        for case in self.finding.special_cases:
            text = self.printer.inline("special case", case.where)
            parts.append(rf"Where ${text} = 0$, another polynomial decides. {VERDICTS[case.finding.verdict]}")
            parts += [self._condition(condition) for condition in case.finding.binding]
        return parts

    def crossings(self) -> list[str]:
        """Where the boundary of stability is reached."""
        if not self.finding.crossings:
            return []
        parts = ["Stability is lost where one of the following is met."]
        parts += [self._crossing(crossing) for crossing in self.finding.crossings]
        return parts

    def _crossing(self, crossing: Crossing) -> str:
        event = crossing_words(crossing)
        label = next((label for c, label in self.labels if _same(c.element, crossing.element)), None)
        if label is not None:
            head = rf"Equality in \eqref{{{label}}}: {tex_text(event)}"
        else:
            display = self.printer.vanishing(f"crossing at {crossing.at}", crossing.element)
            head = f"{display}\nthere, {tex_text(event)}"
        if crossing.frequency_squared is None:
            return f"{head}."
        frequency = self.printer.ratio("frequency at a crossing", r"\omega^{2}", crossing.frequency_squared)
        return f"{head}, at the frequency\n{frequency}"

    def witnesses(self) -> list[str]:
        """Values that show both sides of a conditional verdict."""
        if self.finding.verdict != "conditional":
            return []
        lines = []
        for side, words in (
            ("stable", "Stable, for example, at"),
            ("unstable", "Not stable, for example, at"),
        ):
            point = self.finding.witnesses.get(side)
            if point:
                lines.append(f"{words} {self._values(point)}.")
        return lines

    def _values(self, point: Point) -> str:
        spelling = self.printer.spelling
        return ", ".join(f"${spelling[name]} = {number_latex(value)}$" for name, value in point.items())

    def dropped(self) -> list[str]:
        """The conditions that need no attention, with the reason."""
        rows = [
            rf"\item {prose(f'{c.name}: {c.because}')}"
            for c in self.finding.conditions
            if c.status in ("always", "implied")
        ]
        if not rows:
            return []
        body = "\n".join(rows)
        return [f"Conditions that need no attention:\n\\begin{{itemize}}\n{body}\n\\end{{itemize}}"]


def _same(first: Element, second: Element) -> bool:
    return bool(first == second or first == -second)


def _core(display: str) -> str:
    return "".join(line for line in display.splitlines() if not line.startswith("\\")).strip()
