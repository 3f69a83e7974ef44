"""Put the question: what is on the suspect spot that is not on the clean ones?"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from typing import TYPE_CHECKING, Any

import numpy as np

from ..errors import InputError, SettingError
from ..identification import examine, settings_from
from ..names import symbol_from_name
from .answer import Contrast, Difference, NotComparable
from .compare import Comparison, compare, totals, verdict_of
from .hints import find_hints
from .measure import CALLED, Measured, Strength, called_anywhere, strengths
from .words import explain

if TYPE_CHECKING:
    from ..matching.settings import Settings
    from ..spectrum import Spectrum

ONE_CLEAN = "one clean spectrum: how much clean spots differ among themselves is not known"
LEAST_OVERLAP_EV = 50.0


def contrast(
    suspect: Spectrum,
    clean: Sequence[Spectrum],
    settings: Settings | None = None,
    *,
    relative_to: str | None = None,
    **settings_given: Any,
) -> Contrast:
    """Say which elements are on a suspect spot and not on clean ones, or more or less of them.

    Parameters
    ----------
    suspect : Spectrum
        The spot that failed.
    clean : sequence of Spectrum
        One or more good ones; dwell, step, range and charging may differ.
    settings : Settings, optional
        What the analyst knows, for all of them; or its fields one by one.
    relative_to : str, optional
        Element that ratios are relative to; by default all that was found, each over its sensitivity.

    Raises
    ------
    InputError
        When no clean spectrum is given, or ranges hardly overlap, or a spectrum cannot be searched.
    SettingError
        When `relative_to` is not on all of them.
    """
    chosen = settings_from(settings, settings_given)
    if not clean:
        raise InputError("there is no clean spectrum to compare with", remedy="name one or more after the suspect one")
    _check_ranges(suspect, clean)
    first = [Measured(examine(spectrum, chosen)) for spectrum in (suspect, *clean)]
    elements = called_anywhere(first)
    asked = tuple(dict.fromkeys((*chosen.why_not, *elements)))
    again = replace(chosen, why_not=asked)
    spectra = [Measured(examine(spectrum, again)) for spectrum in (suspect, *clean)]
    return _answer(spectra, elements, chosen, relative_to)


def _check_ranges(suspect: Spectrum, clean: Sequence[Spectrum]) -> None:
    for one in clean:
        shared = sum(
            max(0.0, min(high, top) - max(low, bottom))
            for low, high in suspect.ranges_ev
            for bottom, top in one.ranges_ev
        )
        if shared < LEAST_OVERLAP_EV:
            raise InputError(
                f"shares {shared:.0f} eV with {suspect.name}, which is too little to compare",
                source=one.name,
                remedy="compare scans of the same range",
            )


def _answer(
    spectra: Sequence[Measured], elements: tuple[str, ...], settings: Settings, relative_to: str | None
) -> Contrast:
    measured: dict[str, tuple[tuple[str, ...], list[Strength]]] = {}
    apart: list[NotComparable] = []
    for element in elements:
        one = strengths(element, spectra)
        if one is None:
            apart.append(NotComparable(element=element, why=_why_not(element, spectra)))
        else:
            measured[element] = one
    basis = _basis(relative_to, measured, spectra)
    total = totals({element: found[1] for element, found in measured.items()}, basis) if measured else []
    differences: list[Difference] = []
    scatters = []
    for element, (lines, found) in measured.items():
        if basis == element:
            continue
        comparison = compare(element, lines, found, total, [one.probability(element) for one in spectra])
        if comparison.scatter is not None:
            scatters.append(comparison.scatter)
        difference = _difference(comparison, spectra, relative_to=basis or "total")
        if difference is None:
            apart.append(NotComparable(element=element, why="too weak, or too much under other lines, to be compared"))
        else:
            differences.append(difference)
    return _put_together(spectra, settings, basis or "total", differences, apart, scatters)


def _basis(
    relative_to: str | None, measured: dict[str, tuple[tuple[str, ...], list[Strength]]], spectra: Sequence[Measured]
) -> str | None:
    if relative_to is None:
        return None
    symbol = symbol_from_name(relative_to)
    if symbol not in measured or any(s.value <= 3.0 * s.sigma for s in measured[symbol][1]):
        there = [e for e, (_, found) in measured.items() if all(s.value > 3.0 * s.sigma for s in found)]
        raise SettingError(
            f"{symbol} is not seen in all {len(spectra)} spectra, so that nothing can be relative to it; "
            f"these are: {', '.join(there) or 'none'}"
        )
    return symbol


def _why_not(element: str, spectra: Sequence[Measured]) -> str:
    where = [one.examined.answer.spectrum for one in spectra if one.probability(element) >= CALLED]
    return f"called in {', '.join(where)}, but no strong line of it is in range and unhidden in all of them"


def _difference(comparison: Comparison, spectra: Sequence[Measured], *, relative_to: str) -> Difference | None:
    element = comparison.element
    own = spectra[0].probability(element)
    theirs = max(one.probability(element) for one in spectra[1:])
    verdict = verdict_of(comparison, own, theirs)
    if verdict is None:
        return None
    log_ratio, log_sigma = comparison.log_ratio, comparison.log_sigma
    beyond = None
    if log_ratio is not None and comparison.scatter is not None:
        beyond = bool(abs(log_ratio) > 2.0 * comparison.scatter)
    return Difference(
        element=element,
        verdict=verdict,  # type: ignore[arg-type]
        probability=own,
        probability_clean=theirs,
        ratio=None if log_ratio is None else float(np.exp(log_ratio)),
        ratio_factor=None if log_sigma is None else float(np.exp(log_sigma)),
        limit=comparison.limit,
        above_scatter=beyond,
        lines=comparison.lines,
        reasons=explain(comparison, own, theirs, len(spectra) - 1, relative_to),
    )


def _put_together(
    spectra: Sequence[Measured],
    settings: Settings,
    relative_to: str,
    differences: list[Difference],
    apart: list[NotComparable],
    scatters: list[float],
) -> Contrast:
    answers = [one.examined.answer for one in spectra]
    groups = {
        verdict: tuple(sorted((d for d in differences if d.verdict == verdict), key=_weight))
        for verdict in ("only on suspect", "enriched", "depleted", "only on clean", "unchanged")
    }
    new = {d.element for d in (*groups["only on suspect"], *groups["enriched"])}
    warnings = [f"{answer.spectrum}: {text}" for answer in answers for text in answer.warnings]
    if len(spectra) == 2:
        warnings.append(ONE_CLEAN)
    suspect = answers[0]
    told = {key: value for key, value in suspect.settings.items() if key != "why_not"}
    return Contrast(
        suspect=suspect.spectrum,
        clean=tuple(answer.spectrum for answer in answers[1:]),
        sha256={answer.spectrum: answer.sha256 for answer in answers},
        edition=suspect.edition,
        own_tables=suspect.own_tables,
        settings={**told, "why_not": list(settings.why_not)},
        relative_to=relative_to,
        scatter=float(np.exp(np.median(scatters))) if scatters else None,
        only_on_suspect=groups["only on suspect"],
        enriched=groups["enriched"],
        depleted=groups["depleted"],
        only_on_clean=groups["only on clean"],
        unchanged=groups["unchanged"],
        not_comparable=tuple(apart),
        hints=find_hints(new, suspect.called, {one.element for one in apart}),
        cautions=suspect.cautions,
        warnings=tuple(dict.fromkeys(warnings)),
        examined=tuple(one.examined for one in spectra),
    )


def _weight(difference: Difference) -> tuple[float, float]:
    """What differs most first, then what is surest."""
    change = abs(np.log(difference.ratio)) if difference.ratio else np.log(difference.limit or 1.0)
    return -float(change), -difference.probability
