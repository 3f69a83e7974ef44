"""Calibrate an energy axis with spectra of reference metals."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from datetime import UTC, datetime

import numpy as np

from .. import tables
from ..errors import SettingError
from ..minima import Analysis, Minimum, analyse
from ..names import symbol_from_name
from ..spectrum import FloatArray, Spectrum
from .axis import SLOPE_SIGMA, AxisFit, AxisPrior, fit_axis, usual_axis
from .calibration import CalibrationLine, Deviation, ScaleCalibration, judge
from .pairing import FAR, LEAST_SIGNIFICANCE, Pair, first_axis, pair_lines
from .refusals import refuse_feeble, refuse_out_of_range, refuse_without_lines

LOOSE_EV = (1.5, 1.0, 0.7)  # how far the axis may still be off in each round of pairing
OPEN_OFFSET_EV = 8.0  # the lines give the offset; this keeps the fit from drifting where the slope is open
DETERMINED = 0.5  # part of the usual deviation of a slope from which the lines are said to give it
STRANGE = 2.0  # usual deviations of a slope
VACUUM_EV = -4.5  # an axis counted from the standard vacuum level reads so much less (IUPAC 2020)

Spectra = Mapping[str, Spectrum | Sequence[Spectrum]]


def calibrate_scale(spectra: Spectra, *, resolution: float | None = None, date: str | None = None) -> ScaleCalibration:
    """Fit offset and slope of the energy axis to spectra of clean reference metals, recorded alike.

    Parameters
    ----------
    spectra : mapping of str to Spectrum or sequence of Spectrum
        By metal, Cu, Al, Ag or Au (or its name): its spectrum, or several that cover different ranges.
    resolution : float, optional
        Relative resolution of the analyser (0.005 for 0.5 %), when known.
    date : str, optional
        Day of the calibration, ISO 8601; today when left out.

    Raises
    ------
    SettingError
        When no metal is given, or one that is none of the four.
    InputError
        When the lines that are needed are out of range or not above the noise, or a spectrum cannot be searched.
    """
    analyses = {
        metal: [analyse(spectrum, resolution=resolution) for spectrum in _several(given)]
        for metal, given in by_metal(spectra).items()
    }
    return calibrate(analyses, date=date)


def by_metal(spectra: Spectra) -> dict[str, list[Spectrum]]:
    """Sort spectra by the symbols of their metals, and refuse other metals."""
    found: dict[str, list[Spectrum]] = {}
    for name, given in spectra.items():
        metal = reference_metal(name)
        found.setdefault(metal, []).extend(_several(given))
    if not found or not all(found.values()):
        raise SettingError("an energy scale needs a spectrum of copper, aluminium, silver or gold; give Cu and Au")
    return found


def reference_metal(name: str) -> str:
    """Symbol of one of the four reference metals."""
    symbol = symbol_from_name(name)
    if symbol not in tables.REFERENCE_METALS:
        raise SettingError(
            f"{symbol} is no reference metal for the energy scale; give {', '.join(tables.REFERENCE_METALS)}"
        )
    return symbol


def _several(given: Spectrum | Sequence[Spectrum]) -> list[Spectrum]:
    return [given] if isinstance(given, Spectrum) else list(given)


def calibrate(analyses: Mapping[str, Sequence[Analysis]], *, date: str | None = None) -> ScaleCalibration:
    """Do the same with spectra whose minima were found; errors are those of `calibrate_scale`."""
    minima: dict[str, list[Minimum]] = {
        metal: sorted(
            (m for analysis in several for m in analysis.minima if m.significance >= LEAST_SIGNIFICANCE),
            key=lambda m: m.energy_ev,
        )
        for metal, several in analyses.items()
    }
    refuse_out_of_range(analyses)
    offset_ev, slope = first_axis(minima)
    for loose_ev in LOOSE_EV:
        pairs = pair_lines(minima, offset_ev, slope, loose_ev)
        refuse_without_lines(analyses, pairs, offset_ev, slope)
        widened = _widening(pairs)
        fit, used = _fit(pairs, widened)
        offset_ev, slope = fit.offset_ev, fit.slope
    kept = [pair for pair, good in zip(pairs, used, strict=True) if good]
    refuse_without_lines(analyses, kept, offset_ev, slope)
    refuse_feeble(analyses, kept)
    return _calibration(analyses, pairs, used, fit, widened, date)


def _expected_ev(pairs: Sequence[Pair], widened: FloatArray) -> FloatArray:
    """Minima as wide as recorded, those of rows that give minima moved along with the others."""
    return np.array(
        [p.expected_ev + (0.0 if p.reference.maximum_ev is not None else widened @ [1.0, p.expected_ev]) for p in pairs]
    )


def _widening(pairs: Sequence[Pair]) -> FloatArray:
    """Offset and slope of what the recorded widths add to the minima, from the lines whose maximum is known."""
    known = [p for p in pairs if p.reference.maximum_ev is not None]
    if not known:
        return np.zeros(2)
    kilo = np.array([[1.0, p.expected_ev / 1000.0] for p in known])
    weight = np.array([(0.1 * p.minimum.width_ev) ** -2 for p in known])
    known_little = np.diag([0.5**-2, 1.0**-2])
    solution = np.linalg.solve(
        kilo.T @ (kilo * weight[:, None]) + known_little, kilo.T @ (weight * np.array([p.widened_ev for p in known]))
    )
    return np.array([solution[0], solution[1] / 1000.0])


def _fit(pairs: Sequence[Pair], widened: FloatArray) -> tuple[AxisFit, list[bool]]:
    """Fit the axis robustly, then leave out what stands too far off and fit again."""
    expected, sigma = _expected_ev(pairs, widened), np.array([p.sigma_ev for p in pairs])
    deviation = np.array([p.minimum.energy_ev for p in pairs]) - expected
    used = np.ones(len(pairs), dtype=bool)
    for _ in range(2):
        fit = _fit_axis(expected[used], deviation[used], sigma[used])
        off = np.abs(deviation - fit.offset_ev - fit.slope * expected) / sigma
        used = off < FAR if np.any(off < FAR) else used
    return _fit_axis(expected[used], deviation[used], sigma[used]), used.tolist()


def _prior() -> AxisPrior:
    usual = usual_axis()
    covariance = np.diag([OPEN_OFFSET_EV**2, SLOPE_SIGMA**2])
    return AxisPrior(offset_ev=usual.offset_ev, slope=usual.slope, covariance=covariance)


def _fit_axis(expected: FloatArray, deviation: FloatArray, sigma: FloatArray) -> AxisFit:
    return fit_axis(expected, deviation, sigma, np.zeros(0, dtype=int), 0, prior=_prior())


def _calibration(
    analyses: Mapping[str, Sequence[Analysis]],
    pairs: Sequence[Pair],
    used: Sequence[bool],
    fit: AxisFit,
    widened: FloatArray,
    date: str | None,
) -> ScaleCalibration:
    expected, sigma = _expected_ev(pairs, widened), np.array([p.sigma_ev for p in pairs])
    residual = np.array([p.minimum.energy_ev for p in pairs]) - expected * (1.0 + fit.slope) - fit.offset_ev
    good = np.array(used, dtype=bool)
    chi2, degrees = float(np.sum((residual[good] / sigma[good]) ** 2)), max(int(good.sum()) - 2, 0)
    covariance = fit.covariance * _inflation(chi2, degrees)
    ranges = [r for several in analyses.values() for analysis in several for r in analysis.spectrum.ranges_ev]
    low, high = min(r[0] for r in ranges), max(r[1] for r in ranges)
    deviations = [_deviation(fit, covariance, energy) for energy in np.linspace(low, high, 9)]
    answer, worst = judge(deviations)
    deciding = _deciding(pairs, expected, sigma, good, worst.energy_ev)
    slope_sigma = math.sqrt(float(covariance[1, 1]))
    return ScaleCalibration(
        offset_ev=fit.offset_ev,
        offset_sigma_ev=math.sqrt(float(covariance[0, 0])),
        slope=fit.slope,
        slope_sigma=slope_sigma,
        covariance=(
            (float(covariance[0, 0]), float(covariance[0, 1])),
            (float(covariance[1, 0]), float(covariance[1, 1])),
        ),
        broadening_offset_ev=float(widened[0]),
        broadening_slope=float(widened[1]),
        slope_from="lines" if slope_sigma < DETERMINED * SLOPE_SIGMA else "mostly what is usual",
        chi2=chi2,
        degrees_of_freedom=degrees,
        metals=tuple(analyses),
        lines=tuple(
            _line(pair, float(e), float(r), bool(u))
            for pair, e, r, u in zip(pairs, expected, residual, used, strict=True)
        ),
        spectra=tuple(dict.fromkeys(a.spectrum.name for several in analyses.values() for a in several)),
        range_ev=(low, high),
        within_3_ev=answer,
        worst=worst,
        deciding=deciding,
        date=date or datetime.now(UTC).date().isoformat(),
        edition=tables.edition(),
        notes=tuple(_notes(pairs, good, fit, covariance)),
    )


def _inflation(chi2: float, degrees: int) -> float:
    """Widen the covariance where the lines scatter more than they should."""
    unlikely = degrees > 0 and chi2 > degrees + 2.0 * math.sqrt(2.0 * degrees)
    return chi2 / degrees if unlikely else 1.0


def _line(pair: Pair, expected_ev: float, residual_ev: float, used: bool) -> CalibrationLine:
    return CalibrationLine(
        metal=pair.reference.metal,
        transition=pair.transition,
        expected_ev=expected_ev,
        found_ev=pair.minimum.energy_ev,
        sigma_ev=pair.sigma_ev,
        residual_ev=residual_ev,
        used=used,
        status=pair.reference.row.status,
        source=pair.reference.row.source,
    )


def _deviation(fit: AxisFit, covariance: FloatArray, energy_ev: float) -> Deviation:
    leverage = np.array([1.0, energy_ev])
    return Deviation(
        energy_ev=float(energy_ev),
        deviation_ev=fit.offset_ev + fit.slope * float(energy_ev),
        sigma_ev=math.sqrt(float(leverage @ covariance @ leverage)),
    )


def _deciding(
    pairs: Sequence[Pair], expected: FloatArray, sigma: FloatArray, good: np.ndarray, energy_ev: float
) -> str:
    """The line without which the axis would be least sure at an energy."""
    prior = np.linalg.inv(_prior().covariance)
    design = np.stack([np.ones(expected.size), expected], axis=1)
    leverage = np.array([1.0, energy_ev])

    def variance_without(left_out: int) -> float:
        kept = good & (np.arange(good.size) != left_out)
        information = prior + design[kept].T @ (design[kept] / sigma[kept, None] ** 2)
        return float(leverage @ np.linalg.solve(information, leverage))

    best = max(np.flatnonzero(good), key=lambda i: variance_without(int(i)))
    return f"{pairs[int(best)].reference.metal} {pairs[int(best)].transition}"


def _notes(pairs: Sequence[Pair], good: np.ndarray, fit: AxisFit, covariance: FloatArray) -> list[str]:
    """What the user should know before relying on it."""
    notes = []
    metals = {p.reference.metal for p in pairs}
    sharp = [p for p, u in zip(pairs, good, strict=True) if u and p.reference.row.role == "sharp"]
    if math.sqrt(float(covariance[1, 1])) >= DETERMINED * SLOPE_SIGMA:
        notes.append(
            "these lines hardly give the slope, so that it is mostly what is usual; add a metal far away in energy "
            "(copper and gold, or silver and aluminium)"
        )
    if abs(fit.slope - usual_axis().slope) > STRANGE * SLOPE_SIGMA:
        notes.append(
            f"a slope of {fit.slope:+.2%} is more than axes usually have: make sure that the metals are clean and were "
            "recorded alike"
        )
    if not sharp:
        notes.append(
            "only lines below 100 eV, where many elements have one: make sure that the metals are what is said"
        )
    if metals == {"Al"}:
        notes.append(
            "aluminium alone: its oxide stands 6 to 8 eV lower, and would be taken for the metal; sputter it clean"
        )
    if any(p.transition == "M45N45N45" for p in pairs):
        notes.append("the two lines of silver are one minimum here, which is known to 3 eV only; scan them finer")
    aside = [f"{p.reference.metal} {p.transition}" for p, u in zip(pairs, good, strict=True) if not u]
    if aside:
        notes.append(f"set aside as too far off: {', '.join(aside)}")
    middle = float(np.mean([p.expected_ev for p in pairs]))
    there = _deviation(fit, covariance, middle)
    if abs(there.deviation_ev - VACUUM_EV) < max(1.0, there.sigma_ev) and abs(fit.slope) < 1e-3:
        notes.append("the axis reads 4.5 eV too low or nearly so, as one does that counts from the vacuum level")
    return notes
