"""Zeros of all kinds, poles of both kinds, normal rank and relative degrees of a plant."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from symplant.algebra.division import divide, normalised, product
from symplant.algebra.minors import MinorsGcd, gcd_of_minors
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.rank import Rank, exact_rank
from symplant.algebra.verdict import Verdict
from symplant.derivation.derive import Derivation
from symplant.derivation.zeros.blocks import Blocks
from symplant.derivation.zeros.findings import NormalRank, PolynomialFinding, ZeroStructure
from symplant.derivation.zeros.relative_degree import relative_degree
from symplant.derivation.zeros.smith_mcmillan import infinite_orders, smith_mcmillan
from symplant.derivation.zeros.vanishing import Surroundings

__all__ = ["Decoupling", "channel_positions", "decoupling", "find_zeros", "surroundings"]


@dataclass(frozen=True)
class Decoupling:
    """Input-decoupling (uncontrollable) and output-decoupling (unobservable) polynomials."""

    input: MinorsGcd
    output: MinorsGcd


def decoupling(blocks: Blocks) -> Decoupling:
    """The decoupling polynomials of a plant; its det(sE - A) must not vanish identically."""
    ring, n = blocks.ring, len(blocks.dynamics)
    # det(A - sE) is a nonzero minor of full size in both matrices.
    states = tuple(range(n))
    rank = Rank(n, states, states, blocks.characteristic.element, 0)
    return Decoupling(
        gcd_of_minors(ring, blocks.input_rows, rank), gcd_of_minors(ring, blocks.output_rows, rank)
    )


def surroundings(derivation: Derivation) -> Surroundings:
    """Box, nominal values and divisors of a plant."""
    model = derivation.model
    return Surroundings(model.box, model.nominal, derivation.assumed_nonzero)


def channel_positions(
    derivation: Derivation, output: str | None, input: str | None
) -> tuple[list[int], list[int]]:
    """Positions of the named output and input; None stands for all. KeyError for an unknown name."""
    return (
        _positions([y.name for y in derivation.model.outputs], output),
        _positions([u.name for u in derivation.model.inputs], input),
    )


def find_zeros(
    derivation: Derivation,
    output: str | None = None,
    input: str | None = None,
    stage: Callable[[str], None] = lambda name: None,
) -> ZeroStructure:
    """All kinds of zeros and poles of the plant, or of the part seen from one output or input.

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
    >>> found = find_zeros(derivation)
    >>> found.invariant.polynomial.element, found.normal_rank.value, found.infinite_zeros
    (s + b + 1, 1, (1,))
    """
    outputs, inputs = channel_positions(derivation, output, input)
    blocks = Blocks.of(derivation.pencil, outputs, inputs)
    ring = blocks.ring
    n, m, p = blocks.size
    stage("decoupling zeros")
    hidden = decoupling(blocks)
    stage("normal rank")
    rank = exact_rank(ring, blocks.rows)
    normal = NormalRank(
        rank.value - n, min(m, p), Verdict.PROVED, f"rank of the pencil less {n} states: {rank.reason}"
    )
    stage("invariant zeros")
    invariant = gcd_of_minors(ring, blocks.rows, rank)
    stage("transmission zeros")
    first, second = hidden.input.polynomial, hidden.output.polynomial
    form = smith_mcmillan(blocks, rank, (first, second))
    settled = all(x.verdict is Verdict.PROVED for x in (hidden.input, hidden.output, form))
    verdict = Verdict.PROVED if settled else Verdict.UNDECIDED
    both = divide(product(first, second), form.hidden) if settled else first.gcd(second)
    stage("relative degrees")
    around = surroundings(derivation)
    names = {
        (y.name, u.name)
        for y in (derivation.model.outputs[i] for i in outputs)
        for u in (derivation.model.inputs[j] for j in inputs)
    }
    degrees = tuple(
        relative_degree(channel, around)
        for channel in derivation.channels
        if (channel.output.name, channel.input.name) in names
    )
    stage("zeros at infinity")
    infinite, note = infinite_orders(blocks, rank)

    def found(polynomial: Polynomial, reason: str) -> PolynomialFinding:
        return PolynomialFinding(normalised(polynomial), verdict, reason)

    return ZeroStructure(
        _finding(invariant),
        found(form.zeros, form.reason),
        _finding(hidden.input),
        _finding(hidden.output),
        found(both, "input- and output-decoupling zeros less those that the transfer matrix hides"),
        found(form.system_zeros, form.reason),
        PolynomialFinding(normalised(blocks.characteristic), Verdict.PROVED, "det(sE - A)"),
        found(form.poles, form.reason),
        normal,
        degrees,
        infinite,
        note,
    )


def _finding(found: MinorsGcd) -> PolynomialFinding:
    return PolynomialFinding(found.polynomial, found.verdict, found.reason)


def _positions(names: list[str], wanted: str | None) -> list[int]:
    if wanted is None:
        return list(range(len(names)))
    if wanted not in names:
        raise KeyError(f"{wanted!r} is none of {', '.join(names)}")
    return [names.index(wanted)]
