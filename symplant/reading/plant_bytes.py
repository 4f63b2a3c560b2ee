"""The bytes of a plant file as text, or the fault that stands in the way."""

from __future__ import annotations

from difflib import get_close_matches
from pathlib import Path

from symplant.errors import Fault, InputError
from symplant.reading.suggestions import listed, quoted

__all__ = ["MAX_BYTES", "file_text"]

#: Largest plant file, in bytes.
MAX_BYTES = 4 * 2**20


def file_text(path: str | Path) -> str:
    """The text of a file that is read as UTF-8; a byte order mark is left out.

    Raises InputError, with the path as its file, if there is no such text.

    >>> import tempfile
    >>> with tempfile.TemporaryDirectory() as folder:
    ...     _ = Path(folder, "p.toml").write_bytes(b"\\xef\\xbb\\xbfformat = 1")
    ...     file_text(Path(folder, "p.toml"))
    'format = 1'
    """
    try:
        with Path(path).open("rb") as file:
            data = file.read(MAX_BYTES + 1)
    except FileNotFoundError:
        raise _refused(path, "there is no such file", _neighbour(Path(path))) from None
    except IsADirectoryError:
        raise _refused(path, "this is a folder", _plants_within(Path(path))) from None
    except PermissionError:
        raise _refused(path, "the file may not be read", "look at its permissions") from None
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or str(error)
        raise _refused(path, f"the file cannot be read: {reason}") from None
    if len(data) > MAX_BYTES:
        raise _refused(path, "the file is larger than 4 MB", "a plant file is a short text")
    if data.startswith((b"\xff\xfe", b"\xfe\xff")):
        raise _refused(path, "the text is UTF-16", "save it as UTF-8")
    if b"\0" in data:
        raise _refused(path, "this is no text: it holds zero bytes", "a plant file is a TOML text in UTF-8")
    try:
        return data.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = data.count(b"\n", 0, error.start) + 1
        reason = f"the byte 0x{data[error.start]:02x} in line {line} is not UTF-8"
        raise _refused(f"{path}:{line}", reason, "save the file as UTF-8") from None


def _refused(path: str | Path, reason: str, suggestion: str = "") -> InputError:
    return InputError([Fault("", reason, suggestion, str(path))])


def _neighbour(path: Path) -> str:
    """A file in the same folder that was perhaps meant."""
    try:
        names = {entry.stem: entry.name for entry in sorted(path.parent.iterdir())[:1000]}
    except (OSError, ValueError):
        return ""
    # By the stem: the ending alone makes any two names alike.
    near = get_close_matches(path.stem, names, n=1, cutoff=0.6)
    return f"did you mean {quoted(names[near[0]])}?" if near else ""


def _plants_within(folder: Path) -> str:
    try:
        names = sorted(entry.name for entry in folder.glob("*.toml"))[:3]
    except OSError:
        return ""
    return f"it holds {listed(names, 'and')}" if names else ""
