"""`symplant zeros` and `symplant hidden` as a user meets them: pages, LaTeX, faults, budgets, the face."""

from __future__ import annotations

import json
import os
import re
import subprocess
import sys
from dataclasses import replace
from itertools import product
from pathlib import Path

import pytest
import sympy

from symplant import CheckError, InputError, Plant
from symplant.writing.formula import FormulaWriter
from symplant.writing.hidden_fragment import hidden_fragment
from symplant.writing.zeros_fragment import zeros_fragment

ROOT = Path(__file__).resolve().parent.parent
EXAMPLES = sorted((ROOT / "examples").glob("*.toml"))
HAY, MILL = ROOT / "examples/hay_dryer.toml", ROOT / "examples/grinding_circuit.toml"
CASES = sorted((ROOT / "tests/cases").glob("*.toml"))


def run(*arguments, **options):
    return subprocess.run(
        [sys.executable, "-m", "symplant.cli.main", *map(str, arguments)],
        capture_output=True,
        text=True,
        encoding="utf-8",
        cwd=ROOT,
        check=False,
        timeout=120,
        **options,
    )


def terminal_value(text, names):
    """A formula of a page as SymPy reads it: one line, products by spaces, powers raised."""
    raised = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁻", "0123456789-")
    text = re.sub(r"[⁰¹²³⁴⁵⁶⁷⁸⁹⁻]+", lambda m: f"**({m.group().translate(raised)})", text.replace("−", "-"))
    text = re.sub(r"(?<=[\w)]) (?=[\w(])", "*", text)
    greek = {"μ": "mu", "η": "eta", "φ": "phi", "τ": "tau", "κ": "kappa", "σ": "sigma", "λ": "lamda"}
    for sign, name in greek.items():
        text = text.replace(sign, name)
    return sympy.sympify(text, locals={name: sympy.Symbol(name) for name in names})


def line_after(page, head):
    """What stands behind `head` on the first line of a page that begins so."""
    return next(line.strip()[len(head) :] for line in page.splitlines() if line.strip().startswith(head))


@pytest.mark.parametrize("command", ["zeros", "hidden"])
def test_json_is_all_there_is_on_standard_output(command):
    done = run(command, HAY, "--json")
    assert done.returncode == 0 and done.stderr == ""
    assert json.loads(done.stdout)["command"] == command


@pytest.mark.parametrize("command", ["zeros", "hidden"])
def test_latex_is_a_fragment(command):
    done = run(command, MILL, "--latex")
    assert done.returncode == 0 and r"\begin{equation" in done.stdout and r"\documentclass" not in done.stdout


def test_the_page_of_the_zeros_says_what_is_so():
    page = run("zeros", HAY, "--output", "h", "--input", "q", "--along", "c").stdout
    names = ["s", "d", "c", "phi", "mu", "tau", "eta"]
    s, d, c, phi, mu, eta = (sympy.Symbol(x) for x in ("s", "d", "c", "phi", "mu", "eta"))
    share = phi**2 + (1 - phi) ** 2
    printed = terminal_value(line_after(page, "Z(s) = "), names)
    assert sympy.expand(printed + eta * mu * (share * (s + d) - eta * c)) == 0
    zero = sympy.solve(printed, s)[0]
    assert sympy.simplify(zero - (eta * c / share - d)) == 0
    assert "a zero crosses the origin" in page and "a zero cancels a pole" in page
    assert re.search(r"the zero moves to the right as c grows, for every admissible value", page)
    # At nominal: d = 0.02, eta = 10.8, phi = 1/2: the zero crosses the origin at c = d/(2 eta).
    assert "at nominal:  c = 1/1080 ≈ 0.000925926, inside its range" in page


def test_the_free_response_shows_the_hidden_mode():
    page = run("hidden", HAY).stdout
    assert page.startswith("WARNING:") and "2 φ − 1 = 0" in page.splitlines()[0]
    names = ["s", "d", "c", "phi", "mu", "tau", "eta"]
    s, d, c, eta = (sympy.Symbol(x) for x in ("s", "d", "c", "eta"))
    mode = terminal_value(line_after(page, "0 = "), names)
    assert sympy.expand(mode - (s + d - 2 * eta * c)) == 0
    assert sympy.expand(terminal_value(line_after(page, "D = "), names) - mode * (s + d)) == 0
    plant = Plant.from_file(HAY)
    result = plant.hidden()
    (case,) = [case for case in result.cases if case.warning]
    assert (case.kind, case.verdict, case.inside_box) == ("uncontrollable", "conditional", "proved")
    assert case.visible_in == ["w_1"] and case.conditions == ["2*phi - 1"]
    # What is seen there is stable for every value: neither denominator shows the mode.
    for _, denominator in case.reduced.values():
        roots = sympy.roots(denominator.sympy(), plant.symbols["s"])
        assert roots and all(root.is_negative for root in roots)


def test_the_hidden_mode_is_uncontrollable_there_in_numbers():
    plant = Plant.from_file(HAY)
    values = {p.name: p.nominal for p in plant.model.parameters}
    assert values["phi"] == sympy.Rational(1, 2)
    d, eta, c, tau, mu = (sympy.Rational(values[x]) for x in ("d", "eta", "c", "tau", "mu"))
    A = sympy.Matrix(
        [[eta * c - d, -eta * c, 0], [-eta * c, eta * c - d, 0], [mu / tau / 2, mu / tau / 2, -1 / tau]]
    )
    B = sympy.Matrix([-eta / 2, -eta / 2, 0])
    mode = 2 * eta * c - d
    assert mode > 0 and (A - mode * sympy.eye(3)).row_join(B).rank() == 2
    assert (A - mode * sympy.eye(3)).col_join(sympy.Matrix([[1, 0, 0]])).rank() == 3


def test_the_free_response_is_that_of_the_matrices():
    answer = Plant.from_file(HAY).hidden().answer()
    s, d, c, phi, mu, tau, eta = sympy.symbols("s d c phi mu tau eta")
    names = {str(x): x for x in (s, d, c, phi, mu, tau, eta)}
    A = sympy.Matrix(
        [
            [eta * c - d, -eta * c, 0],
            [-eta * c, eta * c - d, 0],
            [mu * phi / tau, mu * (1 - phi) / tau, -1 / tau],
        ]
    )
    inverse = (s * sympy.eye(3) - A).inv()
    rows = {"h": inverse[2, :], "w_1": inverse[0, :]}
    assert [response["output"] for response in answer["free_response"]] == ["h", "w_1"]
    for response in answer["free_response"]:
        below = sympy.sympify(response["denominator"], locals=names)
        for state, part in zip(("w_1", "w_2", "h"), rows[response["output"]], strict=True):
            above = sympy.sympify(response["numerators"][state], locals=names)
            assert sympy.simplify(above / below - part) == 0


def test_cases_that_cannot_happen_stand_apart():
    page = run("hidden", MILL).stdout
    inside, outside = page.split("Outside the signs and ranges declared")
    assert "a = 0" in inside and "k = 0" in outside and "κ = 0" not in inside


def test_plain_ascii_where_the_terminal_has_no_more():
    for command in ("zeros", "hidden"):
        done = run(command, HAY, env=os.environ | {"PYTHONIOENCODING": "ascii"})
        assert done.returncode == 0 and done.stdout.isascii()


def test_unknown_names_are_told_together():
    done = run("zeros", HAY, "--along", "etta", "--output", "w1", "--input", "u")
    assert done.returncode == 2 and done.stdout == ""
    for part in ("--along", "'eta'?", "--output", "'w_1'?", "--input", "no input is called 'u'"):
        assert part in done.stderr
    answer = json.loads(run("zeros", HAY, "--along", "etta", "--json").stdout)
    assert [fault["place"] for fault in answer["faults"]] == ["--along"]


@pytest.mark.parametrize("names", [{"along": "x"}, {"output": "x"}, {"input": "x"}])
def test_the_face_refuses_unknown_names(names):
    with pytest.raises(InputError, match=rf"{next(iter(names))}.*is called 'x'"):
        Plant.from_file(HAY).zeros(**names)


def test_one_output_with_all_inputs():
    answer = json.loads(Plant.from_file(MILL).zeros(output="w").to_json())
    assert answer["zero_polynomial_is"] == "invariant zeros" and answer["output"] == "w"
    assert Plant.from_file(MILL).zeros(output="w", input="f").answer()["zero_polynomial_is"] == "numerator"


def test_a_channel_that_is_identically_zero():
    plant = Plant([["-a", "0"], ["0", "-b"]], [["1"], ["0"]], [["0", "1"]], parameters={"a": {}, "b": {}})
    result = plant.zeros(along="a")
    assert result.minimum_phase.verdict == "undecided" and "identically zero" in result.minimum_phase.because
    assert "every number is a zero" in str(result) and result.closed_forms == []
    assert json.loads(result.to_json())["zero_polynomial"]["expression"] == "0"
    assert "identically zero" in result.latex()


def test_a_plant_without_parameters():
    plant = Plant([["0", "1"], ["-2", "-3"]], [["0"], ["1"]], [["1", "1"]])
    result = plant.zeros()
    assert [str(zero) for zero in result.closed_forms] == ["-1"] and result.minimum_phase.verdict == "stable"
    (case,) = plant.hidden().cases
    assert case.condition == "0" and str(case.hidden_factor) == "s + 1" and case.verdict == "stable"


@pytest.mark.parametrize("path", [*EXAMPLES, *CASES], ids=lambda path: path.stem)
def test_every_formula_reads_back(path):
    plant = Plant.from_file(path)
    letter = plant.model.letters[0] if plant.model.letters else None
    zeros, hidden = plant.zeros(along=letter), plant.hidden()
    points = zeros._work.derived.substitution.points
    for fragment in (zeros_fragment(zeros._work.study), hidden_fragment(hidden._work.modes, plant.model)):
        for check in fragment.read_back(points):
            unread = (check.what, check.detail) in fragment.printer.unread
            assert str(check.verdict) in ("proved", "agrees") or unread, check
        # What no reader takes is named in the text itself, and only roots of negative numbers are.
        for what, why in fragment.printer.unread:
            assert f"% not read back: {what}: {why}" in fragment.text and "negative" in why


@pytest.mark.parametrize("method", ["factored", "tree"])
def test_a_misprint_is_refused(method, monkeypatch):
    honest = getattr(FormulaWriter, method)

    def misprinted(self, lhs, part):
        formula = honest(self, lhs, part)
        return replace(formula, lines=(formula.lines[0].replace("d", r"\eta", 1), *formula.lines[1:]))

    plant = Plant.from_file(HAY)
    results = {"factored": plant.hidden(), "tree": plant.zeros(output="h", input="q")}
    assert r"\begin{equation" in results[method].latex()
    monkeypatch.setattr(FormulaWriter, method, misprinted)
    with pytest.raises(CheckError):
        results[method].latex()


def test_sympy_on_demand():
    plant = Plant.from_file(MILL)
    result = plant.zeros()
    s = plant.symbols["s"]
    whole = result.zero_polynomial.sympy()
    for zero in result.closed_forms:
        assert sympy.simplify(whole.subs(s, zero.sympy())) == 0
    assert result.closed_forms[0].latex and result._repr_latex_().startswith("$")


def test_a_budget_keeps_what_was_finished(tmp_path):
    n = 11
    rows = [[f"a{i}_{j}" for j in range(n)] for i in range(n)]
    letters = "\n".join(f"a{i}_{j} = {{}}" for i, j in product(range(n), repeat=2))
    text = "format = 1\n[parameters]\n" + letters + "\n[matrices]\n"
    text += f"A = {json.dumps(rows)}\nB = {json.dumps([['1']] * n)}\nC = {json.dumps([['1'] * n])}\n"
    path = tmp_path / "plant.toml"
    path.write_text(text, encoding="utf-8")
    for command in ("zeros", "hidden"):
        done = run(command, path, "--max-seconds", "2", "--json")
        assert done.returncode == 3 and "Traceback" not in done.stderr
        unfinished = json.loads(done.stdout)["stopped"]["unfinished"]
        last = "the zero directions" if command == "zeros" else "conditions of the outputs"
        assert "the characteristic polynomial" in unfinished and last in unfinished
