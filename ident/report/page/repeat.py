"""Everything that somebody else needs to repeat an answer: input, settings, axis, editions, command."""

from __future__ import annotations

import platform
from collections.abc import Mapping, Sequence
from importlib.metadata import PackageNotFoundError, version
from typing import TYPE_CHECKING, Any

from ...identification import plain_data
from .markup import Markup, Part, el

if TYPE_CHECKING:
    from ...identification import Identification

STANDARDS = (
    "What a report of Auger measurements should hold is laid down elsewhere: ISO 16242 and ASTM E996 are where to "
    "look. The header here is a list of our own; no conformity with either is claimed."
)
INDICATIVE = (
    "Atomic per cent are indicative: for a surface alike throughout, with sensitivities from the tables and no "
    "standard measured; the number behind ×÷ is one standard deviation, as a factor."
)


def repeat_list(answer: Identification, reading: Mapping[str, Any]) -> Markup:
    """List input, settings and axis of one spectrum."""
    scale = answer.scale
    ranges = ", ".join(f"{low:g} to {high:g} eV" for low, high in answer.ranges_ev)
    entries: list[tuple[str, Part]] = [
        ("input", answer.spectrum),
        ("SHA-256 of the input", el("code", answer.sha256 or "none: arrays, not a file")),
        ("recorded as", f"{answer.kind}; {ranges}"),
        ("made by", answer.edition),
        *_own_tables(answer),
        ("axis", f"reads energy + ({scale.offset_ev:+.2f} ± {scale.offset_sigma_ev:.2f}) eV "
                 f"+ ({scale.slope:+.5f} ± {scale.slope_sigma:.5f}) × energy, against lines from the Fermi level"),
        ("charging", scale.charging),
        ("axis known by", scale.source),
        ("against handbooks", _readings(scale.readings)),
    ]  # fmt: skip
    settings = {**answer.settings, **reading}
    said = {key: _said(value) for key, value in settings.items()}
    entries += [(f"setting: {key}", value) for key, value in said.items() if value]
    entries.append(("settings not given", ", ".join(key for key, value in said.items() if not value) or "none"))
    if comments := _comments(answer):
        entries.append(("the file also says", el("ul", *(el("li", comment) for comment in comments))))
    return _terms(entries)


def _own_tables(answer: Identification) -> list[tuple[str, Part]]:
    return [("own tables over these", _said(answer.own_tables))] if answer.own_tables else []


def _readings(readings: Sequence[tuple[float, float, float]]) -> str:
    told = [
        f"{abs(off):.1f} ± {sigma:.1f} eV too {'high' if off >= 0 else 'low'} at {at:.0f} eV"
        for at, off, sigma in readings
    ]
    return " and ".join(told) or "not known: no line to judge it by"


def _comments(answer: Identification) -> list[str]:
    header = answer.header
    more = [f"{name}: {header[name]}" for name in ("experiment", "technique") if header.get(name)]
    return [*more, *(str(comment) for comment in header.get("comments") or ())]


def _said(value: Any) -> str:
    """Say a setting in words; nothing for one that was not given."""
    plain = plain_data(value)
    if plain is None or plain in ([], ()):
        return ""
    if isinstance(plain, bool):
        return "yes" if plain else "no"
    if isinstance(plain, float):
        return f"{plain:g}"
    if isinstance(plain, list):
        return ", ".join(str(one) for one in plain)
    if isinstance(plain, dict):
        return "; ".join(f"{key} {_said(one) or 'not known'}" for key, one in plain.items())
    return str(plain)


def whole_list(command: str | None, files: Sequence[tuple[str, str]], inputs: Sequence[str], count: int) -> Markup:
    """List what holds for the whole page: command, other files and their hashes, versions, inputs that failed."""
    entries: list[tuple[str, Part]] = []
    if command:
        entries.append(("command", el("code", command, cls="command")))
    entries += [(f"SHA-256 of {name}", el("code", digest)) for name, digest in files]
    if inputs:
        said = f"{count} {'spectrum' if count == 1 else 'spectra'} from {len(inputs)} input"
        entries.append(("in this page", said + ("" if len(inputs) == 1 else "s")))
    used = ", ".join(f"{name} {_version(name)}" for name in ("numpy", "scipy", "bokeh"))
    entries.append(("computed with", f"Python {platform.python_version()}, {used}"))
    return _terms(entries)


def _version(name: str) -> str:
    try:
        return version(name)
    except PackageNotFoundError:
        return "of unknown version"


def _terms(entries: Sequence[tuple[str, Part]]) -> Markup:
    return el("dl", *(el("div", el("dt", term), el("dd", value), cls="entry") for term, value in entries), cls="terms")
