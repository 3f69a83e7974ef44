"""Where the bytes of a spectrum come from, and how they become lines of text."""

from __future__ import annotations

import codecs
import hashlib
import io
import re
import sys
from dataclasses import dataclass
from os import PathLike, fspath
from pathlib import Path
from typing import IO, NoReturn

from ..errors import InputError

MAX_BYTES = 256 * 1024 * 1024  # a device that never ends must not fill the memory
LINE_END = re.compile(r"\r{0,2}\n|\r")  # two CRs: a file converted twice
CONTROL = re.compile(r"[\x00-\x08\x0e-\x1f]")
TEXT_REMEDY = "give a text table (energy and ordinate columns) or an ISO 14976 file"

# Beginnings of files that people try to read, and what they are (from memory).
MAGIC = (
    (b"PK\x03\x04", "a zip archive or a spreadsheet workbook", "save the sheet as CSV"),
    (b"\xd0\xcf\x11\xe0", "an old spreadsheet or office file", "save the sheet as CSV"),
    (b"\x1f\x8b", "compressed (gzip)", "unpack it first"),
    (b"%PDF", "a PDF document", "export the numbers as text"),
    (b"\x89PNG", "a picture", "export the numbers as text"),
    (b"\x89HDF", "an HDF5 file", "export the numbers as text"),
)
BYTE_ORDER_MARKS = (
    (codecs.BOM_UTF8, "utf-8"),
    (codecs.BOM_UTF32_LE, "utf-32-le"),  # before UTF-16: its mark begins with the shorter one
    (codecs.BOM_UTF32_BE, "utf-32-be"),
    (codecs.BOM_UTF16_LE, "utf-16-le"),
    (codecs.BOM_UTF16_BE, "utf-16-be"),
)


@dataclass(frozen=True, kw_only=True)
class Source:
    """The text of one file.

    Parameters
    ----------
    name : str
        The file as the user named it; "-" for standard input.
    sha256 : str
        Hash of the bytes as they were read.
    lines : tuple of str
        Without line ends; line 1 is `lines[0]`.
    """

    name: str
    sha256: str
    lines: tuple[str, ...]

    @property
    def label(self) -> str:
        """The name for messages."""
        return label_of(self.name)

    def fail(self, what: str, *, line: int | None = None, remedy: str = "") -> NoReturn:
        """Raise the `InputError` that names this file."""
        raise InputError(what, source=self.label, line=line, remedy=remedy)


def label_of(name: str) -> str:
    """Name a source in words: "-" is standard input."""
    return "standard input" if name == "-" else name


def read_source(path: str | PathLike[str], stream: IO[bytes] | None = None) -> Source:
    """Read a file, or standard input for "-", as text.

    Parameters
    ----------
    path : str or path
        The file; "-" reads `stream`.
    stream : binary stream, optional
        Stands in for standard input.

    Raises
    ------
    InputError
        When the file cannot be opened, is empty or is no text.
    """
    name = fspath(path)
    data = _read_stream(stream) if name == "-" else _read_file(name)
    if len(data) > MAX_BYTES:
        raise InputError(f"is longer than {MAX_BYTES // 1024**2} MB", source=label_of(name), remedy=TEXT_REMEDY)
    if not data.strip():
        raise InputError("is empty", source=label_of(name), remedy=TEXT_REMEDY)
    text = _decode(data, label_of(name))
    lines = tuple(LINE_END.split(text.rstrip("\x1a")))  # some old programs end a text with control-Z
    return Source(name=name, sha256=hashlib.sha256(data).hexdigest(), lines=lines)


def _read_stream(stream: IO[bytes] | None) -> bytes:
    """Take all bytes from standard input or what stands in for it."""
    try:
        got: bytes | str = (sys.stdin.buffer if stream is None else stream).read(MAX_BYTES + 1)
    except (OSError, ValueError, AttributeError) as error:  # closed, or replaced by something without bytes
        raise InputError(
            f"cannot be read ({_reason(error)})", source="standard input", remedy="pipe a file into it"
        ) from None
    return got.encode() if isinstance(got, str) else got


def _read_file(name: str) -> bytes:
    """Take all bytes of a file; every failure becomes a one-line error with its remedy."""
    try:
        with Path(name).open("rb") as handle:
            return handle.read(MAX_BYTES + 1)
    except FileNotFoundError:
        problem, remedy = "there is no such file", "check the name and the folder"
    except IsADirectoryError:
        problem, remedy = "is a directory", "name the files in it"
    except PermissionError:
        problem, remedy = "no permission to read it", "change its permissions or copy it"
    except (OSError, ValueError) as error:  # ValueError: a name with a NUL character in it
        problem, remedy = f"cannot be read ({_reason(error)})", "check the name"
    raise InputError(problem, source=name or "(no name)", remedy=remedy)


def _reason(error: Exception) -> str:
    """Say in a few words why the system refused."""
    if isinstance(error, io.UnsupportedOperation):
        return "not readable"
    return (error.strerror if isinstance(error, OSError) else str(error)) or type(error).__name__


def _decode(data: bytes, label: str) -> str:
    """Turn bytes into text: a byte-order mark decides, then UTF-16 without one, UTF-8, Latin-1."""
    for start, what, remedy in MAGIC:
        if data.startswith(start):
            raise InputError(f"is {what}, not a text table", source=label, remedy=remedy)
    for mark, encoding in BYTE_ORDER_MARKS:
        if data.startswith(mark):
            text = data[len(mark) :].decode(encoding, errors="replace")
            break
    else:
        text = _decode_unmarked(data)
    if "\x00" in text or len(CONTROL.findall(text)) > 2 + len(text) // 200:
        raise InputError("is binary, not text", source=label, remedy=TEXT_REMEDY)
    if not text.strip():
        raise InputError("is empty", source=label, remedy=TEXT_REMEDY)
    return text


def _decode_unmarked(data: bytes) -> str:
    """Decode bytes without a byte-order mark."""
    head = data[:4000]
    zeros = (head[0::2].count(0), head[1::2].count(0))
    if max(zeros) > 0.4 * len(head) / 2 and min(zeros) == 0:
        encoding = "utf-16-be" if zeros[0] else "utf-16-le"
        return data.decode(encoding, errors="replace")
    try:
        return data.decode("utf-8")
    except UnicodeDecodeError:
        return data.decode("latin-1")
