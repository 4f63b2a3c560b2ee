"""Random plants for the tests of the derivation: matrices as texts, and what SymPy makes of the texts."""

from __future__ import annotations

from fractions import Fraction
from functools import cache
from typing import Any, NamedTuple

import sympy
from hypothesis import HealthCheck, assume, event, settings
from hypothesis import strategies as st

from symplant.derivation.derive import Derivation, derive
from symplant.errors import InputError
from symplant.reading.arguments import model_from_arguments

LETTERS = ("a", "b", "c")
SYMBOLS = {name: sympy.Symbol(name, positive=True) for name in LETTERS}
S = sympy.Symbol("s")

quick = settings(
    max_examples=60, deadline=None, suppress_health_check=[HealthCheck.too_slow, HealthCheck.filter_too_much]
)

Texts = list[list[str]]


class Written(NamedTuple):
    """The matrices of a plant as texts; D and E may be left out."""

    A: Texts
    B: Texts
    C: Texts
    D: Texts | None
    E: Texts | None

    def derive(self) -> Derivation:
        table = {letter: {"sign": "positive"} for letter in LETTERS}
        return derive(model_from_arguments(*self, parameters=table))

    @property
    def full(self) -> dict[str, Texts]:
        n, m, p = len(self.A), len(self.B[0]), len(self.C)
        eye = [["1" if i == j else "0" for j in range(n)] for i in range(n)]
        zero = [["0"] * m for _ in range(p)]
        return {"A": self.A, "B": self.B, "C": self.C, "D": self.D or zero, "E": self.E or eye}


letters = st.sampled_from(LETTERS)
numbers = st.sampled_from(["1", "-1", "2", "-3", "1/2", "-2/3", "0.7"])
monomials = st.one_of(
    numbers,
    letters,
    st.builds("-{}".format, letters),
    st.builds("{}*{}".format, numbers, letters),
    st.builds("{}/{}".format, letters, letters),
    st.builds("-{}*{}/{}**2".format, letters, letters, letters),
)
quotients = st.one_of(
    st.builds("({} - {})/{}".format, letters, letters, letters),
    st.builds("{}/({} + {})".format, letters, letters, letters),
    st.builds("1/({} + 2)".format, letters),
)
functions = st.one_of(
    st.builds("sqrt({})".format, letters),
    st.builds("-sqrt({}*{})".format, letters, letters),
    st.builds("sqrt({}/{})".format, letters, letters),
    st.builds("sin({})".format, letters),
    st.builds("cos(2*{})".format, letters),
    st.builds("sin({} - {}/2)".format, letters, letters),
    st.builds("exp(-{}*{})".format, letters, letters),
    st.builds("exp(-{}/2)".format, letters),
    st.builds("tanh({})".format, letters),
    st.builds("log({} + 1)".format, letters),
    st.builds("sin(pi/3)*{}".format, letters),
)
plain_entries = st.one_of(st.just("0"), monomials, monomials, quotients)
rich_entries = st.one_of(st.just("0"), monomials, functions)


@st.composite
def plants(
    draw: st.DrawFn,
    entries: st.SearchStrategy[str] = plain_entries,
    states: int = 5,
    channels: int = 3,
    square: bool = False,
) -> Written:
    """A plant of up to so many states, inputs and outputs, with or without D and E, E singular or not."""
    n = draw(st.integers(1, states))
    m = draw(st.integers(1, channels))
    p = m if square else draw(st.integers(1, channels))
    # Large plants are sparser, as plants are, and quicker.
    sparse = entries if n <= 3 else st.one_of(st.just("0"), st.just("0"), entries)

    def matrix(rows: int, columns: int) -> Texts:
        return draw(
            st.lists(st.lists(sparse, min_size=columns, max_size=columns), min_size=rows, max_size=rows)
        )

    A, B, C = matrix(n, n), matrix(n, m), matrix(p, n)
    D = matrix(p, m) if draw(st.booleans()) else None
    kind = draw(st.sampled_from(["none", "full", "singular", "diagonal"]))
    E: Texts | None = None
    if kind == "diagonal":
        diagonal = draw(st.lists(monomials, min_size=n, max_size=n))
        E = [[diagonal[i] if i == j else "0" for j in range(n)] for i in range(n)]
    elif kind != "none":
        E = matrix(n, n)
    if kind == "singular" and E is not None:
        E[draw(st.integers(0, n - 1))] = ["0"] * n
    return Written(A, B, C, D, E)


points = st.fixed_dictionaries(
    {letter: st.fractions(Fraction(1, 3), 4, max_denominator=7) for letter in LETTERS}
)
eighths = st.integers(-24, 24).map(lambda number: number / 8)
frequencies = st.builds(complex, eighths, eighths)


@cache
def expression(text: str) -> Any:
    return sympy.sympify(text, locals={**SYMBOLS, "s": S}, rational=True)


def derived(plant: Written) -> Derivation:
    """The derivation; plants whose pencil is singular are passed over, once SymPy has said so too."""
    try:
        return plant.derive()
    except InputError as error:
        assert "singular for every" in str(error)
        if len(plant.A) <= 3:
            full = plant.full
            pencil = sympy.Matrix(symbolic(full["E"])) * S - sympy.Matrix(symbolic(full["A"]))
            assert sympy.simplify(pencil.det()) == 0
        event("singular pencil")
        assume(False)
        raise


def symbolic(texts: Texts) -> list[list[Any]]:
    return [[expression(text) for text in row] for row in texts]
