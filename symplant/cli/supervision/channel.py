"""The wire between the worker and its parent: framed messages in one direction, over one pipe."""

from __future__ import annotations

import enum
import os
import struct
import threading
from collections.abc import Callable, Iterator
from typing import TYPE_CHECKING

if TYPE_CHECKING:  # the parent is to load as little as it can
    from pathlib import Path

__all__ = ["Channel", "FrameReader", "Kind", "frame_sender", "pack", "to_bytes", "to_text"]

_HEADER = struct.Struct("<BQ")  # kind, length of the payload in bytes


class Kind(enum.IntEnum):
    """What a message is about."""

    STAGE = 1
    PLAN = 2
    OUT = 3
    ERR = 4
    KEEP = 5
    STAGING = 6
    COMMITTING = 7
    SETTLED = 8
    EXIT = 9
    STOPPED = 10
    OUT_OF_MEMORY = 11
    BROKEN = 12


class Channel:
    """What a job tells the process that watches over it.

    `send` takes a kind and its payload; it is the only way out, so that the same job can run in a
    process of its own or in the caller's. A channel belongs to the worker itself: a process that the
    job starts may not use it.

    >>> told: list[tuple[Kind, bytes]] = []
    >>> channel = Channel(lambda kind, payload: told.append((kind, payload)))
    >>> channel.plan(["poles", "zeros"])
    >>> channel.stage("poles")
    >>> told[1] == (Kind.STAGE, b"poles")
    True
    """

    def __init__(self, send: Callable[[Kind, bytes], None]) -> None:
        self._send = send

    def stage(self, name: str) -> None:
        """From now on `name` is being worked on; the stage before it is finished."""
        self._send(Kind.STAGE, to_bytes(name))

    def plan(self, names: list[str]) -> None:
        """All stages that are to come, in order, so that those not reached can be named."""
        self._send(Kind.PLAN, b"\0".join(to_bytes(name) for name in names))

    def out(self, text: str) -> None:
        """Final text for standard output, passed on at once; it stands for everything kept before it."""
        self._send(Kind.OUT, to_bytes(text))

    def err(self, text: str) -> None:
        """Text for standard error, passed on at once."""
        self._send(Kind.ERR, to_bytes(text))

    def keep(self, text: str) -> None:
        """Text of a finished part, put out only if the work is stopped before the next `out`."""
        self._send(Kind.KEEP, to_bytes(text))

    def staging(self, path: Path) -> None:
        """`path` is about to be made; it must go if the worker ends before `settled(path)`."""
        self._send(Kind.STAGING, os.fsencode(path))

    def committing(self, path: Path, target: Path) -> None:
        """Everything under `path` is complete and moves to `target`; if the worker ends, move the rest."""
        self._send(Kind.COMMITTING, os.fsencode(path) + b"\0" + os.fsencode(target))

    def settled(self, path: Path) -> None:
        """Nothing is left of `path`."""
        self._send(Kind.SETTLED, os.fsencode(path))


def to_bytes(text: str) -> bytes:
    """UTF-8 in which bytes that were never text (file names, say) come back unchanged.

    >>> to_bytes("k\\udcff") == b"k\\xff", to_bytes("\\ud800")
    (True, b'\\\\ud800')
    """
    try:
        return text.encode("utf-8", "surrogateescape")
    except UnicodeEncodeError:
        return text.encode("utf-8", "backslashreplace")


def to_text(data: bytes) -> str:
    """The inverse of `to_bytes`."""
    return data.decode("utf-8", "surrogateescape")


def pack(kind: Kind, payload: bytes) -> bytes:
    """One message as it stands on the wire."""
    return _HEADER.pack(kind, len(payload)) + payload


def frame_sender(descriptor: int) -> Callable[[Kind, bytes], None]:
    """A `send` that writes whole frames to a pipe; it ends this process when nobody reads any more."""
    owner = os.getpid()
    lock = threading.Lock()

    def send(kind: Kind, payload: bytes) -> None:
        if os.getpid() != owner:
            raise RuntimeError("a channel may be used only by the worker that it was given to")
        rest = memoryview(pack(kind, payload))
        with lock:
            try:
                while rest:
                    rest = rest[os.write(descriptor, rest) :]
            except BrokenPipeError:
                os._exit(0)  # the parent is gone: there is nobody to work for

    return send


class FrameReader:
    """Cuts the byte stream back into messages; a message that never became whole is never seen.

    >>> reader = FrameReader()
    >>> wire = pack(Kind.OUT, b"yes") + pack(Kind.EXIT, b"0")
    >>> list(reader.feed(wire[:10])), [payload for _, payload in reader.feed(wire[10:])]
    ([], [b'yes', b'0'])
    """

    def __init__(self) -> None:
        self._held = bytearray()

    def feed(self, data: bytes) -> Iterator[tuple[Kind, bytes]]:
        """The messages that `data` completes, in order."""
        self._held += data
        start = 0
        with memoryview(self._held) as view:
            frames: list[tuple[Kind, bytes]] = []
            while len(view) - start >= _HEADER.size:
                kind, length = _HEADER.unpack_from(view, start)
                end = start + _HEADER.size + length
                if end > len(view):
                    break
                frames.append((Kind(kind), bytes(view[start + _HEADER.size : end])))
                start = end
        del self._held[:start]
        yield from frames
