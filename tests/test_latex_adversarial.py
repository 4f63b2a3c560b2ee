"""Hostile text is refused, or read, in bounded time and without deep recursion."""

from __future__ import annotations

import time

import pytest

from symplant.errors import InputError
from symplant.reading.latex import canonical_spelling, read_latex, read_latex_matrix
from symplant.reading.latex.statements import read_rows, split_relation

LONGEST = 100_000
DECLARED = {"s": "s", "m": "m", r"\Delta m": "dm", "k_{1}": "k1"}

HOSTILE = {
    "a megabyte": "s+" * 500_000,
    "deep parentheses": "(" * 10_000 + "s" + ")" * 10_000,
    "deep braces": "{" * 10_000 + "s" + "}" * 10_000,
    "deep fractions": r"\frac{1}{" * 5_000 + "s" + "}" * 5_000,
    "deep exponents": "s^{" * 10_000 + "2" + "}" * 10_000,
    "deep indices": "s_{" * 10_000 + "s" + "}" * 10_000,
    "deep environments": r"\begin{matrix}" * 3_000,
    "unclosed": "(" * LONGEST,
    "closed only": ")" * LONGEST,
    "sized, unclosed": r"\left(" * 16_000,
    "functions of nothing": r"\sin" * 20_000 + " s",
    "roots of nothing": r"\sqrt" * 19_000 + " s",
    "fractions of nothing": r"\frac" * 19_000 + " s",
    "divisions": "s/" * 49_999 + "s",
    "digits": "9" * LONGEST,
    "digits with gaps": "1" + r"\,234" * 16_000,
    "large exponent of ten": "1e" + "9" * 90_000,
    "only space": " " * LONGEST,
    "line breaks": r"\\ " * 33_000,
    "line breaks with arguments": r"\\[ " * 24_000,
    "percent signs": "%" * LONGEST,
    "primes": "s" + "'" * 99_000,
    "long index": "x_{" + "ab" * 49_000 + "}",
    "long index of commands": "x_{" + r"\a b" * 24_000 + "}",
    "many undeclared": "+".join(f"x_{{{i}}}" for i in range(12_000)),
    "many fraction bars": r"\over " * 16_000,
    "dollars": "$" * LONGEST,
    "signs": "+-" * 49_000,
    "products of nothing": r"\cdot " * 16_000,
    "unknown commands": r"\foo" * 24_000,
    "backslash at the end": "s \\",
    "NUL": "s + \x00",
    "emoji": "s + 😀",
    "half a surrogate pair": "s + \ud800",
    "bidirectional override": "s \u202e + m",
    "zero-width": "s\u200b s",
    "escape sequence": "s \x1b[2J",
    "powers of powers": "((((9^{60})^{60})^{60})^{60})^{60}",
    "power tower": "9^{9^{9^{9}}}",
}

READABLE = {
    "long sum": "s+" * 49_999 + "s",
    "long product": "s " * 49_999,
    "long product with signs": r"s\cdot " * 14_000 + "s",
    "many braces": "{s}" * 33_000,
    "many fractions": r"{s \over m}" * 9_000,
    "many roots": r"\sqrt s" * 14_000,
    "many increments": r"\Delta m" * 12_000,
    "many constant divisors": r"\frac{1}{1+1}" * 7_000,
    "deepest brackets": "(1+" * 50 + "s" + ")" * 50,
    "deepest fractions": r"\frac{1}{1+" * 50 + "s" + "}" * 50,
    "deepest functions": r"\sin(1+" * 50 + "s" + ")" * 50,
    "deepest exponentials": r"\mathrm{e}^{1+" * 50 + "s" + "}" * 50,
}


@pytest.mark.parametrize("text", HOSTILE.values(), ids=HOSTILE)
def test_hostile_text_is_refused(text: str) -> None:
    start = time.process_time()
    with pytest.raises(InputError) as caught:
        read_latex(text, DECLARED)
    assert time.process_time() - start < 20
    assert 1 <= len(caught.value.faults) <= 20
    assert len(str(caught.value)) < 8_000
    assert str(caught.value).replace("\n", "").isprintable()
    for other in (
        canonical_spelling,
        split_relation,
        read_rows,
        lambda one: read_latex_matrix(one, DECLARED),
    ):
        start = time.process_time()
        try:
            other(text)  # type: ignore[operator]
        except InputError as error:
            assert str(error).replace("\n", "").isprintable()
        assert time.process_time() - start < 20


@pytest.mark.parametrize("text", READABLE.values(), ids=READABLE)
def test_large_text_is_read(text: str) -> None:
    start = time.process_time()
    read_latex(text, DECLARED)
    assert time.process_time() - start < 20


@pytest.mark.parametrize("text", [None, 3, b"s", ["s"]])
def test_what_is_no_text_is_refused(text: object) -> None:
    for read in (read_latex, read_latex_matrix):
        with pytest.raises(InputError, match="LaTeX text expected"):
            read(text, DECLARED)  # type: ignore[arg-type]


def test_deep_callers_leave_enough_stack() -> None:
    def deep(levels: int) -> None:
        if levels:
            deep(levels - 1)
        else:
            read_latex("(1+" * 49 + r"\frac{1}{s}" + ")" * 49, DECLARED)

    deep(400)
