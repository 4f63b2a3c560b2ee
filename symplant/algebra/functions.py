"""Build the ring that a set of expressions needs, functions of letters included.

Equality stays decidable because the generators are chosen independent of each other: arguments of
sin and cos (and, apart from them, of exp, sinh and cosh) are reduced to a basis over the rationals,
so that sin(2*alpha) is a polynomial in sin(alpha) and cos(alpha); radicands are reduced to a basis
modulo squares, so that sqrt(a*b) is sqrt(a)*sqrt(b) where the signs allow it.  For arguments that
are independent over the rationals the functions are algebraically independent (J. Ax, Annals of
Mathematics 93 (1971) 252-268).  Where independence is not known, `Ring.undecidable` says so.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field

from symplant.algebra.angles import AngleGroup, special_angle
from symplant.algebra.box import Box, Sign
from symplant.algebra.conversion import CallKey, Converter, call_key
from symplant.algebra.expression import Call, Name, Node, children, names_in, walk
from symplant.algebra.ratio import Ratio
from symplant.algebra.ring import Generator, Ring
from symplant.algebra.roots import RootGroup
from symplant.algebra.sign_pattern import factored_sign
from symplant.algebra.trees import ratio_tree
from symplant.errors import Fault, InputError

__all__ = ["Setting", "build_ring"]

PI = Generator("pi", Name("pi"), Sign.POSITIVE, kind="constant")


@dataclass(frozen=True)
class Setting:
    """A ring together with the values of the functions that its expressions use.

    `domain` lists arguments that had to be taken nonnegative (roots) or positive (logarithms).
    """

    ring: Ring
    calls: Mapping[CallKey, Ratio] = field(default_factory=dict)
    domain: tuple[tuple[Node, str], ...] = ()

    def converter(self) -> Converter:
        """A fresh converter of trees into this ring."""
        return Converter(self.ring, self.calls)


def build_ring(
    variable: str, letters: Sequence[str], trees: Mapping[str, Node], box: Box | None = None
) -> Setting:
    """The smallest ring in which all the trees (by place) can be evaluated.

    Errors: InputError, with the places of the trees, where an argument cannot be handled exactly.

    >>> from symplant.algebra.expression import Call, Name, Power, Sum
    >>> a = Name("alpha")
    >>> tree = Sum((Power(Call("sin", a), 2), Power(Call("cos", a), 2)))
    >>> setting = build_ring("s", ("alpha",), {"A[1][1]": tree})
    >>> setting.converter().convert(tree).numerator
    1
    """
    box = box or Box()
    constants = (PI,) if any("pi" in names_in(tree) for tree in trees.values()) else ()
    builder = _Builder(Ring(variable, letters, box, constants))
    levels = _by_depth(trees)
    faults: list[Fault] = []
    for level in levels:
        faults += builder.extend(level)
        if faults:
            raise InputError(faults)
    return Setting(builder.ring, builder.calls, tuple(builder.domain))


def _by_depth(trees: Mapping[str, Node]) -> list[list[tuple[str, Call]]]:
    """The function calls of all trees, innermost level first."""
    levels: list[list[tuple[str, Call]]] = []
    for place, tree in trees.items():
        depths: dict[int, int] = {}
        for part in walk(tree):
            inner = max((depths[id(child)] for child in children(part)), default=0)
            depths[id(part)] = inner + isinstance(part, Call)
            if isinstance(part, Call):
                while len(levels) <= inner:
                    levels.append([])
                levels[inner].append((place, part))
    return levels


class _Builder:
    """The ring as it grows, level by level of nested functions."""

    def __init__(self, ring: Ring) -> None:
        self.ring = ring
        self.calls: dict[CallKey, Ratio] = {}
        self.domain: list[tuple[Node, str]] = []
        self.circular = AngleGroup("circular")
        self.hyperbolic = AngleGroup("hyperbolic")
        self.roots = RootGroup()
        self.transcendental: dict[CallKey, str] = {}

    def extend(self, level: Sequence[tuple[str, Call]]) -> list[Fault]:
        """Take in the calls of one level; the faults found, if any."""
        faults: list[Fault] = []
        found: list[tuple[str, Call, Ratio]] = []
        converter = Converter(self.ring, self.calls)
        for place, call in level:
            try:
                found.append((place, call, converter.convert(call.argument)))
            except InputError as error:
                faults += error.at(place).faults
        if faults:
            return faults
        circular = [(p, c, a) for p, c, a in found if c.function in ("sin", "cos", "tan")]
        hyperbolic = [(p, c, a) for p, c, a in found if c.function in ("exp", "sinh", "cosh", "tanh")]
        special = [special_angle(argument) for _, _, argument in circular]
        root_two_three = sorted({n for s in special if s is not None for n in s.radicands})
        root_args = [(place, call, a) for place, call, a in found if call.function == "sqrt"]
        root_args += [
            ("", Call("sqrt", Name(str(n))), Ratio.of(self.ring, self.ring.constant(n)))
            for n in root_two_three
        ]
        new: list[Generator] = []
        notes = [self.ring.undecidable] if self.ring.undecidable else []
        plain = [(p, c, a) for (p, c, a), s in zip(circular, special, strict=True) if s is None]
        for group, members in ((self.circular, plain), (self.hyperbolic, hyperbolic)):
            generators, group_faults, note = group.choose(self.ring, members)
            new += generators
            faults += group_faults
            notes += [note] if note else []
        generators, root_faults = self.roots.choose(self.ring, root_args, self.domain)
        new += generators
        faults += root_faults
        logs, log_note = self._transcendental(found)
        new += logs
        notes += [log_note] if log_note else []
        if faults:
            return faults
        self._grow(new, "; ".join(dict.fromkeys(notes)))
        for (_, _call, argument), angle in zip(circular, special, strict=True):
            adopted = _adopt(self.ring, argument)
            if angle is not None:
                for name, value in angle.values(self.ring, self.roots).items():
                    self.calls[call_key(name, adopted)] = value
            else:
                for name, value in self.circular.values(self.ring, adopted).items():
                    self.calls[call_key(name, adopted)] = value
        for _, _call, argument in hyperbolic:
            adopted = _adopt(self.ring, argument)
            for name, value in self.hyperbolic.values(self.ring, adopted).items():
                self.calls[call_key(name, adopted)] = value
        for _, _call, argument in root_args:
            adopted = _adopt(self.ring, argument)
            self.calls[call_key("sqrt", adopted)] = self.roots.value(self.ring, adopted)
        for _, call, argument in found:
            if call.function in ("log", "atan"):
                adopted = _adopt(self.ring, argument)
                key = call_key(call.function, adopted)
                if not adopted:  # atan(0); log(0) was refused
                    self.calls[key] = adopted
                    continue
                self.calls[key] = Ratio.of(self.ring, self.ring.gen(self.transcendental[key]))
        return []

    def _grow(self, new: Sequence[Generator], undecidable: str) -> None:
        if not new and undecidable == self.ring.undecidable:
            return
        old = self.ring
        self.ring = Ring(old.variable, old.letters, old.box, (*old.functions, *new), undecidable)
        self.calls = {key: _adopt(self.ring, value) for key, value in self.calls.items()}

    def _transcendental(self, found: Sequence[tuple[str, Call, Ratio]]) -> tuple[list[Generator], str]:
        """Generators for logarithms and inverse tangents: one for each distinct argument."""
        new: list[Generator] = []
        for _place, call, argument in found:
            if call.function not in ("log", "atan") or not argument:
                continue
            key = call_key(call.function, argument)
            if key in self.transcendental:
                continue
            name = f"_{call.function}{len(self.transcendental) + 1}"
            self.transcendental[key] = name
            tree = ratio_tree(argument)
            new.append(Generator(name, Call(call.function, tree), kind=call.function, argument=tree))
            positive = factored_sign(self.ring, argument.numerator * argument.denominator)
            if call.function == "log" and positive is not Sign.POSITIVE:
                self.domain.append((tree, ">"))
        if not new:
            return [], ""
        return new, "logarithms or inverse tangents may be related to each other or to the letters"


def _adopt(ring: Ring, ratio: Ratio) -> Ratio:
    if ratio.ring is ring:
        return ratio
    return Ratio(ring, ring.adopt(ratio.numerator, ratio.ring), ring.adopt(ratio.denominator, ratio.ring))
