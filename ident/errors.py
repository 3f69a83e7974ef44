"""The exception family of ident: every error a user can act on derives from `IdentError`.

A message is one line: what is wrong, where, and what would work.
"""

from __future__ import annotations


class IdentError(Exception):
    """Anything that ident cannot do and says so; the base of the family."""

    def __str__(self) -> str:
        return " ".join(super().__str__().split())


class InputError(IdentError):
    """A spectrum (or a label list) could not be read or used.

    Parameters
    ----------
    what : str
        What is wrong.
    source : str
        The file as the user named it, or "standard input".
    line : int, optional
        Line of the file, counted from 1, where there is one.
    remedy : str, optional
        What would work.
    """

    def __init__(self, what: str, *, source: str = "", line: int | None = None, remedy: str = "") -> None:
        self.what, self.source, self.line, self.remedy = what, source, line, remedy
        place = source + (f", line {line}" if line is not None else "")
        super().__init__((f"{place}: " if place else "") + what + (f"; {remedy}" if remedy else ""))


class TableError(IdentError):
    """A reference table is missing, or a row of it is malformed.

    Parameters
    ----------
    what : str
        What is wrong.
    file : str
        The table's file.
    line : int, optional
        Line of the file, counted from 1.
    column : str, optional
        Name of the column.
    value : str, optional
        The offending value as it stands in the file.
    """

    def __init__(
        self,
        what: str,
        *,
        file: str,
        line: int | None = None,
        column: str | None = None,
        value: str | None = None,
    ) -> None:
        self.what, self.file, self.line, self.column, self.value = what, file, line, column, value
        place = file
        if line is not None:
            place += f", line {line}"
        if column is not None:
            place += f", column {column}"
        shown = f" (found {value!r})" if value is not None else ""
        super().__init__(f"{place}: {what}{shown}")


class UnknownNameError(IdentError):
    """A name that is no element or transition, even read forgivingly.

    Parameters
    ----------
    what : str
        The whole message.
    choices : tuple of str
        Symbols of the elements it may stand for, nearest first; empty when none is near.
    """

    def __init__(self, what: str, *, choices: tuple[str, ...] = ()) -> None:
        self.choices = choices
        super().__init__(what)


class SettingError(IdentError):
    """A setting that makes no sense, by itself or with the others."""
