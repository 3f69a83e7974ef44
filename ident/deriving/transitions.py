"""Every Auger transition between 20 and 3200 eV."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache

from ..tables import PublishedLine, published_lines
from .deviations import deviations
from .families import family_name, formula_ev, levels_of, published_minimum_ev
from .learning import correction, line_strength
from .shells import FINALS, level, vacancies
from .strengths import ONE_BAND, SHELL_ORDER, strength

LOWEST_EV, HIGHEST_EV = 20.0, 3200.0
HIGHEST_Z = 92


@dataclass(frozen=True, kw_only=True)
class Transition:
    """A transition with its energy on the absolute scale, and how that was come by."""

    symbol: str
    z: int
    label: str
    family: str
    energy_ev: float
    sigma_ev: float
    energy_kind: str
    strength: float
    vacancy: str
    parts: tuple[str, str, str]
    one_band: bool  # one of several transitions that make one line of a valence band
    valence: bool
    published: PublishedLine | None = None


@cache
def final_pairs(z: int, vacancy: str) -> tuple[tuple[str, str], ...]:
    """Pairs of levels that may be left empty: further out than the vacancy, each pair once."""
    own = level(z, vacancy)
    if own is None:
        return ()
    names = [
        name
        for name in FINALS
        if (outer := level(z, name)) is not None
        and _order(name) > _order(vacancy)
        and outer.energy_ev < own.energy_ev
        and (name != "V" or vacancy[0] in "NO")
        and (name != "V" or z >= 55)
    ]
    return tuple((names[i], names[j]) for i in range(len(names)) for j in range(i, len(names)))


def _order(name: str) -> tuple[int, int]:
    if name == "V":
        return (len(SHELL_ORDER), 0)
    return (SHELL_ORDER.index(name[0]), int(name[-1]) if len(name) > 1 else 0)


@cache
def transitions_of(z: int, symbol: str) -> tuple[Transition, ...]:
    """Transitions of an element, published energies put in where there are any, by falling strength."""
    published = _published(symbol)
    out = []
    for vacancy in vacancies(z):
        for pair in final_pairs(z, vacancy):
            parts = (vacancy, *pair)
            made = _transition(z, symbol, parts, published.pop(parts, None))
            if made is not None:
                out.append(made)
    for parts, row in published.items():
        out.append(_from_row(z, parts, row))
    # V in a published label is the whole valence band: it stands for the derived line of the same name too.
    named = {made.label for made in out if made.published is not None}
    kept = [made for made in out if made.published is not None or made.label not in named]
    return tuple(sorted(kept, key=lambda t: (-t.strength, t.label)))


def _published(symbol: str) -> dict[tuple[str, str, str], PublishedLine]:
    rows: dict[tuple[str, str, str], PublishedLine] = {}
    for row in published_lines():
        if row.symbol != symbol or row.form != "derivative" or row.reference_level != "handbook":
            continue
        parts = levels_of(row.transition, row.z)
        if parts is None:
            continue
        rows.setdefault(canonical(row.z, parts), row)
    return rows


def published_transitions() -> list[tuple[str, int, tuple[str, str, str], float, PublishedLine]]:
    """Published handbook lines whose levels are known: symbol, Z, levels, energy on the absolute scale, row."""
    out = []
    for symbol in dict.fromkeys(row.symbol for row in published_lines()):
        for parts, row in _published(symbol).items():
            if level(row.z, parts[0]) is not None and parts[1:] in final_pairs(row.z, parts[0]):
                out.append((symbol, row.z, parts, published_minimum_ev(row), row))
    return out


def canonical(z: int, parts: tuple[str, str, str]) -> tuple[str, str, str]:
    """A published triple in the levels that vacancies and final pairs use."""
    own = set(vacancies(z))
    vacancy = parts[0]
    joined = {"L2": "L23", "L3": "L23", "M4": "M45", "M5": "M45", "N4": "N45", "N5": "N45"}
    if vacancy not in own:
        vacancy = joined.get(vacancy, vacancy)
    if vacancy not in own and vacancy in {"L23", "M45", "N45"}:
        vacancy = {"L23": "L3", "M45": "M5", "N45": "N5"}[vacancy]
    first, second = sorted(parts[1:], key=_order)
    if vacancy == "K" and z < 8:
        first = second = "L23" if z > 4 else "L1"
    if vacancy == "L23" and 12 <= z <= 16:
        first = second = "M23" if z > 12 else "M1"
    return (vacancy, first, second)


def _is_valence(z: int, parts: tuple[str, str, str]) -> bool:
    """Light elements whose line lies in the valence band: their chemical shifts are large."""
    return (parts[0] == "K" and z <= 5) or (parts[0] == "L23" and 12 <= z <= 16)


def _strength(z: int, parts: tuple[str, str, str], energy_ev: float, row: PublishedLine | None) -> float:
    """Corrected strength; a published valence line is all transitions of its band."""
    whole = line_strength if row is not None else strength
    return whole(z, parts, energy_ev) * correction(z, parts, energy_ev)


def _from_row(z: int, parts: tuple[str, str, str], row: PublishedLine) -> Transition:
    return Transition(
        symbol=row.symbol,
        z=z,
        label=row.transition,
        family=family_name(parts, z),
        energy_ev=published_minimum_ev(row),
        sigma_ev=row.sigma_ev,
        energy_kind="published",
        strength=0.0,
        vacancy=parts[0],
        parts=parts,
        one_band=family_name(parts, z) in ONE_BAND,
        valence=_is_valence(z, parts),
        published=row,
    )


def _transition(z: int, symbol: str, parts: tuple[str, str, str], row: PublishedLine | None) -> Transition | None:
    value = formula_ev(z, parts)
    if value is None:
        return None
    family = family_name(parts, z)
    learned = deviations().expected(symbol, z, family, parts[0][0])
    energy, sigma, kind = value + learned.offset_ev, learned.sigma_ev, learned.kind
    own = level(z, parts[0])
    if own is not None:
        energy = min(energy, own.energy_ev)  # no electron carries more than its vacancy held
    label = "".join(parts)
    if row is not None:
        energy, sigma, kind, label = published_minimum_ev(row), row.sigma_ev, "published", row.transition
    if not LOWEST_EV <= energy <= HIGHEST_EV:
        return None
    return Transition(
        symbol=symbol,
        z=z,
        label=label,
        family=family,
        energy_ev=energy,
        sigma_ev=sigma,
        energy_kind=kind,
        strength=_strength(z, parts, round(energy, 2), row),
        vacancy=parts[0],
        parts=parts,
        one_band=family_name(parts, z) in ONE_BAND,
        valence=_is_valence(z, parts),
        published=row,
    )
