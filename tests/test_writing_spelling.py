"""Spellings: one for each name, none for two, and back."""

import pytest

from symplant.algebra.expression import Name
from symplant.errors import InputError
from symplant.plant.model import Model
from symplant.plant.parameter import Parameter, Signal
from symplant.writing.spelling import Spelling

K = Name("k")


def plant(*parameters: Parameter, entry=K, discrete: bool = False) -> Model:
    signals = tuple((Signal(name),) for name in ("x1", "F", "y_dot"))
    matrix = ((entry,),)
    return Model(matrix, matrix, matrix, None, None, *signals, parameters, "t", discrete, "plant.toml")


def test_a_plant_gets_declared_and_default_spellings_and_back():
    spelling = Spelling(plant(Parameter("k", r"k_{\mathrm r}"), Parameter("omega0"), Parameter("lambda")))
    assert [spelling[name] for name in ("k", "omega0", "lambda", "s")] == [
        r"k_{\mathrm r}",
        r"\omega_{0}",
        r"\lambda",
        "s",
    ]
    assert {latex: spelling.inverse[latex] for latex in spelling.inverse} == {
        r"k_{\mathrm r}": "k",
        r"\omega_{0}": "omega0",
        r"\lambda": "lambda",
        "s": "s",
    }
    assert spelling.signal("y_dot") == r"\dot{y}"


def test_pi_is_spelled_where_the_plant_uses_it_and_free_for_a_letter_where_not():
    assert Spelling(plant(entry=Name("pi"))).inverse[r"\pi"] == "pi"
    assert Spelling(plant(Parameter("share", r"\pi"))).inverse[r"\pi"] == "share"
    with pytest.raises(InputError, match="kept for pi"):
        Spelling(plant(Parameter("share", r"\pi"), entry=Name("pi")))


@pytest.mark.parametrize(
    ("first", "second", "reason"),
    [
        (Parameter("a", "k_1"), Parameter("b", "k_{1}"), "is that of a"),
        (Parameter("k1"), Parameter("k_1"), "is that of k1"),
        (Parameter("a", r"K_\text{t}"), Parameter("b", r"K_{\mathrm{t}}"), "is that of a"),
        (Parameter("a"), Parameter("b", "s"), "is kept for s"),
        (Parameter("a"), Parameter("b", "a^{2}"), "is a power"),
        (Parameter("a"), Parameter("b", r"\frac{1}{2}"), ""),
    ],
)
def test_a_clash_is_a_fault_with_its_place(first, second, reason):
    with pytest.raises(InputError) as caught:
        Spelling(plant(first, second))
    (fault,) = caught.value.faults
    assert fault.place.startswith(f"parameters.{second.name}.latex")
    assert fault.file == "plant.toml"
    assert reason in fault.reason


def test_all_clashes_are_told_at_once():
    with pytest.raises(InputError) as caught:
        Spelling(plant(*(Parameter(name, "q") for name in "abc"), Parameter("d", "z"), discrete=True))
    assert [fault.place for fault in caught.value.faults] == [
        "parameters.b.latex",
        "parameters.c.latex",
        "parameters.d.latex",
    ]


@pytest.mark.parametrize(
    ("letters", "euler"),
    [({"k": "k"}, "e"), ({"e": "e"}, r"\mathrm{e}"), ({"e": "e", "u": r"\mathrm{e}"}, "")],
)
def test_the_base_of_exponentials_is_no_letter(letters, euler):
    assert Spelling.of("s", letters).euler == euler


@pytest.mark.parametrize(
    ("latex", "base"),
    [
        ("k", "k"),
        (r"K_{\mathrm t}", r"K_{\mathrm t}"),
        (r"\dot x", r"\dot x"),
        ("x'", "x'"),
        ("x'_{0}", "x_{0}'"),
        (r"x^{\prime}", "x'"),
        ("x^{*}", None),
        (r"\Delta m", None),
    ],
)
def test_exponents_are_attached_only_where_that_is_sound_tex(latex, base):
    assert Spelling.of("s", {"q": latex}).power_base("q") == base
