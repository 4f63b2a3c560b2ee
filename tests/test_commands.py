"""The command line as a user meets it: answers, faults, exit statuses, what is loaded."""

from __future__ import annotations

import json
import subprocess
import sys
from itertools import product
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parent.parent
HOSE = "examples/hose_tester.toml"

GOOD = """
format = 1
states = ["x", "v"]
inputs = ["F"]
outputs = ["y"]
[parameters]
m = { sign = "positive" }
k = { sign = "positive" }
[matrices]
A = [["0", "1"], ["-k/m", "0"]]
B = [["0"], ["1/m"]]
C = [["1", "0"]]
"""


def run(*arguments, cwd=ROOT, **options):
    return subprocess.run(
        [sys.executable, "-m", "symplant.cli.main", *map(str, arguments)],
        capture_output=True,
        text=True,
        encoding="utf-8",
        cwd=cwd,
        check=False,
        timeout=120,
        **options,
    )


def plant(tmp_path, text):
    path = tmp_path / "plant.toml"
    path.write_text(text, encoding="utf-8")
    return path


@pytest.mark.parametrize("command", ["derive", "stability"])
def test_json_is_all_there_is_on_standard_output(command):
    done = run(command, HOSE, "--json")
    assert done.returncode == 0 and done.stderr == ""
    assert json.loads(done.stdout)["command"] == command


def test_two_runs_print_the_same_bytes():
    assert run("derive", HOSE, "--json").stdout == run("derive", HOSE, "--json").stdout


@pytest.mark.parametrize("command", ["derive", "stability"])
def test_latex_is_a_fragment(command):
    done = run(command, HOSE, "--latex")
    assert done.returncode == 0 and r"\begin{" in done.stdout and r"\documentclass" not in done.stdout


def test_intervals_of_one_parameter():
    answer = json.loads(run("stability", HOSE, "--along", "K_p", "--json").stdout)
    assert answer["along"] == "K_p" and {i["verdict"] for i in answer["intervals"]} >= {"stable", "unstable"}


def test_set_and_along_name_their_faults_together():
    done = run("stability", HOSE, "--along", "Kp", "--set", "tua=1", "--set", "h=fast")
    assert done.returncode == 2
    for part in ("--along", "'K_p'", "--set", "'tau'", "'fast' is not a number"):
        assert part in done.stderr


def test_help_and_version_load_no_algebra():
    code = (
        "import sys, symplant.cli.main; "
        "bad = {'sympy', 'numpy', 'scipy', 'flint', 'rich', 'jinja2'} & set(sys.modules); sys.exit(bool(bad))"
    )
    assert subprocess.run([sys.executable, "-c", code], check=False).returncode == 0
    assert "derive" in run("--help").stdout
    assert run("--version").stdout.startswith("symplant ")


# Each fault of an input, with its place and a word of the reason.
FAULTS = {
    "undeclared letter": ("-k/m", "-k/mm", "matrices.A[2][1], column 4", "undeclared letter 'mm'"),
    "ragged": ('["-k/m", "0"]', '["-k/m"]', "matrices.A[2]", "row of 1"),
    "wrong shape": ('C = [["1", "0"]]', 'C = [["1"]]', "matrices.C", "1 x 2 is needed"),
    "unknown key": ("[matrices]", "[matrices]\nF = 1", "matrices.F", "unknown key"),
    "bad TOML": ("[matrices]", "[matrices", "line", ""),
    "range ends swapped": (
        'k = { sign = "positive" }',
        "k = { range = [3, 1] }",
        "parameters.k.range",
        "above",
    ),
    "nominal outside": (
        'k = { sign = "positive" }',
        "k = { range = [1, 3], nominal = 4 }",
        "parameters.k.nominal",
        "outside",
    ),
    "named like the variable": ('k = { sign = "positive" }', "k = {}\ns = {}", "parameters.s", "variable"),
    "division by zero": ("-k/m", "-k/(m - m)", "matrices.A[2][1], column 3", "identically zero"),
    "attribute": ("-k/m", "-k.real", "matrices.A[2][1], column", ""),
    "call": ("-k/m", "__import__('os')", "matrices.A[2][1], column", ""),
    "tower of powers": ("-k/m", "k**9**9**9", "matrices.A[2][1], column", ""),
    "LaTeX macro": ("-k/m", r"\\frak{k}", "matrices.A[2][1], column", r"\frak"),
    "LaTeX bracket": ("-k/m", r"\\frac{k}{m", "matrices.A[2][1], column", ""),
}


@pytest.mark.parametrize("name", FAULTS)
def test_bad_input_is_named_with_its_place(name, tmp_path):
    old, new, place, reason = FAULTS[name]
    assert old in GOOD
    path = plant(tmp_path, GOOD.replace(old, new))
    done = run("derive", path)
    assert done.returncode == 2 and done.stdout == ""
    assert place in done.stderr and reason in done.stderr and "Traceback" not in done.stderr
    answer = json.loads(run("derive", path, "--json").stdout)
    assert any(place.split(",")[0] in f"{fault['place']} {fault['file']}" for fault in answer["faults"])


@pytest.mark.parametrize("name", ["undeclared letter", "division by zero"])
def test_bad_input_writes_nothing(name, tmp_path):
    old, new, place, _ = FAULTS[name]
    out = tmp_path / "out"
    done = run("report", plant(tmp_path, GOOD.replace(old, new)), "-o", out)
    assert done.returncode == 2 and place in done.stderr and not out.exists()
    assert [item.name for item in tmp_path.iterdir()] == ["plant.toml"]


def test_a_report_on_a_file_is_a_fault(tmp_path):
    done = run("report", plant(tmp_path, GOOD), "-o", tmp_path / "plant.toml")
    assert done.returncode == 2 and "plant.toml" in done.stderr and done.stdout == ""
    assert (tmp_path / "plant.toml").read_text(encoding="utf-8") == GOOD


@pytest.mark.parametrize("data", [b"\x00\x01\x02", b"\xff\xfe\x00A", b"\x89PNG\r\n\x1a\n" * 50])
def test_a_binary_file_is_a_fault(data, tmp_path):
    path = tmp_path / "plant.toml"
    path.write_bytes(data)
    done = run("derive", path)
    assert done.returncode == 2 and "Traceback" not in done.stderr and done.stdout == ""


def test_a_missing_file_is_a_fault(tmp_path):
    done = run("derive", tmp_path / "nowhere.toml")
    assert done.returncode == 2 and "nowhere.toml" in done.stderr


def test_a_singular_pencil_is_a_clear_fault(tmp_path):
    text = GOOD.replace("[matrices]", '[matrices]\nE = [["1", "0"], ["1", "0"]]').replace(
        '["-k/m", "0"]]', '["0", "1"]]'
    )
    done = run("derive", plant(tmp_path, text))
    assert done.returncode == 2 and "singular for every s" in done.stderr


LETTERS = {
    "E": None,
    "I": None,
    "S": None,
    "N": None,
    "beta": None,
    "gamma": None,
    "lambda": None,
    "I_xx": "I_{xx}",
    "K_t": r"K_{\mathrm{t}}",
    "D_prime": "D'",
    "phi_dot": r"\dot{\phi}",
}


@pytest.mark.parametrize("name", LETTERS)
@pytest.mark.parametrize("as_latex", [False, True])
def test_letters_of_any_name(name, as_latex, tmp_path):
    from symplant.reading.latex import default_spelling

    spelling = LETTERS[name] or default_spelling(name)
    entry = rf"-\frac{{{spelling}}}{{m}}" if as_latex else f"-{name}/m"
    text = GOOD.replace('"-k/m"', f"'''{entry}'''").replace(
        'k = { sign = "positive" }', f"{name} = {{ latex = '''{spelling}''' }}"
    )
    done = run("derive", plant(tmp_path, text), "--json")
    assert done.returncode == 0, done.stderr
    answer = json.loads(done.stdout)
    assert answer["characteristic_polynomial"]["expression"] == f"m*s**2 + {name}"
    assert answer["characteristic_polynomial"]["latex"] == f"m s^{{2}} + {spelling}"


def test_a_budget_keeps_what_was_finished(tmp_path):
    # A dense matrix of letters: its characteristic polynomial has millions of terms.
    n = 11
    rows = [[f"a{i}_{j}" for j in range(n)] for i in range(n)]
    letters = "\n".join(f"a{i}_{j} = {{}}" for i, j in product(range(n), repeat=2))
    text = "format = 1\n[parameters]\n" + letters + "\n[matrices]\n"
    text += f"A = {json.dumps(rows)}\nB = {json.dumps([['1']] * n)}\nC = {json.dumps([['1'] * n])}\n"
    done = run("derive", plant(tmp_path, text), "--max-seconds", "2")
    assert done.returncode == 3
    assert "time budget" in done.stderr and "not finished" in done.stderr and "Traceback" not in done.stderr
    done = run("derive", plant(tmp_path, text), "--max-seconds", "2", "--json")
    answer = json.loads(done.stdout)
    assert done.returncode == 3 and "the characteristic polynomial" in answer["stopped"]["unfinished"]
