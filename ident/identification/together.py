"""Several spectra of one sitting: one axis for all, so that a clear one settles an unclear one."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from typing import Any

import numpy as np

from ..errors import InputError
from ..matching.settings import Settings
from ..scale import FittedAxis, Sitting, find_sittings, usual_axis
from ..spectrum import Spectrum
from .answer import Identification
from .build import examine, settings_from

APART = "its axis could not be tied to those of the other spectra (too few lines, or too far off): taken on its own"


def identify_together(
    spectra: Sequence[Spectrum], settings: Settings | None = None, **settings_given: Any
) -> tuple[Identification, ...]:
    """Name the elements in spectra that share offset and slope of the axis.

    Parameters are those of `identify`, and so are the errors. A spectrum whose axis the others contradict by more
    than four standard deviations is taken on its own, and its answer warns of that.
    """
    chosen = settings_from(settings, settings_given)
    answers = []
    for spectrum, sitting in zip(spectra, sittings_of(spectra, chosen), strict=True):
        answer = examine(spectrum, replace(chosen, sitting=sitting)).answer
        answers.append(warned_of_sitting(answer, sitting) if len(spectra) > 1 else answer)
    return tuple(answers)


def warned_of_sitting(answer: Identification, sitting: Sitting | None) -> Identification:
    """Say in an answer that the other spectra of the sitting did not help it."""
    return answer if sitting is not None else replace(answer, warnings=(*answer.warnings, APART))


def sittings_of(spectra: Sequence[Spectrum], settings: Settings) -> tuple[Sitting | None, ...]:
    """What the other spectra say of the axis of each; None where they say nothing that can be used."""
    prior = usual_axis() if settings.scale is None else settings.scale.prior()
    if settings.insulator:
        prior = prior.of_insulator()
    return find_sittings([_fitted(spectrum, settings) for spectrum in spectra], prior)


def _fitted(spectrum: Spectrum, settings: Settings) -> FittedAxis | None:
    try:
        scale = examine(spectrum, settings).evidence.scale
    except InputError:
        return None  # said when its own turn comes
    return FittedAxis(
        name=spectrum.name,
        offset_ev=scale.offset_ev,
        slope=scale.slope,
        covariance=np.array(scale.covariance),
        lines=scale.lines_used,
    )
