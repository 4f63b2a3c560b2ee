"""The house rules that a reader cannot see from one file alone: layers, sizes, names, what is loaded when."""

from __future__ import annotations

import ast
import json
import subprocess
import sys
from collections.abc import Iterator
from pathlib import Path

import pytest

import symplant

ROOT = Path(symplant.__file__).parent
MODULES = sorted(ROOT.rglob("*.py"))
#: From the ground up; a module may import from its own layer and from those before it.
LAYERS = ("errors", "algebra", "plant", "reading", "derivation", "checking", "writing", "face", "cli")
#: The version is a bare string, and the package itself hands out names lazily.
OUTSIDE = ("version", "__init__")
EXAMPLES = ROOT.parent / "examples"


def name_of(path: Path) -> str:
    return str(path.relative_to(ROOT).with_suffix(""))


def layer_of(path: Path) -> str:
    return path.relative_to(ROOT).with_suffix("").parts[0]


def imports(tree: ast.AST, package: tuple[str, ...]) -> Iterator[tuple[int, str]]:
    """Line and absolute name of every module that a file imports, in functions and under conditions too."""
    for node in ast.walk(tree):
        if isinstance(node, ast.Import):
            yield from ((node.lineno, alias.name) for alias in node.names)
        elif isinstance(node, ast.ImportFrom):
            base = package[: len(package) - node.level + 1] if node.level else ()
            stem = ".".join([*base, *([node.module] if node.module else [])])
            # `from symplant import errors` imports a module as well.
            yield from ((node.lineno, f"{stem}.{alias.name}") for alias in node.names)


def parsed(path: Path) -> ast.Module:
    return ast.parse(path.read_text(encoding="utf-8"), str(path))


@pytest.mark.parametrize("path", MODULES, ids=name_of)
def test_imports_point_downward(path: Path) -> None:
    layer = layer_of(path)
    if layer in OUTSIDE:
        return
    assert layer in LAYERS, f"{path} is in no known layer"
    allowed = {*LAYERS[: LAYERS.index(layer) + 1], "version"}
    package = ("symplant", *path.relative_to(ROOT).parent.parts)
    for line, name in imports(parsed(path), package):
        parts = name.split(".")
        if parts[0] != "symplant":
            continue
        # Plain `import symplant` would reach every layer through its lazy names.
        assert len(parts) > 1 and parts[1] in allowed, f"{path}:{line} imports {name}"


def test_the_import_check_sees_every_form() -> None:
    text = "import a.b\nfrom symplant.cli import x\nfrom . import y\nfrom ..plant.model import z\n"
    text += "def f():\n    from symplant import face\n"
    found = {name for _, name in imports(ast.parse(text), ("symplant", "algebra"))}
    expected = {"a.b", "symplant.cli.x", "symplant.algebra.y", "symplant.plant.model.z", "symplant.face"}
    assert found == expected


@pytest.mark.parametrize("path", MODULES, ids=name_of)
def test_modules_are_small_and_named_for_what_they_do(path: Path) -> None:
    assert path.stem.strip("_") not in {"util", "utils", "helper", "helpers", "misc", "common", "tools"}
    assert len(path.read_text(encoding="utf-8").splitlines()) <= 400


#: Python's ways to run a text as a program, and SymPy's ways to read a text, which do.
PYTHON_RUNS = {"eval", "exec", "compile", "__import__"}
SYMPY_RUNS = {"sympify", "parse_expr", "parse_latex", "S"}
RUNNING = PYTHON_RUNS | SYMPY_RUNS


def calls(tree: ast.AST) -> Iterator[tuple[int, str]]:
    """Line and name of the calls that could run text; methods such as re.compile do not."""
    for node in ast.walk(tree):
        if not isinstance(node, ast.Call):
            continue
        match node.func:
            case ast.Name(id=name) | ast.Attribute(value=ast.Name(id="builtins"), attr=name):
                yield node.lineno, name
            case ast.Attribute(attr=name) if name in SYMPY_RUNS:
                yield node.lineno, name


@pytest.mark.parametrize("path", MODULES, ids=name_of)
def test_no_text_is_ever_run(path: Path) -> None:
    tree = parsed(path)
    for line, name in calls(tree):
        assert name not in RUNNING, f"{path}:{line} calls {name}"
    for node in ast.walk(tree):
        if isinstance(node, ast.ImportFrom):
            assert not RUNNING & {alias.name for alias in node.names}, f"{path}:{node.lineno}"


@pytest.mark.parametrize("text", ["eval(x)", "builtins.exec(x)", "sympy.sympify(x)", "S(x)", "sympy.S(x)"])
def test_the_check_for_running_text_sees_every_form(text: str) -> None:
    assert [name in RUNNING for _, name in calls(ast.parse(text))] == [True]
    assert not list(calls(ast.parse("re.compile(x); model.eval(x)")))


def loaded_after(code: str, *arguments: str) -> set[str]:
    """Top-level packages in a fresh interpreter after some code."""
    report = "\nimport json, sys\nprint(json.dumps(sorted({name.partition('.')[0] for name in sys.modules})))"
    done = subprocess.run(
        [sys.executable, "-c", code + report, *arguments],
        capture_output=True,
        text=True,
        check=True,
        cwd=ROOT.parent,
        timeout=60,
    )
    return set(json.loads(done.stdout.splitlines()[-1]))


HEAVY = {"sympy", "scipy", "numpy", "latex2sympy2", "antlr4", "matplotlib", "jinja2", "z3", "flint", "rich"}


def test_importing_the_package_loads_nothing_heavy() -> None:
    assert not loaded_after("import symplant; symplant.__version__; symplant.InputError") & HEAVY


DERIVE = """
import sys
from symplant.reading.plant_file import read_plant_file
from symplant.derivation.derive import derive
derive(read_plant_file(sys.argv[1]))
"""


@pytest.mark.parametrize("path", sorted(EXAMPLES.glob("*.toml")), ids=lambda path: path.stem)
def test_reading_and_deriving_need_no_computer_algebra_system(path: Path) -> None:
    loaded = loaded_after(DERIVE, str(path))
    assert "flint" in loaded
    assert not loaded & (HEAVY - {"flint"})


def test_help_loads_nothing_heavy() -> None:
    code = "import sys; sys.argv[1:] = ['--help']\nfrom symplant.cli.main import main\n"
    code += "try:\n    main()\nexcept SystemExit:\n    pass\n"
    assert not loaded_after(code) & HEAVY
