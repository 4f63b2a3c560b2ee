"""Lines of a TOML text: where the thing at a given place was written.

The text has been through the TOML reader before, so that only its structure is followed here.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from contextlib import suppress
from typing import TypeAlias

__all__ = ["Path", "line_of", "lines_of", "path_of"]

#: Keys and, counted from 1, positions in lists.
Path: TypeAlias = tuple[str | int, ...]

_SKIPPED = re.compile(r"(?:[ \t\r\n]|#[^\n]*)*")
_BLANKS = re.compile(r"[ \t]*")
_BARE_KEY = re.compile(r"[A-Za-z0-9_-]+")
_BASIC_KEY = re.compile(r'"((?:[^"\\\n]|\\.)*)"')
_LITERAL_KEY = re.compile(r"'([^'\n]*)'")
_STRING = re.compile(
    r'"""(?:[^\\]|\\.)*?"{3,5}|\'\'\'.*?\'{3,5}|"(?:[^"\\\n]|\\.)*"|\'[^\'\n]*\'',
    re.DOTALL,
)
_PLAIN_VALUE = re.compile(r"[^,\]}#\n]*")
_PLACE_PART = re.compile(r"\.?(?:'((?:[^'\\]|\\.)*)'|([\w-]+))|\[(\d+)\]")


def lines_of(text: str) -> dict[Path, int]:
    """The line, counted from 1, of every key and every item of a list.

    >>> lines_of("time = 'discrete'\\n[matrices]\\nA = [\\n  ['0'],\\n]")["matrices", "A", 1]
    4
    """
    scanner = _Scanner(text)
    # A line that is not found is not shown; those found before still hold.
    with suppress(ValueError, RecursionError):
        scanner.scan()
    return scanner.found


def path_of(place: str) -> Path:
    """The path that the place of a fault describes; what follows a comma is within the value.

    >>> path_of("matrices.A[2][1], column 7")
    ('matrices', 'A', 2, 1)
    """
    parts: list[str | int] = []
    for match in _matches(place):
        quoted, bare, number = match.groups()
        parts.append(int(number) if number else bare if bare is not None else quoted)
    return tuple(parts)


def line_of(place: str, lines: dict[Path, int]) -> int:
    """The line of a place, or of the nearest thing around it that has one; 0 if there is none."""
    path = path_of(place)
    while path:
        if path in lines:
            return lines[path]
        path = path[:-1]
    return 0


def _matches(place: str) -> Iterator[re.Match[str]]:
    position = 0
    while match := _PLACE_PART.match(place, position):
        yield match
        position = match.end()


class _Scanner:
    """One pass over the text, noting where keys and items start."""

    def __init__(self, text: str) -> None:
        self.found: dict[Path, int] = {}
        self._text = text
        self._position = 0
        self._line = 1
        self._counted = 0  # up to where line ends have been counted
        self._lengths: dict[Path, int] = {}  # of arrays of tables

    def scan(self) -> None:
        table: Path = ()
        while self._skip(_SKIPPED) and self._position < len(self._text):
            if self._take("[["):
                name = self._key("]")
                inner = self._within(name[:-1]) + name[-1:]
                self._note(inner)
                self._lengths[inner] = self._lengths.get(inner, 0) + 1
                table = (*inner, self._lengths[inner])
                self._note(table)
                self._expect("]]")
            elif self._take("["):
                table = self._within(self._key("]"))
                self._note(table)
                self._expect("]")
            else:
                self._pair(table)

    def _within(self, name: Path) -> Path:
        """A table name as a path: an array of tables on the way means its last table."""
        path: Path = ()
        for part in name:
            path = (*path, part)
            if path in self._lengths:
                path = (*path, self._lengths[path])
        return path

    def _pair(self, table: Path) -> None:
        path = self._note(table + self._key("="))
        self._expect("=")
        self._skip(_BLANKS)
        self._value(path)

    def _key(self, end: str) -> Path:
        parts: list[str] = []
        while True:
            self._skip(_BLANKS)
            for pattern in (_BARE_KEY, _BASIC_KEY, _LITERAL_KEY):
                if match := pattern.match(self._text, self._position):
                    self._position = match.end()
                    parts.append(match.group(match.lastindex or 0))
                    break
            else:
                raise ValueError("no key")
            self._skip(_BLANKS)
            if self._text.startswith(end, self._position):
                return tuple(parts)
            self._expect(".")

    def _value(self, path: Path) -> None:
        if self._take("["):
            number = 0
            while self._skip(_SKIPPED) and not self._take("]"):
                number += 1
                self._value(self._note((*path, number)))
                self._skip(_SKIPPED)
                self._take(",")
        elif self._take("{"):
            while self._skip(_SKIPPED) and not self._take("}"):
                self._pair(path)
                self._skip(_SKIPPED)
                self._take(",")
        else:
            match = _STRING.match(self._text, self._position) or _PLAIN_VALUE.match(
                self._text, self._position
            )
            if match is None or match.end() == self._position:
                raise ValueError("no value")
            self._position = match.end()

    def _note(self, path: Path) -> Path:
        self._line += self._text.count("\n", self._counted, self._position)
        self._counted = self._position
        for end in range(1, len(path) + 1):
            self.found.setdefault(path[:end], self._line)
        return path

    def _skip(self, pattern: re.Pattern[str]) -> bool:
        match = pattern.match(self._text, self._position)
        self._position = match.end() if match else self._position
        return True

    def _take(self, sign: str) -> bool:
        if not self._text.startswith(sign, self._position):
            return False
        self._position += len(sign)
        return True

    def _expect(self, sign: str) -> None:
        if not self._take(sign):
            raise ValueError(f"no {sign}")
