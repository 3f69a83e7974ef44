"""How the demo files are written: text tables as programs leave them, and ISO 14976."""

from __future__ import annotations

import numpy as np

from ident.spectrum import Spectrum, Window

from .shapes import FloatArray

WORKSHOP = "Skerry Point buoy workshop"
INVENTED = "INVENTED DATA: calculated, not measured; there is no such workshop and no such part"
BEAM_KV = 5


def write_table(
    part: str,
    spectrum: Spectrum,
    *,
    separator: str,
    names: tuple[str, str],
    descending: bool = False,
) -> str:
    """Write energy and one ordinate; an empty line between windows."""
    head = [f"# {WORKSHOP}", f"# {INVENTED}", f"# sample: {part}", f"# beam energy: {BEAM_KV} kV"]
    blocks = []
    for window in spectrum.windows:
        rows = [
            f"{energy:.1f}{separator}{value}" for energy, value in zip(window.energy_ev, _values(window), strict=True)
        ]
        blocks.append("\n".join(rows[::-1] if descending else rows))
    return "\n".join([*head, "# " + separator.join(names), "\n\n".join(blocks)]) + "\n"


def write_decimal_comma(part: str, spectrum: Spectrum, rng: np.random.Generator) -> str:
    """Write with decimal comma and semicolon, the counts of each of two sweeps in a column of its own."""
    (window,) = spectrum.windows
    total = window.intensity.astype(np.int64)
    first = rng.binomial(total, 0.5)  # a Poisson count halved so is two independent Poisson counts
    head = [
        f"# {WORKSHOP}",
        f"# {INVENTED}",
        f"# sample: {part}",
        f"# beam energy: {BEAM_KV} kV",
        "energy (eV);sweep 1 (counts);sweep 2 (counts);sample current (nA)",
    ]
    current = 48.0 + np.cumsum(rng.normal(0.0, 0.01, total.size))
    rows = [
        f"{energy:.2f};{one:d};{two:d};{amps:.2f}".replace(".", ",")
        for energy, one, two, amps in zip(window.energy_ev, first, total - first, current, strict=True)
    ]
    return "\n".join([*head, *rows]) + "\n"


def write_iso14976(part: str, spectrum: Spectrum, *, dwell_s: float) -> str:
    """Write one block of direct data, regular scan, one ordinate (items as ISO 14976 numbers them)."""
    (window,) = spectrum.windows
    values = _values(window)
    low, high = float(window.intensity.min()), float(window.intensity.max())
    header = [
        "VAMAS Surface Chemical Analysis Standard Data Transfer Format 1988 May 4",
        WORKSHOP,
        "Not Specified",
        "Not Specified",
        "failed parts",
        *("2", INVENTED, "calculated by the project's own forward model"),
        *("NORM", "REGULAR", "1"),  # one spectral region
        *("0", "0", "0", "0", "0"),  # variables, list, manual items, future experiment and block entries
        "1",  # blocks
    ]
    block = [
        *("survey", part),
        *("2031", "3", "14", "9", "30", "0", "0"),  # 1 to 7, date and time
        *("1", INVENTED),  # 8
        *("AES dir", "electron gun"),  # 9, 12
        *(f"{BEAM_KV * 1000}", *["1E+037"] * 5),  # 14 to 20 less 17 and 18, which NORM has not
        *("FRR", "1E+037", "1E+037", "4.5", "0"),  # 21, 22, 24, 25, 26
        *["1E+037"] * 4,  # 27, 28
        *("survey", "none", "-1"),  # 29, 30
        *("kinetic energy", "eV", f"{window.energy_ev[0]:g}", f"{window.step_ev:g}"),  # 31
        *("1", "E*N(E)", "d"),  # 32
        *("pulse counting", f"{dwell_s:g}", "1", "0"),  # 33 to 36
        *("0", "0", "0", "0"),  # 38, 39, 40
        f"{len(values)}",
        *(f"{low:.0f}", f"{high:.0f}"),
        *values,
    ]
    return "\n".join([*header, *block, "end of experiment"]) + "\n"


def _values(window: Window) -> list[str]:
    """Write the ordinates: whole counts as they are, others with the digits they deserve."""
    values: FloatArray = window.intensity
    if np.array_equal(values, np.round(values)):
        return [f"{value:.0f}" for value in values]
    digits = max(0, 5 - int(np.ceil(np.log10(np.abs(values).max()))))
    return [f"{value:.{digits}f}" for value in values]
