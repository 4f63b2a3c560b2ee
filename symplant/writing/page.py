"""A page of text for a terminal: lines with a role each, rendered plain or in colour.

The text is the same either way; colour only helps the eye.
"""

from __future__ import annotations

import io
from collections.abc import Iterable
from dataclasses import dataclass

__all__ = ["GLUE", "Line", "Page"]

#: A space at which rows are not broken.
GLUE = "\N{NO-BREAK SPACE}"

_STYLES = {
    "title": "bold",
    "heading": "bold cyan",
    "label": "cyan",
    "good": "green",
    "bad": "bold red",
    "doubt": "yellow",
    "quiet": "dim",
}


@dataclass(frozen=True, slots=True)
class Line:
    """One line: its text and its role (a key of the styles, or "" for running text)."""

    text: str
    role: str = ""


class Page:
    """Lines collected from top to bottom.

    >>> page = Page()
    >>> page.heading("Poles")
    >>> page.add("s = -1")
    >>> page.plain()
    'Poles\\n  s = -1\\n'
    """

    def __init__(self, width: int = 100) -> None:
        self.width = width
        self.lines: list[Line] = []

    def add(self, text: str, role: str = "", indent: int = 2) -> None:
        """Running text or a formula; each line of `text` is indented."""
        self.lines += [Line(" " * indent + line if line else "", role) for line in text.split("\n")]

    def title(self, text: str) -> None:
        """The first line of a page."""
        self.lines.append(Line(text, "title"))

    def heading(self, text: str) -> None:
        """A heading, with an empty line before it."""
        if self.lines:
            self.lines.append(Line(""))
        self.lines.append(Line(text, "heading"))

    def rows(self, rows: Iterable[tuple[str, str]], roles: Iterable[str] = (), indent: int = 2) -> None:
        """Two columns, the second wrapped to the width of the page and aligned."""
        table = list(rows)
        styles = [*roles, *[""] * len(table)]
        left = max((len(label) for label, _ in table), default=0)
        for (label, text), role in zip(table, styles, strict=False):
            lines = _wrapped(text, self.width - indent - left - 2)
            for number, line in enumerate(lines):
                head = label if number == 0 else ""
                self.lines.append(Line(f"{' ' * indent}{head:<{left}}  {line}".rstrip(), role))

    def plain(self) -> str:
        """The page as plain text, ending in a line feed."""
        return "".join(f"{line.text}\n" for line in self.lines)

    def coloured(self) -> str:
        """The page with colours for a terminal."""
        from rich.console import Console
        from rich.text import Text

        console = Console(
            file=io.StringIO(), force_terminal=True, width=10_000, highlight=False, legacy_windows=False
        )
        for line in self.lines:
            console.print(Text(line.text, style=_STYLES.get(line.role, "")), soft_wrap=True)
        written = console.file
        assert isinstance(written, io.StringIO)
        return written.getvalue()


def _wrapped(text: str, width: int) -> list[str]:
    import textwrap

    lines: list[str] = []
    for part in text.split("\n"):
        lines += textwrap.wrap(part, max(width, 30), break_long_words=False, break_on_hyphens=False) or [""]
    return [line.replace(GLUE, " ") for line in lines]
