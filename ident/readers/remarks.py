"""What the words of a text file say: the header fields, and whether the data are differential."""

from __future__ import annotations

import re
from collections.abc import Sequence
from datetime import datetime

from ..spectrum import Header, Kind, Ordinate

DERIVATIVE = re.compile(
    r"\bd\s?\(?\s?(?:E\W{0,3})?N\s?(?:\(\s?E\s?\))?\s?\)?\s?/\s?d\s?E\b|\bderivative\b|\bdifferentiated\b|"
    r"\bdifferential\b(?!\s*(?:pump|width|aperture|non))|\bAES diff\b",
    re.IGNORECASE,
)
DENIED = re.compile(
    r"\b(?:not|non|un|no|without|before)\W{0,2}(?:yet\s)?(?:a\s)?(?:derivative|differenti)|"
    r"(?:derivative|differentiat\w+|differential)\s*[:=]\s*(?:no|off|none|false|0)\b",
    re.IGNORECASE,
)
EN = re.compile(r"\bd?\s?\(?\s?E\s?[*\u00b7\u00d7x.]?\s?N\s?\(\s?E\s?\)|\bd?\s?\(?EN\b", re.IGNORECASE)
N = re.compile(r"\bd?N\s?\(\s?E\s?\)", re.IGNORECASE)
RATE = re.compile(r"/\s?s\b|\bcps\b|per\s+sec|\brate\b|norm|\ba\.?\s?u\b|arb", re.IGNORECASE)
COUNTS = re.compile(r"\bcounts?\b|\bcts\b|\bpulses\b", re.IGNORECASE)

PAIR = re.compile(r"(?P<key>[^:=]{2,40}?)\s*[:=]\s*(?P<value>\S.*)")
MOST_REMARKS = 200
KEYS = {
    "sample": re.compile(r"^(?:sample|specimen)(?:\s?(?:id|name|identifier))?$", re.IGNORECASE),
    "location": re.compile(r"^(?:location|position|spot|area|point)$", re.IGNORECASE),
    "institution": re.compile(r"^(?:institution|institute|laboratory|company)$", re.IGNORECASE),
    "instrument": re.compile(r"^(?:instrument|spectrometer)(?:\s?(?:model|name))?$", re.IGNORECASE),
    "operator": re.compile(r"^(?:operator|user|measured by)$", re.IGNORECASE),
    "experiment": re.compile(r"^experiment(?:\s?(?:id|name|identifier))?$", re.IGNORECASE),
    "technique": re.compile(r"^(?:technique|method)$", re.IGNORECASE),
    "acquired": re.compile(r"^(?:acquired|acquisition (?:date|time)|date(?:\s?(?:and|/|&)?\s?time)?)$", re.IGNORECASE),
}
BEAM = re.compile(r"^(?:primary|electron)?\s?(?:beam|source|gun)?\s?(?:energy|voltage)$|^beam$", re.IGNORECASE)
VOLTS = re.compile(r"(?P<number>\d+(?:[.,]\d+)?)\s*(?P<kilo>k)?(?:e?V)\b", re.IGNORECASE)


def read_header(texts: Sequence[str]) -> Header:
    """Fill the header from lines such as "sample: steel" or "beam energy = 5 keV"; all lines are comments."""
    fields: dict[str, str] = {}
    beam_kev: float | None = None
    texts = texts[:MOST_REMARKS]
    for text in texts:
        match = PAIR.fullmatch(text.strip(" ,;\t"))
        if not match:
            continue
        key, value = match["key"].strip(" \"'"), match["value"].strip(" \"',;\t")
        if beam_kev is None and BEAM.search(key):
            beam_kev = _read_kev(f"{value} {key}")
        for name, pattern in KEYS.items():
            if pattern.search(key) and value:
                fields.setdefault(name, value)
    return Header(
        sample=fields.get("sample"),
        location=fields.get("location"),
        acquired=_read_time(fields.get("acquired", "")),
        institution=fields.get("institution"),
        instrument=fields.get("instrument"),
        operator=fields.get("operator"),
        experiment=fields.get("experiment"),
        technique=fields.get("technique"),
        beam_kev=beam_kev,
        comments=tuple(texts),
    )


def _read_kev(text: str) -> float | None:
    """Read a beam energy with its unit; None without a unit or outside 0.1 to 50 keV."""
    match = VOLTS.search(text)
    if not match:
        return None
    energy = float(match["number"].replace(",", ".")) * (1.0 if match["kilo"] else 1e-3)
    return energy if 0.1 <= energy <= 50 else None


def _read_time(text: str) -> str | None:
    """Bring a date into ISO 8601 where it is written so already (other orders cannot be told apart)."""
    try:
        return datetime.fromisoformat(text.strip().replace("/", "-")).isoformat()
    except ValueError:
        return None


def guess_kind(name: str, names: Sequence[str], texts: Sequence[str]) -> Kind:
    """Say "derivative" when the chosen column or the header says so; "auto" when nothing does."""
    texts = [
        *texts,
        " ".join(names),
    ]  # a remark of two words may have been taken for the names of two columns
    if any(DERIVATIVE.search(each) for each in names) and not DENIED.search(texts[-1]):
        return "derivative" if DERIVATIVE.search(name) else "auto"
    said = [text for text in texts if DERIVATIVE.search(text)]
    return "derivative" if said and not any(DENIED.search(text) for text in said) else "auto"


def guess_ordinate(name: str, texts: Sequence[str]) -> Ordinate:
    """Say whether the column, or else the header, calls the ordinate N(E) or E N(E)."""
    for text in (name, " ".join(texts)):
        rest, found = EN.subn("", text)
        en, n = found > 0, bool(N.search(rest))
        if en != n:
            return "en" if en else "n"
    return "auto"


def guess_counts(name: str, whole: bool, kind: Kind) -> bool | None:
    """Say whether an ordinate is raw counts: True, False (the name denies it), or None (not known).

    Parameters
    ----------
    whole : bool
        Whether all ordinates are whole numbers and none is negative.
    """
    if kind == "derivative" or RATE.search(name):
        return False
    return True if whole and COUNTS.search(name) else None
