"""Scale files: a calibration as JSON, written and read back with every value checked."""

from __future__ import annotations

import json
import math
from pathlib import Path
from typing import Any

import numpy as np

from ..errors import InputError
from .calibration import SCHEMA, WHAT, CalibrationLine, Deviation, ScaleCalibration

MOST_OFFSET_EV, MOST_SLOPE = 50.0, 0.05
REMEDY = "make it anew with ident scale --save"


def save_scale(calibration: ScaleCalibration, path: str | Path) -> None:
    """Write a calibration as JSON."""
    text = json.dumps(calibration.to_dict(), indent=1, allow_nan=False)
    Path(path).write_text(text + "\n", encoding="utf-8")


def load_scale(path: str | Path) -> ScaleCalibration:
    """Read a calibration that `save_scale` wrote.

    Raises
    ------
    InputError
        When the file cannot be read, is no scale file, or a value in it is missing or makes no sense.
    """
    source = str(path)
    try:
        plain = json.loads(Path(path).read_text(encoding="utf-8"))
    except OSError as error:
        raise InputError(f"cannot be read ({error.strerror or error})", source=source, remedy=REMEDY) from error
    except ValueError as error:
        raise InputError("is no scale file (no JSON text)", source=source, remedy=REMEDY) from error
    if not isinstance(plain, dict) or plain.get("what") != WHAT:
        raise InputError(f'is no scale file (no "what": "{WHAT}")', source=source, remedy=REMEDY)
    if plain.get("schema") != SCHEMA:
        raise InputError(f"has schema {plain.get('schema')!r}, not {SCHEMA}", source=source, remedy=REMEDY)
    try:
        return _checked(plain)
    except KeyError as error:
        raise InputError(f"lacks {error}", source=source, remedy=REMEDY) from None
    except (TypeError, ValueError) as error:
        raise InputError(f"is malformed: {error}", source=source, remedy=REMEDY) from None


def _checked(plain: dict[str, Any]) -> ScaleCalibration:
    """Make a calibration of plain data; KeyError, TypeError or ValueError where they do not fit."""
    values = {name: plain[name] for name in ScaleCalibration.__dataclass_fields__}
    limits = {"offset_ev": MOST_OFFSET_EV, "broadening_offset_ev": MOST_OFFSET_EV}
    limits |= {"slope": MOST_SLOPE, "broadening_slope": MOST_SLOPE}
    for name, most in limits.items():
        values[name] = _number(name, values[name], -most, most)
    for name in ("offset_sigma_ev", "slope_sigma", "chi2"):
        values[name] = _number(name, values[name], 0.0, math.inf)
    for name in ("metals", "spectra", "notes"):
        if not isinstance(values[name], list):
            raise ValueError(f"{name} is {values[name]!r}, no list")
        values[name] = tuple(_text(name, item) for item in values[name])
    for name in ("date", "edition", "deciding", "slope_from", "within_3_ev"):
        values[name] = _text(name, values[name])
    low, high = (_number("range_ev", energy, 0.0, 1e5) for energy in values["range_ev"])
    values["covariance"], values["range_ev"] = _covariance(values["covariance"]), (low, high)
    values["lines"] = tuple(CalibrationLine(**line) for line in values["lines"])
    values["worst"] = Deviation(**values["worst"])
    return ScaleCalibration(**values)


def _number(name: str, value: Any, low: float, high: float) -> float:
    if isinstance(value, bool) or not isinstance(value, int | float) or not math.isfinite(value):
        raise ValueError(f"{name} is {value!r}, no number")
    if not low <= value <= high:
        raise ValueError(f"{name} is {value:g}, which lies outside {low:g} to {high:g}")
    return float(value)


def _text(name: str, value: Any) -> str:
    if not isinstance(value, str):
        raise ValueError(f"{name} holds {value!r}, no text")
    return value


def _covariance(rows: Any) -> tuple[tuple[float, float], tuple[float, float]]:
    (a, b), (c, d) = ([_number("covariance", cell, -math.inf, math.inf) for cell in row] for row in rows)
    matrix = np.array([[a, b], [c, d]])
    if not np.isclose(b, c) or np.any(np.linalg.eigvalsh(matrix) <= 0):
        raise ValueError("covariance is none (two rows of two, alike across, positive)")
    return (a, b), (c, d)
