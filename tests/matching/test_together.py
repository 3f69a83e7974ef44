"""Spectra of one sitting: a clear one places the axis of an unclear one; one that does not belong is left alone."""

from __future__ import annotations

import json
from pathlib import Path

import numpy as np
import pytest

from ident import Spectrum, identify, identify_together
from ident.identification import Identification
from tests.benchmarks.forward import Scale, build_case, draw_setup
from tests.benchmarks.samples import Constituent
from tests.program import Run

DEMO = Path(__file__).resolve().parents[2] / "demo_spectra"
CLEAR = (
    Constituent(element="Cu", strength=0.7),
    Constituent(element="Fe", strength=0.5),
    Constituent(element="C", strength=0.3),
    Constituent(element="O", strength=0.4),
)
UNCLEAR = (Constituent(element="C", strength=0.5), Constituent(element="S", strength=0.4))
OFFSETS_EV = (-4.0, -2.0, 1.0, 3.0, 4.5)


def measured(sample: tuple[Constituent, ...], offset_ev: float, seed: int) -> Spectrum:
    rng = np.random.default_rng(seed)
    setup = draw_setup(rng, "surveys", sample)
    setup = type(setup)(**{**setup.__dict__, "scale": Scale(offset_ev=offset_ev, slope=0.0), "film_nm": 0.0})
    return build_case(rng, setup, sample, kind="surveys", seed=seed, recipe="sitting").spectrum


def reading(answer: Identification) -> tuple[float, float]:
    """How far too high the axis reads at the lowest place told, and its standard deviation."""
    _, off, sigma = answer.scale.readings[0]
    return off, sigma


def test_a_clear_spectrum_places_the_axis_of_an_unclear_one() -> None:
    alone, together, claimed = [], [], []
    for place, offset in enumerate(OFFSETS_EV):
        unclear = measured(UNCLEAR, offset, 3_100 + place)
        clear = [measured(CLEAR, offset, 3_200 + 10 * place + n) for n in range(2)]
        shared = identify_together([unclear, *clear])[0]
        off, sigma = reading(shared)
        alone.append(reading(identify(unclear))[0] - offset)
        together.append(off - offset)
        claimed.append(sigma)
        assert "of the sitting" in shared.scale.source
    assert np.sqrt(np.mean(np.square(together))) < np.sqrt(np.mean(np.square(alone)))
    assert np.mean(np.abs(together) < 2.0 * np.array(claimed)) >= 0.6  # 95 % of many; five are few


def test_order_does_not_matter_and_one_spectrum_is_taken_alone() -> None:
    spectra = [measured(CLEAR, 1.0, 3_300), measured(CLEAR, 1.0, 3_301), measured(UNCLEAR, 1.0, 3_302)]
    forward = identify_together(spectra)
    backward = identify_together(spectra[::-1])[::-1]
    for one, other in zip(forward, backward, strict=True):
        assert one.scale.offset_ev == pytest.approx(other.scale.offset_ev, abs=1e-6)
        assert [a.element for a in one.assignments] == [a.element for a in other.assignments]
    assert identify_together(spectra[:1])[0].to_dict() == identify(spectra[0]).to_dict()


def test_a_charged_spectrum_is_taken_on_its_own_and_says_so() -> None:
    spectra = [measured(CLEAR, 1.0, 3_400 + n) for n in range(3)] + [measured(CLEAR, 30.0, 3_410)]
    charged = identify_together(spectra, insulator=True)[3]
    assert any("on its own" in text for text in charged.warnings)
    assert charged.scale.offset_ev == pytest.approx(30.0, abs=6.0)


def test_together_on_the_command_line_is_said_and_what_was_assumed(run: Run) -> None:
    names = [DEMO / "slip_ring_dead.csv", DEMO / "slip_ring_reference.csv"]
    code, out, _ = run("assign", "--together", "--format", "json", *names)
    answers = [json.loads(line) for line in out.splitlines()]
    assert code == 0
    for answer, other in zip(answers, names[::-1], strict=True):
        assert answer["settings"]["sitting"]["spectra"] == [str(other)]


def test_sputtering_makes_its_gas_likelier_and_air_less_so() -> None:
    """Argon stays after sputtering with it and carbon goes: common practice, no source."""
    sample = (Constituent(element="Cu", strength=0.7), Constituent(element="Ar", strength=0.05))
    told = {None: [], "Ar": []}
    for seed in range(3_500, 3_508):
        spectrum = measured(sample, 1.0, seed)
        for gas in (None, "argon"):
            answer = identify(spectrum, sputtered=gas)
            found = {a.element: a for a in answer.assignments}
            told["Ar" if gas else None].append(found["Ar"].probability if "Ar" in found else 0.0)
            if gas:
                assert answer.settings["sputtered"] == "Ar"
                assert any("sputtering" in text for text in answer.cautions)
            if gas and "Ar" in found:
                assert "sputter-gas" in {reason.code for reason in found["Ar"].reasons}
    assert np.mean(told["Ar"]) >= np.mean(told[None])
    assert all(with_gas >= without - 0.02 for with_gas, without in zip(told["Ar"], told[None], strict=True))
