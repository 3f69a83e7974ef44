"""From how deep the lines of an element come."""

from __future__ import annotations

from dataclasses import dataclass

from .. import tables
from ..errors import SettingError
from ..physics.escape import (
    SEAH_DENCH_FACTOR,
    TPP2M_FACTOR,
    TPP2M_FROM_EV,
    FreePath,
    depth_seen_nm,
    free_path,
    free_path_in_compound,
)

SOLID = "element"  # state of a material that is met as such; gases stand in the table as liquids
MOST_EMISSION_DEG = 80.0  # nearer to grazing, elastic scattering and roughness decide


@dataclass(frozen=True, kw_only=True)
class CardEscape:
    """How mean free paths and depths of a card were worked out."""

    emission_deg: float  # between the surface normal and the direction of collection
    material: str  # what they hold for
    depth: str  # what the depth means
    formulas: tuple[str, ...]  # with stated accuracy and DOI
    source: str  # of the material's numbers


def escape_of(symbol: str, emission_deg: float) -> CardEscape:
    """Say how the depths of an element's lines are worked out.

    Raises
    ------
    SettingError
        When the angle is not between 0 and 80 degrees.
    """
    if not 0.0 <= emission_deg <= MOST_EMISSION_DEG:
        raise SettingError(
            f"emission {emission_deg:g} must lie between 0 and {MOST_EMISSION_DEG:g} degrees from the surface normal; "
            "give 42 for a coaxial cylindrical mirror"
        )
    row = tables.materials()[symbol]
    alone = f"{symbol} ({row.density_g_cm3:g} g/cm3, {row.valence_electrons} valence electrons)"
    return CardEscape(
        emission_deg=emission_deg,
        material=alone if row.state == SOLID else f"an inorganic compound, atoms as large as {symbol} in its liquid",
        depth="3 lambda cos(theta): 95 % of the signal comes from no deeper",
        formulas=(
            f"TPP-2M from {TPP2M_FROM_EV:g} eV, good to about 10 % (from memory; taken as "
            f"{100 * (TPP2M_FACTOR - 1):.0f} %), Tanuma, Powell, Penn, Surf. Interface Anal. 21 (1994) 165, "
            "doi 10.1002/sia.740210302",
            f"Seah-Dench otherwise (lower energies; gases in compounds), good to a factor of {SEAH_DENCH_FACTOR:g}, "
            "Seah, Dench, Surf. Interface Anal. 1 (1979) 2, doi 10.1002/sia.740010103",
        ),
        source=row.source,
    )


def line_free_path(line: tables.Line) -> FreePath:
    """Mean free path of a line's electrons in its own element; of gases, in an inorganic compound."""
    row = tables.materials()[line.symbol]
    if row.state != SOLID:
        return free_path_in_compound(
            line.energy_ev, row.density_g_cm3, row.molar_mass, density_sigma_g_cm3=row.density_sigma_g_cm3
        )
    return free_path(
        line.energy_ev,
        row.valence_electrons,
        row.density_g_cm3,
        row.molar_mass,
        row.gap_ev,
        density_sigma_g_cm3=row.density_sigma_g_cm3,
    )


def line_depth_nm(path: FreePath, emission_deg: float) -> float:
    """Depth that a line is seen from, nm."""
    return depth_seen_nm(path.nm, emission_deg)
