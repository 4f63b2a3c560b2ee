"""The machine answers of `zeros` and `hidden` on every example and published plant: shape and sense."""

from __future__ import annotations

import importlib.util
import json
import re
from pathlib import Path

import pytest
import sympy

from symplant import Plant

ROOT = Path(__file__).resolve().parent.parent
PLANTS = sorted((ROOT / "examples").glob("*.toml")) + sorted((ROOT / "tests/cases").glob("*.toml"))

# The reader of EXPR and the checks that all answers share stand beside the first two commands.
_spec = importlib.util.spec_from_file_location("contract", ROOT / "tests/test_contract.py")
contract = importlib.util.module_from_spec(_spec)
_spec.loader.exec_module(contract)


class Reader(contract.Reader):
    """Reads numbers as exact ones: in Python 1/6 would be a float."""

    def __init__(self, answer):
        super().__init__(answer)
        self.functions["Integer"] = sympy.Integer

    def __call__(self, text):
        return super().__call__(re.sub(r"(?<![\w.])(\d+)(?![\w.])", r"Integer(\1)", text))


EVENTS = {
    "crosses at origin",
    "crosses on imaginary axis",
    "crosses at z = 1",
    "crosses at z = -1",
    "crosses on unit circle",
    "goes to infinity",
    "zeros meet",
    "cancels a pole",
}
KINDS = {"uncontrollable", "unobservable", "both"}


def plants():
    return pytest.mark.parametrize("path", PLANTS, ids=[path.stem for path in PLANTS])


def load(path):
    """A plant with its first letter that has a nominal value, or its first letter, or None."""
    plant = Plant.from_file(path)
    letters = [p.name for p in plant.model.parameters if p.nominal is not None] or list(plant.model.letters)
    return plant, letters[0] if letters else None


def is_zero(expression):
    """Whether an expression vanishes: exactly where it is rational, else at points to many digits."""
    together = sympy.together(expression)
    numerator = sympy.expand(sympy.numer(together))
    if numerator == 0:
        return True
    if not numerator.has(sympy.sqrt(sympy.Symbol("x")).func) and not numerator.atoms(
        sympy.Function, sympy.Pow
    ):
        return False
    names = sorted(numerator.free_symbols, key=str)
    for start in (3, 11):
        point = {name: sympy.Rational(start + 7 * i, 5 + i) for i, name in enumerate(names)}
        value = numerator.subs(point)
        size = sum(abs(sympy.N(term.subs(point), 60)) for term in sympy.Add.make_args(numerator))
        if abs(sympy.N(value, 60)) > sympy.Float("1e-40", 60) * (size + 1):
            return False
    return True


def is_number(value):
    if isinstance(value, dict):
        return set(value) == {"lower", "upper"} and float(value["lower"]) <= float(value["upper"])
    return isinstance(sympy.Rational(value), sympy.Rational)


@plants()
def test_zeros_follow_the_contract(path):
    plant, letter = load(path)
    answer = json.loads(plant.zeros(along=letter).to_json())
    contract.check_head(answer, "zeros")
    contract.check_checks(answer)
    read = Reader(answer)
    s = sympy.Symbol(answer["plant"]["variable"])
    whole = contract.check_polynomial(answer["zero_polynomial"], read)
    check_closed_forms(answer, read, whole, s)
    check_phase(answer["minimum_phase"], read)
    check_directions(answer, read)
    check_influence(answer, read, whole, s)
    if letter is not None:
        check_along(answer["along"], letter, read, s)


def check_closed_forms(answer, read, whole, s):
    covered = 0
    for form in answer["closed_forms"]:
        assert form["multiplicity"] >= 1
        assert form["when"] is None or read(form["when"]).free_symbols
        assert is_zero(whole.subs(s, read(form["zero"])))
        covered += form["multiplicity"]
    rest = sum(f["degree"] * f["multiplicity"] for f in answer["factors"] if not f["closed"])
    degree = sympy.Poly(whole, s).degree() if whole != 0 else 0
    assert covered + rest == max(degree, 0)


def check_phase(phase, read):
    assert phase["verdict"] in contract.VERDICTS
    for condition in phase["conditions"]:
        assert condition["status"] in contract.STATUSES and condition["relation"] == ">"
        read(condition["expression"])
    for crossing in phase["crossings"]:
        assert crossing["at"] in contract.CROSSINGS
        read(crossing["expression"])
    assert set(phase["witnesses"]) == {"stable", "unstable"}


def check_directions(answer, read):
    n, m = len(answer["plant"]["states"]), len(answer["plant"]["inputs"])
    for direction in answer["directions"]:
        assert direction["verdict"] == "proved"
        assert (len(direction["state"]), len(direction["input"])) == (n, m)
        entries = [read(text) for text in (*direction["state"], *direction["input"])]
        assert any(entry != 0 for entry in entries)
        read(direction["zero"])


def check_influence(answer, read, whole, s):
    names = [p["name"] for p in answer["plant"]["parameters"]]
    assert [row["parameter"] for row in answer["influence"]] == names
    monic = sympy.Poly(sympy.cancel(whole / sympy.LC(whole, s)), s) if whole != 0 else None
    for row in answer["influence"]:
        assert all(isinstance(row[key], bool) for key in ("moves_zeros", "moves_poles", "scales_gain"))
        if monic is not None:
            slopes = [sympy.diff(c, sympy.Symbol(row["parameter"])) for c in monic.all_coeffs()]
            assert row["moves_zeros"] == any(not is_zero(slope) for slope in slopes)
    for group in answer["groups"].values():
        for text in (*group["through"], *group["ratios"]):
            read(text)


def check_along(along, letter, read, s):
    assert along["parameter"] == letter
    p = sympy.Symbol(letter)
    for event in along["events"]:
        assert event["event"] in EVENTS
        equation = read(event["equation"])
        assert p in equation.free_symbols
        for text in event["values"]:
            assert is_zero(equation.subs(p, read(text)))
        assert all(is_number(found["value"]) for found in event["nominal"])
    for finding in along["sensitivities"]:
        factor = read(finding["factor"])
        slope = -sympy.diff(factor, p) / sympy.diff(factor, s)
        assert is_zero(read(finding["derivative"]) - slope)
        assert is_zero(read(finding["relative"]) - slope * p / s)
        for at in finding["nominal"]:
            assert is_number(at["zero"]["real"]) and is_number(at["zero"]["imaginary"])
    for limit in along["limits"]:
        assert limit["at"] in ("0", "infinity") and limit["count"] >= 1
        for text in limit["leading"]:
            read(text)


@plants()
def test_hidden_modes_follow_the_contract(path):
    plant, _ = load(path)
    answer = json.loads(plant.hidden().to_json())
    contract.check_head(answer, "hidden")
    contract.check_checks(answer)
    read = Reader(answer)
    found = {
        name: contract.check_polynomial(answer[name], read)
        for name in ("input_decoupling", "output_decoupling", "invariant", "transmission", "system_poles")
    }
    m, p = len(answer["plant"]["inputs"]), len(answer["plant"]["outputs"])
    assert 0 <= answer["normal_rank"] <= answer["full_rank"] == min(m, p)
    s = sympy.Symbol(answer["plant"]["variable"])
    for name in ("input_decoupling", "output_decoupling"):
        assert s not in sympy.denom(sympy.cancel(found["system_poles"] / found[name])).free_symbols
    assert s not in sympy.denom(sympy.cancel(found["invariant"] / found["transmission"])).free_symbols
    always = [case for case in answer["cases"] if case["always"]]
    hides = any(found[name].has(s) for name in ("input_decoupling", "output_decoupling"))
    assert bool(always) == hides
    for case in answer["cases"]:
        check_case(case, found["system_poles"], read, s)


def check_case(case, poles, read, s):
    assert case["kind"] in KINDS and case["verdict"] in contract.VERDICTS
    assert case["inside_box"] in ("proved", "refuted", "undecided")
    conditions = [read(text) for text in case["conditions"]]
    assert case["condition"] == (case["conditions"][0] if conditions else "0")
    assert case["always"] == (not conditions)
    if case["verdict"] != "stable" and case["inside_box"] != "refuted":
        assert case["warning"]
    else:
        assert case["warning"] is None
    if case["hidden_factor"] is None:
        return
    factor = read(case["hidden_factor"])
    assert factor.has(s)
    for channel in case["reduced"]:
        assert read(channel["denominator"]) != 0
        read(channel["numerator"])
    check_root(factor, poles, conditions, case["solved"], read, s)


def check_root(factor, poles, conditions, solved, read, s):
    """The hidden mode is a mode: where the conditions hold, its factor divides det(sE - A)."""
    values = {read(row["of"]): read(row["value"]) for row in solved}
    if len(values) != len(conditions):
        return
    for of, value in values.items():
        poles, factor = (x.subs(of, value) for x in (poles, factor))
    assert is_zero(sympy.rem(sympy.Poly(poles, s), sympy.Poly(factor, s)).as_expr())
