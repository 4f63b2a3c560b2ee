"""The machine answers on every example and every published plant: shape, sense and checks."""

from __future__ import annotations

import json
from fractions import Fraction
from pathlib import Path

import pytest
import sympy

from symplant import Plant

ROOT = Path(__file__).resolve().parent.parent
PLANTS = sorted((ROOT / "examples").glob("*.toml")) + sorted((ROOT / "tests/cases").glob("*.toml"))
STATUSES = {"required", "always", "never", "implied", "undecided"}
VERDICTS = {"stable", "unstable", "marginal", "conditional", "undecided"}
CROSSINGS = {"origin", "imaginary pair", "infinity", "unit circle"}


def plants():
    return pytest.mark.parametrize("path", PLANTS, ids=[path.stem for path in PLANTS])


class Reader:
    """Reads EXPR of the contract with SymPy, every name a plain symbol."""

    def __init__(self, answer):
        names = [p["name"] for p in answer["plant"]["parameters"]] + [answer["plant"]["variable"]]
        # `lambda` is a legal letter, but no name in Python: it is renamed before SymPy sees it.
        self.renamed = {"lambda": "lambda_"}
        self.locals = {self.renamed.get(n, n): sympy.Symbol(n) for n in names} | {"pi": sympy.pi}
        self.functions = {
            n: getattr(sympy, n)
            for n in ("sin", "cos", "tan", "exp", "log", "sqrt", "sinh", "cosh", "tanh", "atan")
        }

    def __call__(self, text):
        from tokenize import NAME, OP, generate_tokens, untokenize

        tokens = []
        for token in generate_tokens(iter([text]).__next__):
            name = self.renamed.get(token.string, token.string)
            if token.type == NAME:
                assert name in self.locals or name in self.functions, f"unknown name {name}"
            tokens.append((token.type, name))
            assert token.type != OP or token.string in {"+", "-", "*", "/", "**", "(", ")"}
        code = compile(untokenize(tokens).strip(), "EXPR", "eval")
        value = eval(code, {"__builtins__": {}}, {**self.locals, **self.functions})
        return sympy.sympify(value)


def check_polynomial(poly, read):
    assert set(poly) >= {"variable", "coefficients", "expression", "factored", "latex"}
    s = sympy.Symbol(poly["variable"])
    whole = sum(read(c) * s**i for i, c in enumerate(poly["coefficients"]))
    assert sympy.expand(read(poly["expression"]) - whole) == 0
    assert sympy.expand(read(poly["factored"]) - whole) == 0
    assert poly["latex"] and not any(s in read(c).free_symbols for c in poly["coefficients"])
    return whole


def check_head(answer, command):
    assert answer["format"] == 1 and answer["command"] == command
    plant = answer["plant"]
    assert set(plant) >= {"title", "time", "variable", "states", "inputs", "outputs", "parameters"}
    assert plant["variable"] == {"continuous": "s", "discrete": "z"}[plant["time"]]


def check_checks(answer):
    assert answer["checks"]
    for check in answer["checks"]:
        assert set(check) == {"what", "method", "verdict", "detail"}
        assert check["verdict"] in ("proved", "agrees"), check


@plants()
def test_derive_follows_the_contract(path):
    answer = json.loads(Plant.from_file(path).derive().to_json())
    check_head(answer, "derive")
    read = Reader(answer)
    characteristic = check_polynomial(answer["characteristic_polynomial"], read)
    s = sympy.Symbol(answer["plant"]["variable"])
    pairs = {(c["output"], c["input"]) for c in answer["channels"]}
    assert pairs == {(y, u) for y in answer["plant"]["outputs"] for u in answer["plant"]["inputs"]}
    for channel in answer["channels"]:
        above = check_polynomial(channel["numerator"], read)
        below = check_polynomial(channel["denominator"], read)
        factor = check_polynomial(channel["common_factor"], read)
        # One nonzero multiplier free of s: denominator over characteristic polynomial does not know s.
        assert s not in sympy.cancel(below / characteristic).free_symbols
        for whole in (above, below):
            assert s not in sympy.denom(sympy.cancel(whole / factor)).free_symbols
        degrees = [sympy.Poly(x, s).degree() for x in (below, above)]
        assert channel["relative_degree"] == (None if above == 0 else degrees[0] - degrees[1])
    square = len(answer["plant"]["inputs"]) == len(answer["plant"]["outputs"])
    if square:
        check_polynomial(answer["zero_polynomial"], read)
    else:
        assert answer["zero_polynomial"] is None and answer["zero_polynomial_note"]
    for text in answer["assumed_nonzero"]:
        assert read(text).free_symbols
    check_checks(answer)


@plants()
def test_stability_follows_the_contract(path):
    answer = json.loads(Plant.from_file(path).stability().to_json())
    check_head(answer, "stability")
    read = Reader(answer)
    assert answer["verdict"] in VERDICTS
    for condition in answer["conditions"]:
        assert set(condition) >= {"expression", "relation", "latex", "status", "because"}
        assert condition["relation"] == ">" and condition["status"] in STATUSES and condition["because"]
        read(condition["expression"])
    for crossing in answer["crossings"]:
        assert crossing["at"] in CROSSINGS
        read(crossing["expression"])
        if crossing["frequency_squared"] is not None:
            read(crossing["frequency_squared"])
    assert set(answer["witnesses"]) == {"stable", "unstable"}
    check_witnesses(answer, read)
    check_checks(answer)


def check_witnesses(answer, read):
    """Witnesses lie in the box and show what they are said to show."""
    needed = [c for c in answer["conditions"] if c["status"] in ("required", "undecided")]
    ranges = {p["name"]: p["range"] for p in answer["plant"]["parameters"]}
    for side, point in answer["witnesses"].items():
        if point is None:
            continue
        values = {sympy.Symbol(name): read(value) for name, value in point.items()}
        for name, value in point.items():
            if ranges[name] is not None:
                low, high = map(Fraction, ranges[name])
                assert low <= Fraction(value) <= high
        met = [bool(sympy.sympify(read(c["expression"]).subs(values)) > 0) for c in needed]
        if side == "stable":
            assert all(met) and answer["verdict"] in ("stable", "conditional", "undecided")
    if answer["verdict"] == "conditional":
        assert answer["witnesses"]["stable"] and answer["witnesses"]["unstable"]
