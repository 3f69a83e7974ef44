"""Small files for the reader tests: an invented curve with known numbers, written in many ways."""

from __future__ import annotations

import math
from collections.abc import Iterable
from pathlib import Path

import numpy as np

from ident.spectrum import FloatArray


def axis(low: float, high: float, step: float) -> FloatArray:
    """Energies from low to high, both ends included."""
    return low + step * np.arange(round((high - low) / step) + 1)


def curve(energy: FloatArray, scale: float = 1.0) -> FloatArray:
    """Whole numbers that look like a spectrum: a falling background, a line and ripple that never repeats."""
    line = 400 * np.exp(-(((energy - energy.mean()) / 4) ** 2))
    ripple = np.array([round(9 * math.sin(value * value)) for value in energy])
    return np.round(scale * (2000 + 0.5 * energy + line + ripple))


def rows(energy: Iterable[float], *columns: Iterable[float], separator: str = " ", decimal: str = ".") -> str:
    """Write a table."""
    lines = [
        separator.join(f"{value:.10g}".replace(".", decimal) for value in values)
        for values in zip(energy, *columns, strict=True)
    ]
    return "\n".join(lines) + "\n"


def write(folder: Path, text: str | bytes, name: str = "spectrum.txt") -> Path:
    """Write a file as it is, line ends untouched."""
    path = folder / name
    path.write_bytes(text.encode() if isinstance(text, str) else text)
    return path
