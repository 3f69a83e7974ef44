"""Physics of line strengths against published numbers and against a second model where there is one."""

from __future__ import annotations

import doctest
import math
from types import ModuleType

import numpy as np
import pytest
import xraydb
import xraylib

from ident import tables
from ident.physics import backscatter, freepath_arrays, ionisation, recording, yields
from ident.physics.freepath import tpp2m_nm


@pytest.mark.parametrize(
    "module", [backscatter, freepath_arrays, ionisation, recording, yields], ids=lambda m: m.__name__
)
def test_examples_in_the_docstrings(module: ModuleType) -> None:
    """Each stands beside the published number that it is near to."""
    result = doctest.testmod(module)
    assert result.attempted > 0
    assert result.failed == 0


def test_two_models_of_ionisation_agree() -> None:
    """Within a factor of 1.5 from U = 3 to 30 for K levels (common practice: that is what either is good to)."""
    binding = np.array([284.2, 543.1, 1559.6])[:, None]
    over = np.array([3.0, 5.0, 10.0, 30.0])
    ratio = ionisation.casnati_cm2(binding, 2, over * binding) / ionisation.gryzinski_cm2(binding, 2, over * binding)
    assert ratio.shape == (3, 4)
    assert np.all((ratio > 1 / 1.5) & (ratio < 1.5))


@pytest.mark.parametrize("model", sorted(ionisation.MODELS))
def test_ionisation_is_greatest_at_three_to_five_times_the_binding_energy(model: str) -> None:
    """Common practice (U of about 3 to 5); Casnati's non-relativistic maximum lies near 3.5."""
    over = np.linspace(1.01, 20.0, 2000)
    best = over[np.argmax(ionisation.MODELS[model](1000.0, 2, 1000.0 * over))]
    assert 2.5 < best < 5.5


def test_arrays_give_what_numbers_give() -> None:
    binding, electrons = np.array([99.3, 368.3, 4000.0]), np.array([6, 6, 2])
    for model in ionisation.MODELS.values():
        every = model(binding, electrons, 3000.0)
        assert every[2] == 0.0  # not enough energy
        assert every[0] == pytest.approx(float(model(99.3, 6, 3000.0)))
    paths = freepath_arrays.tpp2m_paths_nm(np.array([272.0, 1000.0]), 4, 2.26, 12.011)
    assert paths == pytest.approx([1.074, 2.669], rel=2e-3)  # worked values of TPP-2M for graphite


@pytest.mark.parametrize("z", [13, 29, 47, 79])
def test_two_models_of_backscattering_agree(z: int) -> None:
    """Shimizu (1983), mean of 0 and 30 degrees, and Reuter (1972): within 20 % from U = 3 to 20."""
    for over in (3.0, 5.0, 10.0, 20.0):
        shimizu = (backscatter.shimizu_factor(z, over, 0) + backscatter.shimizu_factor(z, over, 30)) / 2
        assert shimizu == pytest.approx(backscatter.reuter_factor(z, over), rel=0.20)


@pytest.mark.parametrize(("z", "measured"), [(6, 0.06), (13, 0.15), (29, 0.30), (47, 0.41), (79, 0.50)])
def test_backscattering_coefficients(z: int, measured: float) -> None:
    """Measured at 20 keV (H. E. Bishop, 1966, from memory, to 0.03)."""
    assert backscatter.reuter_coefficient(z) == pytest.approx(measured, abs=0.03)


def test_backscattering_grows_with_atomic_number_and_overvoltage() -> None:
    """Common practice; nothing comes back with enough energy at threshold."""
    z, over = np.arange(6, 93)[:, None], np.array([2.0, 5.0, 20.0])
    for angle in (0, 30, 45):
        factor = backscatter.shimizu_factor(z, over, angle)
        assert np.all(np.diff(factor, axis=0) >= 0)
        assert np.all(np.diff(factor, axis=1) >= 0)
        assert np.all((factor >= 1) & (factor < 3))
    assert backscatter.shimizu_factor(79, 0.9) == 1.0


@pytest.mark.parametrize(("z", "published"), [(13, 0.039), (16, 0.078), (26, 0.340), (29, 0.440), (31, 0.507),
                                              (47, 0.831)])  # fmt: skip
def test_k_yields(z: int, published: float) -> None:
    """Krause, J. Phys. Chem. Ref. Data 8 (1979) 307 (from memory), to 5 %; xraylib to 2 %, xraydb to 20 %."""
    own = float(yields.fluorescence_yield_k(z))
    assert own == pytest.approx(published, rel=0.05)
    assert own == pytest.approx(xraylib.FluorYield(z, xraylib.K_SHELL), rel=0.02)
    assert own == pytest.approx(xraydb.fluor_yield(xraydb.atomic_symbol(z), "K", "Ka", 1e6)[0], rel=0.2)


def test_l_and_m_yields() -> None:
    """Mean yields of the shells against xraylib's of L3 and M5: 20 % from Sn to U (L), 35 % from Er to U (M)."""
    for z in range(50, 93):
        if z in {51, 75}:
            continue  # not smooth in that library
        assert float(yields.fluorescence_yield_l(z)) == pytest.approx(xraylib.FluorYield(z, xraylib.L3_SHELL), rel=0.2)
    for z in range(68, 93):
        assert float(yields.fluorescence_yield_m(z)) == pytest.approx(xraylib.FluorYield(z, xraylib.M5_SHELL), rel=0.35)


def test_auger_yield_falls_with_atomic_number() -> None:
    """Common practice: light elements decay by Auger electrons, K vacancies half and half near Z = 31."""
    z = np.arange(5, 93)
    for law in (yields.fluorescence_yield_k, yields.fluorescence_yield_l, yields.fluorescence_yield_m):
        own = yields.auger_yield(law(z))
        assert np.all(np.diff(own[z >= 14]) < 0)
        assert np.all((own >= 0) & (own <= 1))
    assert float(yields.auger_yield(yields.fluorescence_yield_k(31))) == pytest.approx(0.5, abs=0.03)
    with pytest.raises(ValueError, match="more than one"):
        yields.auger_yield(0.5, 0.6)


def test_transfer_conserves_vacancies() -> None:
    """Sum rule: what stays after all transfer is as much as was made, to rounding."""
    made = np.array([[1.0, 0.2], [0.7, 3.0], [2.0, 0.0]])
    transfer = {(0, 1): 0.31, (0, 2): 0.52, (1, 2): 0.153}
    passed = yields.with_transfer(made, transfer)
    stay = [1.0 - sum(part for (source, _), part in transfer.items() if source == place) for place in range(3)]
    assert np.array(stay) @ passed == pytest.approx(made.sum(axis=0), rel=1e-12)
    with pytest.raises(ValueError, match="outer"):
        yields.with_transfer([1.0, 2.0], {(1, 0): 0.1})


def test_film_takes_low_energies_first() -> None:
    """Common practice: 2 nm of carbon leave little at 70 eV and a third or more at 900 eV (paths of 0.6 and 2.5 nm)."""
    low, high = recording.film_transmission(2.0, [0.6, 2.5])
    assert low == pytest.approx(math.exp(-2 / 0.6))
    assert low < 0.05
    assert high > 0.33
    assert recording.film_transmission(1.0, 1.0, 60.0) == pytest.approx(math.exp(-2))
    assert recording.film_transmission(0.0, 1.0) == 1.0


def test_analysers() -> None:
    """A constant ratio of window to energy passes in proportion to energy (definition); the ideal one passes all."""
    energy = np.array([50.0, 1000.0, 2000.0])
    assert recording.analyser_transmission(energy) == pytest.approx([0.05, 1.0, 2.0])
    assert recording.analyser_transmission(energy, "ideal") == pytest.approx(1.0)
    assert np.all(np.diff(recording.analyser_transmission(energy, "constant pass energy")) < 0)


def test_depth_of_a_derivative_by_numerics() -> None:
    """A Gaussian on a fine grid, numpy's own gradient."""
    energy = np.linspace(-30.0, 30.0, 60001)
    for width in (2.0, 5.0, 9.0):
        sigma = width / 2.354820045
        line = np.exp(-0.5 * (energy / sigma) ** 2) / (sigma * math.sqrt(2 * math.pi))
        depth = -np.gradient(line, energy).min()
        assert float(recording.derivative_depth(1.0, width)) == pytest.approx(depth, rel=1e-5)
    assert float(recording.recorded_width_ev(3.0, 800.0)) == pytest.approx(5.0)  # 3, 4, 5


def test_average_path_runs_through_the_elements() -> None:
    """Medians of TPP-2M over the solid elements, to 8 %."""
    solids = [row for row in tables.materials().values() if row.kind == "compiled"]
    energy = np.array([50.0, 100.0, 300.0, 1000.0, 2000.0, 3000.0])
    paths = [
        freepath_arrays.tpp2m_paths_nm(energy, row.valence_electrons, row.density_g_cm3, row.molar_mass, row.gap_ev)
        for row in solids
    ]
    assert freepath_arrays.average_path_nm(energy) == pytest.approx(np.median(paths, axis=0), rel=0.08)


def test_paths_on_arrays_are_those_of_numbers() -> None:
    for row in (tables.materials()[symbol] for symbol in ("Al", "Cu", "Au")):
        material = (row.valence_electrons, row.density_g_cm3, row.molar_mass, row.gap_ev)
        single = [tpp2m_nm(energy, *material) for energy in (60.0, 900.0)]
        assert freepath_arrays.tpp2m_paths_nm([60.0, 900.0], *material) == pytest.approx(single, rel=1e-12)
