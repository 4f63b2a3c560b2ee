"""Factors multiply to the element, whatever the length of the coefficients."""

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from symplant.algebra.factors import factors
from symplant.algebra.ring import Ring

RING = Ring("s", ("a", "b"))


@st.composite
def products(draw):
    total = RING.constant(draw(st.integers(1, 9)))
    long = st.integers(-(2**70), 2**70)
    for _ in range(draw(st.integers(1, 3))):
        exponents = st.tuples(*[st.integers(0, 2)] * 3)
        terms = draw(st.dictionaries(exponents, st.one_of(st.integers(-9, 9), long), min_size=1, max_size=3))
        part = RING.element(("s", "a", "b"), terms)
        total = total * (part if part else RING.one) ** draw(st.integers(1, 2))
    return total


@given(products())
@settings(max_examples=200, deadline=None)
def test_factors_multiply_to_the_element_and_are_irreducible(element):
    content, found = factors(element)
    product = RING.constant(content)
    for factor, exponent in found:
        product = product * factor**exponent
        assert exponent > 0 and abs(int(factor.primitive()[0])) == 1
        assert factors(factor) in ((1, [(factor, 1)]), (-1, [(-factor, 1)]))
    assert product == element
    assert len({str(factor) for factor, _ in found}) == len(found)


def test_coefficients_of_more_than_32_bits_in_factors_that_begin_alike():
    a, b = RING.gen("a"), RING.gen("b")
    element = (2**40 * a + b + 1) * ((2**40 + 1) * a + b)
    content, found = factors(element)
    assert content == 1 and {str(factor) for factor, _ in found} == {
        "1099511627776*a + b + 1",
        "1099511627777*a + b",
    }


def test_zero_has_no_factors():
    with pytest.raises(ValueError, match="zero"):
        factors(RING.zero)
