"""From the blocks of an ISO 14976 file to spectra: which blocks belong together, what their header says."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass, replace
from datetime import datetime, timedelta, timezone
from functools import reduce

import numpy as np
from numpy.typing import NDArray

from ..errors import InputError
from ..spectrum import FloatArray, Header, Kind, Ordinate, Spectrum
from .assemble import build_spectrum, number_names, to_windows
from .checks import check_axis_name
from .columns import choose_columns
from .iso14976 import WITH_POSITION, WITH_SPUTTERING, Block, Iso14976, Preamble, parse_iso14976
from .iso14976_lines import said
from .remarks import RATE, guess_ordinate
from .scans import Scan, same_energies
from .source import Source

KINDS: dict[str, Kind] = {"aes diff": "derivative", "aes dir": "direct", "aes": "auto"}
NO_UNIT = ("", "d", "n", "not specified")
SPOT = re.compile(r"\b(?:spot|point|area|location|position|pos|site)\W{0,2}(\d+|[A-Z])\b", re.IGNORECASE)
LEVEL = re.compile(
    r"\b(?:level|layer|etch|depth|sputter)(?:\s(?:time|level|no\.?))?\W{0,2}(\d+(?:\.\d+)?)", re.IGNORECASE
)
REPEAT = re.compile(r"\b(?:sweep|scan|cycle|repeat|repetition|loop|iteration|frame|elapsed)", re.IGNORECASE)
LOWEST_BEAM_EV = 100.0  # a smaller source energy cannot excite what is looked for here


@dataclass(frozen=True, kw_only=True, eq=False)
class _Part:
    """One usable block: its windows, and what it has in common with other blocks of one spectrum."""

    block: Block
    kind: Kind
    position: str | None
    level: tuple[object, ...]
    windows: tuple[Scan, ...]
    counts: bool | None
    ordinate: Ordinate
    warnings: tuple[str, ...]


def read_iso14976(
    source: Source, *, column: str | None, kind: Kind, ordinate: Ordinate, separate: bool
) -> tuple[Spectrum, ...]:
    """Read the Auger spectra of an ISO 14976 file.

    Blocks that share sample, position, kind and level (of a depth profile) are windows of one spectrum, and
    repeats of one range are summed; with `separate` every block is a spectrum of its own.

    Raises
    ------
    InputError
        When the file is truncated or damaged, holds no Auger block, or its numbers cannot be a spectrum.
    """
    parsed = parse_iso14976(source)
    blocks, warnings = _auger_blocks(parsed, source)
    parts = [_read_part(block, parsed.preamble, column, source) for block in blocks]
    groups = [[part] for part in parts] if separate else _group(parts, parsed.preamble)
    spectra: list[Spectrum] = []
    failures: list[InputError] = []
    for group in groups:
        try:
            spectra.append(_build(group, parsed.preamble, source, kind, ordinate))
        except InputError as error:
            failures.append(error)
    if not spectra:
        raise failures[0]
    warnings += [f"{_say_where(error)}{error.what}: left out" for error in failures]
    spectra[0] = replace(spectra[0], warnings=(*parsed.warnings, *warnings, *spectra[0].warnings))
    return number_names(spectra, source, from_first=separate)


def list_iso14976_columns(source: Source) -> tuple[str, ...]:
    """Names of the ordinates of the first Auger block."""
    parsed = parse_iso14976(source)
    blocks, _ = _auger_blocks(parsed, source)
    return _names(blocks[0])[1 if parsed.preamble.scan_mode == "IRREGULAR" else 0 :]


def _names(block: Block) -> tuple[str, ...]:
    """Label and unit of each corresponding variable."""
    return tuple(
        (label.strip() or f"variable {at}") + (f" [{unit.strip()}]" if unit.strip().lower() not in NO_UNIT else "")
        for at, (label, unit) in enumerate(block.labels, start=1)
    )


def _say_where(error: InputError) -> str:
    return f"line {error.line}: " if error.line is not None else ""


def _auger_blocks(parsed: Iso14976, source: Source) -> tuple[list[Block], list[str]]:
    """Keep the blocks that are Auger spectra, with a warning for the others; refuse a file without one."""
    if parsed.preamble.scan_mode == "MAPPING":
        source.fail("holds maps (scan mode MAPPING), which have no energy axis", remedy="export the spectra")
    kept = [block for block in parsed.blocks if (block.text(9) or "").casefold() in KINDS]
    others = sorted({block.text(9) or "not specified" for block in parsed.blocks if block not in kept})
    if not kept:
        first = parsed.blocks[0]
        source.fail(
            f"holds {' and '.join(others)} blocks only, no Auger spectrum",
            line=first.items[9].line,
            remedy="this reads the techniques AES dir and AES diff; Auger lines in an X-ray excited spectrum "
            "can be given as two columns, kinetic energy and counts",
        )
    if not others:
        return kept, []
    left = len(parsed.blocks) - len(kept)
    return kept, [f"{left} of {len(parsed.blocks)} blocks left out: technique {' and '.join(others)}"]


def _read_part(block: Block, preamble: Preamble, column: str | None, source: Source) -> _Part:
    """Read the energies and the ordinate of a block."""
    irregular = preamble.scan_mode == "IRREGULAR"
    names = _names(block)
    if irregular and len(names) < 2:
        source.fail(f"block {block.number} has no ordinate beside its abscissa", line=block.items[32].line)
    own = names[1:] if irregular else names
    choice = choose_columns(own, column, source, energies=())
    offset = 1 if irregular else 0
    intensity = reduce(np.add, [block.values[:, at + offset] for at in choice.ordinates])
    energy = _energies(block, irregular, source)
    scan, warnings = _cut_missing(Scan(energy_ev=energy, intensity=intensity, line=_lines(block)), block, source)
    name = own[choice.ordinates[0]]
    kind = KINDS[(block.text(9) or "").casefold()]
    return _Part(
        block=block,
        kind=kind,
        position=_position(block, preamble),
        level=_level(block, preamble),
        windows=tuple(to_windows([scan], source)),
        counts=_counts(block, name, scan, kind),
        ordinate=guess_ordinate(name, block.comments),
        warnings=(*choice.warnings, *warnings),
    )


def _lines(block: Block) -> NDArray[np.int64]:
    """Line of the file on which each point begins."""
    points, variables = block.values.shape
    return np.asarray(block.values_line + variables * np.arange(points), dtype=np.int64)


def _energies(block: Block, irregular: bool, source: Source) -> FloatArray:
    """Energies of a block in the order of recording; refuse an abscissa that is no kinetic energy in eV."""
    if irregular:
        label, unit = block.labels[0]
        line = block.items[32].line + 1
    else:
        label, unit = block.items[31].texts[:2]
        line = block.items[31].line
    check_axis_name(f"{label} [{unit}]", source, line=line)
    plain = unit.casefold() in ("ev", "electron volt", "electron volts")
    if not plain and not (unit.casefold() in NO_UNIT and re.search("energy|kinetic", label, re.IGNORECASE)):
        source.fail(
            f"the abscissa {label!r} in {unit!r} is no energy in eV",
            line=line,
            remedy="export spectra over kinetic energy in eV",
        )
    if irregular:
        abscissa: FloatArray = block.values[:, 0]
        return abscissa
    start, increment = block.number_of(31, 2), block.number_of(31, 3)
    if start is None or not increment:
        source.fail("the abscissa has no start or no increment", line=line + 2, remedy="export the file again")
    return np.asarray(start + increment * np.arange(len(block.values)), dtype=np.float64)


def _cut_missing(scan: Scan, block: Block, source: Source) -> tuple[Scan, list[str]]:
    """Take missing values off both ends, as an aborted scan leaves them; refuse them inside."""
    good = np.isfinite(scan.intensity) & np.isfinite(scan.energy_ev)
    if good.all():
        return scan, []
    if not good.any():
        source.fail(f"block {block.number} holds no values", line=block.values_line, remedy="record it again")
    low, high = int(np.argmax(good)), good.size - int(np.argmax(good[::-1]))
    inside = np.flatnonzero(~good[low:high])
    if inside.size:
        source.fail(
            "a value is missing inside the scan",
            line=int(scan.line[low + int(inside[0])]),
            remedy="repair the file, or export the block without the missing points",
        )
    cut = good.size - (high - low)
    return scan[low:high], [f"block {block.number}: {cut} missing values at the ends left out"]


def _counts(block: Block, name: str, scan: Scan, kind: Kind) -> bool | None:
    """Say whether the ordinate is raw counts: pulse counting, whole numbers, and no rate."""
    mode = (block.text(33) or "").casefold()
    if kind == "derivative" or "analog" in mode or RATE.search(name):
        return False
    whole = bool(np.all((scan.intensity >= 0) & (scan.intensity == np.floor(scan.intensity))))
    return True if "pulse" in mode and whole else None


def _position(block: Block, preamble: Preamble) -> str | None:
    """Where on the sample a block was taken, as far as it says."""
    if preamble.experiment_mode in WITH_POSITION:
        x, y = block.items[10].texts
        return f"x {x}, y {y}"
    match = SPOT.search(block.block_id)
    return match.group(0) if match else None


def _level(block: Block, preamble: Preamble) -> tuple[object, ...]:
    """What sets a block apart from a repeat: the depth and other variables of the experiment."""
    profile = preamble.experiment_mode in WITH_SPUTTERING
    values = [
        text
        for (label, _), text in zip(preamble.variables, block.items[11].texts, strict=True)
        if profile or not REPEAT.search(label)
    ]
    match = LEVEL.search(block.block_id)
    return (*(_plain(value) for value in values), match.group(1) if match else None)


def _plain(text: str) -> object:
    """Compare numbers as numbers: "1.0" and "1" are one level."""
    try:
        return float(text.replace(",", "."))
    except ValueError:
        return text


def _group(parts: Sequence[_Part], preamble: Preamble) -> list[list[_Part]]:
    """Put the parts of one spectrum together, in the order of first appearance.

    A depth profile whose levels carry no variable is told by repetition: a range seen for the second time
    belongs to the second level.
    """
    counted = preamble.experiment_mode in WITH_SPUTTERING and not preamble.variables
    groups: dict[tuple[object, ...], list[_Part]] = {}
    for part in parts:
        key = (part.block.sample_id, part.position, part.kind, part.level)
        turn = 0
        while counted and any(_same_range(part, other) for other in groups.get((*key, turn), [])):
            turn += 1
        groups.setdefault((*key, turn), []).append(part)
    return list(groups.values())


def _same_range(one: _Part, other: _Part) -> bool:
    return len(one.windows) == len(other.windows) and all(
        same_energies(a, b) for a, b in zip(one.windows, other.windows, strict=True)
    )


def _build(group: Sequence[_Part], preamble: Preamble, source: Source, kind: Kind, ordinate: Ordinate) -> Spectrum:
    """Make one spectrum of its parts."""
    counts = {part.counts for part in group}
    ordinates = {part.ordinate for part in group}
    header, said_of_header = _header(group, preamble)
    own = dict.fromkeys(warning for part in group for warning in part.warnings)
    return build_spectrum(
        [window for part in group for window in part.windows],
        source,
        kind=group[0].kind if kind == "auto" else kind,
        ordinate=(ordinates.pop() if len(ordinates) == 1 else "auto") if ordinate == "auto" else ordinate,
        counts=False if kind == "derivative" else counts.pop() if len(counts) == 1 else None,
        header=header,
        warnings=[*own, *said_of_header],
    )


def _header(group: Sequence[_Part], preamble: Preamble) -> tuple[Header, list[str]]:
    """Fill the header from the first block of a spectrum and the file's preamble."""
    part = group[0]
    block = part.block
    beam_ev = block.number_of(14)
    warnings = []
    if beam_ev is not None and 0 < beam_ev < LOWEST_BEAM_EV:
        warnings.append(f"the source energy of {beam_ev:g} eV is not believed: give the beam energy with --beam")
        beam_ev = None
    dwell, scans = block.number_of(34), block.number_of(35)
    comments = [text for text in preamble.comments if said(text)]
    comments += [text for member in group for text in member.block.comments]
    return Header(
        sample=said(block.sample_id),
        location=part.position,
        acquired=_acquired(block),
        institution=said(preamble.institution),
        instrument=said(preamble.instrument),
        operator=said(preamble.operator),
        experiment=said(preamble.experiment),
        technique=block.text(9),
        beam_kev=beam_ev / 1000 if beam_ev and beam_ev > 0 else None,
        analyser_mode=block.text(21),
        pass_energy=block.number_of(22),
        dwell_s=dwell if dwell and dwell > 0 else None,
        sweeps=int(scans) if scans and scans >= 1 else None,
        comments=tuple(dict.fromkeys(comments)),
    ), warnings


def _acquired(block: Block) -> str | None:
    """Time of recording in ISO 8601; None when the date is missing or impossible."""
    parts = [block.number_of(item) for item in range(1, 8)]
    date, clock, hours = parts[:3], [part or 0 for part in parts[3:6]], parts[6]
    if any(part is None for part in date):
        return None
    zone = timezone(timedelta(hours=hours)) if hours is not None and abs(hours) < 24 else None
    try:
        year, month, day, hour, minute, second = (int(part or 0) for part in [*date, *clock])
        return datetime(year, month, day, hour, minute, second, tzinfo=zone).isoformat()
    except (ValueError, OverflowError):
        return None
