"""What is printed reads back to the same value: functions, awkward spellings, every form."""

from fractions import Fraction

import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from symplant.algebra.box import Box, Interval, Sign
from symplant.algebra.conversion import Converter
from symplant.algebra.expression import Call, Name, Node, Number, Power, Product, Quotient, Sum, children
from symplant.algebra.functions import build_ring
from symplant.algebra.ring import Ring
from symplant.algebra.sign_pattern import factored_sign
from symplant.algebra.trees import tree_of
from symplant.errors import InputError
from symplant.reading.latex import read_latex
from symplant.writing.conditions import condition
from symplant.writing.formula import FormulaWriter
from symplant.writing.latex_tree import node_latex
from symplant.writing.shapes import multiplied_out, shape_tree
from symplant.writing.spelling import Spelling

SPELLINGS = {
    "Ixx": "I_{xx}",
    "Kt": r"K_{\mathrm{t}}",
    "Dp": "D'",
    "phid": r"\dot{\phi}",
    "lam": r"\lambda",
    "e": "e",
    "gain": r"\mathrm{gain}",
    "xs": "x^{*}",
    "dm": r"\Delta m",
}
SPELLING = Spelling.of("s", SPELLINGS)
POSITIVE = Interval(declared=Sign.POSITIVE)
BOX = Box(dict.fromkeys(SPELLINGS, POSITIVE))


def _functions() -> dict[str, Node]:
    lam, kt, e, ixx = Name("lam"), Name("Kt"), Name("e"), Name("Ixx")
    angle = Sum((lam, Product((Number(2), Name("phid")))))
    return {
        "sine": Call("sin", lam),
        "turned": Call("cos", angle),
        "decay": Call("exp", Quotient(Product((Number(-1), e, kt)), Number(2))),
        "root": Call("sqrt", Quotient(ixx, kt)),
        "two": Call("sqrt", Number(2)),
        "log": Call("log", kt),
        "pi": Name("pi"),
    }


SETTING = build_ring("s", tuple(SPELLINGS), _functions(), BOX)
RING = SETTING.ring
WRITER = FormulaWriter(RING, SPELLING)


@st.composite
def elements(draw, ring: Ring = RING, largest: int = 6):
    """Sums of a few monomials in the generators, in normal form."""
    total = ring.zero
    for _ in range(draw(st.integers(1, largest))):
        value = draw(st.one_of(st.integers(-12, 12), st.sampled_from([10**7, 123456789, -2 * 10**11])))
        term = ring.constant(value)
        for key in draw(st.lists(st.sampled_from(ring.keys), max_size=4)):
            term = term * ring.gen(key)
        total = total + term
    return ring.reduce(total)


def same_value(first: Node, second: Node) -> bool:
    """Whether two trees have the same value, functions included."""
    setting = build_ring("s", tuple(SPELLINGS), {"first": first, "second": second}, BOX)
    converter = setting.converter()
    left, right = converter.convert(first), converter.convert(second)
    return setting.ring.is_zero(left.numerator * right.denominator - right.numerator * left.denominator)


def read(latex: str) -> Node:
    return read_latex(latex, SPELLING.inverse)


@given(elements())
@settings(max_examples=60, deadline=None)
def test_an_element_reads_back_as_sum_and_as_product(element):
    meant = tree_of(RING, element)
    assert same_value(read(WRITER.latex(element)), meant)
    assert same_value(read(WRITER.factored_latex(element)), meant)


@given(elements(), st.sampled_from([4.0, 6.0, 9.0, 14.0, 20.0]))
@settings(max_examples=60, deadline=None)
def test_broken_lines_read_back(element, room):
    formula = FormulaWriter(RING, SPELLING, room).polynomial("", element)
    assert same_value(read(formula.body), tree_of(RING, element))
    assert formula.width <= max(room, 14.0)  # below that, a function of one angle may be too wide


@given(elements(largest=3), elements(largest=3), st.sampled_from([6.0, 8.0, 11.0, 14.0, 40.0]))
@settings(max_examples=40, deadline=None)
def test_a_quotient_reads_back_as_fraction_and_in_lines(top, bottom, room):
    assume(bottom)
    formula = FormulaWriter(RING, SPELLING, room).ratio("G", top, bottom)
    meant = Quotient(tree_of(RING, top), tree_of(RING, bottom))
    assert same_value(read(formula.body), meant)
    assert same_value(read(formula.whole), meant)
    assert formula.width <= max(room, 14.0)


@given(elements(), st.sampled_from([">", ">=", "<", "<=", "=", "!="]))
@settings(max_examples=60, deadline=None)
def test_a_condition_reads_back_and_is_equivalent(element, relation):
    found = condition(WRITER, element, relation)
    top, bottom = found.difference
    sides = Sum((read(found.left), Product((Number(-1), read(found.right)))))
    assert same_value(sides, Quotient(tree_of(RING, top), tree_of(RING, bottom)))
    # The element is the difference times something of known sign, which tells whether the relation is turned.
    if element and top:
        common = element.gcd(top)
        over = factored_sign(RING, (element // common) * (top // common) * bottom)
        if found.relation in ("=", "!="):
            assert found.relation == relation and over.is_nonzero
        else:
            assert over is (Sign.POSITIVE if found.relation == relation else Sign.NEGATIVE)
    else:
        assert not element and not top


@given(elements(largest=9))
@settings(max_examples=150, deadline=None)
def test_every_shape_multiplies_out_to_the_element(element):
    shapes = WRITER.trees.shapes
    for shape in (shapes.polynomial(element), shapes.drawn(element), shapes.shortest(element)):
        assert multiplied_out(RING, shape) == element
    product = shapes.factored(element)
    assert product is None or multiplied_out(RING, product) == element


@given(elements(largest=9))
@settings(max_examples=100, deadline=None)
def test_the_width_of_a_shape_is_that_of_its_text(element):
    shapes = WRITER.trees.shapes
    for shape in (shapes.polynomial(element), shapes.shortest(element)):
        written = WRITER.writer.signed(WRITER.writer.write(shape_tree(RING, shape)))
        # Multiplication dots and thin spaces between factors are not foreseen.
        assert shapes.widths.width(shape) == pytest.approx(written[1], rel=0.2, abs=1.5)


@given(st.data())
@settings(max_examples=80, deadline=None)
def test_trees_as_written_read_back(data):
    names = st.sampled_from([Name(name) for name in (*SPELLINGS, "s", "pi")])
    numbers = st.sampled_from(
        ["0", "1", "-1", "2", "-7", "1.5", "-0.00025", "3/7", "-1/3", "1e-5", "10000000"]
    )
    leaves = st.one_of(names, numbers.map(lambda text: Number(Fraction(text))))

    def grown(inner):
        pairs = st.tuples(inner, inner)
        return st.one_of(
            st.lists(inner, min_size=2, max_size=3).map(lambda parts: Sum(tuple(parts))),
            st.lists(inner, min_size=2, max_size=4).map(lambda parts: Product(tuple(parts))),
            pairs.map(lambda pair: Quotient(*pair)),
            st.tuples(inner, st.sampled_from([2, 3, -1, -2])).map(lambda pair: Power(*pair)),
        )

    tree = data.draw(st.recursive(leaves, grown, max_leaves=8))
    ring = Ring("s", (*SPELLINGS, "pi"))
    try:
        value = Converter(ring).convert(tree)
    except InputError:
        assume(False)  # divides by zero
    assume(_height_of_powers(tree) <= 8)  # the reader's cap is 60, with the power of 10^{7} counted
    back = Converter(ring).convert(read(WRITER.writer.text(tree)))
    assert (back.numerator, back.denominator) == (value.numerator, value.denominator)


def _height_of_powers(node: Node) -> int:
    """The largest product of exponents on one way down a tree."""
    below = max(map(_height_of_powers, children(node)), default=1)
    return below * abs(node.exponent) if isinstance(node, Power) else below


FUNCTION_TREES = {
    r"k \sin^{2}(\alpha) s": Product((Name("k"), Power(Call("sin", Name("al")), 2), Name("s"))),
    r"\sin \alpha \cos \alpha": Product((Call("sin", Name("al")), Call("cos", Name("al")))),
    r"\tan(2 \alpha)": Call("tan", Product((Number(2), Name("al")))),
    r"\ln k \arctan\left(\frac{k}{\alpha}\right)": Product(
        (Call("log", Name("k")), Call("atan", Quotient(Name("k"), Name("al"))))
    ),
    r"e^{-k \alpha}": Call("exp", Product((Number(-1), Name("k"), Name("al")))),
    r"e^{-k/\alpha} \sinh \alpha": Product(
        (Call("exp", Quotient(Product((Number(-1), Name("k"))), Name("al"))), Call("sinh", Name("al")))
    ),
    r"\sqrt{\frac{k}{\alpha}} s": Product((Call("sqrt", Quotient(Name("k"), Name("al"))), Name("s"))),
    r"k \cdot \left(\tanh \alpha\right)^{-1}": Product((Name("k"), Power(Call("tanh", Name("al")), -1))),
    r"\left(e^{k}\right)^{2}": Power(Call("exp", Name("k")), 2),
    r"\cos(-\alpha)": Call("cos", Product((Number(-1), Name("al")))),
    r"\exp\left(\frac{k}{\alpha + 1}\right)": Call("exp", Quotient(Name("k"), Sum((Name("al"), Number(1))))),
}


@pytest.mark.parametrize("latex", FUNCTION_TREES)
def test_functions_are_written_as_they_are_set(latex):
    spelling = Spelling.of("s", {"k": "k", "al": r"\alpha"})
    tree = FUNCTION_TREES[latex]
    assert node_latex(tree, spelling) == latex
    back = read_latex(latex, spelling.inverse)
    setting = build_ring("s", ("k", "al"), {"one": tree, "two": back}, Box({"k": POSITIVE, "al": POSITIVE}))
    converter = setting.converter()
    one, two = converter.convert(tree), converter.convert(back)
    assert setting.ring.is_zero(one.numerator * two.denominator - two.numerator * one.denominator)
