"""Two letters: curves, cells and witnesses against eigenvalues, and the picture of them."""

from __future__ import annotations

import json
import subprocess
import sys
from fractions import Fraction
from pathlib import Path
from random import Random
from typing import Any

import numpy as np
import pytest

from symplant.derivation.stability import StabilityPlane, stability_plane
from symplant.errors import InputError
from symplant.plant.model import Model
from symplant.reading.arguments import model_from_arguments
from symplant.reading.plant_file import read_plant_file
from symplant.writing.plane_answer import plane_answer
from symplant.writing.plane_page import plane_page
from symplant.writing.plane_picture import SUFFIXES, plane_picture

ROOT = Path(__file__).resolve().parent.parent
HOSE = ROOT / "examples/hose_tester.toml"


def _plant(A: Any, parameters: Any, **more: Any) -> Model:
    n = len(A)
    return model_from_arguments(
        A, [["1"]] + [["0"]] * (n - 1), [["1"] + ["0"] * (n - 1)], parameters=parameters, **more
    )


PI_LOOP = _plant(
    [["0", "1", "0"], ["-(2 + K)", "-3", "KI"], ["-1", "0", "0"]],
    {"K": {"sign": "real"}, "KI": {"sign": "real"}},
    title="PI loop",
)


def _matches(plane: StabilityPlane, model: Model, entry: Any) -> None:
    """The conditions of the plane against eigenvalues at random points."""
    random = Random(11)
    for _ in range(300):
        point = {
            plane.across: Fraction(random.randint(-80, 80), 10),
            plane.up: Fraction(random.randint(-80, 80), 10),
        }
        poles = np.linalg.eigvals(np.array(entry(**{k: float(v) for k, v in point.items()})))
        margin = max(np.abs(poles)) - 1 if model.discrete else max(poles.real)
        if abs(margin) > 1e-6:
            assert (margin < 0) == all(plane.ring.value(c, point) > 0 for c in plane.conditions)


def test_curves_and_cells_of_a_loop() -> None:
    # Franklin, Powell, Emami-Naeini, Example 3.34: KI > 0 and K > KI/3 - 2.
    plane = stability_plane(PI_LOOP, "K", "KI")
    assert {c.at: str(c.element) for c in plane.curves} == {
        "origin": "KI",
        "imaginary pair": "3*K - KI + 6",
    }
    stable = [c.point for c in plane.cells if c.verdict == "stable"]
    assert stable and all(0 < p["KI"] < 3 * p["K"] + 6 for p in stable)
    _matches(plane, PI_LOOP, lambda K, KI: [[0, 1, 0], [-(2 + K), -3, KI], [-1, 0, 0]])


def test_cells_beside_functions_of_numbers() -> None:
    plane = stability_plane(read_plant_file(HOSE), "K_p", "K_i")
    (curve,) = plane.curves
    assert curve.detail == "complex pair" and "_exp" in str(curve.element)
    counts = {v: sum(c.verdict == v for c in plane.cells) for v in ("stable", "unstable", "axis")}
    assert counts["stable"] and counts["unstable"] and not counts["axis"]
    for cell in plane.cells:
        a, h, R = float(np.exp(-0.25)), 0.1, 0.9
        Kp, Ki = float(cell.point["K_p"]), float(cell.point["K_i"])
        poles = np.linalg.eigvals(np.array([[a, R * (1 - a), 0], [-Kp, 0, 1], [-Ki * h, 0, 1]]))
        assert (max(abs(poles)) < 1) == (cell.verdict == "stable")


def test_letters_inside_functions_have_curves_but_no_cells() -> None:
    plane = stability_plane(read_plant_file(HOSE), "K_p", "h")
    assert plane.curves and not plane.cells and "no cells" in plane.note
    assert "no cells" in plane_page(plane, read_plant_file(HOSE)).plain()


def test_an_undamped_plant_has_no_stable_point() -> None:
    model = _plant([["0", "1"], ["-k/m", "0"]], {"k": {"sign": "positive"}, "m": {"sign": "positive"}})
    plane = stability_plane(model, "k", "m")
    assert "no point is stable" in plane.note and plane.witnesses["stable"] is None


def test_faults_are_told_together() -> None:
    model = read_plant_file(HOSE)
    with pytest.raises(InputError) as caught:
        stability_plane(model, "K_q", "h", {"h": Fraction(1)})
    assert len(caught.value.faults) == 2
    with pytest.raises(InputError):
        stability_plane(model, "h", "h")


def test_the_answer_reads_back() -> None:
    answer = plane_answer(stability_plane(PI_LOOP, "K", "KI"), PI_LOOP)["plane"]
    for cell in answer["cells"]:
        point = {name: Fraction(value) for name, value in cell["point"].items()}
        holds = [eval(c["expression"], {}, dict(point)) > 0 for c in answer["conditions"]]  # our own texts
        assert all(holds) == (cell["verdict"] == "stable")


@pytest.mark.parametrize("suffix", SUFFIXES)
def test_the_picture_is_the_same_every_time(suffix: str) -> None:
    plane = stability_plane(PI_LOOP, "K", "KI")
    first, second = (plane_picture(plane, PI_LOOP, suffix) for _ in range(2))
    assert first == second
    assert first.startswith({"svg": b"<?xml", "pdf": b"%PDF", "png": b"\x89PNG"}[suffix])


def test_the_picture_is_shaded_where_the_plant_is_stable() -> None:
    from io import BytesIO

    from matplotlib.image import imread

    whole = imread(BytesIO(plane_picture(stability_plane(PI_LOOP, "K", "KI"), PI_LOOP, "png")))
    shade = np.array([0xCF, 0xE3, 0xD4]) / 255
    share = float((np.abs(whole[:, :, :3] - shade).max(axis=2) < 0.02).mean())
    assert 0.05 < share < 0.6


def _run(*arguments: str) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [sys.executable, "-m", "symplant.cli.main", "stability", str(HOSE), *arguments],
        capture_output=True,
        text=True,
        encoding="utf-8",
        cwd=ROOT,
        check=False,
        timeout=120,
    )


def test_the_command_prints_and_draws(tmp_path: Path) -> None:
    target = tmp_path / "region.svg"
    done = _run("--plane", "K_p", "K_i", "--picture", str(target), "--json")
    assert done.returncode == 0 and done.stderr == ""
    assert json.loads(done.stdout)["plane"]["witnesses"]["stable"]
    assert b"<svg" in target.read_bytes() and list(tmp_path.iterdir()) == [target]


def test_faults_of_the_options_are_told_together(tmp_path: Path) -> None:
    done = _run("--plane", "Kp", "K_i", "--picture", str(tmp_path / "region.gif"), "--set", "tua=1")
    assert done.returncode == 2 and done.stdout == ""
    for part in ("'K_p'", "'tau'", ".svg"):
        assert part in done.stderr
    alone = _run("--picture", str(tmp_path / "region.svg"))
    assert alone.returncode == 2 and "--plane" in alone.stderr and not list(tmp_path.iterdir())
