"""Whole commands against the bare import of SymPy: what a user waits for, imports included."""

from __future__ import annotations

import statistics
import subprocess
import sys
import time
from pathlib import Path
from typing import Any

import pytest
from ratios import Ratios, Rival

ROOT = Path(__file__).parents[2]
EXAMPLES = sorted((ROOT / "examples").glob("*.toml"))
SYMPLANT = [sys.executable, "-m", "symplant.cli.main"]
BARE = [sys.executable, "-c", "import sympy"]


def run(command: list[str]) -> None:
    subprocess.run(command, cwd=ROOT, check=True, stdout=subprocess.DEVNULL, timeout=120)


def against_import(benchmark: Any, ratios: Ratios, name: str, command: list[str], rounds: int) -> None:
    """Alternating runs of a command and of `import sympy`, medians of both."""
    bare: list[float] = []

    def import_sympy() -> None:
        start = time.perf_counter()
        run(BARE)
        bare.append(time.perf_counter() - start)

    run(command)  # byte code is compiled, files are in memory
    benchmark.pedantic(run, args=(command,), setup=import_sympy, rounds=rounds)
    if benchmark.stats:
        ours = benchmark.stats.stats.median
        ratios.add(f"symplant {name}", None, ours, 'python -c "import sympy"', Rival(statistics.median(bare)))


def test_help(benchmark: Any, ratios: Ratios) -> None:
    against_import(benchmark, ratios, "--help", [*SYMPLANT, "--help"], 7)


def test_derive_of_four_states(benchmark: Any, ratios: Ratios) -> None:
    plant = ROOT / "examples" / "grinding_circuit.toml"
    against_import(benchmark, ratios, f"derive {plant.name}", [*SYMPLANT, "derive", str(plant)], 7)


@pytest.mark.parametrize("plant", EXAMPLES, ids=lambda path: path.stem)
def test_report(benchmark: Any, ratios: Ratios, tmp_path: Path, plant: Path) -> None:
    command = [*SYMPLANT, "report", str(plant), "--output", str(tmp_path)]
    # Fewer rounds: each sets a whole document.
    against_import(benchmark, ratios, f"report {plant.name}", command, 3)
