"""What `derive` prints for people: the formulas first, then what was assumed and checked."""

from __future__ import annotations

from collections import Counter
from collections.abc import Sequence
from typing import TYPE_CHECKING

from symplant.algebra.text import node_text, polynomial_text
from symplant.algebra.verdict import Check, Verdict
from symplant.derivation.derive import Channel, Derivation, Scaled
from symplant.writing.page import Page
from symplant.writing.plain import PlainFormulas

if TYPE_CHECKING:
    from symplant.algebra.ring import Element
    from symplant.plant.model import Model

__all__ = ["add_checks", "add_failures", "add_head", "derive_page", "finding_page"]

#: Findings of more terms than this are kept in Python arithmetic.
PLAIN_LIMIT = 500
ROLES = {
    Verdict.PROVED: "good",
    Verdict.AGREES: "good",
    Verdict.REFUTED: "bad",
    Verdict.UNDECIDED: "doubt",
}


def derive_page(
    derivation: Derivation, checks: Sequence[Check], width: int = 100, unicode: bool = True
) -> Page:
    """The page of a derivation with its checks."""
    page = Page(width)
    writer = _Writer(derivation, page, unicode)
    add_failures(page, checks)
    add_head(page, derivation.model)
    writer.characteristic()
    writer.channels()
    writer.zero()
    writer.assumptions()
    add_checks(page, checks)
    return page


def finding_page(finding: Scaled | Channel, width: int = 100, unicode: bool = True) -> Page:
    """One finding by itself, for work that is stopped before the rest is there."""
    page = Page(width)
    if isinstance(finding, Scaled):
        heading, letter, polynomial = "Characteristic polynomial", "Δ", finding.polynomial
    else:
        heading, letter, polynomial = f"Numerator of {finding.name}", "N", finding.numerator
    page.heading(heading)
    name = _name(letter, polynomial.ring.variable, unicode)
    if len(polynomial.element) > PLAIN_LIMIT:
        # Most of these are never shown: a long one is not worth the pains of setting it well.
        page.add(f"{name} = {polynomial_text(polynomial.ring, polynomial.element)}")
    else:
        page.add(PlainFormulas(polynomial.ring, width - 2, unicode).polynomial(name, polynomial.element))
    return page


def add_head(page: Page, model: Model) -> None:
    """The title and one line on what the plant is."""
    page.title(model.title or "Plant")
    counts = ", ".join(
        f"{len(signals)} {noun}{'' if len(signals) == 1 else 's'}"
        for signals, noun in ((model.states, "state"), (model.inputs, "input"), (model.outputs, "output"))
    )
    time = "discrete time" if model.discrete else "continuous time"
    kind = ", descriptor form" if model.E is not None else ""
    page.add(f"{counts}, {time}{kind}", "quiet", indent=0)


def add_failures(page: Page, checks: Sequence[Check]) -> None:
    """A failed check is the first thing that is said."""
    failed = [check for check in checks if check.verdict is Verdict.REFUTED]
    if failed:
        count = "A check" if len(failed) == 1 else f"{len(failed)} checks"
        page.add(f"{count} FAILED: do not use these results. {failed[0].what}: {failed[0].detail}", "bad", 0)
        page.add("", indent=0)


def add_checks(page: Page, checks: Sequence[Check]) -> None:
    """The checks: passed ones counted by how they were made, all others in full."""
    page.heading("Checks")
    groups: dict[tuple[Verdict, str], list[Check]] = {}
    for check in checks:
        groups.setdefault((check.verdict, check.method), []).append(check)
    order = [Verdict.REFUTED, Verdict.UNDECIDED, Verdict.PROVED, Verdict.AGREES]
    rows, roles = [], []
    for (verdict, method), members in sorted(groups.items(), key=lambda item: order.index(item[0][0])):
        if verdict in (Verdict.REFUTED, Verdict.UNDECIDED):
            for check in members:
                rows.append((str(verdict), f"{check.what}: {method}: {check.detail}"))
                roles.append(ROLES[verdict])
            continue
        named = ", ".join(Counter(check.what for check in members))
        rows.append((str(verdict), f"{named}: {method}"))
        roles.append("")
    page.rows(rows, roles)


def _name(letter: str, variable: str, unicode: bool) -> str:
    return f"{letter if unicode or letter.isascii() else 'Delta'}({variable})"


class _Writer:
    """Writes the parts of one derivation to a page."""

    def __init__(self, derivation: Derivation, page: Page, unicode: bool) -> None:
        self.derivation, self.page, self.unicode = derivation, page, unicode
        self.variable = derivation.model.variable
        self.plain = PlainFormulas(derivation.ring, page.width - 2, unicode)
        self.delta = _name("Δ", self.variable, unicode)

    def characteristic(self) -> None:
        """The characteristic polynomial, expanded and factored, and what it was multiplied by."""
        scaled = self.derivation.characteristic_polynomial
        self.page.heading("Characteristic polynomial")
        self._polynomial(self.delta, scaled)
        matrix = "E" if self.derivation.model.E is not None else "I"
        self._multiplied(self.delta, f"det({self.variable} {matrix} - A)", scaled)

    def channels(self) -> None:
        """Every channel."""
        shared = self.derivation.characteristic_polynomial.polynomial.element
        many = len(self.derivation.channels) > 1
        for channel in self.derivation.channels:
            self.page.heading(f"{channel.output.name} over {channel.input.name}")
            if channel.numerator.is_zero:
                self.page.add("identically zero: this input does not reach this output")
                continue
            index = f"[{channel.name}]" if many else ""
            above = f"N{index}({self.variable})"
            same = channel.denominator.element == shared
            below = self.delta if same else f"D{index}({self.variable})"
            self.page.add(f"= {above} / {below}", "quiet")
            self._shown(above, channel.numerator.element)
            if not same:
                self._shown(below, channel.denominator.element)
            self.page.add(f"relative degree {channel.relative_degree}", "quiet")
            if channel.common_factor.degree > 0:
                factor = self.plain.text(channel.common_factor.element)
                self.page.add(
                    f"common factor {factor}: not cancelled here; this channel does not show that mode",
                    "doubt",
                )

    def zero(self) -> None:
        """The zero polynomial, or why there is none."""
        zero = self.derivation.zero_polynomial
        self.page.heading("Zero polynomial")
        if zero is None or zero.polynomial.is_zero:
            self.page.rows([("none" if zero is None else "Z = 0", self.derivation.zero_polynomial_note)])
            return
        name = f"Z({self.variable})"
        self._polynomial(name, zero)
        if zero.polynomial.degree == 0:
            self.page.add(f"free of {self.variable}: no finite zeros for generic values", "quiet")
        self._multiplied(name, "det [A - s E, B; C, D]".replace("s", self.variable), zero)

    def assumptions(self) -> None:
        """What had to be taken nonzero, nonnegative or independent."""
        self.page.heading("Assumed")
        rows = []
        if self.derivation.assumed_nonzero:
            texts = [self.plain.text(element) for element in self.derivation.assumed_nonzero]
            rows.append(("nonzero", ", ".join(texts)))
        rows += [
            ("real values", f"{node_text(tree)} {relation} 0")
            for tree, relation in self.derivation.pencil.setting.domain
        ]
        if self.derivation.ring.undecidable:
            rows.append(("equality", self.derivation.ring.undecidable))
        self.page.rows(rows or [("nothing", "no entry is divided by a letter")])

    def _polynomial(self, name: str, scaled: Scaled) -> None:
        self._shown(name, scaled.polynomial.element)

    def _shown(self, name: str, element: Element) -> None:
        whole = self.plain.polynomial(name, element)
        self.page.add(whole)
        product = self.plain.factored(name, element)
        if product != whole:
            self.page.add(product)

    def _multiplied(self, name: str, determinant: str, scaled: Scaled) -> None:
        top, bottom = scaled.multiplier
        if top.is_one() and bottom.is_one():
            return
        if bottom.is_one() and (-top).is_one():
            self.page.add(f"= -{determinant}", "quiet")
            return
        factor = self.plain.text(top) if len(top) == 1 else f"({self.plain.text(top)})"
        if not bottom.is_one():
            factor += f"/({self.plain.text(bottom)})"
        self.page.add(
            f"= {factor} · {determinant}" if self.unicode else f"= {factor} * {determinant}", "quiet"
        )
