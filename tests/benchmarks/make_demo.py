"""Make the files of demo_spectra/: `python -m tests.benchmarks.make_demo`.

The scenario is invented: parts that failed in the Skerry Point buoy workshop. The same forward model as the
benchmark's makes the spectra, with seeds of their own, so that the files come out the same to the byte.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from functools import cache
from pathlib import Path

import numpy as np

from .demo_files import write_decimal_comma, write_iso14976, write_table
from .forward import Case, Scale, Setup, build_case
from .recording import Recording
from .samples import Constituent, State
from .seeds import DEMO_SEEDS
from .shapes import FloatArray, draw_background

FOLDER = Path(__file__).resolve().parents[2] / "demo_spectra"
GOOD = Recording(
    resolution=0.005,
    mode="direct",
    times_energy=True,
    unit="counts",
    signal_to_noise=90.0,
    dwell_s=0.1,
    modulation_ev=1.8,
    upside_down=False,
    gains=(1.0,),
    spikes=0,
    dead=0,
)


@dataclass(frozen=True, kw_only=True)
class Demo:
    """One file: the part, what lies on it, how it was recorded and written."""

    file: str
    part: str
    surface: str  # `Fe 0.5 oxide; C 0.3`
    seed: int  # of DEMO_SEEDS; spots of one sitting share it, and with it what is drawn for their first element
    axes_ev: tuple[FloatArray, ...]
    write: Callable[[Demo, Case], str]
    recording: Recording = GOOD
    offset_ev: float = 1.2
    slope: float = 0.0006
    film_nm: float = 0.0
    energy_scatter: float = 1.0
    expect: tuple[str, ...] = ()  # what the part is known to be made of, without which the scan cannot tell

    @property
    def sample(self) -> tuple[Constituent, ...]:
        """The surface, read."""
        words = [piece.split() for piece in self.surface.split(";")]
        return tuple(
            Constituent(element=element, strength=float(strength), state=_state(rest))
            for element, strength, *rest in words
        )


def _state(rest: list[str]) -> State:
    states: dict[str, State] = {"": "element", "oxide": "oxide", "both": "both"}
    return states[" ".join(rest)]


def _scan(low_ev: float, high_ev: float, step_ev: float = 1.0) -> FloatArray:
    return low_ev + step_ev * np.arange(round((high_ev - low_ev) / step_ev) + 1, dtype=np.float64)


def _csv(demo: Demo, case: Case) -> str:
    return write_table(demo.part, case.spectrum, separator=",", names=_names(demo))


def _tabs(demo: Demo, case: Case) -> str:
    return write_table(demo.part, case.spectrum, separator="\t", names=_names(demo))


def _blanks_descending(demo: Demo, case: Case) -> str:
    return write_table(demo.part, case.spectrum, separator="   ", names=_names(demo), descending=True)


def _decimal_comma(demo: Demo, case: Case) -> str:
    rng = np.random.default_rng([2, case.seed])
    return write_decimal_comma(demo.part, case.spectrum, rng)


def _iso(demo: Demo, case: Case) -> str:
    return write_iso14976(demo.part, case.spectrum, dwell_s=demo.recording.dwell_s)


def _names(demo: Demo) -> tuple[str, str]:
    how = demo.recording
    ordinate = "E*N(E)" if how.times_energy else "N(E)"
    if how.mode != "direct":
        return "energy (eV)", f"d({ordinate})/dE (arb. units)"
    units = {"counts": "counts", "per second": "counts/s", "normalised": "normalised"}
    return "energy (eV)", f"{ordinate} ({units[how.unit]})"


SHARP = replace(GOOD, signal_to_noise=200.0)
CONTACT = replace(GOOD, unit="per second", signal_to_noise=160.0)

DEMOS: tuple[Demo, ...] = (
    Demo(
        file="slip_ring_dead.csv",
        part="slip ring of buoy 7, track 3: no longer conducts",
        surface="Ag 0.5; Cu 0.3 oxide; S 0.4; Cl 0.5; C 0.6; O 0.25",
        seed=DEMO_SEEDS[24],
        axes_ev=(_scan(30, 1000),),
        write=_csv,
        recording=CONTACT,
        film_nm=0.6,
    ),
    Demo(
        file="slip_ring_reference.csv",
        part="slip ring of buoy 7, track 3: clean spot beside the dead one, same sitting",
        surface="Ag 0.85; Cu 0.2; C 0.15; O 0.06",
        seed=DEMO_SEEDS[24],
        axes_ev=(_scan(30, 1000),),
        write=_csv,
        recording=CONTACT,
    ),
    Demo(
        file="bond_pad_lifted.txt",
        part="barometer board, bond pad 12: wire lifted",
        surface="Al 0.7 both; F 0.4; O 0.5; C 0.2; Au 0.5",
        seed=DEMO_SEEDS[2],
        axes_ev=(_scan(20, 2200),),
        write=_tabs,
        recording=replace(GOOD, times_energy=False, spikes=1, signal_to_noise=120.0),
        offset_ev=-1.6,
        expect=("Al", "Au"),
    ),
    Demo(
        file="valve_stem_coated.csv",
        part="inflation valve stem, coated, worn",
        surface="Ti 0.8; N 0.6; C 0.2; O 0.15",
        seed=DEMO_SEEDS[12],
        axes_ev=(_scan(30, 1000, 0.5),),
        write=_csv,
        offset_ev=-2.1,
        slope=-0.0004,
    ),
    Demo(
        file="valve_stem_bare.csv",
        part="inflation valve stem, coating missed, same sitting as the coated one",
        surface="Ti 0.8 both; C 0.2; O 0.35",
        seed=DEMO_SEEDS[12],
        axes_ev=(_scan(30, 1000, 0.5),),
        write=_csv,
        offset_ev=-2.1,
        slope=-0.0004,
    ),
    Demo(
        file="feedthrough_bead.vms",
        part="hull feedthrough 2, glass bead: leaks",
        surface="Si 0.6 oxide; O 0.9; Na 0.2; Ca 0.15; C 0.15",
        seed=DEMO_SEEDS[5],
        axes_ev=(_scan(20, 2000),),
        write=_iso,
        recording=replace(GOOD, signal_to_noise=150.0),
        offset_ev=21.0,
    ),
    Demo(
        file="housing_cover.txt",
        part="lamp housing cover: white bloom, scraped at one corner",
        surface="Al 0.9 both; O 0.5; Mg 0.3 oxide; C 0.2",
        seed=DEMO_SEEDS[6],
        axes_ev=(_scan(30, 2000),),
        write=_blanks_descending,
        recording=replace(GOOD, signal_to_noise=120.0),
    ),
    Demo(
        file="bracket_stain.csv",
        part="mooring bracket, stainless: brown stain",
        surface="Fe 0.7 oxide; Cr 0.4 oxide; Ni 0.2; O 0.6; C 0.3; Cl 0.25",
        seed=DEMO_SEEDS[7],
        axes_ev=(_scan(30, 1000),),
        write=_decimal_comma,
        recording=replace(GOOD, signal_to_noise=160.0),
    ),
    Demo(
        file="connector_pin_derivative.txt",
        part="data connector, nickel-plated pin 4: dull",
        surface="Ni 0.9; P 0.2; O 0.15; C 0.2",
        seed=DEMO_SEEDS[8],
        axes_ev=(_scan(20, 2000),),
        write=_tabs,
        recording=replace(GOOD, mode="modulated", signal_to_noise=140.0),
        offset_ev=2.4,
    ),
    Demo(
        file="solder_short_scan.csv",
        part="battery lug, solder joint: cracked; short scan before the beam failed",
        surface="Sn 0.8; Pb 0.7; O 0.3; C 0.4",
        seed=DEMO_SEEDS[24],
        axes_ev=(_scan(20, 1000),),
        write=_csv,
        recording=replace(GOOD, unit="normalised", signal_to_noise=24.0),
        expect=("Pb", "Sn"),
    ),
    Demo(
        file="terminal_windows.csv",
        part="antenna terminal, brass: green rim; windows only",
        surface="Cu 0.6; Zn 0.5; Cl 0.35; O 0.3; C 0.4",
        seed=DEMO_SEEDS[10],
        axes_ev=(
            _scan(160, 210, 0.5),
            _scan(240, 300),
            _scan(480, 535),
            _scan(890, 950, 0.5),
            _scan(965, 1025, 0.5),
        ),
        write=_csv,
        recording=replace(GOOD, gains=(2.0, 1.0, 1.0, 1.5, 1.5), signal_to_noise=70.0),
        expect=("Cu", "Zn"),
    ),
    Demo(
        file="copper_foil.csv",
        part="copper foil, sputtered clean: to set the energy axis of the bench",
        surface="Cu 1.0; C 0.03",
        seed=DEMO_SEEDS[30],
        axes_ev=(_scan(30, 1100, 0.5),),
        write=_csv,
        recording=SHARP,
        energy_scatter=0.1,
    ),
    Demo(
        file="gold_foil.csv",
        part="gold foil, sputtered clean: to set the energy axis of the bench",
        surface="Au 1.0; C 0.03",
        seed=DEMO_SEEDS[31],
        axes_ev=(_scan(30, 2200, 0.5),),
        write=_csv,
        recording=SHARP,
        energy_scatter=0.1,
    ),
)


@cache
def demo_cases() -> dict[str, Case]:
    """Return the case behind every file."""
    cases = {}
    for demo in DEMOS:
        rng = np.random.default_rng([1, demo.seed])
        setup = Setup(
            axes_ev=demo.axes_ev,
            scale=Scale(offset_ev=demo.offset_ev, slope=demo.slope),
            background=draw_background(rng),
            recording=demo.recording,
            tilt=0.0,
            film_nm=demo.film_nm,
            energy_scatter=demo.energy_scatter,
        )
        cases[demo.file] = build_case(rng, setup, demo.sample, kind="demo", seed=demo.seed, recipe=demo.part)
    return cases


def render_demos() -> dict[str, bytes]:
    """Return the content of every file."""
    cases = demo_cases()
    return {demo.file: demo.write(demo, cases[demo.file]).encode("utf-8") for demo in DEMOS}


def main() -> None:
    """Write the files."""
    FOLDER.mkdir(exist_ok=True)
    for name, content in render_demos().items():
        (FOLDER / name).write_bytes(content)
        case = demo_cases()[name]
        weak = ", ".join(sorted(case.unscored)) or "none"
        print(f"{name}: {', '.join(sorted(case.must))}; too weak to ask for: {weak}")


if __name__ == "__main__":
    main()
