"""The shortest of several shapes of a sum: expanded, factored, grouped by common letters, collected."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from math import inf

from symplant.algebra.factors import factors
from symplant.algebra.ring import Element, Ring, Term
from symplant.writing.shape_width import ShapeWidths
from symplant.writing.shapes import (
    Bracket,
    Powers,
    Shape,
    Summand,
    by_first,
    common,
    led,
    quotient,
    steady,
    turned,
    unsigned,
)
from symplant.writing.squares import swapped
from symplant.writing.written import TreeWriter

__all__ = ["ShapeFinder"]

#: Sums with more terms than these are grouped, factored (within others), or collected no more: it is slow.
MOST_GROUPED, MOST_FACTORED, MOST_FACTORED_WITHIN, MOST_COLLECTED = 3000, 1500, 24, 40
#: Polynomials with more terms than these are written expanded, which is a matter of pages anyway.
MOST_SHAPED = 6000
#: Sums with more terms than these are not tried with sines in place of cosines.
MOST_SWAPPED = 200
#: Sums with more terms than these fill many lines in any shape: only flat ones are tried.
MOST_NESTED = 100
#: How much wider a polynomial may become for what its terms share to stand in front.
DRAWN = 1.1
#: Brackets within brackets that grouping may make.
DEEPEST = 3


@dataclass
class ShapeFinder:
    """Chooses shapes for the elements of one ring by the width that a notation gives them.

    A sum wider than `room`, a line of the page, is given the shape that needs the fewest lines, and of
    those the flattest: brackets within brackets over many lines are hard to follow.
    """

    ring: Ring
    writer: TreeWriter
    room: float = inf

    def __post_init__(self) -> None:
        self.widths = ShapeWidths(self.ring, self.writer)

    def expanded(self, terms: Sequence[Term]) -> Shape:
        """Every term by itself."""
        return tuple(Summand(value, powers) for value, powers in terms)

    def shortest(self, element: Element) -> Shape:
        """The shortest shape of an element that is seen as one sum, whatever letters it holds."""
        best = self._best(self.ring.terms(element), DEEPEST)
        if len(element) <= MOST_SWAPPED:
            for variant in swapped(self.ring, element):
                best = min(best, self._best(self.ring.terms(variant), DEEPEST), key=self.widths.width)
        return best

    def fitting(self, element: Element) -> Shape:
        """The shortest shape if it fits the line, else the one that fills the fewest lines."""
        terms = self.ring.terms(element)
        nested: list[Shape] = []
        if len(terms) <= MOST_NESTED:
            shortest = self.shortest(element)
            if self.widths.width(shortest) <= self.room:
                return shortest
            nested = [self._grouped(terms, 2), shortest]
        if len(terms) > MOST_GROUPED:
            return led(self.expanded(terms))
        if self.room == inf:
            return nested[-1] if nested else self._grouped(terms, DEEPEST)
        return min(
            led(self.expanded(terms)),
            self._grouped(terms, 1),
            *nested,
            key=lambda shape: self.widths.lines(shape, self.room - 1),
        )

    def factored(self, element: Element) -> Shape | None:
        """The product of the irreducible factors, monomial in front; None where there is but one factor."""
        if len(element) < 2:
            return None
        value, found = factors(element)
        if len(found) == 1 and found[0][1] == 1 and abs(value) == 1:
            return None
        powers, brackets = dict[int, int](), list[Bracket]()
        variable = self.ring.position[self.ring.variable]
        for factor, exponent in found:
            if len(factor) == 1:
                ((number, held),) = self.ring.terms(factor)
                value *= number**exponent
                powers.update({place: e * exponent for place, e in held})
                continue
            if factor.degrees()[variable]:
                sign, inside = unsigned(self.polynomial(factor))
            else:
                sign, inside = steady(self._grouped(self.ring.terms(factor), DEEPEST - 1))
            value *= sign**exponent
            brackets.append(Bracket(inside, exponent))
        brackets.sort(key=lambda b: (self._degree(b.inside, variable) * b.exponent, len(b.inside)))
        order = [(place, powers[place]) for place in self.ring.print_order if place in powers]
        return (turned(Summand(value, tuple(order), tuple(brackets), variable_first=True)),)

    def _best(self, terms: Sequence[Term], depth: int, whole: bool = True) -> Shape:
        """The shortest shape of some terms; of equally short ones the one nearest to the expanded.

        `whole` is false for terms within a group, where less is tried.
        """
        best = led(self.expanded(terms))
        if len(terms) < 2 or depth == 0 or len(terms) > MOST_GROUPED:
            return best
        found = [best]
        if len(terms) <= (MOST_FACTORED if whole else MOST_FACTORED_WITHIN):
            product = self.factored(self._element(terms))
            found += [product] if product else []
        found.append(self._grouped(terms, depth))
        if whole and 2 < len(terms) <= MOST_COLLECTED:
            found += self._collected(terms, depth)
        return min(found, key=self.widths.width)

    def polynomial(self, element: Element) -> Shape:
        """The sum by falling powers of the variable, each coefficient in its shortest shape.

        The coefficient of the power zero stands without brackets.
        """
        place = self.ring.position[self.ring.variable]
        parts: list[Summand] = []
        for power, coefficient in reversed(list(enumerate(self.ring.coefficients(element)))):
            if not coefficient:
                continue
            large = len(element) > MOST_SHAPED
            shape = led(self.expanded(self.ring.terms(coefficient))) if large else self.fitting(coefficient)
            if power:
                sign, inside = steady(shape)
                shape = (self._times(sign, ((place, power),), inside),)
            parts += shape
        return tuple(parts)

    def drawn(self, element: Element) -> Shape:
        """By falling powers of the variable; what all terms share in front unless that is much longer."""
        whole = self.polynomial(element)
        if len(element) < 2:
            return whole
        value, powers = common((value, dict(powers)) for value, powers in self.ring.terms(element))
        if value == 1 and not powers:
            return whole
        rest = element // self._element([(value, powers)])
        sign, inside = unsigned(self.polynomial(rest))
        order = tuple(
            (place, dict(powers)[place]) for place in self.ring.print_order if place in dict(powers)
        )
        product = (Summand(value * sign, order, (Bracket(inside),), variable_first=True),)
        return product if self.widths.width(product) <= DRAWN * self.widths.width(whole) else whole

    def _grouped(self, terms: Sequence[Term], depth: int) -> Shape:
        """Common letters drawn out, each time those that shorten the sum most."""
        if len(terms) < 2 or depth == 0:
            return led(self.expanded(terms))
        rest = {i: (value, dict(powers)) for i, (value, powers) in enumerate(terms)}
        counts: dict[tuple[int, int], int] = {}
        _count(counts, terms, 1)
        parts: list[tuple[int, Summand]] = []
        while (chosen := self._saving_group(rest, counts)) is not None:
            members, value, powers = chosen
            taken = [terms[i] for i in members]
            for i in members:
                del rest[i]
            _count(counts, taken, -1)
            inner = [quotient(term, value, powers) for term in taken]
            sign, inside = steady(self._best(inner, depth - 1, False))
            parts.append((members[0], self._times(value * sign, powers, inside)))
        parts += [(i, Summand(*terms[i])) for i in rest]
        return led(self._merged(by_first(parts), depth))

    def _saving_group(
        self, rest: dict[int, tuple[int, dict[int, int]]], counts: dict[tuple[int, int], int]
    ) -> tuple[list[int], int, Powers] | None:
        """The terms that share what saves most when drawn out, and what that is."""
        likely = sorted(
            ((n - 1) * self.widths.power(place, e), (place, e)) for (place, e), n in counts.items() if n > 1
        )[-3:]
        best, found = 0.0, None
        for gain, (place, exponent) in reversed(likely):
            if gain * 3 < best:
                break
            members = [i for i, (_, powers) in rest.items() if powers.get(place, 0) >= exponent]
            value, powers = common(rest[i] for i in members)
            drawn = sum(self.widths.power(p, e) for p, e in powers) + (
                self.widths.number(value) if value > 1 else 0.0
            )
            saving = (len(members) - 1) * drawn - self.writer.pair
            if saving > best:
                best, found = saving, (members, value, powers)
        return found

    def _collected(self, terms: Sequence[Term], depth: int) -> Iterator[Shape]:
        """The sum by powers of one letter, for every letter."""
        places = {place for _, powers in terms for place, _ in powers}
        for place in sorted(places):
            by_power: dict[int, list[tuple[int, Term]]] = {}
            for i, (value, powers) in enumerate(terms):
                exponent = dict(powers).get(place, 0)
                left = tuple((p, e) for p, e in powers if p != place)
                by_power.setdefault(exponent, []).append((i, (value, left)))
            if len(by_power) == len(terms):
                continue
            parts: list[tuple[int, Summand]] = []
            for exponent, members in by_power.items():
                shape = self._best([term for _, term in members], depth - 1, False)
                if exponent == 0:
                    parts += [(members[0][0], summand) for summand in shape]
                    continue
                sign, inside = steady(shape)
                parts.append((members[0][0], self._times(sign, ((place, exponent),), inside)))
            yield led(by_first(parts))

    def _merged(self, shape: Shape, depth: int) -> Shape:
        """Summands with the same bracket made one: a (c + d) + b (c + d) is (a + b) (c + d)."""
        alike: dict[Shape, list[int]] = {}
        for i, summand in enumerate(shape):
            if len(summand.brackets) == 1 and summand.brackets[0].exponent == 1:
                alike.setdefault(summand.brackets[0].inside, []).append(i)
        merged, gone = list(shape), set[int]()
        for inside, places in alike.items():
            if len(places) > 1:
                outer = self._grouped([(shape[i].value, shape[i].powers) for i in places], depth - 1)
                sign, held = steady(outer)
                one = self._times(sign, (), held)
                merged[places[0]] = one._replace(brackets=(*one.brackets, Bracket(inside)))
                gone.update(places[1:])
        return tuple(summand for i, summand in enumerate(merged) if i not in gone)

    def _times(self, value: int, powers: Powers, inside: Shape) -> Summand:
        """A monomial times a sum, without a bracket where the sum is a single summand."""
        if len(inside) > 1:
            return turned(Summand(value, powers, (Bracket(inside),)))
        (only,) = inside
        total = dict(powers)
        for place, exponent in only.powers:
            total[place] = total.get(place, 0) + exponent
        order = tuple((place, total[place]) for place in self.ring.print_order if place in total)
        return Summand(value * only.value, order, only.brackets)

    def _element(self, terms: Sequence[Term]) -> Element:
        rows: dict[tuple[int, ...], int] = {}
        for value, powers in terms:
            row = [0] * len(self.ring.keys)
            for place, exponent in powers:
                row[place] = exponent
            rows[tuple(row)] = value
        return self.ring.context.from_dict(rows)

    def _degree(self, shape: Shape, place: int) -> int:
        return max((e for summand in shape for p, e in summand.powers if p == place), default=0)


def _count(counts: dict[tuple[int, int], int], terms: Sequence[Term], step: int) -> None:
    """How many terms hold at least each power of each generator, kept up to date."""
    for _, powers in terms:
        for power in powers:
            counts[power] = counts.get(power, 0) + step
            for e in range(1, power[1]):
                counts[power[0], e] = counts.get((power[0], e), 0) + step
