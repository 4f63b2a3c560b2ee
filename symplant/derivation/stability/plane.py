"""Two letters: boundary curves of the stable region, and the verdict in every cell between them."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction

from symplant.algebra.decide_factors import radical
from symplant.algebra.ring import Element, Ring
from symplant.derivation.pencil import build_pencil
from symplant.derivation.stability.candidates import Candidate, candidates, leading
from symplant.derivation.stability.finding import Crossing
from symplant.derivation.stability.fixing import fixed_model
from symplant.derivation.stability.planes import open_cells
from symplant.derivation.stability.subject import Subject, subject_of
from symplant.derivation.stability.witnesses import PointVerdict, classify
from symplant.errors import Fault, InputError
from symplant.plant.model import Model

__all__ = ["PlaneCell", "StabilityPlane", "stability_plane"]


@dataclass(frozen=True)
class PlaneCell:
    """An open cell of the plane: a rational point in it, and what holds in all of it."""

    point: Mapping[str, Fraction]
    verdict: PointVerdict


@dataclass(frozen=True)
class StabilityPlane:
    """The stable region in the plane of two letters.

    `curves` are zero where roots may cross the boundary of stability; inside the box the plant is stable
    exactly where all `conditions` are positive.  `cells` cover the box up to the curves; they are
    empty, and `note` says why, where they could not be made.  `fixed` are the values of the other letters.
    """

    ring: Ring
    across: str
    up: str
    fixed: Mapping[str, Fraction]
    curves: tuple[Crossing, ...]
    conditions: tuple[Element, ...]
    cells: tuple[PlaneCell, ...]
    note: str = ""

    @property
    def witnesses(self) -> Mapping[str, Mapping[str, Fraction] | None]:
        """A stable and an unstable point, the simplest that the cells give."""

        def simplest(verdict: PointVerdict) -> Mapping[str, Fraction] | None:
            found = [cell.point for cell in self.cells if cell.verdict == verdict]
            return min(found, key=_length, default=None)

        return {"stable": simplest("stable"), "unstable": simplest("unstable")}


def stability_plane(
    model: Model, across: str, up: str, fixed: Mapping[str, Fraction] | None = None
) -> StabilityPlane:
    """The stable region over two letters, all others at the values `fixed` or else nominal.

    Errors: InputError for unknown letters, one letter twice, and letters without a value.
    """
    values = _values(model, across, up, dict(fixed or {}))
    subject = subject_of(build_pencil(fixed_model(model, values)))
    ring = subject.ring
    curves: dict[tuple[str, str], Crossing] = {}
    conditions: list[Element] = []
    note = ""
    for number, part in enumerate(subject.parts):
        if part.symmetric:
            note = f"the factor {part.text} has roots on the boundary everywhere: no point is stable"
            continue
        for candidate in candidates(subject, part, number):
            kernel = radical(ring, candidate.make() or -ring.one, subject.nonzero)
            element = kernel.element
            if kernel.is_settled and kernel.sign > 0:
                continue
            conditions.append(element)
            crossing = _crossing(subject, candidate, element)
            if crossing is not None and not kernel.is_settled:
                curves.setdefault((str(element), crossing.at), crossing)
        vanishing = leading(subject, part.polynomial).vanishing
        if vanishing is not None:
            curves.setdefault((str(vanishing), "infinity"), Crossing(vanishing, "infinity"))
    cells, reason = _cells(subject)
    return StabilityPlane(
        ring, across, up, values, tuple(curves.values()), tuple(conditions), cells, note or reason
    )


def _cells(subject: Subject) -> tuple[tuple[PlaneCell, ...], str]:
    try:
        points = open_cells(subject)
        if points is None:
            return (), "no cells: the curves are too many or too high, or no polynomials in two letters"
        found = []
        for point in points:
            verdict = classify(subject, point)
            if verdict is None:
                return (), "no cells: a sign could not be certified"
            found.append(PlaneCell(point, verdict))
    except ArithmeticError:
        return (), "no cells: roots could not be told apart, or there are too many cells"
    return tuple(found), ""


def _crossing(subject: Subject, candidate: Candidate, element: Element) -> Crossing | None:
    match candidate.event, subject.discrete:
        case "origin", False:
            return Crossing(element, "origin")
        case "origin", True:
            return Crossing(element, "unit circle", None, "z = 1")
        case "minus one", _:
            return Crossing(element, "unit circle", None, "z = -1")
        case "pair", False:
            return Crossing(element, "imaginary pair")
        case "pair", True:
            return Crossing(element, "unit circle", None, "complex pair")
    return None


def _values(model: Model, across: str, up: str, fixed: dict[str, Fraction]) -> dict[str, Fraction]:
    faults = []
    for name in dict.fromkeys((across, up)):
        if name not in model.letters:
            reason = f"'{name}' is not a parameter of the plant"
            faults.append(Fault("plane", reason, f"one of {', '.join(model.letters)}"))
        elif name in fixed:
            faults.append(Fault("plane", f"'{name}' has a fixed value", "leave one of the two out"))
    if across == up:
        faults.append(Fault("plane", "the same letter twice", "name two letters"))
    rest = [name for name in model.letters if name not in (across, up)]
    for name in rest:
        if name not in fixed and name not in model.nominal:
            reason = f"'{name}' has no nominal value"
            faults.append(Fault(f"parameters.{name}", reason, "give it one, or fix it for this question"))
    if faults:
        raise InputError(faults)
    return {name: fixed.get(name, model.nominal.get(name, Fraction(0))) for name in rest}


def _length(point: Mapping[str, Fraction]) -> tuple[int, list[Fraction]]:
    size = sum(abs(v.numerator) + v.denominator for v in point.values())
    return size, [abs(value) for value in point.values()]
