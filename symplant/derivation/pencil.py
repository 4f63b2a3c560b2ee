"""The system pencil over the ring: rows cleared of their denominators, what they were remembered."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from functools import cached_property

from symplant.algebra.conversion import Converter
from symplant.algebra.expression import Node
from symplant.algebra.factors import factors as irreducible
from symplant.algebra.functions import Setting, build_ring
from symplant.algebra.ratio import Ratio
from symplant.algebra.ring import Element, Ring
from symplant.errors import Fault, InputError
from symplant.plant.model import Model

__all__ = ["Pencil", "build_pencil", "irreducible_factors"]


@dataclass(frozen=True)
class Pencil:
    """The pencil of a plant with n states, m inputs, p outputs, each row times its denominator.

    `dynamics` (n x n) holds the rows of s*E - A, `drive` (n x m) those of B, each times
    `row_multipliers` (n); `reading` (p x n) holds the rows of C, `direct` (p x m) those of D, each
    times `output_multipliers` (p).  All multipliers are free of the variable and products of what
    `divisors` lists: the irreducible expressions that the entries were divided by.
    """

    model: Model
    setting: Setting
    dynamics: tuple[tuple[Element, ...], ...]
    drive: tuple[tuple[Element, ...], ...]
    reading: tuple[tuple[Element, ...], ...]
    direct: tuple[tuple[Element, ...], ...]
    row_multipliers: tuple[Element, ...]
    output_multipliers: tuple[Element, ...]
    divisors: tuple[Element, ...]

    @property
    def ring(self) -> Ring:
        """The ring that every entry lives in."""
        return self.setting.ring

    @cached_property
    def multiplier(self) -> Element:
        """What det(s*E - A) was multiplied by: the product of the row multipliers."""
        return _product(self.ring, self.row_multipliers)


def build_pencil(model: Model) -> Pencil:
    """The cleared pencil of a plant.

    Errors: InputError listing every entry that divides by zero or uses a function that cannot be
    treated exactly, with its place ("matrices.A[2][1], column 7").
    """
    trees = {
        f"matrices.{name}[{i}][{j}]": entry
        for name, matrix in model.matrices.items()
        for i, row in enumerate(matrix, 1)
        for j, entry in enumerate(row, 1)
    }
    try:
        setting = build_ring(model.variable, model.letters, trees, model.box)
        values, divisors = _values(setting, trees)
    except InputError as error:
        raise error.at(file=model.source) from None
    ring = setting.ring
    n, m, p = len(model.states), len(model.inputs), len(model.outputs)

    def ratio(name: str, i: int, j: int) -> Ratio:
        place = f"matrices.{name}[{i + 1}][{j + 1}]"
        if place in values:
            return values[place]
        return Ratio.of(ring, ring.constant(int(name == "E" and i == j)))

    s = Ratio.of(ring, ring.gen(ring.variable))
    dynamics, drive, row_multipliers = [], [], []
    for i in range(n):
        left = [s * ratio("E", i, j) + -ratio("A", i, j) for j in range(n)]
        cleared, multiplier = _cleared(ring, [*left, *(ratio("B", i, j) for j in range(m))])
        dynamics.append(cleared[:n])
        drive.append(cleared[n:])
        row_multipliers.append(multiplier)
    reading, direct, output_multipliers = [], [], []
    for i in range(p):
        row = [*(ratio("C", i, j) for j in range(n)), *(ratio("D", i, j) for j in range(m))]
        cleared, multiplier = _cleared(ring, row)
        reading.append(cleared[:n])
        direct.append(cleared[n:])
        output_multipliers.append(multiplier)
    return Pencil(
        model,
        setting,
        tuple(dynamics),
        tuple(drive),
        tuple(reading),
        tuple(direct),
        tuple(row_multipliers),
        tuple(output_multipliers),
        tuple(irreducible_factors(ring, divisors)),
    )


def irreducible_factors(ring: Ring, elements: Iterable[Element]) -> list[Element]:
    """The distinct irreducible factors of elements, constants left out, first seen first.

    >>> ring = Ring("s", ("m", "k"))
    >>> irreducible_factors(ring, [2 * ring.gen("m") ** 2, ring.gen("m") * ring.gen("k")])
    [m, k]
    """
    found: dict[str, Element] = {}
    for element in elements:
        if element.is_constant():
            continue
        factors = sorted(
            (factor for factor, _ in irreducible(element)[1]), key=lambda f: ring.terms(f), reverse=True
        )
        for factor in factors:
            positive = -factor if ring.is_led_negative(factor) else factor
            found.setdefault(str(positive), positive)
    return list(found.values())


def _values(setting: Setting, trees: Mapping[str, Node]) -> tuple[dict[str, Ratio], list[Element]]:
    values: dict[str, Ratio] = {}
    divisors: list[Element] = []
    faults: list[Fault] = []
    for place, tree in trees.items():
        converter: Converter = setting.converter()
        try:
            values[place] = converter.convert(tree)
        except InputError as error:
            faults += error.at(place).faults
        divisors += converter.divisors
    if faults:
        raise InputError(faults)
    return values, divisors


def _cleared(ring: Ring, row: list[Ratio]) -> tuple[tuple[Element, ...], Element]:
    """A row times the least common multiple of its denominators, and that multiple."""
    multiple = ring.one
    for entry in row:
        if not entry.denominator.is_one():
            multiple = multiple * (entry.denominator // multiple.gcd(entry.denominator))
    return tuple(entry.numerator * (multiple // entry.denominator) for entry in row), multiple


def _product(ring: Ring, elements: Iterable[Element]) -> Element:
    total = ring.one
    for element in elements:
        total = total * element
    return total
