"""Generators for sin and cos, and for exp, sinh and cosh, over a basis of their arguments."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction
from math import lcm
from typing import TYPE_CHECKING, TypeAlias

from symplant.algebra.box import Sign
from symplant.algebra.conversion import RatioKey, ratio_key
from symplant.algebra.expression import Call
from symplant.algebra.ratio import Ratio
from symplant.algebra.ring import Element, Generator, Ring
from symplant.algebra.trees import ratio_tree
from symplant.errors import Fault

if TYPE_CHECKING:
    from symplant.algebra.roots import RootGroup

__all__ = ["AngleGroup", "SpecialAngle", "special_angle"]

#: Coordinates of an argument: rational multiples of (denominator, monomial) directions.
Vector: TypeAlias = "dict[tuple[object, ...], Fraction]"
#: Largest integer multiple of a basis angle that is expanded.
LARGEST_MULTIPLE = 32


def vector(argument: Ratio) -> Vector:
    """Coordinates of an argument over the rationals; independent directions stay independent.

    >>> ring = Ring("s", ("a", "b"))
    >>> arg = Ratio.of(ring, ring.gen("a") + 2 * ring.gen("b"), ring.constant(3))
    >>> sorted(vector(arg).values())
    [Fraction(1, 3), Fraction(2, 3)]
    """
    ring = argument.ring
    # An integer factor of the denominator belongs to the coordinate, not to the direction.
    content = abs(int(argument.denominator.primitive()[0]))
    bottom = argument.denominator // ring.constant(content)
    _, key = ratio_key(Ratio(ring, ring.one, bottom))
    result: Vector = {}
    for exponents, value in argument.numerator.terms():
        monomial = tuple((ring.keys[i], int(e)) for i, e in enumerate(exponents) if e)
        result[key, monomial] = Fraction(int(value), content)
    return result


@dataclass(frozen=True)
class SpecialAngle:
    """A rational multiple of pi whose sine and cosine are roots of 2 and 3."""

    turn: Fraction  # the angle over pi, in [0, 2)

    @property
    def radicands(self) -> tuple[int, ...]:
        """The integers whose square roots are needed."""
        return {1: (), 2: (), 3: (3,), 4: (2,), 6: (3,)}[self.turn.denominator]

    def values(self, ring: Ring, roots: RootGroup) -> dict[str, Ratio]:
        """Sine and cosine in a ring that has the roots."""
        return {
            "sin": _special_cosine(ring, roots, (self.turn - Fraction(1, 2)) % 2),
            "cos": _special_cosine(ring, roots, self.turn),
        }


def special_angle(argument: Ratio) -> SpecialAngle | None:
    """The multiple of pi that an argument is, if its sine and cosine are known in closed form."""
    parts = vector(argument)
    if not parts:
        return SpecialAngle(Fraction(0))
    turn = _pi_part(parts)
    if turn is None or len(parts) > 1 or turn.denominator not in (1, 2, 3, 4, 6):
        return None
    return SpecialAngle(turn % 2)


def _pi_part(parts: Vector) -> Fraction | None:
    return next(
        (v for (bottom, monomial), v in parts.items() if monomial == (("pi", 1),) and _is_one(bottom)),
        None,
    )


def _is_one(bottom: object) -> bool:
    return bottom == frozenset({(1,)})


def _special_cosine(ring: Ring, roots: RootGroup, turn: Fraction) -> Ratio:
    if turn > 1:
        turn = 2 - turn
    if turn > Fraction(1, 2):
        return -_special_cosine(ring, roots, 1 - turn)
    if turn == 0:
        return Ratio.of(ring, ring.one)
    if turn == Fraction(1, 2):
        return Ratio.of(ring, ring.zero)
    if turn == Fraction(1, 3):
        return Ratio.of(ring, ring.one, ring.constant(2))
    root = roots.value(ring, Ratio.of(ring, ring.constant(2 if turn == Fraction(1, 4) else 3)))
    return root / Ratio.of(ring, ring.constant(2))


class AngleGroup:
    """The basis of arguments of one kind ("circular" or "hyperbolic") and its generators.

    For a basis angle t the generators are cos t and sin t with sin**2 = 1 - cos**2, or, where
    hyperbolic functions occur, cosh t and sinh t with sinh**2 = cosh**2 - 1 and exp t = cosh t +
    sinh t; where only exponentials occur, exp t alone.
    """

    def __init__(self, kind: str) -> None:
        self.kind = kind
        self.basis: list[tuple[Vector, tuple[str, ...]]] = []
        self.coordinates: dict[RatioKey, list[int]] = {}
        self.quarter_turns: dict[RatioKey, int] = {}

    def choose(
        self, ring: Ring, members: Sequence[tuple[str, Call, Ratio]]
    ) -> tuple[list[Generator], list[Fault], str]:
        """New generators for these arguments, faults, and a note where independence is unknown."""
        faults: list[Fault] = []
        vectors: list[tuple[RatioKey, Vector, Ratio]] = []
        note = ""
        for place, call, argument in members:
            parts = vector(argument)
            turn = _pi_part(parts) if self.kind == "circular" else None
            key = ratio_key(argument)
            if turn is not None:
                if (2 * turn).denominator != 1:
                    faults.append(_fault(place, call, "a multiple of pi that is not known in closed form"))
                    continue
                self.quarter_turns[key] = int(2 * turn) % 4
                parts = {k: v for k, v in parts.items() if k[1] != (("pi", 1),)}
            if any(_transcendental(ring, monomial) for _, monomial in parts) or (
                any(not monomial for _, monomial in parts) and len(parts) + len(self.basis) > 1
            ):
                note = "a function of a constant or of another function may be related to the rest"
            vectors.append((key, parts, argument))
        if faults or not vectors:
            return [], faults, note
        vectors.sort(key=lambda item: len(item[1]))
        old = len(self.basis)
        fresh: list[Vector] = []
        combined: list[tuple[RatioKey, list[Fraction]]] = []
        for key, parts, _ in vectors:
            coordinates = _solve([b for b, _ in self.basis] + fresh, parts)
            if coordinates is None:
                fresh.append(parts)
                coordinates = [Fraction(0)] * (old + len(fresh) - 1) + [Fraction(1)]
            combined.append((key, coordinates))
        steps = [lcm(*(c[j].denominator for _, c in combined if j < len(c))) for j in range(old + len(fresh))]
        if any(step != 1 for step in steps[:old]):
            place, call, _ = members[0]
            return [], [_fault(place, call, "a fraction of an angle used inside another function")], note
        rich = any(call.function != "exp" for _, call, _ in members)
        for key, coordinates in combined:
            whole = [int(c * steps[j]) for j, c in enumerate(coordinates)]
            if any(abs(n) > LARGEST_MULTIPLE for n in whole):
                place, call, _ = members[0]
                return [], [_fault(place, call, f"a multiple above {LARGEST_MULTIPLE} of an angle")], note
            self.coordinates[key] = whole
        generators: list[Generator] = []
        for index, parts in enumerate(fresh):
            angle = _scaled_ratio(ring, vectors, parts, steps[old + index])
            names, made = self._generators(angle, old + index + 1, rich)
            generators += made
            self.basis.append(({k: v / steps[old + index] for k, v in parts.items()}, names))
        return generators, faults, note

    def _generators(self, angle: Ratio, number: int, rich: bool) -> tuple[tuple[str, ...], list[Generator]]:
        tree = ratio_tree(angle)
        if self.kind == "hyperbolic" and not rich:
            name = f"_exp{number}"
            return (name,), [Generator(name, Call("exp", tree), Sign.POSITIVE, None, "exp", tree)]
        first, second = ("cos", "sin") if self.kind == "circular" else ("cosh", "sinh")
        names = (f"_{first}{number}", f"_{second}{number}")
        relation: dict[tuple[int, ...], int] = (
            {(0,): 1, (2,): -1} if self.kind == "circular" else {(0,): -1, (2,): 1}
        )
        even = Sign.REAL if self.kind == "circular" else Sign.POSITIVE
        return names, [
            Generator(names[0], Call(first, tree), even, None, first, tree),
            Generator(names[1], Call(second, tree), Sign.REAL, ((names[0],), relation), second, tree),
        ]

    def values(self, ring: Ring, argument: Ratio) -> dict[str, Ratio]:
        """The functions of an argument that was chosen before, in a ring that has the generators."""
        key = ratio_key(argument)
        multiples = self.coordinates[key]
        if self.kind == "hyperbolic":
            return self._hyperbolic(ring, multiples)
        cosine, sine = ring.one, ring.zero
        for multiple, (_, names) in zip(multiples, self.basis, strict=False):
            c, s = _multiple(ring, names, abs(multiple), -1)
            s = s if multiple >= 0 else -s
            cosine, sine = cosine * c - sine * s, sine * c + cosine * s
        for _ in range(self.quarter_turns.get(key, 0)):
            cosine, sine = -sine, cosine
        return {"cos": Ratio.of(ring, cosine), "sin": Ratio.of(ring, sine)}

    def _hyperbolic(self, ring: Ring, multiples: Sequence[int]) -> dict[str, Ratio]:
        grown = Ratio.of(ring, ring.one)
        even, odd = ring.one, ring.zero
        pairs = True
        for multiple, (_, names) in zip(multiples, self.basis, strict=False):
            if len(names) == 1:
                pairs = False
                grown = grown * Ratio.of(ring, ring.gen(names[0])) ** multiple
                continue
            c, s = _multiple(ring, names, abs(multiple), 1)
            s = s if multiple >= 0 else -s
            even, odd = even * c + odd * s, odd * c + even * s
        grown = grown * Ratio.of(ring, even + odd)
        if pairs:
            cosh, sinh = Ratio.of(ring, even), Ratio.of(ring, odd)
        else:
            inverse, two = Ratio.of(ring, ring.one) / grown, Ratio.of(ring, ring.constant(2))
            cosh, sinh = (grown + inverse) / two, (grown + -inverse) / two
        return {"exp": grown, "cosh": cosh, "sinh": sinh, "tanh": sinh / cosh}


def _multiple(ring: Ring, names: Sequence[str], count: int, square: int) -> tuple[Element, Element]:
    """cos and sin (square = -1), or cosh and sinh (square = 1), of `count` times a basis angle."""
    c, s = ring.gen(names[0]), ring.gen(names[1])
    even, odd = ring.one, ring.zero
    for _ in range(count):
        even, odd = ring.reduce(even * c + square * odd * s), ring.reduce(odd * c + even * s)
    return even, odd


def _transcendental(ring: Ring, monomial: object) -> bool:
    kinds = {function.key: function.kind for function in ring.functions}
    assert isinstance(monomial, tuple)
    return any(kinds.get(key) in ("log", "atan", "exp", "sin", "cos", "sinh", "cosh") for key, _ in monomial)


def _solve(basis: Sequence[Vector], target: Vector) -> list[Fraction] | None:
    """Coordinates of `target` over an independent `basis`, None if it is independent of it."""
    directions = sorted({k for v in (*basis, target) for k in v}, key=repr)
    rows = [[v.get(d, Fraction(0)) for v in basis] + [target.get(d, Fraction(0))] for d in directions]
    rank, pivots = 0, []
    for column in range(len(basis)):
        pivot = next((i for i in range(rank, len(rows)) if rows[i][column]), None)
        if pivot is None:
            continue
        rows[rank], rows[pivot] = rows[pivot], rows[rank]
        rows[rank] = [x / rows[rank][column] for x in rows[rank]]
        for i, row in enumerate(rows):
            if i != rank and row[column]:
                factor = row[column]
                rows[i] = [x - factor * y for x, y in zip(row, rows[rank], strict=True)]
        pivots.append(column)
        rank += 1
    if any(row[-1] for row in rows[rank:]):
        return None
    return [rows[pivots.index(j)][-1] if j in pivots else Fraction(0) for j in range(len(basis))]


def _scaled_ratio(
    ring: Ring, vectors: Sequence[tuple[RatioKey, Vector, Ratio]], parts: Vector, step: int
) -> Ratio:
    """The basis angle itself: the argument with these coordinates, less its turns, over `step`."""
    argument = next(a for _, v, a in vectors if v is parts)
    turn = _pi_part(vector(argument))
    if turn is not None and "pi" in ring.position:
        pi = Ratio.of(ring, ring.gen("pi"))
        fraction = Ratio.of(ring, ring.constant(-turn.numerator), ring.constant(turn.denominator))
        argument = argument + fraction * pi
    return argument / Ratio.of(ring, ring.constant(step))


def _fault(place: str, call: Call, reason: str) -> Fault:
    where = f"{place}, column {call.column}" if call.column else place
    return Fault(where, f"{call.function} of {reason}", "give it a letter of its own")
