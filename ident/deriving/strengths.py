"""Strengths of transitions: how many vacancies, which way they decay, how many electrons get out and are recorded.

Depths of the derivative minima of E N(E), as a cylindrical mirror of 0.5 % records it, in the pure element. For a beam
energy: ionisation with what is scattered back, Coster-Kronig transfer, branching, mean free path, transmission, width.
Rates of K and L vacancies are a registry library's evaluated ones; for M, N and O vacancies no complete set exists
there, so the final pairs share by electrons (`_weight`, a stated rule, no source).
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ..physics.backscatter import shimizu_factor
from ..physics.freepath_arrays import average_path_nm, tpp2m_paths_nm
from ..physics.ionisation import MODELS
from ..physics.recording import analyser_transmission, derivative_depth, recorded_width_ev
from ..physics.widths import natural_width_ev
from ..physics.yields import with_transfer
from ..tables import Material, binding_energies, materials
from .decay import SUBSHELLS, auger_part, library_rates, transfer, transferred
from .shells import D_BANDS, DEGENERACY, GROUPS, level

FloatArray = NDArray[np.float64]
BEAM_EV = 5000.0  # what published heights are nearest to: 3 to 5 keV
MODEL = "gryzinski"
ONE_BAND = frozenset({"KVV", "L23VV"})  # families of which all transitions end in one valence band
LEAST_BINDING_EV = 5.0
COMPOUND_PATH = 1.45  # mean free path in silica over the average one, TPP-2M, 100 to 1000 eV
SHELL_ORDER = "KLMNOPQ"
SCALE = 1e18  # cross-sections in 1e-18 cm2
# Share of an electron of a final level by how many shells further out it is; leaving-one-out picks 0.3 to 1 for two.
BY_DISTANCE = {0: 1.0, 1: 1.0, 2: 0.5}
FURTHER_OUT = 0.1


@dataclass(frozen=True, kw_only=True, eq=False)
class Subshells:
    """Levels of one shell of an element, innermost first."""

    names: tuple[str, ...]
    binding_ev: FloatArray
    electrons: FloatArray


@cache
def subshells(z: int, shell: str) -> Subshells:
    """Subshells with a binding energy; partly filled d bands that have none count as their upper level."""
    known = binding_energies()
    names, energies, electrons = [], [], []
    for name in SUBSHELLS[shell]:
        row = known.get((_symbol(z), name))
        if row is not None:
            names.append(name)
            energies.append(max(row.energy_ev, LEAST_BINDING_EV))
            electrons.append(float(DEGENERACY[name]))
    for group, members in GROUPS.items():
        own = level(z, group)
        if group[0] == shell and group in D_BANDS and members[1] not in names and own is not None:
            names.append(members[1])
            energies.append(LEAST_BINDING_EV)
            electrons.append(float(own.electrons))
    return Subshells(names=tuple(names), binding_ev=np.array(energies), electrons=np.array(electrons))


@cache
def _symbol(z: int) -> str:
    return {row.z: row.symbol for row in binding_energies().values()}[z]


def vacancies_of_shell(z: int, shell: str, beam_ev: ArrayLike, model: str = MODEL) -> FloatArray:
    """Vacancies in each subshell of a shell (n, m) at beam energies (m,), backscattering and transfer counted in."""
    own = subshells(z, shell)
    beam = np.atleast_1d(np.asarray(beam_ev, dtype=float))
    binding = own.binding_ev[:, None]
    made = SCALE * MODELS[model](binding, own.electrons[:, None], beam) * shimizu_factor(z, beam / binding)
    place = {name: index for index, name in enumerate(own.names)}
    moves = {
        (place[source], place[target]): part
        for (source, target), part in transfer(z, shell).items()
        if source in place and target in place
    }
    return with_transfer(made, moves) if moves else made


@cache
def members(z: int, vacancy: str) -> list[int]:
    """Places of the subshells of a level or group of levels among those of its shell."""
    own = subshells(z, vacancy[0]).names
    return [own.index(name) for name in GROUPS.get(vacancy, (vacancy,)) if name in own]


def vacancies_made(z: int, vacancy: str, beam_ev: ArrayLike, model: str = MODEL) -> FloatArray:
    """Vacancies in a level or a group of levels, in 1e-18 cm2 an atom, at beam energies (m,)."""
    if vacancy[0] not in SUBSHELLS:
        return np.zeros(np.atleast_1d(np.asarray(beam_ev)).shape)
    out: FloatArray = vacancies_of_shell(z, vacancy[0], beam_ev, model)[members(z, vacancy)].sum(axis=0)
    return out


@cache
def branching(z: int, parts: tuple[str, str, str]) -> float:
    """Part of the vacancies of a level or group that decays by a transition; a group counts by its electrons."""
    names = [subshells(z, parts[0][0]).names[place] for place in members(z, parts[0])]
    total = sum(DEGENERACY[name] for name in names)
    held = sum(DEGENERACY[name] * shares(z, parts[0], name).get(parts[1:], 0.0) for name in names)
    return held / total if total else 0.0


@cache
def shares(z: int, vacancy: str, member: str) -> dict[tuple[str, str], float]:
    """Parts of the vacancies of a subshell by pairs of final levels; with fluorescence they add up to one."""
    pairs = _pairs(z, vacancy)
    inside = {pair: _weight(z, vacancy, pair) for pair in pairs if _own_shell(z, member, pair)}
    outside = {pair: _weight(z, vacancy, pair) for pair in pairs if pair not in inside}
    rates = library_rates(z, member) if member[0] in "KL" else {}
    grouped = {pair: _grouped(rates, pair) for pair in outside}
    if sum(grouped.values()) > 0:
        outside = grouped
    moved = transferred(z, member) if inside else 0.0
    left = auger_part(z, member) + (transferred(z, member) - moved)
    if not any(outside.values()):
        moved, left = moved + left, 0.0
    return {**_scaled(inside, moved), **_scaled(outside, left)}


def _own_shell(z: int, member: str, pair: tuple[str, str]) -> bool:
    """Whether a hole stays in the shell by a transition that the transfer probabilities count."""
    moves = {target for source, target in transfer(z, member[0]) if source == member}
    return any(set(GROUPS.get(name, (name,))) & moves for name in pair)


def _scaled(weights: dict[tuple[str, str], float], total: float) -> dict[tuple[str, str], float]:
    every = sum(weights.values())
    return {pair: total * weight / every for pair, weight in weights.items()} if every > 0 else {}


def _grouped(rates: dict[tuple[str, str], float], pair: tuple[str, str]) -> float:
    first, second = (GROUPS.get(name, (name,)) for name in pair)
    wanted = {(min(a, b), max(a, b)) for a in first for b in second}
    return sum(rate for found, rate in rates.items() if found in wanted)


@cache
def _pairs(z: int, vacancy: str) -> tuple[tuple[str, str], ...]:
    from .families import formula_ev
    from .transitions import final_pairs

    return tuple(p for p in final_pairs(z, vacancy) if (formula_ev(z, (vacancy, *p)) or 0.0) > 0.0)


def _weight(z: int, vacancy: str, pair: tuple[str, str]) -> float:
    """Electrons of both levels, those far out less."""
    shell = SHELL_ORDER.index(vacancy[0])
    weight = 1.0
    for name in pair:
        own = level(z, name)
        if own is None:
            return 0.0
        away = (SHELL_ORDER.index(name[0]) if name != "V" else shell + 2) - shell
        weight *= own.electrons * BY_DISTANCE.get(away, FURTHER_OUT)
    return weight * (0.5 if pair[0] == pair[1] else 1.0)


def parts_of_line(z: int, parts: tuple[str, str, str]) -> tuple[tuple[str, str, str], ...]:
    """The transitions that make one line: all of one valence band in light elements, else the transition itself."""
    from .families import family_name

    if family_name(parts, z) not in ONE_BAND:
        return (parts,)
    every = ((parts[0], *pair) for pair in _pairs(z, parts[0]))
    return tuple(other for other in every if family_name(other, z) in ONE_BAND)


@cache
def strength(z: int, parts: tuple[str, str, str], energy_ev: float, beam_ev: float = BEAM_EV) -> float:
    """Depth of a transition's derivative minimum from the pure element, arbitrary but common units."""
    made = float(vacancies_made(z, parts[0], beam_ev)[0])
    return made * branching(z, parts) * float(recorded_part(z, parts, energy_ev)[0])


def recorded_part(z: int, parts: tuple[str, str, str], energy_ev: float) -> FloatArray:
    """Depth an Auger electron made: mean free path in the element, analyser, width; shape (1,)."""
    natural = natural_width_ev(z, parts[0], parts[1] + parts[2])
    width = recorded_width_ev(natural, energy_ev)
    depth = derivative_depth(free_path_nm(z, energy_ev), width) * analyser_transmission(energy_ev)
    return np.atleast_1d(depth)


def free_path_nm(z: int, energy_ev: ArrayLike) -> FloatArray:
    """Mean free path in the element where it is a solid, else in a compound; below 50 eV that at 50 eV."""
    own = _materials().get(z)
    energy = np.maximum(np.asarray(energy_ev, dtype=float), 50.0)
    if own is None or own.kind != "compiled":
        return COMPOUND_PATH * average_path_nm(energy)
    return tpp2m_paths_nm(energy, own.valence_electrons, own.density_g_cm3, own.molar_mass, own.gap_ev)


@cache
def _materials() -> dict[int, Material]:
    return {row.z: row for row in materials().values()}
