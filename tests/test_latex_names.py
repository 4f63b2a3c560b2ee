"""LaTeX spellings of letters: their normal form, and the spelling of a letter without one."""

from __future__ import annotations

import keyword

import pytest
from hypothesis import given
from hypothesis import strategies as st

from symplant.algebra.expression import Name
from symplant.errors import InputError
from symplant.reading.latex import canonical_spelling, default_spelling, read_latex


@pytest.mark.parametrize(
    "alike",
    [
        ["K_t", "K_{t}", "K _ { t }", "K_{{t}}", r"K_{\,t}"],
        [
            r"K_{\mathrm{t}}",
            r"K_\mathrm{t}",
            r"K_{\text{t}}",
            r"K_{\rm t}",
            r"K_{\operatorname{t}}",
            r"K_{\textrm{t}}",
        ],
        [r"\mathrm{K}", r"{\rm K}", r"\text{K}"],
        ["x'", r"x^{\prime}", r"x^\prime", "x′"],
        ["x''", r"x^{\prime\prime}"],
        ["x^*", "x^{*}", r"x^{\ast}"],
        ["x_1^*", "x^*_1", "x_{1}^{*}"],
        [r"\dot x", r"\dot{x}", r"\dot {x}"],
        [r"\theta_0", "θ_0", r"\theta_{0}"],
        [r"\omega_{\max}", r"\omega_\max"],
        ["x_{12}", "x_12", "x_{1 2}"],
        ["V_{C_1}", "V_{C_{1}}"],
        ["k_{1,2}", "k_{1, 2}", "k_{1{,}2}"],
        [r"\Delta m", r"\Delta  m"],
        [r"\bm{\theta}", r"\boldsymbol{\theta}", r"\boldsymbol\theta"],
    ],
    ids=lambda alike: alike[0],
)
def test_what_prints_alike_is_one_spelling(alike: list[str]) -> None:
    normal = canonical_spelling(alike[0])
    assert {canonical_spelling(spelling) for spelling in alike} == {normal}
    assert canonical_spelling(normal) == normal
    for written in alike:
        assert read_latex(written, {normal: "found"}) == Name("found")


def test_normal_forms_stay_readable() -> None:
    assert canonical_spelling(r"x_{\alpha  a, \max b}") == r"x_{\alpha a,\max b}"
    assert canonical_spelling(r"\Delta m_1'") == r"\Delta m_{1}'"


def test_what_prints_otherwise_is_another_spelling() -> None:
    different = [
        *(
            "x",
            "X",
            "x_1",
            "x_{11}",
            "x'",
            "x''",
            "x^*",
            "x^{+}",
            "x_{+}",
            r"\dot{x}",
            r"\ddot{x}",
            r"\dot{x}_1",
        ),
        *(r"\mathrm{x}", r"\mathbf{x}", "x_a", r"x_{\mathrm{a}}", r"x_{\alpha}", r"\chi", r"x_{\alpha a}"),
        *(
            r"\phi",
            r"\varphi",
            "E",
            "I",
            "I_{xx}",
            "e",
            r"\mathrm{e}",
            r"\Delta x",
            r"\Delta",
            r"x_{(1)}",
            "x_{[1]}",
        ),
    ]
    assert len({canonical_spelling(spelling) for spelling in different}) == len(different)


@pytest.mark.parametrize(
    ("spelling", "words"),
    [
        ("", "an empty spelling"),
        ("  ", "an empty spelling"),
        ("a b", "'a b' is not one name"),
        ("Kt", r"'Kt' is not one name (write \mathrm{Kt})"),
        ("2", "'2' is not one name"),
        ("a+b", "not one name"),
        ("(a)", "not one name"),
        ("x^2", "'x^2' is a power, not a name"),
        ("x^{-1}", "is a power"),
        ("x_{", "never closed"),
        ("x_", "an index or exponent is missing"),
        ("x_{}", "an empty index or exponent"),
        ("x_1_2", "second '_' after 'x'"),
        (r"\frac{a}{b}", "not one name"),
        (r"x_{\frac{1}{2}}", r"unexpected '\frac' in a name"),
        (r"\sin", "not one name"),
        (r"\foo", "not one name"),
        (r"\dot", r"'\dot' without a letter under it"),
        ("x_{a&b}", "unexpected '&' in a name"),
        ("$x$", "not one name"),
        ("x\x00", r"'x\x00' is not one name"),
        ("(" * 100, "nested deeper"),
        ("x" * 200_000, "a text of 200000 characters"),
        (None, "a spelling must be text, not NoneType"),
        (["x"], "a spelling must be text, not list"),
    ],
)
def test_what_is_not_one_name(spelling: str, words: str) -> None:
    with pytest.raises(InputError) as caught:
        canonical_spelling(spelling)
    assert words in str(caught.value)


@pytest.mark.parametrize(
    ("name", "spelling"),
    [
        ("m", "m"),
        ("I", "I"),
        ("E", "E"),
        ("m1", "m_{1}"),
        ("x12", "x_{12}"),
        ("k_r", "k_{r}"),
        ("k_1_2", "k_{1,2}"),
        ("Kt", "K_{t}"),
        ("TL", "T_{L}"),
        ("Ixx", "I_{xx}"),
        ("a_ij", "a_{ij}"),
        ("V_C1", "V_{C1}"),
        ("J1m", "J_{1m}"),
        ("Jmot", r"J_{\mathrm{mot}}"),
        ("R_load", r"R_{\mathrm{load}}"),
        ("RDS_on", r"R_{\mathrm{DS,on}}"),
        ("xref", r"x_{\mathrm{ref}}"),
        ("mass", r"\mathrm{mass}"),
        ("Mass", r"\mathrm{Mass}"),
        ("mass2", r"\mathrm{mass}_{2}"),
        ("motor_gain", r"\mathrm{motor}_{\mathrm{gain}}"),
        ("beta", r"\beta"),
        ("lambda", r"\lambda"),
        ("lambda_", r"\lambda"),
        ("Omega", r"\Omega"),
        ("omega0", r"\omega_{0}"),
        ("omega_n", r"\omega_{n}"),
        ("omegamax", r"\omega_{\mathrm{max}}"),
        ("mus", r"\mu_{s}"),
        ("taum", r"\tau_{m}"),
        ("etamot", r"\mathrm{etamot}"),
        ("pitch", r"\mathrm{pitch}"),
        ("pin", r"p_{\mathrm{in}}"),
        ("DeltaT", r"\Delta_{T}"),
        ("L_sigma", r"L_{\sigma}"),
        ("k_theta1", r"k_{\theta 1}"),
        ("varphi", r"\varphi"),
        ("x_dot", r"\dot{x}"),
        ("x_dot_1", r"\dot{x}_{1}"),
        ("x1dot", r"\dot{x}_{1}"),
        ("thetaddot", r"\ddot{\theta}"),
        ("x_hat", r"\hat{x}"),
        ("xstar", "x^{*}"),
        ("x_prime", "x'"),
        ("ω_1", r"\omega_{1}"),
        ("größe", r"\mathrm{größe}"),
        ("_", r"\mathrm{\_}"),
    ],
)
def test_default_spellings(name: str, spelling: str) -> None:
    assert default_spelling(name) == spelling
    assert read_latex(spelling, {spelling: name}) == Name(name)


identifiers = st.one_of(
    st.from_regex(r"[A-Za-z_][A-Za-z0-9_]{0,8}", fullmatch=True),
    st.text(min_size=1, max_size=6).filter(str.isidentifier),
    st.sampled_from(keyword.kwlist),
)


@given(identifiers)
def test_default_spellings_are_names(name: str) -> None:
    spelling = default_spelling(name)
    normal = canonical_spelling(spelling)
    assert canonical_spelling(normal) == normal
    assert read_latex(spelling, {normal: name}) == Name(name)
    assert read_latex(f"({spelling}) + 1", {spelling: name}).terms[0] == Name(name)  # type: ignore[union-attr]


def test_short_identifiers_keep_apart() -> None:
    letters = "abekmxABIJKRTxyz"
    names = [a + b for a in letters for b in ["", *"0129abtrLC", "12", "_12a", "max", "_load"]]
    spelled: dict[str, str] = {}
    for name in dict.fromkeys(names):
        assert spelled.setdefault(canonical_spelling(default_spelling(name)), name) == name
