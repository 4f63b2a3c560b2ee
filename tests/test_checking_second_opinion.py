"""SciPy's second opinion: right polynomials agree, wrong ones are refuted, and no process stays behind."""

from __future__ import annotations

import os
import signal
import subprocess
import sys
import textwrap
import time
from collections.abc import Iterator
from dataclasses import replace
from fractions import Fraction
from pathlib import Path
from typing import Any

import pytest

from symplant.algebra.verdict import Check, Verdict
from symplant.checking.eigenvalues import Problem, Spectrum, answer, read_answer, request_text
from symplant.checking.nominal import nominal_values
from symplant.checking.root_agreement import agreement
from symplant.checking.second_opinion import Request, SecondOpinion, second_opinion_request
from symplant.derivation.derive import derive
from symplant.plant.model import Model
from symplant.plant.parameter import Parameter
from symplant.reading.arguments import model_from_arguments

ROOT = Path(__file__).resolve().parents[1]


@pytest.fixture(scope="module")
def opinion() -> Iterator[SecondOpinion]:
    with SecondOpinion() as asked:
        yield asked


def crane(**given: Any) -> Model:
    parameters: dict[str, Any] = {
        "m": {"nominal": 120, "range": [80, 200]},
        "k": {"sign": "positive", "nominal": 96000},
        "c": {"sign": "positive", "nominal": "0.75"},
    }
    parameters.update(given)
    A = [[0, 1, 0], ["-k/m", "-c/m", "1/m"], [0, 0, 0]]
    return model_from_arguments(A, [[0], [0], [1]], [[1, 0, 0]], parameters=parameters)


def checked(model: Model, opinion: SecondOpinion) -> dict[str, Check]:
    opinion.ask(second_opinion_request(derive(model)))
    return {check.what: check for check in opinion.checks()}


def spectrum(A: list[list[float]], E: list[list[float]] | None = None) -> Spectrum:
    (found,) = read_answer(answer(request_text([Problem(A, E)])))
    return found


def polynomial(*coefficients: float | str) -> list[Fraction]:
    return [Fraction(value) for value in coefficients]


def test_poles_and_zeros_agree_and_say_how_well(opinion: SecondOpinion) -> None:
    checks = checked(crane(), opinion)
    assert {check.verdict for check in checks.values()} == {Verdict.AGREES}
    poles, zeros = checks["characteristic polynomial"], checks["zero polynomial"]
    assert "SciPy" in poles.method and "tolerance 1e-09" in poles.method
    assert poles.detail.startswith("largest deviation ") and "3 roots (1 of them zero)" in poles.detail
    assert "4 more eigenvalues at infinity" in zeros.detail
    assert "nominal value" not in poles.detail


def test_plants_that_are_not_square_get_no_check_of_zeros(opinion: SecondOpinion) -> None:
    model = model_from_arguments([["-a"]], [["b", "c"]], [[1]])
    assert list(checked(model, opinion)) == ["characteristic polynomial"]


def test_a_singular_pencil_of_zeros_gets_no_check(opinion: SecondOpinion) -> None:
    model = model_from_arguments([["-a", 0], [0, "-b"]], [[1], [0]], [[0, 1]])
    assert list(checked(model, opinion)) == ["characteristic polynomial"]


def test_singular_descriptors_have_eigenvalues_at_infinity(opinion: SecondOpinion) -> None:
    E = [["L", 0, 0], [0, 0, "M"], [0, 0, 0]]
    A = [["-R", 1, 0], [0, 1, 0], [0, 0, 1]]
    model = model_from_arguments(A, [[1], [1], [1]], [[1, 1, 0]], None, E)
    checks = checked(model, opinion)
    assert {check.verdict for check in checks.values()} == {Verdict.AGREES}
    assert "2 more eigenvalues at infinity" in checks["characteristic polynomial"].detail


@pytest.mark.parametrize("entry", ["-sqrt(k/m)", "-sin(k) - exp(m)", "-pi*k/m"])
def test_functions_at_nominal_values(entry: str, opinion: SecondOpinion) -> None:
    model = model_from_arguments([[entry, 1], ["k", -1]], [[1], [0]], [[1, "m"]])
    assert {check.verdict for check in checked(model, opinion).values()} == {Verdict.AGREES}


# Values


def test_missing_nominal_values_are_told(opinion: SecondOpinion) -> None:
    model = crane(m={"range": [80, 200]}, c={"sign": "negative"})
    checks = checked(model, opinion)
    expected = "without nominal value: m taken as 140, c taken as -3/7"
    assert checks["characteristic polynomial"].detail.endswith(expected)
    assert checks["zero polynomial"].detail.endswith("; at the same values")


@pytest.mark.parametrize(
    ("given", "expected"),
    [
        ({}, "3/7"),
        ({"sign": "negative"}, "-3/7"),
        ({"range": [1, 2]}, "3/2"),
        ({"range": [-1, 1], "sign": "nonzero"}, "1/2"),
        ({"nominal": "0.1"}, "1/10"),
    ],
)
def test_values_taken(given: dict[str, Any], expected: str) -> None:
    model = model_from_arguments([["-a"]], [[1]], [[1]], parameters={"a": given})
    values, note = nominal_values(model)
    assert values == {"a": Fraction(expected)}
    assert model.box.contains(values)
    assert note == ("" if "nominal" in given else f"a has no nominal value: taken as {expected}")


@pytest.mark.parametrize(
    ("bounds", "expected"), [((10, None), "73/7"), ((None, -10), "-73/7"), ((-10, None), "-67/7")]
)
def test_values_taken_beside_one_bound(bounds: tuple[int | None, int | None], expected: str) -> None:
    lower, upper = (None if bound is None else Fraction(bound) for bound in bounds)
    model = model_from_arguments([["-a"]], [[1]], [[1]])
    model = replace(model, parameters=(Parameter("a", lower=lower, upper=upper),))
    assert nominal_values(model)[0] == {"a": Fraction(expected)}


def test_stand_ins_differ_from_each_other() -> None:
    letters = [f"a{i}" for i in range(60)]
    model = model_from_arguments([["+".join(letters)]], [[1]], [[1]])
    assert len(set(nominal_values(model)[0].values())) == 60


def test_stand_ins_that_divide_by_zero_are_exchanged(opinion: SecondOpinion) -> None:
    model = model_from_arguments([["-1/(a - 3/7)"]], [[1]], [[1]])
    checks = checked(model, opinion)
    assert checks["characteristic polynomial"].verdict is Verdict.AGREES
    assert "taken as 19/7" in checks["characteristic polynomial"].detail


def test_nominal_values_that_divide_by_zero_are_undecided(opinion: SecondOpinion) -> None:
    model = model_from_arguments([["-1/(a - 2)"]], [[1]], [[1]], parameters={"a": {"nominal": 2}})
    check = checked(model, opinion)["characteristic polynomial"]
    assert check.verdict is Verdict.UNDECIDED and "not defined" in check.detail


def test_values_beyond_double_precision_are_undecided(opinion: SecondOpinion) -> None:
    model = model_from_arguments([["-a"]], [[1]], [[1]], parameters={"a": {"nominal": "1e390"}})
    check = checked(model, opinion)["characteristic polynomial"]
    assert check.verdict is Verdict.UNDECIDED and "double precision" in check.detail


def test_a_polynomial_that_vanishes_at_nominal_values_is_undecided(opinion: SecondOpinion) -> None:
    model = model_from_arguments(
        [["a", 0], [0, 1]], [[1], [1]], [[1, 0]], None, [["a", 0], [0, 1]], parameters={"a": {"nominal": 0}}
    )
    check = checked(model, opinion)["characteristic polynomial"]
    assert check.verdict is Verdict.UNDECIDED and "vanishes" in check.detail


# Wrong polynomials


def tampered(model: Model, what: str, change: Any, opinion: SecondOpinion) -> Check:
    request = second_opinion_request(derive(model))
    questions = tuple(
        replace(q, coefficients=tuple(change(list(q.coefficients))))
        for q in request.questions
        if q.what == what
    )
    assert questions
    opinion.ask(Request(questions))
    (check,) = opinion.checks()
    return check


@pytest.mark.parametrize("index", [1, 2, 3])
def test_a_wrong_sign_is_refuted(index: int, opinion: SecondOpinion) -> None:
    def change(coefficients: list[Fraction]) -> list[Fraction]:
        coefficients[index] = -coefficients[index]
        return coefficients

    check = tampered(crane(), "characteristic polynomial", change, opinion)
    assert check.verdict is Verdict.REFUTED and "SciPy" in check.detail


def test_a_wrong_number_is_refuted(opinion: SecondOpinion) -> None:
    def change(coefficients: list[Fraction]) -> list[Fraction]:
        return [coefficients[0], coefficients[1] * Fraction(1001, 1000), *coefficients[2:]]

    assert tampered(crane(), "characteristic polynomial", change, opinion).verdict is Verdict.REFUTED


def test_a_wrong_degree_is_refuted(opinion: SecondOpinion) -> None:
    poles = "characteristic polynomial"
    assert tampered(crane(), poles, lambda c: c[:-1], opinion).verdict is Verdict.REFUTED
    assert tampered(crane(), poles, lambda c: [Fraction(0), *c[:-1]], opinion).verdict is Verdict.REFUTED
    model = model_from_arguments([["-a", 1], [0, "-b"]], [[1], [1]], [[1, 1]])
    assert tampered(model, "zero polynomial", lambda c: c[:1], opinion).verdict is Verdict.REFUTED
    assert (
        tampered(model, "zero polynomial", lambda c: [Fraction(0), c[1]], opinion).verdict is Verdict.REFUTED
    )


# Numbers that double precision finds hard


def test_multiple_roots_agree() -> None:
    n = 7
    A = [[-1.0 if i == j else 1.0 if j == i + 1 else 0.0 for j in range(n)] for i in range(n)]
    A[n - 1][0] = 0.0
    verdict, _ = agreement(polynomial(1, 7, 21, 35, 35, 21, 7, 1), spectrum(A))
    assert verdict is Verdict.AGREES


def test_companion_matrix_of_a_multiple_root_agrees() -> None:
    # Eigenvalues near -1 spread by a hundredth; their products do not.
    coefficients = polynomial(1, 6, 15, 20, 15, 6, 1)
    A = [[0.0] * 6 for _ in range(6)]
    for i in range(5):
        A[i][i + 1] = 1.0
    A[5] = [float(-value) for value in coefficients[:-1]]
    found = spectrum(A)
    assert max(abs(alpha + 1) for alpha, _ in found.runs[0]) > 1e-4
    assert agreement(coefficients, found)[0] is Verdict.AGREES


def test_double_roots_at_zero_agree_beside_fast_modes() -> None:
    A = [[0.0, 1.0, 0.0, 0.0], [0.0, 0.0, 1e6, 0.0], [0.0, 0.0, 0.0, 1.0], [0.0, 0.0, -1e8, -3.0]]
    verdict, detail = agreement(polynomial(0, 0, "1e8", 3, 1), spectrum(A))
    assert verdict is Verdict.AGREES and "2 of them zero" in detail


def test_roots_of_very_different_size_agree() -> None:
    A = [[-1e-5, 0.0, 0.0], [0.0, -1.0, 0.0], [3.0, 2.0, -1e6]]
    roots = [Fraction("1e-5"), Fraction(1), Fraction(10**6)]
    coefficients = polynomial(1)
    for root in roots:
        moved = [Fraction(0), *coefficients]
        coefficients = [root * a + b for a, b in zip([*coefficients, Fraction(0)], moved, strict=True)]
    assert agreement(coefficients, spectrum(A))[0] is Verdict.AGREES
    wrong = [coefficients[0] * 2, *coefficients[1:]]
    assert agreement(wrong, spectrum(A))[0] is Verdict.REFUTED


def test_rounding_is_not_taken_for_an_error() -> None:
    pairs = tuple((complex(x), 1 + 0j) for x in (-1.0, -2.0))
    nearby = tuple((complex(x), 1 + 0j) for x in (-1.0 - 1e-4, -2.0))
    verdict, detail = agreement(polynomial(2 - 1e-5, 3, 1), Spectrum((pairs, nearby)))
    assert verdict is Verdict.UNDECIDED and "ill-conditioned" in detail


def test_eigenvalues_that_are_no_numbers_are_undecided() -> None:
    found = spectrum([[0.0, 0.0], [0.0, 1.0]], [[0.0, 0.0], [0.0, 1.0]])
    assert agreement(polynomial(-1, 1), found)[0] is Verdict.UNDECIDED


def test_an_entry_that_is_no_number_is_answered_with_the_reason() -> None:
    (found,) = read_answer(answer("1 inf"))
    assert "beyond the range" in found.trouble
    assert agreement(polynomial(1, 1), found) == (Verdict.UNDECIDED, found.trouble)


def test_floats_travel_unchanged() -> None:
    numbers = [[0.1, 1e-300], [1.7976931348623157e308, -5e-324]]
    size, *entries = request_text([Problem(numbers, None)]).split()
    assert size == "2" and [float(x) for x in entries] == [x for row in numbers for x in row]


# The process on the side: every test in a fresh interpreter, where NumPy is not loaded yet


def run(program: str) -> str:
    environment = {**os.environ, "PYTHONPATH": str(ROOT)}
    done = subprocess.run(
        [sys.executable, "-c", PRELUDE + textwrap.dedent(program)],
        capture_output=True,
        text=True,
        env=environment,
        timeout=120,
        check=False,
    )
    assert done.stderr == ""
    return done.stdout


PRELUDE = """
import os, sys, signal, time, threading
from symplant.checking.second_opinion import SecondOpinion, second_opinion_request
from symplant.derivation.derive import derive
from symplant.reading.arguments import model_from_arguments

def plant():
    return model_from_arguments([["-a", 1], [0, "-b"]], [[0], [1]], [[1, 0]])

def children():
    return [pid for pid in map(int, filter(str.isdigit, os.listdir("/proc"))) if parent(pid) == os.getpid()]

def parent(pid):
    try:
        with open(f"/proc/{pid}/stat") as stat:
            return int(stat.read().rpartition(")")[2].split()[1])
    except OSError:
        return 0
"""

linux = pytest.mark.usefixtures("_needs_proc")


@pytest.fixture
def _needs_proc() -> None:
    assert Path("/proc/self/stat").exists(), "these tests look into /proc"


@linux
def test_the_work_is_done_in_another_process_that_is_gone_afterwards() -> None:
    told = run(
        """
        with SecondOpinion() as opinion:
            assert len(children()) == 1
            opinion.ask(second_opinion_request(derive(plant())))
            print(*(check.verdict for check in opinion.checks()))
            print(*(check.verdict for check in opinion.checks()))
        assert children() == []
        print("numpy" in sys.modules, "sympy" in sys.modules)
        opinion.close()
        opinion.ask(second_opinion_request(derive(plant())))
        print(*(check.verdict for check in opinion.checks()))  # in this process now
        """
    )
    assert told.split() == ["agrees"] * 4 + ["False", "False"] + ["agrees"] * 2


@linux
def test_an_exception_leaves_no_process_behind() -> None:
    told = run(
        """
        try:
            with SecondOpinion():
                raise KeyboardInterrupt
        except KeyboardInterrupt:
            print(children())
        SecondOpinion().start()  # dropped without being closed
        print(children())
        opinion = SecondOpinion().start()  # closed by the interpreter's end
        print(opinion._process.pid)
        """
    )
    *lists, pid = told.split()
    assert lists == ["[]", "[]"]
    assert not Path(f"/proc/{pid}").exists()


@linux
def test_a_child_that_was_killed_is_told_of() -> None:
    told = run(
        """
        with SecondOpinion() as opinion:
            os.kill(opinion._process.pid, signal.SIGKILL)
            opinion.ask(second_opinion_request(derive(plant())))
            for check in opinion.checks():
                print(check.verdict, "SciPy gave no answer" in check.detail)
        """
    )
    assert told.split() == ["undecided", "True"] * 2


@linux
@pytest.mark.parametrize("delay", [0.0, 1.5])
def test_the_child_ends_when_its_parent_is_killed(delay: float) -> None:
    environment = {**os.environ, "PYTHONPATH": str(ROOT)}
    # Another child holds the pipe open: the end of the pipe alone would not be noticed.
    program = """
opinion = SecondOpinion().start()
other = os.fork()
if other == 0:
    time.sleep(30)
    os._exit(0)
print(opinion._process.pid, other, flush=True)
time.sleep(30)
"""
    parent = subprocess.Popen(
        [sys.executable, "-c", PRELUDE + program], stdout=subprocess.PIPE, text=True, env=environment
    )
    assert parent.stdout is not None
    pid, other = map(int, parent.stdout.readline().split())
    time.sleep(delay)
    parent.kill()
    parent.wait()
    parent.stdout.close()
    limit = time.monotonic() + 20
    while _runs(pid) and time.monotonic() < limit:
        time.sleep(0.05)
    gone = not _runs(pid)
    os.kill(other, signal.SIGKILL)
    assert gone


def _runs(pid: int) -> bool:
    try:
        state = Path(f"/proc/{pid}/stat").read_text().rpartition(")")[2].split()[0]
    except OSError:
        return False
    return state != "Z"


@linux
def test_the_child_is_in_the_group_of_its_parent() -> None:
    told = run(
        """
        with SecondOpinion() as opinion:
            print(os.getpgid(opinion._process.pid) == os.getpgid(0))
        """
    )
    assert told.split() == ["True"]


@linux
@pytest.mark.parametrize(
    "setting",
    [
        "threading.Thread(target=time.sleep, args=(5,), daemon=True).start()",
        "del os.fork",
        "import numpy",
        "os.close(0)",
    ],
)
def test_where_forking_is_not_safe_the_work_is_done_here(setting: str) -> None:
    told = run(
        f"""
        {setting}
        with SecondOpinion() as opinion:
            print(children())
            opinion.ask(second_opinion_request(derive(plant())))
            print(*(check.verdict for check in opinion.checks()))
        """
    )
    assert told.split() == ["[]", "agrees", "agrees"]


def test_large_requests_pass_through_the_pipe() -> None:
    told = run(
        """
        from symplant.checking.eigenvalues import Problem, read_answer, request_text
        from symplant.checking.numerical_process import NumericalProcess
        n = 120
        A = [[(i + 1) / 7 if i == j else 0.0 for j in range(n)] for i in range(n)]
        text = request_text([Problem(A, None), Problem(A, A)])
        process = NumericalProcess()
        first, second = read_answer(process.ask(text))
        process.close()
        print(len(text) > 150000, len(first.runs[0]), len(second.runs[1]))
        """
    )
    assert told.split() == ["True", "120", "120"]
