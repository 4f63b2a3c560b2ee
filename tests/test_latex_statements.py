"""Rows of displays, and the sides of relations."""

from __future__ import annotations

import pytest

from symplant.errors import InputError
from symplant.reading.latex import read_latex
from symplant.reading.latex.statements import read_rows, split_relation


def rows(text: str) -> list[str]:
    found = read_rows(text)
    for row in found:  # what is left of a row stands where its column says
        at = row.column - 1
        assert all(a in (b, " ") for a, b in zip(row.text, text[at : at + len(row.text)], strict=True))
    return [" ".join(row.text.split()) for row in found]


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("a = b", ["a = b"]),
        ("$$ a = b. $$", ["a = b"]),
        (r"\[ a = b \]", ["a = b"]),
        (r"a = b \\ c = d", ["a = b", "c = d"]),
        ("", []),
        (r"\begin{align}\end{align}", []),
        (r"\begin{align} a &= b \\ c &= d \end{align}", ["a = b", "c = d"]),
        (r"\begin{align*} a &= b \\[4pt] &= c \\* d &= e \end{align*}", ["a = b = c", "d = e"]),
        (r"\begin{align} a &= b \\ &\quad + c \\ & - d \end{align}", [r"a = b \quad + c - d"]),
        (r"\begin{align} a = b + {} & c \end{align}", ["a = b + {} & c"]),
        (r"\begin{gather} a \\ -b \\ = c \end{gather}", ["a", "-b = c"]),
        (r"\begin{multline} a = b \\ + c \\ \cdot d \end{multline}", [r"a = b + c \cdot d"]),
        (r"\begin{eqnarray} a &=& b \\ && + c \end{eqnarray}", ["a = b + c"]),
        (r"\begin{cases} a > 0 \\ b &> 0 \end{cases}", ["a > 0", "b > 0"]),
        (r"\begin{cases} a & b > 0 \end{cases}", ["a & b > 0"]),
        (r"\begin{align} a &= b & c &= d \end{align}", ["a = b & c = d"]),
        (r"\begin{align} a &= b & -c &= d \end{align}", ["a = b & -c = d"]),
        (
            r"\begin{equation}\label{eq:a_1} \begin{split} p &= a \\ &= c \end{split} \tag{3} \end{equation}",
            ["p = a = c"],
        ),
        (r"\begin{align} a &= b \nonumber \\ c &= d \notag \label{x} \end{align}", ["a = b", "c = d"]),
        (r"\begin{equation} a = \begin{bmatrix} 1 \\ 2 \end{bmatrix} \end{equation}", None),
        (r"\begin{align} a &= b % no \\ here" + "\n" + r"\\ c &= d \end{align}", None),
    ],
)
def test_rows(text: str, expected: list[str] | None) -> None:
    if expected is None:
        expected = (
            [r"a = \begin{bmatrix} 1 \\ 2 \end{bmatrix}"]
            if "bmatrix" in text
            else [r"a = b % no \\ here", "c = d"]
        )
    assert rows(text) == expected


def test_rows_that_part_columns_are_refused_by_the_reader() -> None:
    (row,) = read_rows(r"\begin{align} a &= b & c &= d \end{align}")
    (statement,) = split_relation(row.text, column=row.column)
    with pytest.raises(InputError, match="unexpected '&'"):
        read_latex(statement.sides[1].text, {"b": "b", "c": "c"}, column=statement.sides[1].column)


def test_columns_of_rows_and_sides_are_those_of_the_whole_text() -> None:
    text = r"\begin{align} p &= a \label{one} \\ &= \frac{a}{q} \end{align}"
    (row,) = read_rows(text)
    (statement,) = split_relation(row.text, column=row.column)
    side = statement.sides[-1]
    with pytest.raises(InputError) as caught:
        read_latex(side.text, {"a": "a"}, column=side.column)
    assert caught.value.faults[0].place == f"column {text.index('q') + 1}"


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("a", [(["a"], [])]),
        ("a = b", [(["a", "b"], ["="])]),
        ("= b", [(["", "b"], ["="])]),
        ("G(s) = a = b.", [(["G(s)", "a", "b"], ["=", "="])]),
        (r"0 < a \le b \leqslant c", [(["0", "a", "b", "c"], ["<", "<=", "<="])]),
        (r"a \geq b \gt c \ne d", [(["a", "b", "c", "d"], [">=", ">", "!="])]),
        ("a ≤ b ≥ c ≠ d", [(["a", "b", "c", "d"], ["<=", ">=", "!="])]),
        ("a <= b >= c == d", [(["a", "b", "c", "d"], ["<=", ">=", "="])]),
        (r"a := b", [(["a", "b"], ["="])]),
        (r"a \coloneqq b \equiv c", [(["a", "b", "c"], ["=", "="])]),
        ("a > 0, b > 0", [(["a", "0"], [">"]), (["b", "0"], [">"])]),
        ("a > 0; b > 0,", [(["a", "0"], [">"]), (["b", "0"], [">"])]),
        ("a > 0 and b > 0", [(["a", "0"], [">"]), (["b", "0"], [">"])]),
        (r"a > 0 \text{ and } b > 0", [(["a", "0"], [">"]), (["b", "0"], [">"])]),
        (r"a > 0 \land b > 0 \wedge c > 0", [(["a", "0"], [">"]), (["b", "0"], [">"]), (["c", "0"], [">"])]),
        ("$a > 0$, $b > 0$", [(["a", "0"], [">"]), (["b", "0"], [">"])]),
        (r"a > 0,\quad b > 0", [(["a", "0"], [">"]), (["b", "0"], [">"])]),
        ("x_{a,b} = k_{i=1}", [(["x_{a,b}", "k_{i=1}"], ["="])]),
        (r"\left( a, b \right) = c", [([r"\left( a, b \right)", "c"], ["="])]),
    ],
)
def test_statements(text: str, expected: list[tuple[list[str], list[str]]]) -> None:
    found = split_relation(text)
    assert [([side.text for side in sides], list(relations)) for sides, relations in found] == expected
    for statement in found:
        for side in statement.sides:
            assert text[side.column - 1 : side.column - 1 + len(side.text)] == side.text


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("a > 1,5", "column 7: '5' is no relation (a decimal comma must be announced as one)"),
        ("a, b", "column 1: 'a' is no relation"),
        ("a = ", "column 3: a side is missing after '='"),
        ("a = = b", "column 3: a side is missing after '='"),
        (r"a > 0 \quad b > 0", "column 5: '0 \\\\quad b' reads two ways: one side or two"),
        ("a > (0, b > 0", "column 5: '(' is never closed"),
    ],
)
def test_faults(text: str, message: str) -> None:
    with pytest.raises(InputError) as caught:
        split_relation(text)
    assert message.replace("\\\\", "\\") in str(caught.value)


def test_decimal_comma() -> None:
    (statement,) = split_relation("a > 1,5", decimal_comma=True)
    assert statement.sides[1].text == "1,5"
