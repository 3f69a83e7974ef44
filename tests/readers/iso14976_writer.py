"""A writer of ISO 14976 files for the tests, written line by line from the published order of lines.

It shares nothing with the reader: what the two agree on is the standard (order of lines: ISO 14976:1998,
first published by Dench, Hazell, Seah et al., Surf. Interface Anal. 13 (1988) 63).
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Any

IDENTIFIER = "VAMAS Surface Chemical Analysis Standard Data Transfer Format 1988 May 4"
ION_TECHNIQUES = (
    "FABMS", "FABMS energy spec", "ISS", "SIMS", "SIMS energy spec", "SNMS", "SNMS energy spec"
)  # fmt: skip
PROFILES = ("MAPDP", "MAPSVDP", "SDP", "SDPSV")


@dataclass
class WriterBlock:
    """One block to be written; defaults are a plain direct Auger region."""

    values: list[Any]
    block_id: str = "region"
    sample_id: str = "coupon"
    date: tuple[Any, ...] = (2021, 3, 4, 10, 20, 30, 1)
    comments: list[str] = field(default_factory=list)
    technique: str = "AES dir"
    xy: tuple[Any, Any] = (3, 4)
    experimental: list[Any] = field(default_factory=list)
    source_energy: Any = 5000
    analyser_mode: str = "FRR"
    pass_energy: Any = 4
    label: str = "kinetic energy"
    unit: str = "eV"
    start: Any = 100
    increment: Any = 1
    variables: list[tuple[str, str]] = field(default_factory=lambda: [("counts", "d")])
    signal_mode: str = "pulse counting"
    dwell: Any = 0.05
    scans: Any = 2
    extra: list[tuple[str, str, Any]] = field(default_factory=list)
    count: int | None = None  # number of ordinate values, when it is to be wrong
    omit: tuple[int, ...] = ()  # items left out


@dataclass
class WriterFile:
    """A file to be written."""

    blocks: list[WriterBlock]
    mode: str = "NORM"
    scan: str = "REGULAR"
    institution: str = "institute"
    instrument: str = "analyser"
    operator: str = "operator"
    experiment: str = "trial"
    comments: list[str] = field(default_factory=list)
    variables: list[tuple[str, str]] = field(default_factory=list)
    listed: list[int] = field(default_factory=list)
    excluded: bool = True  # whether `listed` is an exclusion list
    manual: list[str] = field(default_factory=list)
    future_experiment: int = 0
    future_block: int = 0
    end: str = "end of experiment"


def render(file: WriterFile) -> str:
    """Write the whole file."""
    out: list[Any] = [IDENTIFIER, file.institution, file.instrument, file.operator, file.experiment]
    out += [len(file.comments), *file.comments, file.mode, file.scan]
    if file.mode in ("MAP", "MAPDP", "NORM", "SDP"):
        out.append(1)
    if file.mode in ("MAP", "MAPDP"):
        out += [2, 2, 2]
    out.append(len(file.variables))
    for label, unit in file.variables:
        out += [label, unit]
    out += [-len(file.listed) if file.excluded else len(file.listed), *file.listed]
    out += [len(file.manual), *file.manual, file.future_experiment, file.future_block, len(file.blocks)]
    for number, block in enumerate(file.blocks):
        out += _block_lines(file, block, first=number == 0)
    return "\n".join(str(line) for line in [*out, file.end]) + "\n"


def _block_lines(file: WriterFile, block: WriterBlock, *, first: bool) -> list[Any]:
    out: list[Any] = [block.block_id, block.sample_id]
    for number, lines in sorted(_items(file, block).items()):
        listed = number in file.listed
        if first or not file.listed or listed != file.excluded:
            out += lines
    out.append(len(block.values) if block.count is None else block.count)
    width = len(block.variables)
    for at in range(width):
        column = [value for value in block.values[at::width] if isinstance(value, int | float)]
        out += [min(column, default=0), max(column, default=0)]
    return out + block.values


def _items(file: WriterFile, block: WriterBlock) -> dict[int, list[Any]]:
    """Lines of the 40 items of a block."""
    mode, profile = file.mode, file.mode in PROFILES
    items: dict[int, list[Any]] = {at + 1: [value] for at, value in enumerate(block.date)}
    items[8] = [len(block.comments), *block.comments]
    items[9] = [block.technique]
    items[10] = list(block.xy) if mode in ("MAP", "MAPDP") else []
    items[11] = list(block.experimental)
    items[12] = ["electron gun"]
    items[13] = [18, 1, 1] if profile or block.technique in ION_TECHNIQUES else []
    items[14] = [block.source_energy]
    items[15] = ["1E37"]
    items[16] = [0.1, 0.1]
    items[17] = [500, 500] if mode in ("MAP", "MAPDP", "MAPSV", "MAPSVDP", "SEM") else []
    items[18] = [0, 0, 1, 0, 1, 1] if mode in ("MAPSV", "MAPSVDP", "SEM") else []
    items[19], items[20] = [30], [180]
    items[21], items[22] = [block.analyser_mode], [block.pass_energy]
    items[23] = [2] if block.technique == "AES diff" else []
    items[24], items[25], items[26] = [1], [4.5], [0]
    items[27], items[28] = [1, 1], [0, 0]
    items[29], items[30] = ["survey"], ["", -1]
    items[31] = [block.label, block.unit, block.start, block.increment] if file.scan == "REGULAR" else []
    items[32] = [len(block.variables), *(text for pair in block.variables for text in pair)]
    items[33], items[34], items[35], items[36] = [block.signal_mode], [block.dwell], [block.scans], [0]
    sputtered = block.technique in ("AES diff", "AES dir", "EDX", "ELS", "UPS", "XPS", "XRF")
    items[37] = [3000, 1, 2, 2, 45, 0, "continuous"] if profile and sputtered else []
    items[38], items[39] = [0, 0], [0]
    items[40] = [len(block.extra), *(part for triple in block.extra for part in triple)]
    return items
