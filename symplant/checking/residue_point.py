"""Points modulo a prime as the second reader needs them: a residue for every letter and function."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

from flint import nmod

from symplant.algebra.expression import Call, Product
from symplant.algebra.ring import Element, Ring
from symplant.checking.draws import Draws
from symplant.checking.evaluation import UndefinedValueError, evaluate
from symplant.checking.residues import PRIME, generator_residues
from symplant.checking.termwise import Terms, horner

__all__ = ["ResiduePoint", "residue_points"]


class ResidueArithmetic:
    """Arithmetic modulo the prime; functions are looked up by the residue of their argument.

    >>> arithmetic = ResidueArithmetic()
    >>> int(arithmetic.number(Fraction(1, 2)) + arithmetic.number(Fraction(3, 2)))
    2
    """

    def __init__(self) -> None:
        self.known: dict[tuple[str, int], Any] = {}

    def number(self, value: Fraction) -> Any:
        """The residue of a fraction."""
        return nmod(value.numerator, PRIME) * self.inverse(nmod(value.denominator, PRIME))

    def pi(self) -> Any:
        """None: where pi is used it is a generator and has a residue like a letter."""
        raise UndefinedValueError("pi stands for no residue")

    def inverse(self, value: Any) -> Any:
        """One over a residue; UndefinedValueError for zero."""
        if not value:
            raise UndefinedValueError("division by zero")
        return value**-1

    def function(self, name: str, argument: Any) -> Any:
        """The residue that stands for a function of this argument; UndefinedValueError if none does."""
        found = self.known.get((name, int(argument)))
        if found is None:
            raise UndefinedValueError(f"{name} of a residue that no function of the plant has")
        return found


@dataclass(frozen=True)
class ResiduePoint:
    """Residues for the generators of a ring, by key and in the order of `ring.keys`."""

    ring: Ring
    values: tuple[int, ...]
    names: Mapping[str, Any]
    arithmetic: ResidueArithmetic

    def __str__(self) -> str:
        return ", ".join(f"{name} = {value}" for name, value in self.names.items())

    def element(self, element: Element) -> Any:
        """The residue of an element."""
        coefficients = Terms(self.ring, element).residues(self.values, PRIME)
        return nmod(horner(coefficients, self.values[self.ring.position[self.ring.variable]]) % PRIME, PRIME)


def residue_points(ring: Ring, count: int) -> list[ResiduePoint]:
    """Points modulo the prime, fixed by the names of the ring's generators; none where none are found.

    >>> ring = Ring("s", ("k",))
    >>> one, two = residue_points(ring, 2)
    >>> one.element(ring.gen("k")) == one.names["k"], one.names["k"] == two.names["k"]
    (True, False)
    """
    draws = Draws(" ".join(ring.keys))
    points: list[ResiduePoint] = []
    for _ in range(3 * count):
        values = generator_residues(ring, draws)
        if values is None or len(points) == count:
            break
        point = _point(ring, values)
        if point is not None:
            points.append(point)
    return points


def _point(ring: Ring, values: list[int]) -> ResiduePoint | None:
    arithmetic = ResidueArithmetic()
    residues = dict(zip(ring.keys, (nmod(value, PRIME) for value in values), strict=True))
    names = {
        key: residues[key] for key in (ring.variable, *ring.letters, *(["pi"] if "pi" in residues else []))
    }
    try:
        for generator in ring.functions:  # inner functions come before those that use them
            meaning, value = generator.meaning, residues[generator.key]
            if isinstance(meaning, Product):  # a denominator times a root
                *others, meaning = meaning.factors
                for factor in others:
                    value = value * arithmetic.inverse(evaluate(factor, names, arithmetic))
            if isinstance(meaning, Call):
                argument = evaluate(meaning.argument, names, arithmetic)
                arithmetic.known[meaning.function, int(argument)] = value
    except UndefinedValueError:
        return None
    return ResiduePoint(ring, tuple(values), names, arithmetic)
