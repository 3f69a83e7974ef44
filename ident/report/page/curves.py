"""What the browser draws of one spectrum: curves packed into text, in the units of the answer."""

from __future__ import annotations

import base64
from typing import TYPE_CHECKING, Any

import numpy as np

from ...identification.predicted import background_slope, predict_curves
from ...spectrum import FloatArray
from ..figure_axis import stretches_of
from ..figure_labels import Label

if TYPE_CHECKING:
    from ...identification import Examination
    from ...minima import Minimum

LEVELS = 65_000  # of 16 bits; one is kept for "nothing here"
NOTHING = -32_768
EVEN = 1e-3  # of a step: how far from even the energies may be and still be told by first and step
STEEP = 4.0  # highest over lowest ordinate from which the direct panel is logarithmic, as in figures
POSSIBLE = 0.05  # least probability of an element whose pattern can be chosen


def packed(values: FloatArray) -> dict[str, Any]:
    """Pack numbers (n,), NaN for nothing, as 16-bit steps from `from`: good to one part in 65 000 of their span."""
    finite = np.isfinite(values)
    low = float(np.min(values[finite])) if finite.any() else 0.0
    high = float(np.max(values[finite])) if finite.any() else 0.0
    step = (high - low) / LEVELS or 1.0
    whole = np.full(values.size, NOTHING, dtype="<i2")
    whole[finite] = np.round((values[finite] - low) / step) + (NOTHING + 1)
    return {"from": low, "step": step, "data": base64.b64encode(whole.tobytes()).decode("ascii")}


def energies(values: FloatArray) -> dict[str, Any]:
    """Tell energies (n,) by first, step and number where they are even, else one by one."""
    step = (values[-1] - values[0]) / (values.size - 1)
    even = values[0] + step * np.arange(values.size)
    if np.max(np.abs(values - even)) <= EVEN * step:
        return {"first": float(values[0]), "step": float(step), "n": int(values.size)}
    return {"each": [round(float(v), 4) for v in values]}


def runs(values: FloatArray) -> dict[str, Any]:
    """Pack a curve (n,) that is nothing in most places: where its pieces begin, how long they are, and the pieces."""
    finite = np.isfinite(values)
    edges = np.flatnonzero(np.diff(np.concatenate([[False], finite, [False]]).astype(np.int8)))
    starts, ends = edges[::2], edges[1::2]
    return {"at": [[int(a), int(b - a)] for a, b in zip(starts, ends, strict=True)], **packed(values[finite])}


def curve_data(examination: Examination, labels: tuple[Label, ...]) -> dict[str, Any]:
    """Give the curves of a spectrum as plain data: see `page.js` for who reads them."""
    analysis, answer = examination.analysis, examination.answer
    shown = [a.element for a in answer.assignments if a.probability >= POSSIBLE]
    together = predict_curves(examination, answer.called)
    alone = {element: predict_curves(examination, [element]) for element in shown}
    minima = {m.energy_ev for m in analysis.minima}
    nothing = {note.energy_ev for note in answer.artefacts}
    windows = []
    for number, (window, differential) in enumerate(
        zip(analysis.spectrum.windows, analysis.differentials, strict=True)
    ):
        told = {
            "energy": energies(differential.energy_ev),
            "measured": packed(differential.derivative - background_slope(differential)),
            "together": runs(together[number]),
            "patterns": {element: runs(alone[element][number]) for element in shown},
        }
        if answer.kind != "derivative":
            told["direct"] = {"energy": energies(window.energy_ev), "value": packed(window.intensity)}
        windows.append(told)
    return {
        "windows": windows,
        "called": list(answer.called),
        "steep": steep(examination),
        "stretches": [[round(s.low_ev, 3), round(s.high_ev, 3), s.gain, s.window] for s in stretches_of(analysis)],
        "minima": [_minimum(m, labels, m.energy_ev in nothing) for m in analysis.minima],
        "artefacts": sorted(nothing - minima),
    }


def steep(examination: Examination) -> bool:
    """Tell whether the direct ordinate falls so steeply that its axis is to be logarithmic."""
    if examination.answer.kind == "derivative":
        return False
    windows = examination.analysis.spectrum.windows
    low = min(float(np.min(w.intensity)) for w in windows)
    return low > 0.0 and max(float(np.max(w.intensity)) for w in windows) > STEEP * low


def label_at(energy_ev: float, labels: tuple[Label, ...]) -> Label | None:
    """Find what is written at a minimum."""
    return next((one for one in labels if one.role != "artefact" and one.energy_ev == energy_ev), None)


def _minimum(minimum: Minimum, labels: tuple[Label, ...], no_line: bool) -> dict[str, Any]:
    label = label_at(minimum.energy_ev, labels)
    told: dict[str, Any] = {"ev": round(minimum.energy_ev, 3)}
    if label is not None:
        told |= {"role": label.role, "label": list(label.text), "rank": round(label.rank, 3)}
        told |= {"shared": True} if label.shared else {}
    elif no_line:
        told["role"] = "artefact"
    return told
