"""Characteristic polynomial, numerators by two routes, and the zero polynomial, in closed form."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from symplant.algebra.determinant import adjugate, determinant
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ring import Element, Ring
from symplant.algebra.verdict import Check, Verdict
from symplant.derivation.pencil import Pencil, build_pencil, irreducible_factors
from symplant.errors import Fault, InputError
from symplant.plant.model import Model
from symplant.plant.parameter import Signal

__all__ = ["Channel", "Derivation", "Scaled", "derive", "derive_pencil", "derive_stages"]


@dataclass(frozen=True)
class Scaled:
    """A polynomial that is a determinant times `multiplier`, which is nonzero and free of s."""

    polynomial: Polynomial
    multiplier: tuple[Element, Element]  # numerator and denominator


@dataclass(frozen=True)
class Channel:
    """One output over one input: numerator over denominator, nothing cancelled.

    numerator = (C adj(sE-A) B + D det(sE-A)) * multiplier and denominator = det(sE-A) * multiplier,
    with one multiplier, a nonzero expression free of s (given as numerator and denominator).
    `relative_degree` is None for a channel that is identically zero.
    """

    output: Signal
    input: Signal
    numerator: Polynomial
    denominator: Polynomial
    common_factor: Polynomial
    multiplier: tuple[Element, Element]

    @property
    def relative_degree(self) -> int | None:
        """Degree of the denominator minus that of the numerator, for generic letters."""
        if self.numerator.is_zero:
            return None
        return self.denominator.degree - self.numerator.degree

    @property
    def name(self) -> str:
        """Output over input."""
        return f"{self.output.name}/{self.input.name}"


@dataclass(frozen=True)
class Derivation:
    """What `derive` found; every polynomial lives in `pencil.ring`."""

    pencil: Pencil
    characteristic_polynomial: Scaled
    channels: tuple[Channel, ...]
    zero_polynomial: Scaled | None
    zero_polynomial_note: str
    checks: tuple[Check, ...]

    @property
    def model(self) -> Model:
        """The plant."""
        return self.pencil.model

    @property
    def ring(self) -> Ring:
        """The ring of all results."""
        return self.pencil.ring

    @property
    def assumed_nonzero(self) -> tuple[Element, ...]:
        """The irreducible expressions that the entries were divided by."""
        return self.pencil.divisors


def derive_stages(model: Model) -> list[str]:
    """The names that `derive` gives to `stage`, in order."""
    return [
        "the pencil",
        "the characteristic polynomial",
        "the adjugate",
        *(f"the numerator of {y.name}/{u.name}" for y in model.outputs for u in model.inputs),
        "the zero polynomial",
    ]


def derive(
    model: Model,
    stage: Callable[[str], None] = lambda name: None,
    found: Callable[[Scaled | Channel], None] = lambda finding: None,
) -> Derivation:
    """Derive everything from a plant.

    `stage` is told what is being worked on, `found` is handed the characteristic polynomial and each
    channel as soon as it is there, so that a caller can keep them if the rest takes too long.

    Errors: InputError for entries at fault and for a pencil that is singular for every s.
    """
    stage("the pencil")
    return derive_pencil(build_pencil(model), stage, found)


def derive_pencil(
    pencil: Pencil,
    stage: Callable[[str], None] = lambda name: None,
    found: Callable[[Scaled | Channel], None] = lambda finding: None,
) -> Derivation:
    """Derive everything from a pencil that is at hand; see `derive`."""
    ring = pencil.ring
    stage("the characteristic polynomial")
    characteristic = determinant(pencil.dynamics, ring.one)
    if ring.is_zero(characteristic):
        raise InputError([_singular_pencil(pencil.model)])
    characteristic = ring.reduce(characteristic)
    polynomial = _scaled(pencil, characteristic, pencil.multiplier)
    found(polynomial)
    stage("the adjugate")
    again, adjoint = adjugate(pencil.dynamics, ring.one)
    checks = [
        _identity(
            ring,
            "characteristic polynomial",
            "determinant by rows against determinant from the adjugate's lattice",
            characteristic - again,
        )
    ]
    channels: list[Channel] = []
    for i, output in enumerate(pencil.model.outputs):
        for j, entry in enumerate(pencil.model.inputs):
            stage(f"the numerator of {output.name}/{entry.name}")
            contracted = _contraction(pencil, adjoint, characteristic, i, j)
            bordered = determinant(_bordered(pencil, i, j), ring.one)
            checks.append(
                _identity(
                    ring,
                    f"numerator {output.name}/{entry.name}",
                    "contraction with the adjugate against the bordered determinant",
                    contracted - bordered,
                )
            )
            channels.append(_channel(pencil, i, j, ring.reduce(contracted), characteristic))
            found(channels[-1])
    stage("the zero polynomial")
    zero, note = _zero_polynomial(pencil)
    return Derivation(
        pencil,
        polynomial,
        tuple(channels),
        zero,
        note,
        tuple(checks),
    )


def _contraction(
    pencil: Pencil, adjoint: list[list[Element]], characteristic: Element, i: int, j: int
) -> Element:
    total = pencil.direct[i][j] * characteristic
    for row, weight in enumerate(pencil.reading[i]):
        if not weight:
            continue
        inner = pencil.ring.zero
        for column, cofactor in enumerate(adjoint[row]):
            if cofactor and pencil.drive[column][j]:
                inner = inner + cofactor * pencil.drive[column][j]
        total = total + weight * inner
    return total


def _bordered(pencil: Pencil, i: int, j: int) -> list[list[Element]]:
    rows = [[*row, -drive[j]] for row, drive in zip(pencil.dynamics, pencil.drive, strict=True)]
    return [*rows, [*pencil.reading[i], pencil.direct[i][j]]]


def _channel(pencil: Pencil, i: int, j: int, numerator: Element, characteristic: Element) -> Channel:
    ring = pencil.ring
    denominator = ring.reduce(characteristic * pencil.output_multipliers[i])
    multiplier = pencil.multiplier * pencil.output_multipliers[i]
    (top, bottom), factor = _lowered(pencil, [numerator, denominator], multiplier)
    above, below = Polynomial(ring, top), Polynomial(ring, bottom)
    return Channel(pencil.model.outputs[i], pencil.model.inputs[j], above, below, above.gcd(below), factor)


def _scaled(pencil: Pencil, element: Element, multiplier: Element) -> Scaled:
    (lowered,), factor = _lowered(pencil, [element], multiplier)
    return Scaled(Polynomial(pencil.ring, lowered), factor)


def _lowered(
    pencil: Pencil, elements: list[Element], multiplier: Element
) -> tuple[list[Element], tuple[Element, Element]]:
    """Divide elements by the factors that clearing brought in and that they all still carry.

    Only factors of the multiplier (nonzero by assumption) and integers are divided out: a common
    factor that the plant itself has stays.  The last element gets a positive first coefficient.
    Returned with the remaining multiplier as (numerator, denominator).
    """
    ring = pencil.ring
    below = ring.one
    for factor in irreducible_factors(ring, [multiplier]):
        while all(_divides(ring, factor, element) for element in elements):
            elements = [element // factor for element in elements]
            if _divides(ring, factor, multiplier):
                multiplier = multiplier // factor
            else:
                below = below * factor
    return _signed(ring, elements, multiplier, below)


def _signed(
    ring: Ring, elements: list[Element], multiplier: Element, below: Element
) -> tuple[list[Element], tuple[Element, Element]]:
    content = ring.zero
    for element in elements:
        if element:
            content = content.gcd(ring.constant(abs(int(element.primitive()[0]))))
    if not content:
        return elements, (multiplier, below)
    last = next(element for element in reversed(elements) if element)
    if ring.is_led_negative(last):
        content = -content
    elements = [element // content for element in elements]
    common = multiplier.gcd(content)
    multiplier, content = multiplier // common, content // common
    if ring.is_led_negative(content):
        multiplier, content = -multiplier, -content
    return elements, (multiplier, content * below)


def _divides(ring: Ring, factor: Element, element: Element) -> bool:
    return not element or not element % factor


def _zero_polynomial(pencil: Pencil) -> tuple[Scaled | None, str]:
    m, p = len(pencil.model.inputs), len(pencil.model.outputs)
    if m != p:
        return None, (
            f"the plant has {_count(m, 'input')} and {_count(p, 'output')}: the determinant of the pencil "
            "exists for square plants only"
        )
    ring = pencil.ring
    rows = [
        [*(-entry for entry in row), *drive] for row, drive in zip(pencil.dynamics, pencil.drive, strict=True)
    ]
    rows += [[*row, *direct] for row, direct in zip(pencil.reading, pencil.direct, strict=True)]
    element = ring.reduce(determinant(rows, ring.one))
    multiplier = pencil.multiplier
    for output in pencil.output_multipliers:
        multiplier = multiplier * output
    if not element:
        return Scaled(Polynomial(ring, element), (multiplier, ring.one)), (
            "the determinant of the pencil vanishes identically: the normal rank of the transfer matrix is "
            f"below {m}"
        )
    return _scaled(pencil, element, multiplier), ""


def _count(number: int, noun: str) -> str:
    return f"{number} {noun}" if number == 1 else f"{number} {noun}s"


def _identity(ring: Ring, what: str, method: str, difference: Element) -> Check:
    if ring.is_zero(difference):
        return Check(what, method, Verdict.PROVED, "identical")
    return Check(what, method, Verdict.REFUTED, "the two routes differ")


def _singular_pencil(model: Model) -> Fault:
    descriptor = model.E is not None
    return Fault(
        "matrices.E" if descriptor else "matrices.A",
        f"det({model.variable}*E - A) is identically zero: the pencil is singular for every "
        f"{model.variable}, so the equations do not determine the states",
        "look for an equation that is missing or repeated",
        model.source,
    )
