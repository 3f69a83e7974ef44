"""A sample that charges is found out without being told, and an axis without lines is not made up."""

from __future__ import annotations

from pathlib import Path

import numpy as np

from ident import Spectrum, identify, read_spectrum

DEMO = Path(__file__).parents[2] / "demo_spectra"


def test_a_charged_glass_is_read_without_being_told() -> None:
    # Truth: what was put in (demo_spectra/README.md): soda-lime glass, everything about 21 eV too high.
    answer = identify(read_spectrum(DEMO / "feedthrough_bead.vms"))
    called = {a.element for a in answer.assignments if a.probability >= 0.5}
    assert {"O", "Si", "Ca", "Na"} <= called
    assert answer.scale.charging == "yes"
    assert all(abs(off - 21.0) < 5.0 for _, off, _ in answer.scale.readings)


def test_a_scan_without_lines_says_nothing_of_the_axis() -> None:
    energy = np.arange(100.0, 900.0)
    counts = np.random.default_rng(11).poisson(3e4 * np.exp(-energy / 500.0)).astype(float)
    answer = identify(Spectrum.from_arrays(energy, counts))
    assert not [a for a in answer.assignments if a.probability >= 0.5]
    assert answer.scale.readings == ()
