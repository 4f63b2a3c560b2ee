"""Zero directions: initial state and input that hold the output at zero.

At a zero z there are x0 and u0, not both zero, with (A - zE) x0 + B u0 = 0 and C x0 + D u0 = 0.  Then
the input u0 exp(z t) from the state x0 gives the state x0 exp(z t) and an output that stays zero (in
discrete time z**t); see A. G. J. MacFarlane and N. Karcanias, Int. J. Control 24 (1976) 33-74.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

from symplant.algebra.adjoined_root import AdjoinedRoot, adjoined_roots
from symplant.algebra.determinant import adjugate
from symplant.algebra.division import factors_in_variable
from symplant.algebra.expression import Node
from symplant.algebra.factored_tree import factored_ratio_tree
from symplant.algebra.polynomial import content
from symplant.algebra.rank import exact_rank
from symplant.algebra.ratio import Ratio
from symplant.algebra.ring import Element, Ring
from symplant.algebra.verdict import Verdict
from symplant.derivation.derive import Derivation
from symplant.derivation.zeros.blocks import Blocks
from symplant.derivation.zeros.structure import channel_positions, find_zeros

__all__ = ["Directions", "ZeroDirection", "directions"]


@dataclass(frozen=True)
class ZeroDirection:
    """One direction of one zero; everything lives in `ring`, which has the roots that the zero needs.

    `state` (n) and `input` (m) are free of denominators; a common factor is arbitrary.  `proved`
    means that the pencil at the zero times the direction vanishes identically.
    """

    ring: Ring
    zero: Ratio
    state: tuple[Element, ...]
    input: tuple[Element, ...]
    verdict: Verdict
    reason: str

    @property
    def zero_tree(self) -> Node:
        """The zero as a tree."""
        return factored_ratio_tree(self.zero)


@dataclass(frozen=True)
class Directions:
    """All directions that were found, and notes on zeros without."""

    directions: tuple[ZeroDirection, ...]
    notes: tuple[str, ...]


def directions(derivation: Derivation, output: str | None = None, input: str | None = None) -> Directions:
    """The directions of the invariant zeros of the plant, or of the part between an input and an output.

    Errors: KeyError for a name that is no output or input.

    >>> from symplant.derivation.derive import derive
    >>> from symplant.reading.plant_file import read_plant_text
    >>> text = '''
    ... format = 1
    ... [parameters]
    ... a = { sign = "positive", nominal = 3 }
    ... b = { sign = "positive", nominal = 2 }
    ... [matrices]
    ... A = [["-a", "1"], ["0", "-b"]]
    ... B = [["1"], ["1"]]
    ... C = [["1", "0"]]
    ... '''
    >>> derivation = derive(read_plant_text(text))
    >>> (direction,) = directions(derivation).directions
    >>> direction.zero.numerator, direction.state, direction.input
    (-b - 1, (0, 1), (-1,))
    """
    outputs, inputs = channel_positions(derivation, output, input)
    blocks = Blocks.of(derivation.pencil, outputs, inputs)
    structure = find_zeros(derivation, output, input)
    _, m, _ = blocks.size
    if structure.normal_rank.value < m:
        return Directions(
            (),
            (
                "the pencil has fewer independent columns than there are states and inputs: at every "
                f"{blocks.ring.variable} some input holds the output at zero, and directions tell no zeros",
            ),
        )
    found: list[ZeroDirection] = []
    notes: list[str] = []
    for factor, multiplicity in factors_in_variable(structure.invariant.polynomial):
        roots = list(adjoined_roots(factor))
        if not roots:
            notes.append(f"no direction for the zeros of a factor of degree {factor.degree}: no closed form")
        if multiplicity > 1:
            notes.append(
                f"a zero of multiplicity {multiplicity} may have fewer directions; no generalised ones"
            )
        for root in roots:
            for direction in _at_root(blocks, root):
                found.append(direction)
                if root.root:
                    found.append(_conjugate(blocks, root, direction))
    return Directions(tuple(found), tuple(dict.fromkeys(notes)))


def _at_root(blocks: Blocks, root: AdjoinedRoot) -> Iterator[ZeroDirection]:
    n, _, _ = blocks.size
    rows = [_put_in(row, blocks.ring, root.ring, root.value) for row in blocks.rows]
    for vector in _null_vectors(root.ring, rows):
        yield _checked(root.ring, root.value, rows, vector, n)


def _put_in(row: Sequence[Element], ring: Ring, target: Ring, value: Ratio) -> list[Element]:
    """A row of the pencil with the variable replaced, times a power of the denominator of the value."""
    parts = [ring.coefficients(entry) for entry in row]
    degree = max((len(part) - 1 for part in parts), default=0)
    result = []
    for part in parts:
        total = target.zero
        for power, coefficient in enumerate(part):
            lift = value.numerator**power * value.denominator ** (degree - power)
            total = total + target.adopt(coefficient, ring) * lift
        result.append(target.reduce(total))
    return result


def _null_vectors(ring: Ring, rows: Sequence[Sequence[Element]]) -> Iterator[list[Element]]:
    """A basis of the null space: one vector for each column outside a nonzero minor (Cramer's rule)."""
    rank = exact_rank(ring, rows)
    inner = [[rows[i][j] for j in rank.columns] for i in rank.rows]
    determinant, adjoint = adjugate(inner, ring.one)
    for column in range(len(rows[0])):
        if column in rank.columns:
            continue
        vector = [ring.zero] * len(rows[0])
        vector[column] = ring.reduce(-determinant)
        for k, position in enumerate(rank.columns):
            total = ring.zero
            for entry, i in zip(adjoint[k], rank.rows, strict=True):
                if entry and rows[i][column]:
                    total = total + entry * rows[i][column]
            vector[position] = ring.reduce(total)
        yield _shortest(ring, vector)


def _shortest(ring: Ring, vector: Sequence[Element]) -> list[Element]:
    """A multiple of a vector with few terms: entries are made free of the last root one at a time."""
    candidates = [_primitive(ring, vector)]
    root = next((f.key for f in reversed(ring.functions) if f.key.startswith("_root")), None)
    for entry in candidates[0] if root else ():
        parts = ring.coefficients(entry, root)
        if len(parts) == 2:
            conjugate = parts[0] - parts[1] * ring.gen(root or "")
            candidates.append(_primitive(ring, [ring.reduce(x * conjugate) for x in vector]))
    return min(candidates, key=lambda v: sum(len(entry) for entry in v))


def _primitive(ring: Ring, vector: Sequence[Element]) -> list[Element]:
    common = content(ring, vector)
    first = next(entry for entry in vector if entry)
    if ring.is_led_negative(first // common):
        common = -common
    return [entry // common for entry in vector]


def _checked(
    ring: Ring, value: Ratio, rows: Sequence[Sequence[Element]], vector: Sequence[Element], n: int
) -> ZeroDirection:
    holds = all(
        ring.is_zero(sum((a * b for a, b in zip(row, vector, strict=True) if a and b), ring.zero))
        for row in rows
    )
    verdict = Verdict.PROVED if holds else Verdict.REFUTED
    reason = "the pencil at the zero times the direction " + (
        "vanishes identically" if holds else "does not vanish"
    )
    return ZeroDirection(ring, value, tuple(vector[:n]), tuple(vector[n:]), verdict, reason)


def _conjugate(blocks: Blocks, root: AdjoinedRoot, direction: ZeroDirection) -> ZeroDirection:
    """The direction of the zero with the other sign of the root, checked anew."""
    ring = root.ring

    def other(element: Element) -> Element:
        parts = ring.coefficients(element, root.root)
        return parts[0] - parts[1] * ring.gen(root.root) if len(parts) == 2 else element

    value = Ratio.of(ring, other(direction.zero.numerator), other(direction.zero.denominator))
    rows = [_put_in(row, blocks.ring, ring, value) for row in blocks.rows]
    vector = [other(entry) for entry in (*direction.state, *direction.input)]
    return _checked(ring, value, rows, vector, len(direction.state))
