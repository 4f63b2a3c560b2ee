"""Conditions that hold together: solved one after the other, and whether the box allows them."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from fractions import Fraction

from symplant.algebra.decide_search import respects
from symplant.algebra.enclosure import certified_sign
from symplant.algebra.letter_images import LetterImage
from symplant.algebra.points import points
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ring import Element, Ring
from symplant.algebra.verdict import Verdict
from symplant.derivation.zeros.vanishing import POINTS, Surroundings, Vanishing, solutions, vanishing

__all__ = ["ConditionChain"]


@dataclass(frozen=True)
class ConditionChain:
    """Irreducible conditions with their solutions; each is given in the ring of the one before."""

    ring: Ring
    images: tuple[LetterImage, ...] = ()

    @property
    def target(self) -> Ring:
        """The ring after all conditions were put in."""
        return self.images[-1].target if self.images else self.ring

    @property
    def conditions(self) -> tuple[Element, ...]:
        """The conditions, written in the ring of the plant."""
        return tuple(self._back(image.condition, k) for k, image in enumerate(self.images))

    @property
    def leading(self) -> tuple[Element, ...]:
        """The coefficients that were divided by, where the conditions hold."""
        found = []
        for k, image in enumerate(self.images):
            element = image.target.adopt(image.leading, image.source)
            for later in self.images[k + 1 :]:
                (element,) = later.row([element])
            found.append(element)
        return tuple(found)

    def then(self, image: LetterImage) -> ConditionChain:
        """One condition more."""
        return ConditionChain(self.ring, (*self.images, image))

    def back(self, polynomial: Polynomial) -> Polynomial:
        """A polynomial over the last ring, written in the ring of the plant."""
        return Polynomial.of(self.ring, self._back(polynomial.element, len(self.images)))

    def image(self, polynomial: Polynomial) -> Polynomial:
        """A polynomial over the ring of the plant where all conditions hold."""
        for image in self.images:
            polynomial = image.polynomial(polynomial)
        return polynomial

    def completed(self, point: Mapping[str, Fraction]) -> dict[str, Fraction] | None:
        """A point of the letters that are left, with those that were solved for; None if not rational."""
        full = dict(point)
        for image in reversed(self.images):
            for key, value in image.values.items():
                if image.root or key not in self.ring.letters:
                    return None
                parts = (value.numerator, value.denominator)
                if not self.ring.used(part for part in parts if part) <= set(full):
                    return None
                top, bottom = (self.ring.value(part, full) for part in parts)
                if not bottom:
                    return None
                full[key] = top / bottom
        return full

    def inside(self, around: Surroundings) -> Vanishing:
        """Whether all conditions hold together somewhere in the box."""
        if not self.images:
            return Vanishing(Verdict.PROVED, "for all values of the letters", {})
        rings = [self.ring, *(image.target for image in self.images)]
        single = [
            vanishing(ring, image.condition, around) for ring, image in zip(rings, self.images, strict=False)
        ]
        if len(single) == 1:
            return single[0]
        for found in single:
            if found.verdict is Verdict.REFUTED:
                return found
        for point in self.points(around):
            if self.admits(point, around):
                return Vanishing(Verdict.PROVED, "an exact common zero inside the box", point)
        return Vanishing(Verdict.UNDECIDED, f"no common zero was found from {POINTS} points of the box")

    def admits(self, point: Mapping[str, Fraction], around: Surroundings) -> bool:
        """Whether a point lies in the box and meets all conditions exactly."""
        return (
            all(
                around.box.intervals[letter].contains(value)
                for letter, value in point.items()
                if letter in around.box.intervals
            )
            and respects(self.ring, around.nonzero, point)
            and all(certified_sign(self.ring, condition, point) == 0 for condition in self.conditions)
        )

    def points(self, around: Surroundings) -> Iterator[dict[str, Fraction]]:
        """Rational points, near the box, at which all conditions hold; each is to be checked."""
        last = self.images[-1]
        solved = {key for image in self.images for key in image.values}
        every = [letter for letter in self.ring.letters if letter in around.box.intervals]
        free = [letter for letter in every if letter not in solved or letter == last.letter]
        earlier = ConditionChain(self.ring, self.images[:-1])
        if last.source is not self.ring:
            return
        for point in points(around.box, free, around.nominal, POINTS):
            for letter, value in solutions(last.source, last.condition, point):
                full = earlier.completed({**point, letter: value})
                if full is not None:
                    yield full

    def _back(self, element: Element, count: int) -> Element:
        for image in reversed(self.images[:count]):
            element = image.back(element)
        return element
