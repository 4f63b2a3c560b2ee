"""The README's commands, outputs and Python example, as a new user would run them."""

from __future__ import annotations

import contextlib
import io
import re
import subprocess
import sys
import tomllib
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parent.parent
README = (ROOT / "README.md").read_text(encoding="utf-8")
CONSOLE = re.findall(r"```console\n\$ symplant ([^\n]*)\n(.*?)```", README, re.S)
PYTHON = re.findall(r"```python\n(.*?)```", README, re.S)


def run(*arguments: str) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [sys.executable, "-m", "symplant.cli.main", *arguments],
        capture_output=True,
        text=True,
        encoding="utf-8",
        cwd=ROOT,
        check=False,
    )


def test_the_readme_shows_commands():
    assert len(CONSOLE) >= 3 and PYTHON


@pytest.mark.parametrize(("command", "expected"), CONSOLE, ids=[command for command, _ in CONSOLE])
def test_console_blocks_show_the_real_output(command, expected):
    done = run(*command.split())
    assert (done.stdout + done.stderr).rstrip("\n") == expected.rstrip("\n")
    assert "Traceback" not in done.stderr


@pytest.mark.parametrize("code", PYTHON)
def test_python_blocks_print_what_their_comments_say(code):
    expected = re.findall(r"^print\(.*\)\s*# (.*)$", code, re.M)
    printed = io.StringIO()
    with contextlib.redirect_stdout(printed):
        exec(compile(code, "README.md", "exec"), {})
    assert expected and printed.getvalue().splitlines() == expected


def test_the_report_command_of_the_readme(tmp_path):
    (command,) = re.findall(r"^ +python3 -m venv .*\.venv/bin/symplant (report .*)$", README, re.M)
    arguments = command.split()
    arguments[arguments.index("-o") + 1] = str(tmp_path / "out")
    done = run(*arguments)
    assert done.returncode == 0, done.stderr
    assert (tmp_path / "out" / "report.tex").read_text(encoding="utf-8").startswith("%")


def test_plant_snippets_are_those_of_the_example():
    example = tomllib.loads((ROOT / "examples/harvester_bucking.toml").read_text(encoding="utf-8"))
    snippets = re.findall(r"```toml\n(.*?)```", README, re.S)
    matrices = tomllib.loads(next(text for text in snippets if "C_h" in text))
    for name, rows in matrices.items():
        assert rows == example["matrices"][name]
