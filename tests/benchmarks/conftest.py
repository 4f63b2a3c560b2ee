"""Collects the ratios of a run and prints them at its end."""

from __future__ import annotations

import sys
from pathlib import Path

import pytest

sys.path.insert(0, str(Path(__file__).parent))

from ratios import Ratios

_RATIOS = pytest.StashKey[Ratios]()


def pytest_configure(config: pytest.Config) -> None:
    config.stash[_RATIOS] = Ratios()


@pytest.fixture
def ratios(request: pytest.FixtureRequest) -> Ratios:
    """Where a benchmark notes what it found."""
    return request.config.stash[_RATIOS]


@pytest.hookimpl(trylast=True)
def pytest_terminal_summary(terminalreporter: pytest.TerminalReporter, config: pytest.Config) -> None:
    found = config.stash[_RATIOS]
    if found.lines:
        terminalreporter.section("ratios: how many times as long the other takes")
        for line in found.table():
            terminalreporter.write_line(line)
