"""Matrices written in LaTeX."""

from __future__ import annotations

from fractions import Fraction

import pytest

from symplant.algebra.expression import Name, Number, Product, Quotient, integer
from symplant.errors import InputError
from symplant.reading.latex import read_latex_matrix

LETTERS = {letter: letter for letter in "abckm"}
ROWS = [[integer(0), integer(1)], [Product((integer(-1), Quotient(Name("k"), Name("m")))), Name("c")]]
BODY = r"0 & 1 \\ -\frac{k}{m} & c"


@pytest.mark.parametrize(
    "text",
    [
        *(rf"\begin{{{name}}} {BODY} \end{{{name}}}" for name in ("matrix", "pmatrix", "bmatrix")),
        rf"\begin{{Bmatrix}} {BODY} \end{{Bmatrix}}",
        rf"\begin{{smallmatrix}} {BODY} \end{{smallmatrix}}",
        rf"\begin{{array}}{{cc}} {BODY} \end{{array}}",
        rf"\left[\begin{{array}}[c]{{c|c}} \hline {BODY} \\ \hline \end{{array}}\right]",
        rf"\begin{{bmatrix*}}[r] {BODY} \end{{bmatrix*}}",
        rf"\left( \begin{{matrix}} {BODY} \end{{matrix}} \right)",
        rf"[\begin{{matrix}} {BODY} \end{{matrix}}]",
        rf"\left\{{ \begin{{matrix}} {BODY} \end{{matrix}} \right\}}",
        rf"$\begin{{bmatrix}} {BODY} \end{{bmatrix}}$",
        rf"\[ \begin{{bmatrix}} {BODY} \end{{bmatrix}}. \]",
        "\n\\begin{bmatrix} % system\n 0 & 1 \\\\[4pt]\n -\\tfrac{k}{m} & c \\\\\n\\end{bmatrix}\n",
    ],
)
def test_matrices(text: str) -> None:
    assert read_latex_matrix(text, LETTERS) == ROWS


def test_one_entry_and_one_row() -> None:
    assert read_latex_matrix(r"\begin{bmatrix} a \end{bmatrix}", LETTERS) == [[Name("a")]]
    assert read_latex_matrix(r"\begin{bmatrix} a & b & c \end{bmatrix}", LETTERS) == [
        [Name("a"), Name("b"), Name("c")]
    ]


def test_decimal_comma() -> None:
    text = r"\begin{bmatrix} 1,5 & a \end{bmatrix}"
    assert read_latex_matrix(text, LETTERS, decimal_comma=True) == [[Number(Fraction(3, 2)), Name("a")]]
    with pytest.raises(InputError):
        read_latex_matrix(text, LETTERS)


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("", "column 1: no matrix"),
        ("a", "column 1: a matrix and nothing else is expected here"),
        (r"\begin{bmatrix} a & b \\ c \end{bmatrix}", "column 26: row 2 has 1 entry, row 1 has 2 entries"),
        (r"\begin{bmatrix} a \\ b & c \end{bmatrix}", "column 22: row 2 has 2 entries, row 1 has 1 entry"),
        (
            r"\begin{bmatrix} a & \\ & b \end{bmatrix}",
            "column 21: row 1, entry 2 is empty (write 0 for a zero)",
        ),
        (r"\begin{bmatrix} a \\ \\ b \end{bmatrix}", "column 22: row 2, entry 1 is empty"),
        (r"\begin{bmatrix} \end{bmatrix}", "row 1, entry 1 is empty"),
        (r"\begin{bmatrix} a, b \end{bmatrix}", "column 18: unexpected ','"),
        (r"\begin{vmatrix} a \end{vmatrix}^2", "column 32: a matrix and nothing else"),
        (r"\begin{bmatrix} a \end{bmatrix} \begin{bmatrix} b \end{bmatrix}", "column 33: a second matrix"),
        (r"2 \begin{bmatrix} a \end{bmatrix}", "column 1: a matrix and nothing else is expected here"),
        (r"\begin{bmatrix} a \end{bmatrix}^T", "column 32: a matrix and nothing else is expected here"),
        (r"\begin{align} a \end{align}", r"column 1: '\begin{align}' is not a matrix"),
        (r"\begin{array} a & b \end{array}", r"column 1: '\begin{array}' without its column letters"),
        (r"\begin{bmatrix} a", r"column 1: '\begin{bmatrix}' is never closed"),
        (
            r"\begin{bmatrix} a \end{pmatrix}",
            r"'\end{pmatrix}' does not close the '\begin{bmatrix}' at column 1",
        ),
        (r"\begin{bmatrix} \begin{matrix} a \end{matrix} \end{bmatrix}", "where a scalar is expected"),
    ],
)
def test_faults(text: str, message: str) -> None:
    with pytest.raises(InputError) as caught:
        read_latex_matrix(text, LETTERS)
    assert message in str(caught.value)


def test_a_determinant_is_no_matrix() -> None:
    with pytest.raises(InputError, match="a determinant, not a matrix"):
        read_latex_matrix(r"\begin{vmatrix} a \end{vmatrix}", LETTERS)


def test_faults_of_all_entries_at_once() -> None:
    with pytest.raises(InputError) as caught:
        read_latex_matrix(r"\begin{bmatrix} q & a/b c \\ a + & k \end{bmatrix}", LETTERS)
    assert [fault.place for fault in caught.value.faults] == ["column 17", "column 25", "column 34"]


def test_many_entries_are_read_quickly_enough() -> None:
    row = " & ".join([r"-\frac{k}{m} a"] * 40)
    rows = read_latex_matrix(r"\begin{bmatrix}" + r" \\ ".join([row] * 40) + r"\end{bmatrix}", LETTERS)
    assert (len(rows), len(rows[0])) == (40, 40)
