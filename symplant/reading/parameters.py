"""The table of parameters: what is declared of every letter, and whether it holds together."""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction

from symplant.algebra.box import Interval, Sign
from symplant.plant.parameter import Parameter
from symplant.reading.fault_list import FaultList
from symplant.reading.identifiers import name_trouble, reserved_trouble
from symplant.reading.quantities import NumberError, exact_number, number_text, rational_text
from symplant.reading.suggestions import did_you_mean, listed, quoted
from symplant.reading.tables import check_keys, key_place, kind_of, text_field
from symplant.reading.tokens import normal_form

__all__ = ["PARAMETER_KEYS", "SIGN_WORDS", "read_parameters"]

PARAMETER_KEYS = ("sign", "latex", "unit", "nominal", "range", "about")
#: The words for signs.  A letter that is always zero is no parameter.
SIGN_WORDS = tuple(sign.value for sign in Sign if sign is not Sign.ZERO)


def read_parameters(
    raw: object, variable: str, faults: FaultList, elsewhere: Mapping[str, str] | None = None
) -> tuple[Parameter, ...]:
    """The parameters of a table, in its order; faults at "parameters.NAME.KEY".

    `variable` is that of the polynomials (empty if not known), which no letter may be called;
    `elsewhere` tells where keys belong that are no parameters.  A parameter with a fault is still
    declared, so that no entry is blamed for using it.

    >>> faults = FaultList()
    >>> read_parameters({"m": {"range": [80, 200]}}, "s", faults)[0].upper
    Fraction(200, 1)
    """
    if not isinstance(raw, Mapping):
        faults.add("parameters", f"{kind_of(raw)} where a table is expected", "write [parameters]")
        return ()
    parameters: dict[str, Parameter] = {}
    for key, table in raw.items():
        place, name = key_place("parameters", key), normal_form(str(key))
        trouble = name_trouble(name) or reserved_trouble(name, variable)
        if trouble:
            faults.add(place, *trouble)
        elif name in parameters:
            faults.add(
                place, f"{quoted(name)} is declared twice", "Python takes the two spellings for one name"
            )
        if isinstance(table, Mapping):
            parameters[name] = _read_one(name, table, place, faults)
        else:
            hint = (elsewhere or {}).get(str(key)) or _as_table(table)
            faults.add(place, f"{kind_of(table)} where a table is expected", hint)
            parameters[name] = Parameter(name)
    return tuple(parameters.values())


def _as_table(value: object) -> str:
    if isinstance(value, str):
        key = "sign" if value in SIGN_WORDS else "about"
        return f"write {{ {key} = ... }}"
    return "write { range = [..., ...] }" if isinstance(value, list) else "write { nominal = ... }"


def _read_one(name: str, table: Mapping[str, object], place: str, faults: FaultList) -> Parameter:
    check_keys(table, PARAMETER_KEYS, place, faults)
    sign = _sign(table, place, faults)
    nominal = _number(table["nominal"], f"{place}.nominal", faults) if "nominal" in table else None
    lower, upper = _range(table["range"], f"{place}.range", faults) if "range" in table else (None, None)
    parameter = Parameter(
        name,
        latex=text_field(table, "latex", place, faults),
        unit=text_field(table, "unit", place, faults),
        nominal=nominal,
        lower=lower,
        upper=upper,
        sign=sign,
        about=text_field(table, "about", place, faults),
    )
    _check_values(parameter, place, faults)
    return parameter


def _sign(table: Mapping[str, object], place: str, faults: FaultList) -> Sign:
    if "sign" not in table:
        return Sign.REAL
    word = table["sign"]
    if isinstance(word, str) and word in SIGN_WORDS:
        return Sign(word)
    hint = did_you_mean(word, SIGN_WORDS) if isinstance(word, str) else ""
    reason = (
        f"unknown sign {quoted(word)}"
        if isinstance(word, str)
        else f"{kind_of(word)} where a word is expected"
    )
    faults.add(f"{place}.sign", reason, hint or f"signs are {listed(SIGN_WORDS, 'and')}")
    return Sign.REAL


def _number(value: object, place: str, faults: FaultList) -> Fraction | None:
    try:
        return rational_text(value) if isinstance(value, str) else exact_number(value)
    except NumberError as error:
        faults.add(place, str(error), error.suggestion)
        return None


def _range(value: object, place: str, faults: FaultList) -> tuple[Fraction | None, Fraction | None]:
    if not isinstance(value, list | tuple):
        faults.add(place, f"{kind_of(value)} where two numbers are expected", "write [lower, upper]")
        return None, None
    if len(value) != 2:
        count = f"{len(value)} number{'' if len(value) == 1 else 's'}"
        faults.add(
            place,
            f"{count} where two are expected",
            "write [lower, upper]; leave the range out if it is open",
        )
        return None, None
    ends = [_number(end, f"{place}[{i}]", faults) for i, end in enumerate(value, start=1)]
    lower, upper = ends
    if lower is None or upper is None:
        return None, None
    if lower > upper:
        low, high = number_text(upper), number_text(lower)
        faults.add(place, f"lower end {high} is above upper end {low}", f"write [{low}, {high}]")
        return None, None
    return lower, upper


def _check_values(parameter: Parameter, place: str, faults: FaultList) -> None:
    """Notes where nominal value, range and sign contradict each other."""
    sign, nominal, lower, upper = parameter.sign, parameter.nominal, parameter.lower, parameter.upper
    word = f"a {sign.value} parameter"
    if nominal is not None and not Interval(declared=sign).contains(nominal):
        faults.add(f"{place}.nominal", f"{number_text(nominal)} cannot be the value of {word}")
    if lower is None or upper is None:
        return
    range_text = f"[{number_text(lower)}, {number_text(upper)}]"
    if nominal is not None and not lower <= nominal <= upper:
        faults.add(f"{place}.nominal", f"{number_text(nominal)} lies outside the range {range_text}")
    # An end at zero of a positive letter is meant as an open end; beyond zero it contradicts the sign.
    beyond = (sign.is_nonnegative and lower < 0) or (sign.is_nonpositive and upper > 0)
    if beyond or (lower == upper == 0 and sign.is_nonzero) or _misses(sign, lower, upper):
        faults.add(f"{place}.range", f"{range_text} holds values that {word} cannot take")


def _misses(sign: Sign, lower: Fraction, upper: Fraction) -> bool:
    return (sign is Sign.POSITIVE and upper <= 0) or (sign is Sign.NEGATIVE and lower >= 0)
