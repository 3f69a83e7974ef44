"""The report's header: what was measured and how, and where each entry comes from."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from .about import REPORT_KEYS
from .markup import Markup, el, lines

if TYPE_CHECKING:
    from ...identification import Identification

APART = ("title", "remark")  # shown elsewhere
OPTIONAL = ("laboratory", "instrument")  # not of our list: shown when they are known
NOT_SUPPLIED = "not supplied"


@dataclass(frozen=True, kw_only=True)
class Entry:
    """One entry of the header."""

    key: str
    value: str | None
    origin: str  # "file", "given", or "" when nobody says it
    note: str = ""

    @property
    def label(self) -> str:
        """What the page calls it."""
        return REPORT_KEYS[self.key]


def header_entries(answer: Identification, told: Mapping[str, str]) -> list[Entry]:
    """Put together what the file says and what was given; what was given goes first.

    Parameters
    ----------
    answer : Identification
        Its header is what the file says.
    told : mapping
        Entries of [report] that hold for this spectrum.
    """
    from_file, used = _from_file(answer.header), _used(answer.settings)
    entries = []
    for key in REPORT_KEYS:
        if key in APART:
            continue
        value, origin = told.get(key), "given"
        if value is None:
            value, origin = (from_file[key], "file") if from_file.get(key) else (used.get(key), "given")
        if value is None and key in OPTIONAL:
            continue
        entries.append(Entry(key=key, value=value, origin=origin if value else "", note=_note(key, told, used)))
    return entries


def _from_file(header: Mapping[str, Any]) -> dict[str, str | None]:
    beam, mode, energy, dwell, sweeps = (
        header.get(name) for name in ("beam_kev", "analyser_mode", "pass_energy", "dwell_s", "sweeps")
    )
    tuned = f"pass energy or retard ratio {energy:g}" if energy is not None else None
    return {
        "sample": header.get("sample"),
        "spot": header.get("location"),
        "operator": header.get("operator"),
        "laboratory": header.get("institution"),
        "instrument": header.get("instrument"),
        "date": header.get("acquired"),
        "beam_energy": None if beam is None else f"{beam:g} keV",
        "analyser_mode": ", ".join(part for part in (mode, tuned) if part) or None,
        "dwell": None if dwell is None else f"{dwell:g} s a point and sweep",
        "sweeps": None if sweeps is None else str(sweeps),
    }


def _used(settings: Mapping[str, Any]) -> dict[str, str]:
    """What the options say that the identification itself made use of."""
    told = {}
    if settings.get("beam_kev") is not None:
        told["beam_energy"] = f"{settings['beam_kev']:g} keV"
    if settings.get("resolution") is not None:
        told["resolution"] = f"{100 * settings['resolution']:g} % of the energy"
    elif settings.get("resolution_ev") is not None:
        told["resolution"] = f"{settings['resolution_ev']:g} eV"
    if settings.get("sputtered"):
        told["sputter_state"] = f"sputtered with {settings['sputtered']}"
    return told


OPTION_OF = {"beam_energy": "--beam", "resolution": "--resolution", "sputter_state": "--sputtered"}


def _note(key: str, told: Mapping[str, str], used: Mapping[str, str]) -> str:
    """Say what the identification took, where the report says it too: the two need not be the same."""
    if key not in told or key not in OPTION_OF:
        return ""
    if key in used:
        return "" if used[key] == told[key] else f"the identification used: {used[key]}"
    return f"the identification made no use of it; {OPTION_OF[key]} would" if key != "sputter_state" else ""


def header_list(entries: list[Entry], remark: str | None) -> Markup:
    """Show the header as a list of terms; what nobody supplied says so."""
    shown = [el("div", el("dt", entry.label), _value(entry), cls="entry") for entry in entries]
    if remark:
        shown.append(el("div", el("dt", "remark"), el("dd", lines(remark)), cls="entry remark"))
    return el("dl", *shown, cls="header")


def _value(entry: Entry) -> Markup:
    if entry.value is None:
        return el("dd", NOT_SUPPLIED, cls="missing")
    origin = el("span", " (given)", cls="origin") if entry.origin == "given" else None
    note = el("span", f" {entry.note}", cls="origin") if entry.note else None
    return el("dd", entry.value, origin, note)
