"""What must be said along with some answers: hazards, and what Auger data cannot carry."""

from __future__ import annotations

from collections.abc import Sequence

from .answer import Assignment, Scale

CAUTION_FROM = 0.5  # said of what is called; a list of everything possible would not be read

# Common practice, no source: what safety sheets of these elements and their compounds agree on.
HAZARDS = {
    "Be": "beryllium and its oxide are toxic as dust",
    "As": "arsenic compounds are toxic",
    "Cd": "cadmium compounds are toxic",
    "Hg": "mercury is toxic and leaves vapour in the vacuum system",
    "Tl": "thallium compounds are toxic, through the skin too",
    "Pb": "lead compounds are toxic",
    "Cr": "chromium may be there as chromate, which is toxic; the spectrum does not tell",
    "Ba": "soluble barium compounds are toxic; the spectrum does not tell which it is",
    "Th": "thorium is radioactive",
    "U": "uranium is radioactive and toxic",
}
# Common practice, no source: what every report of this kind must say along.
LEAVE_IT = (
    "where the failure of a part can hurt someone, confirm by a second technique, and leave its disposition to the "
    "responsible engineer"
)
BEAM_SENSITIVE = ("F", "Cl", "Br", "I", "Na", "K")


def cautions_for(assignments: Sequence[Assignment], scale: Scale, sputtered: str | None = None) -> tuple[str, ...]:
    """Give the cautions that apply to these assignments."""
    said = [
        f"{a.element}: {HAZARDS[a.element]}; follow local rules before touching the sample"
        for a in assignments
        if a.element in HAZARDS and a.probability >= CAUTION_FROM
    ]
    if any(a.state is not None and a.probability >= CAUTION_FROM for a in assignments):
        said.append(
            "Auger data alone do not give the oxidation state reliably; states named here are those whose shift fits "
            "best, and photoelectron spectra or a reference sample should confirm them"
        )
    touchy = [a.element for a in assignments if a.element in BEAM_SENSITIVE and a.probability >= 0.5]
    if touchy:
        said.append(
            f"{', '.join(touchy)}: the electron beam can drive it off or draw it in; compare a first quick scan with "
            "a later one before taking its strength seriously"
        )
    if scale.charging == "yes":
        said.append("the sample charges: energies are moved by several eV, and lines may be broadened or doubled")
    if sputtered is not None:
        said.append(
            "sputtering reduces oxides, mixes layers, roughens and removes some elements faster than others: the "
            "surface seen is not the one that was there"
        )
    if any(a.probability >= CAUTION_FROM for a in assignments):
        said.append(LEAVE_IT)
    return tuple(said)
