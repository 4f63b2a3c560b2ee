"""SymPy expressions to expression trees.  SymPy is there already when this is called, or never loaded."""

from __future__ import annotations

from collections.abc import Collection, Mapping
from fractions import Fraction
from typing import TYPE_CHECKING, Any

from symplant.algebra.expression import (
    FUNCTIONS,
    Call,
    Name,
    Node,
    Number,
    Product,
    Quotient,
    Sum,
    integer,
)
from symplant.errors import Fault, InputError
from symplant.reading.arithmetic import MAX_NESTING
from symplant.reading.exponents import MAX_EXPONENT, exponent_trouble, raised
from symplant.reading.letters import CONSTANT, undeclared
from symplant.reading.quantities import NumberError, exact_number
from symplant.reading.suggestions import listed, quoted

if TYPE_CHECKING:
    import sympy

__all__ = ["tree_from_sympy"]


def tree_from_sympy(
    expression: sympy.Basic, names: Mapping[sympy.Symbol, str], letters: Collection[str] = ()
) -> Node:
    """The tree of a SymPy expression; `names` gives the letter that each symbol stands for.

    `letters` are all that are declared, for the question what an undeclared one was meant to be.

    A factor with a negative exponent becomes a divisor, so that what is divided by stays known.  A
    Float is the decimal that SymPy prints for it.  What SymPy cancelled before is not seen here.

    Raises InputError with everything that is no arithmetic of letters; the faults have no place.

    >>> import sympy
    >>> k, m = sympy.symbols("k m")
    >>> tree_from_sympy(k / m, {k: "k", m: "m"}).denominator
    Name(name='m', column=0)
    """
    reader = _Reader(names, letters or set(names.values()))
    tree = reader.read(expression, 1, 1)
    if reader.faults:
        raise InputError(dict.fromkeys(reader.faults))
    return tree


class _Reader:
    """One reading of one expression; `faults` gathers what has no tree, and reading goes on."""

    def __init__(self, names: Mapping[sympy.Symbol, str], letters: Collection[str]) -> None:
        self.faults: list[Fault] = []
        self._letters = letters
        self._names = names

    def read(self, part: Any, depth: int, powers: int) -> Node:
        """The tree of a part `depth` levels down, within powers that multiply to `powers`."""
        import sympy

        if depth > MAX_NESTING:
            return self._refuse(f"nested deeper than {MAX_NESTING} levels")
        if isinstance(part, sympy.Symbol):
            return self._letter(part)
        if isinstance(part, sympy.Rational | sympy.Float):
            return self._number(part)
        if part is sympy.pi:
            return Name(CONSTANT)
        if part is sympy.E:
            return Call("exp", integer(1))
        if isinstance(part, sympy.Add):
            return Sum(tuple(self.read(term, depth + 1, powers) for term in part.args))
        if isinstance(part, sympy.Mul):
            return self._product(part.args, depth, powers)
        if isinstance(part, sympy.Pow) and part.base is sympy.E:
            return Call("exp", self.read(part.exp, depth + 1, 1))
        if isinstance(part, sympy.Pow):
            return self._product((part,), depth, powers)
        function = part.func.__name__ if isinstance(part, sympy.Function) else ""
        # By class, not by name alone: a caller's own function may be called sin as well.
        if function in FUNCTIONS and part.func is getattr(sympy, function):
            return Call(function, self.read(part.args[0], depth + 1, 1))
        return self._refuse_part(part)

    def _letter(self, symbol: sympy.Symbol) -> Node:
        name = self._names.get(symbol)
        if name is not None:
            return Name(name)
        fault = undeclared(symbol.name, self._letters, "")
        return self._refuse(fault.reason, fault.suggestion)

    def _number(self, number: object) -> Node:
        try:
            return Number(exact_number(number))
        except NumberError as error:
            return self._refuse(str(error), error.suggestion)

    def _product(self, parts: tuple[Any, ...], depth: int, powers: int) -> Node:
        """A product, its factors with negative exponents under one line."""
        above: list[Node] = []
        below: list[Node] = []
        for part in parts:
            base, exponent = self._split(part)
            if exponent is None:
                above.append(self.read(part, depth + 2, powers))
                continue
            inside = powers * max(1, abs(exponent.numerator))
            if trouble := exponent_trouble(exponent):
                self._refuse(trouble)
                continue
            if inside > MAX_EXPONENT:
                reason = f"powers within powers that multiply to {inside}"
                self._refuse(reason, f"at most {MAX_EXPONENT} is read")
                continue
            tree = self.read(base, depth + 4, inside)
            side = above if exponent > 0 else below
            side.append(tree if abs(exponent) == 1 else raised(tree, abs(exponent)))
        if not below:
            return _multiplied(above)
        first = above[0] if above else None
        if isinstance(first, Number) and first.value < 0:
            # The sign in front of the line, as the arithmetic reader has it.
            above = [Number(-first.value), *above[1:]] if first.value != -1 else above[1:]
            return Product((integer(-1), Quotient(_multiplied(above), _multiplied(below))))
        return Quotient(_multiplied(above), _multiplied(below))

    def _split(self, part: Any) -> tuple[Any, Fraction | None]:
        """Base and exponent of a power; no exponent for what is none, or is the exponential."""
        import sympy

        if not isinstance(part, sympy.Pow) or part.base is sympy.E:
            return part, None
        base, exponent = part.args
        if isinstance(exponent, sympy.Rational | sympy.Float):
            try:
                return base, exact_number(exponent)
            except NumberError as error:
                self._refuse(str(error), error.suggestion)
                return base, Fraction(1)
        hint = "x**n with letters is written exp(n*log(x)), for positive x"
        self._refuse(f"exponent {quoted(_text(exponent))} is no number", hint)
        return base, Fraction(1)

    def _refuse_part(self, part: Any) -> Node:
        import sympy

        if part is sympy.I:
            return self._refuse("the imaginary unit, where entries are real")
        if part in (sympy.nan, sympy.zoo, sympy.oo, -sympy.oo):
            return self._refuse(f"{quoted(str(part))} is no number")
        if isinstance(part, sympy.Function):
            return self._refuse(
                f"unknown function {quoted(_text(part))}", f"functions are {listed(FUNCTIONS, 'and')}"
            )
        return self._refuse(f"{quoted(_text(part))} ({type(part).__name__}) is no arithmetic of letters")

    def _refuse(self, reason: str, suggestion: str = "") -> Node:
        self.faults.append(Fault("", reason, suggestion))
        return integer(1)


def _multiplied(factors: list[Node]) -> Node:
    if not factors:
        return integer(1)
    return factors[0] if len(factors) == 1 else Product(tuple(factors))


def _text(part: Any) -> str:
    """A short part as SymPy prints it, a long one by its kind: printing could take minutes."""
    import sympy

    sizes = zip(range(30), sympy.preorder_traversal(part), strict=False)
    return str(part) if sum(1 for _ in sizes) < 30 else f"{type(part).__name__}(...)"
