"""What the analyst adds to a page: the report's header, his decisions and the spots, from a small TOML file."""

from __future__ import annotations

import datetime
import hashlib
import tomllib
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, field, replace
from pathlib import Path
from typing import Any, Literal, get_args

from ...errors import InputError, UnknownNameError

# Keys of [report], and what the page calls them. Our own list, common practice, no source; where to look for what
# belongs into a report of Auger measurements: ISO 16242 and ASTM E996.
REPORT_KEYS: dict[str, str] = {
    "title": "title",
    "sample": "sample",
    "spot": "spot",
    "operator": "operator",
    "laboratory": "laboratory",
    "instrument": "instrument",
    "date": "date of measurement",
    "beam_energy": "beam energy",
    "beam_current": "beam current",
    "incidence": "incidence",
    "analyser_mode": "analyser mode",
    "resolution": "resolution",
    "dwell": "dwell",
    "sweeps": "sweeps",
    "sputter_state": "sputter state",
    "energy_reference": "energy reference",
    "processing": "processing",
    "remark": "remark",
}
PLAIN_NUMBERS = ("sweeps", "title", "sample", "spot", "remark")  # a number means something without a unit
SPOT_KEYS = ("name", "x", "y", "spectrum")
DECISION_KEYS = ("decision", "remark", "spectrum")
TABLES = ("report", "analyst", "spot")
MOST_BYTES = 1_000_000
NO_LINES = ("H", "He")
Word = Literal["accepted", "overruled"]


@dataclass(frozen=True, kw_only=True)
class Decision:
    """What the analyst says of an element; of one spectrum when it is named, else of all."""

    element: str
    decision: Word | None = None
    remark: str | None = None
    spectrum: str | None = None


@dataclass(frozen=True, kw_only=True)
class Spot:
    """A place on the image, in pixels from its upper left corner or in parts of its width and height."""

    name: str
    x: float | None = None
    y: float | None = None
    parts: bool = False  # True: x and y run from 0 to 1
    spectrum: str | None = None  # the spectrum that was taken there
    report: Mapping[str, str] = field(default_factory=dict)  # what holds for this spectrum only


@dataclass(frozen=True, kw_only=True)
class About:
    """All that the analyst adds."""

    report: Mapping[str, str] = field(default_factory=dict)
    decisions: tuple[Decision, ...] = ()
    spots: tuple[Spot, ...] = ()
    source: str = ""
    sha256: str | None = None

    def report_of(self, spectrum: str) -> dict[str, str]:
        """Give what is known of one spectrum; what its spot says goes before what holds for all."""
        told = dict(self.report)
        for spot in self.spots:
            if spot.spectrum is not None and names(spot.spectrum, spectrum):
                told |= {"spot": spot.name, **spot.report}
        return told

    def decisions_on(self, spectrum: str) -> dict[str, Decision]:
        """Give the decisions on one spectrum by element; one that names it goes before one for all."""
        general = {d.element: d for d in self.decisions if d.spectrum is None}
        own = {d.element: d for d in self.decisions if d.spectrum is not None and names(d.spectrum, spectrum)}
        return general | own

    def with_report(self, pairs: Mapping[str, str]) -> About:
        """Add to the header; these go before what a file says of all spectra."""
        return replace(self, report={**self.report, **pairs})


def names(told: str, spectrum: str) -> bool:
    """Tell whether a name, with or without folder and "#2", means a spectrum."""
    file, _, number = spectrum.rpartition("#")
    whole = {spectrum, file} if file and number.isdigit() else {spectrum}
    return any(told == one or one.replace("\\", "/").endswith("/" + told) for one in whole)


def check_spectra(about: About, inputs: Sequence[str]) -> None:
    """Refuse an entry that names no input, or more than one: it would be left out, or believed twice, unseen.

    Raises
    ------
    InputError
        With the entry, and the input that was likely meant.
    """
    entries = [(f"the decision on {d.element}", d.spectrum) for d in about.decisions]
    entries += [(f"the spot {s.name!r}", s.spectrum) for s in about.spots]
    for what, told in entries:
        if told is None:
            continue
        file, _, number = told.rpartition("#")
        bare = file if file and number.isdigit() else told
        meant = {one for one in inputs if names(bare, one) or names(told, one)}
        if not meant:
            short = [one.replace("\\", "/").rpartition("/")[2] for one in inputs]
            raise InputError(
                f"{what} is about the spectrum {told!r}, which is not among the inputs",
                source=about.source,
                remedy=_nearest(bare, short),
            )
        if len(meant) > 1:
            raise InputError(
                f"{what} is about the spectrum {told!r}, which names {len(meant)} inputs",
                source=about.source,
                remedy="write its folder too, as on the command line",
            )


def read_about(path: str | Path) -> About:
    """Read a TOML file with the tables [report], [analyst.ELEMENT] and [[spot]].

    Raises
    ------
    InputError
        When it cannot be read, is no TOML, or holds a key or value that means nothing here.
    """
    source = str(path)
    try:
        with Path(path).open("rb") as stream:
            raw = stream.read(MOST_BYTES + 1)
    except OSError as failed:
        raise InputError(
            f"cannot be read ({failed.strerror or failed})", source=source, remedy="--about takes a TOML file"
        ) from None
    if len(raw) > MOST_BYTES:
        raise InputError("is larger than 1 MB", source=source, remedy="--about takes a small TOML file of text")
    try:
        told = tomllib.loads(raw.decode("utf-8-sig"))
    except UnicodeDecodeError:
        raise InputError("is not UTF-8", source=source, remedy="save it as UTF-8, as TOML asks for") from None
    except RecursionError:
        raise InputError("is nested too deeply", source=source, remedy="write tables and plain entries") from None
    except tomllib.TOMLDecodeError as wrong:
        raise InputError(
            f"is no TOML: {wrong}", source=source, remedy='write a table as [report] and an entry as sample = "lid 3"'
        ) from None
    _check_keys(told, TABLES, source, "a table")
    return About(
        report=_report(_table(told.get("report", {}), source, "report"), source),
        decisions=tuple(_decisions(_table(told.get("analyst", {}), source, "analyst"), source)),
        spots=tuple(_spot(entry, source) for entry in _tables(told.get("spot", []), source, "spot")),
        source=source,
        sha256=hashlib.sha256(raw).hexdigest(),
    )


def report_value(key: str, value: Any, source: str = "") -> str:
    """Check one entry of the header and give it as text; InputError says what would work."""
    _check_keys([key], tuple(REPORT_KEYS), source, "an entry of [report]")
    if isinstance(value, datetime.date | datetime.time | datetime.datetime):
        return value.isoformat(sep=" ") if isinstance(value, datetime.datetime) else value.isoformat()
    if isinstance(value, int | float) and not isinstance(value, bool):
        if key in PLAIN_NUMBERS:
            return f"{value:g}" if isinstance(value, float) else str(value)
        raise InputError(
            f"{key} = {value} has no unit", source=source, remedy=f'write it as text with its unit: {key} = "{value} …"'
        )
    if not isinstance(value, str):
        raise InputError(f"{key} is no text", source=source, remedy=f'write it as {key} = "…"')
    return value.strip()


def _report(table: Mapping[str, Any], source: str) -> dict[str, str]:
    told = {key: report_value(key, value, source) for key, value in table.items()}
    return {key: value for key, value in told.items() if value}


def _decisions(table: Mapping[str, Any], source: str) -> Iterable[Decision]:
    seen: set[tuple[str, str | None]] = set()
    for name, entry in table.items():
        element = _element(name, source)
        for one in _tables(entry if isinstance(entry, list) else [entry], source, f"analyst.{name}"):
            decision = _decision(element, one, source)
            if (element, decision.spectrum) in seen:
                raise InputError(f"decides on {element} twice", source=source, remedy="keep one of them")
            seen.add((element, decision.spectrum))
            yield decision


def _element(name: str, source: str) -> str:
    from ...names import symbol_from_name

    try:
        symbol = symbol_from_name(name)
    except UnknownNameError as unknown:
        raise InputError(f"[analyst.{name}]: {unknown}", source=source) from None
    if symbol in NO_LINES:
        raise InputError(
            f"[analyst.{name}]: {symbol} has no Auger transition, so that there is nothing to decide",
            source=source,
            remedy="say what is known of it in remark under [report]",
        )
    return symbol


def _decision(element: str, entry: Mapping[str, Any], source: str) -> Decision:
    where = f"[analyst.{element}]"
    _check_keys(entry, DECISION_KEYS, source, f"an entry of {where}")
    word = entry.get("decision")
    if word is not None and word not in get_args(Word):
        raise InputError(
            f"{where}: decision is {word!r}", source=source, remedy='write decision = "accepted" or "overruled"'
        )
    return Decision(
        element=element,
        decision=word,
        remark=_text(entry.get("remark"), f"{where} remark", source),
        spectrum=_text(entry.get("spectrum"), f"{where} spectrum", source),
    )


def _spot(entry: Mapping[str, Any], source: str) -> Spot:
    _check_keys(entry, (*SPOT_KEYS, *REPORT_KEYS), source, "an entry of [[spot]]")
    name = _text(entry.get("name"), "[[spot]] name", source)
    if name is None:
        raise InputError("a [[spot]] has no name", source=source, remedy='write name = "pit 1" in it')
    x, y, parts = _place(name, entry.get("x"), entry.get("y"), source)
    spectrum = _text(entry.get("spectrum"), f"spectrum of the spot {name!r}", source)
    report = _report({key: value for key, value in entry.items() if key not in SPOT_KEYS}, source)
    if report and spectrum is None:
        raise InputError(
            f"the spot {name!r} has {next(iter(report))} but no spectrum that it would be said of",
            source=source,
            remedy='add spectrum = "file.csv" to it, or put the entry under [report]',
        )
    return Spot(name=name, x=x, y=y, parts=parts, spectrum=spectrum, report=report)


def _place(name: str, x: Any, y: Any, source: str) -> tuple[float | None, float | None, bool]:
    """Pixels, or parts of the image where both are written with a decimal point and lie between 0 and 1."""
    if x is None and y is None:
        return None, None, False
    numbers = [v for v in (x, y) if isinstance(v, int | float) and not isinstance(v, bool) and 0 <= v < 1e6]
    if len(numbers) != 2:
        raise InputError(
            f"the spot {name!r} lies nowhere (x = {x!r}, y = {y!r})",
            source=source,
            remedy="give x and y in pixels (x = 310) or in parts of width and height (x = 0.31)",
        )
    parts = [isinstance(v, float) and v <= 1.0 for v in numbers]
    if parts[0] != parts[1]:
        raise InputError(
            f"the spot {name!r} has one place in pixels and one in parts (x = {x!r}, y = {y!r})",
            source=source,
            remedy="write both as whole pixels, or both between 0.0 and 1.0",
        )
    return float(numbers[0]), float(numbers[1]), parts[0]


def _text(value: Any, what: str, source: str) -> str | None:
    if value is None:
        return None
    if not isinstance(value, str):
        raise InputError(f"{what} is no text", source=source, remedy='write it between quotes: "…"')
    return value.strip() or None


def _table(value: Any, source: str, name: str) -> Mapping[str, Any]:
    if not isinstance(value, dict):
        raise InputError(f"{name} is no table", source=source, remedy=f"write it as [{name}] with entries below it")
    return value


def _tables(value: Any, source: str, name: str) -> list[Mapping[str, Any]]:
    if not isinstance(value, list) or not all(isinstance(entry, dict) for entry in value):
        raise InputError(f"{name} is no table", source=source, remedy=f"write it as [[{name}]] with entries below it")
    return value


def _check_keys(told: Iterable[str], known: Sequence[str], source: str, what: str) -> None:
    for key in told:
        if key not in known:
            raise InputError(f"{key!r} is not {what}", source=source, remedy=_nearest(key, known))


def _nearest(word: str, known: Sequence[str]) -> str:
    """Say which of the known words is nearest, or all of them when none is near."""
    from rapidfuzz import fuzz, process

    found = process.extractOne(word.lower(), known, scorer=fuzz.ratio, score_cutoff=70)
    if found is not None:
        return f"did you mean {found[0]!r}?"
    shown = ", ".join(dict.fromkeys(known[:20])) + (", …" if len(known) > 20 else "")
    return f"there {'are' if len(known) > 1 else 'is'} {shown}"
