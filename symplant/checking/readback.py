"""The read-back: what was printed is read again and must have the value of what was meant."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping, Sequence
from dataclasses import dataclass
from functools import cached_property
from typing import Any

from symplant.algebra.ring import Element, Ring
from symplant.algebra.verdict import Check, Verdict
from symplant.checking.comparison import Row, compared
from symplant.checking.evaluation import PRECISION, UndefinedValueError, ball_precision
from symplant.checking.formula import is_readable
from symplant.checking.layout import sides, without_layout
from symplant.checking.modular import MisprintError, read_modulo
from symplant.checking.point import Point
from symplant.checking.residue_point import ResiduePoint, residue_points
from symplant.checking.residues import PRIME
from symplant.checking.termwise import Terms, horner
from symplant.errors import InputError
from symplant.reading.latex import read_latex
from symplant.reading.latex.tokens import MAX_LENGTH

__all__ = ["MAX_TERMS", "STAGE", "Printed", "read_back"]

#: The name of this work in progress reports.
STAGE = "the read-back of what is printed"
#: Formulas of more terms are read by the second reader alone.
MAX_TERMS = 1500
_RESIDUE_POINTS = 2
_METHOD = "printed LaTeX read back: "
_MODULO = f"by a second reader, values modulo the prime {PRIME}"


@dataclass(frozen=True)
class Printed:
    """A printed formula and what it stands for: `element` of `ring`, over `divisor` if there is one.

    `latex` may be a whole display: layout is left out.  Of an equation the right side is read; of an
    inequality, and of an equation if it is `two_sided`, left side less right side is what is meant.
    """

    what: str
    latex: str
    ring: Ring
    element: Element
    divisor: Element | None = None
    two_sided: bool = False

    @cached_property
    def sides(self) -> tuple[str, ...]:
        """The one or two expressions that are read, each on one line."""
        return sides(without_layout(self.latex), self.two_sided)

    @property
    def is_short(self) -> bool:
        """Whether the reader of LaTeX takes it."""
        fits = all(len(side) <= MAX_LENGTH for side in self.sides)
        return fits and all(is_readable(part, MAX_TERMS) for part in (self.element, self.divisor) if part)


class _UnreadableError(ValueError):
    """A reader refuses a formula."""


def read_back(
    printed: Iterable[Printed],
    spellings: Mapping[str, str],
    points: Sequence[Point],
    stage: Callable[[str], None] = lambda name: None,
) -> list[Check]:
    r"""Check printed formulas; `spellings` maps LaTeX spellings to names, `points` are from `choose_points`.

    A formula is read by the reader of LaTeX and evaluated at the points; and it is read by a second,
    independent reader modulo a prime, which alone has to do for very long ones.  Failures come first,
    each with the values that differ; formulas that passed the same way are told together.  A formula
    that no reader can read is refuted.

    >>> from fractions import Fraction
    >>> ring = Ring("s", ("k", "m"))
    >>> point = Point({"k": Fraction(2), "m": Fraction(3), "s": Fraction(5)})
    >>> formula = Printed("gain", r"\frac{k}{m}", ring, ring.gen("k"), ring.gen("m"))
    >>> [check.verdict.value for check in read_back([formula], {"k": "k", "m": "m", "s": "s"}, [point])]
    ['proved']
    """
    stage(STAGE)
    with ball_precision():
        reader = _Readers(spellings, points)
        return _told_together([reader.check(formula) for formula in printed])


class _Readers:
    """Both readers, with the points that they use."""

    def __init__(self, spellings: Mapping[str, str], points: Sequence[Point]) -> None:
        self.spellings, self.points = spellings, points
        self._residues: dict[int, tuple[Ring, list[ResiduePoint]]] = {}

    def check(self, formula: Printed) -> Check:
        """The check of one formula by every reader that can take it."""
        made: list[Check] = []
        refusals: list[str] = []
        readers = [self._exactly] if formula.is_short and self.points else []
        if self._points_for(formula.ring):
            readers.append(self._modulo)
        if len(formula.sides) > 2:
            readers, refusals = [], ["several relations in one formula"]
        for reader in readers:
            try:
                made.append(reader(formula))
            except _UnreadableError as error:
                refusals.append(str(error))
        if not made:
            if not refusals:
                reason = "no points were found at which it could be evaluated"
                return Check(formula.what, _METHOD.strip(": "), Verdict.UNDECIDED, reason)
            reason = f"what is printed cannot be read: {'; '.join(refusals)}"
            return Check(formula.what, _METHOD.strip(": "), Verdict.REFUTED, reason)
        refuted = next((check for check in made if check.verdict is Verdict.REFUTED), None)
        if refuted is not None:
            return refuted
        if refusals:
            detail = f"one of two readers refuses it: {refusals[0]}; {made[0].detail}"
            return Check(formula.what, made[0].method, Verdict.UNDECIDED, detail)
        return _joined(made)

    def _exactly(self, formula: Printed) -> Check:
        what = formula.what
        exact = all(point.exact for point in self.points)
        method = f"{_METHOD}{'exact values' if exact else f'balls of {PRECISION} bits'} at points"
        try:
            trees = [read_latex(side, self.spellings) for side in formula.sides]
        except InputError as error:
            raise _UnreadableError(str(error.faults[0])) from None
        terms = Terms(formula.ring, formula.element)
        divisor = None if formula.divisor is None else Terms(formula.ring, formula.divisor)
        rows: list[Row] = []
        for point in self.points:
            meant = _value(terms, point)
            try:
                if divisor is not None:
                    meant = meant * point.arithmetic.inverse(_value(divisor, point))
                shown = [point.evaluate(tree) for tree in trees]
            except UndefinedValueError as error:
                return Check(what, method, Verdict.UNDECIDED, f"at {point}: {error}")
            rows.append(Row(what, point, shown[0] if len(shown) == 1 else shown[0] - shown[1], meant))
        return compared(what, method, rows, ("printed", "meant"))

    def _modulo(self, formula: Printed) -> Check:
        what, method = formula.what, _METHOD + _MODULO
        points = self._points_for(formula.ring)
        for point in points:
            try:
                values = [read_modulo(side, self.spellings, point) for side in formula.sides]
            except MisprintError as error:
                raise _UnreadableError(str(error)) from None
            except UndefinedValueError as error:
                return Check(what, method, Verdict.UNDECIDED, str(error))
            shown = values[0] if len(values) == 1 else values[0] - values[1]
            divisor = 1 if formula.divisor is None else point.element(formula.divisor)
            meant = point.element(formula.element)
            if shown * divisor != meant:
                over = "" if formula.divisor is None else f" over {divisor}"
                detail = f"at {point} (modulo {PRIME}): printed {shown}, meant {meant}{over}"
                return Check(what, method, Verdict.REFUTED, detail)
        return Check(what, method, Verdict.PROVED, f"equal at {len(points)} points modulo the prime")

    def _points_for(self, ring: Ring) -> list[ResiduePoint]:
        known = self._residues.get(id(ring))
        if known is None:
            known = self._residues[id(ring)] = (ring, residue_points(ring, _RESIDUE_POINTS))
        return known[1]


def _value(terms: Terms, point: Point) -> Any:
    return horner(terms.coefficients(point), point.scalars.get(terms.ring.variable))


def _joined(checks: Sequence[Check]) -> Check:
    """One check of what both readers found; the weaker verdict counts."""
    weakest = next(
        v
        for v in (Verdict.UNDECIDED, Verdict.AGREES, Verdict.PROVED)
        if any(check.verdict is v for check in checks)
    )
    method = _METHOD + "; ".join(check.method.removeprefix(_METHOD) for check in checks)
    return Check(checks[0].what, method, weakest, "; ".join(check.detail for check in checks))


def _told_together(checks: Sequence[Check]) -> list[Check]:
    """Checks that passed alike as one, behind all the others."""
    alike: dict[tuple[str, Verdict], list[Check]] = {}
    told: list[Check] = []
    for check in checks:
        if check.verdict in (Verdict.PROVED, Verdict.AGREES):
            alike.setdefault((check.method, check.verdict), []).append(check)
        else:
            told.append(check)
    for (method, verdict), group in alike.items():
        if len(group) == 1:
            told += group
            continue
        detail = group[0].detail if verdict is Verdict.PROVED else "within the balls"
        names = ", ".join(dict.fromkeys(check.what for check in group))
        told.append(Check(f"{len(group)} printed formulas", method, verdict, f"{names}: each {detail}"))
    return told
