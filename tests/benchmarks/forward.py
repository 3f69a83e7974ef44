"""Synthetic Auger spectra with their truth: `make_case(kind, seed)`.

Lines come from `published_lines.csv`, never from the derived table of the project, and are moved: each
element by 1.5 eV, each line by 1 eV more, depths by 30 %, widths by 25 %, all depths tilted together with
energy, the axis by 2.5 eV and 0.15 %.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field, replace

import numpy as np

from ident.spectrum import Spectrum, Window

from .published import PublishedLine, published_lines
from .recording import Recording, draw_recording, record
from .samples import Constituent, draw_random, draw_technical
from .shapes import (
    FWHM,
    HANDBOOK_RESOLUTION,
    OTHER_SHIFT_EV,
    OXIDE_SHIFT_EV,
    Background,
    Emission,
    FloatArray,
    Losses,
    attenuation,
    background_shape,
    draw_background,
    draw_losses,
    line_core,
    line_shape,
)
from .truth import line_significance

KINDS = ("surveys", "charging", "film", "windows", "random", "background")
MUST, SCORED_ABOVE = 8.0, 3.0  # noise widths: must be called; below it nothing could be seen


@dataclass(frozen=True, kw_only=True, eq=False)
class Case:
    """One synthetic spectrum and what is true of it."""

    spectrum: Spectrum
    truth: dict[str, float]  # element -> strength (depth of its strongest line, pure strong element = 1)
    significance: dict[str, float]  # element -> noise widths of its strongest line that nobody else explains
    strongest_ev: dict[str, float]  # element -> minimum of that line on this spectrum's axis; none out of range
    kind: str
    seed: int
    recipe: str
    insulator: bool = False
    notes: tuple[str, ...] = ()
    states: Mapping[str, str] = field(default_factory=dict)  # element -> element, oxide or both

    @property
    def must(self) -> frozenset[str]:
        """Elements that have to be called."""
        return frozenset(element for element, sigma in self.significance.items() if sigma >= MUST)

    @property
    def unscored(self) -> frozenset[str]:
        """Elements that are there but too weak or too hidden to be scored; all the rest is absent."""
        return frozenset(self.truth) - self.must

    @property
    def scorable(self) -> dict[str, str]:
        """Element -> "must" or "unscored"; an element not named is "absent"."""
        return {element: "must" if element in self.must else "unscored" for element in self.truth}


@dataclass(frozen=True, kw_only=True)
class Scale:
    """The spectrum's axis: own = true + offset + slope * true."""

    offset_ev: float
    slope: float

    def place(self, energy_ev: float) -> float:
        return energy_ev + self.offset_ev + self.slope * energy_ev


@dataclass(frozen=True, kw_only=True)
class Setup:
    """Everything about one measurement but the sample."""

    axes_ev: tuple[FloatArray, ...]  # one a window
    scale: Scale
    background: Background
    recording: Recording
    tilt: float  # exponent: all depths go as (E / 500 eV) ** tilt
    film_nm: float
    energy_scatter: float = 1.0  # of lines about their published energies; less for the metals of a calibration


def make_case(kind: str, seed: int) -> Case:
    """Make one case; the same kind and seed always give the same numbers."""
    if kind not in KINDS:
        raise ValueError(f"no such kind of case: {kind!r}; there are {', '.join(KINDS)}")
    rng = np.random.default_rng([KINDS.index(kind), seed])
    insulator = kind == "charging"
    sample: tuple[Constituent, ...] = ()
    recipe = "smooth background"
    if kind != "background":
        draw: Callable[..., tuple[str, tuple[Constituent, ...]]] = draw_random if kind == "random" else draw_technical
        recipe, sample = draw(rng, insulating=True) if insulator else draw(rng)
    setup = draw_setup(rng, kind, sample)
    return build_case(rng, setup, sample, kind=kind, seed=seed, recipe=recipe)


def build_case(
    rng: np.random.Generator,
    setup: Setup,
    sample: tuple[Constituent, ...],
    *,
    kind: str,
    seed: int,
    recipe: str,
) -> Case:
    """Measure a sample: emit its lines, record them, and work out what had to be seen."""
    lines = [line for part in sample for line in emit(rng, part, setup)]
    energy = np.concatenate(setup.axes_ev)
    shapes = np.array([line_shape(energy, line) for line in lines]).reshape(len(lines), energy.size)
    cores = np.array([line_core(energy, line) for line in lines]).reshape(len(lines), energy.size)
    base = background_shape(energy - setup.scale.offset_ev, setup.background)
    taken = record(rng, setup.axes_ev, setup.recording, base=base, shapes=shapes, cores=cores)
    windows = tuple(
        Window(energy_ev=axis, intensity=values) for axis, values in zip(setup.axes_ev, taken.values, strict=True)
    )
    found = line_significance(setup.axes_ev, lines, taken)
    return Case(
        spectrum=Spectrum(windows=windows, name=f"{kind} {seed}"),
        truth={part.element: part.strength for part in sample},
        significance={part.element: found.get(part.element, (0.0,))[0] for part in sample},
        strongest_ev={element: minimum for element, (_, minimum) in found.items()},
        kind=kind,
        seed=seed,
        recipe=recipe,
        insulator=kind == "charging",
        states={part.element: part.state for part in sample},
        notes=(
            *taken.notes,
            f"axis {setup.scale.offset_ev:+.1f} eV {100 * setup.scale.slope:+.2f} %",
            f"resolution {100 * setup.recording.resolution:.2f} %",
            f"film {setup.film_nm:.1f} nm",
        ),
    )


def draw_setup(rng: np.random.Generator, kind: str, sample: tuple[Constituent, ...]) -> Setup:
    """Draw the measurement."""
    scale = Scale(offset_ev=rng.normal(0.0, 2.5), slope=rng.normal(0.0, 0.0015))
    film_nm = rng.uniform(0.0, 1.0) if rng.random() < 0.4 else 0.0
    if kind == "charging":
        scale = replace(scale, offset_ev=scale.offset_ev + rng.uniform(-10.0, 60.0))
    elif kind == "film":
        film_nm = 5.0 * rng.beta(1.5, 2.5)
    axes = _window_axes(rng, sample, scale) if kind == "windows" else (_survey_axis(rng),)
    if kind == "background" and rng.random() < 0.2:
        start = float(round(rng.uniform(40, 900)))
        axes = (_axis(start, start + 60.0, 0.5),)
    return Setup(
        axes_ev=axes,
        scale=scale,
        background=draw_background(rng),
        recording=draw_recording(rng, windows=len(axes), blemishes=kind != "background"),
        tilt=rng.normal(0.0, 0.25),
        film_nm=film_nm,
    )


def _survey_axis(rng: np.random.Generator) -> FloatArray:
    start = float(rng.choice([20.0, 30.0]))
    stop = float(rng.choice([1000.0, 2000.0, 2200.0], p=[0.25, 0.5, 0.25]))
    step = float(rng.choice([0.5, 1.0], p=[0.3, 0.7]))
    return _axis(start, stop, step)


def _axis(low_ev: float, high_ev: float, step_ev: float) -> FloatArray:
    return low_ev + step_ev * np.arange(round((high_ev - low_ev) / step_ev) + 1, dtype=np.float64)


def _window_axes(rng: np.random.Generator, sample: tuple[Constituent, ...], scale: Scale) -> tuple[FloatArray, ...]:
    """Place windows of 60 eV as an operator would: on strong lines of what he expects, and of C and O."""
    expected = {part.element for part in sample} | {"C", "O"}
    for element in ("S", "Cl", "N"):
        if rng.random() < 0.2:
            expected.add(element)
    centres = []
    for element in sorted(expected):
        lines = [line for line in published_lines()[element] if 45 <= line.energy_ev <= 2150]
        for line in lines[: int(rng.integers(1, 3))]:
            centres.append(scale.place(line.energy_ev) + rng.normal(0.0, 5.0) - 2.0)
    ranges: list[list[float]] = []
    for centre in sorted(centres):
        low, high = max(20.0, round(centre) - 30.0), round(centre) + 30.0
        if ranges and low <= ranges[-1][1] + 2.0:
            ranges[-1][1] = max(high, ranges[-1][1])
        else:
            ranges.append([low, high])
    step = rng.choice([0.5, 1.0])
    steps = [step if rng.random() < 0.8 else rng.choice([0.25, 0.5, 1.0]) for _ in ranges]
    return tuple(_axis(low, high, own) for (low, high), own in zip(ranges, steps, strict=True))


def emit(rng: np.random.Generator, part: Constituent, setup: Setup) -> list[Emission]:
    """Emit every line of one element, in one state or two, and lines that no table lists."""
    losses = draw_losses(rng, part.element)
    own_ev = setup.energy_scatter * rng.normal(0.0, 1.5)
    shift = np.array(OXIDE_SHIFT_EV.get(part.element, OTHER_SHIFT_EV)) * rng.uniform(0.6, 1.1)
    oxide_part = {"element": 0.0, "oxide": 1.0, "both": rng.uniform(0.25, 0.75)}[part.state]
    emitted = []
    rows = published_lines()[part.element]
    for row in rows + _unlisted(rng, rows):
        moved = own_ev + setup.energy_scatter * rng.normal(0.0, 1.0)
        height = part.strength * row.relative_height * np.exp(rng.normal(0.0, 0.3))
        width = row.width_ev * np.exp(rng.normal(0.0, 0.25))
        lean = rng.uniform(1.2, 1.8) if row.valence else rng.uniform(1.1, 1.5)
        moved_row = replace(row, energy_ev=row.energy_ev + moved, width_ev=width)
        if oxide_part < 1.0:
            emitted.append(_emission(moved_row, height * (1 - oxide_part), lean, setup, losses))
        if oxide_part > 0.0:
            oxide = replace(
                moved_row,
                energy_ev=moved_row.energy_ev + shift[int(row.valence)],
                width_ev=width * (1.3 if row.valence else 1.1),
            )
            emitted.append(_emission(oxide, height * oxide_part, lean, setup, losses))
    return emitted


def _unlisted(rng: np.random.Generator, rows: tuple[PublishedLine, ...]) -> tuple[PublishedLine, ...]:
    """Draw the weak low-energy lines that heavy elements have and short tables leave out."""
    if rows[0].z <= 36:
        return ()
    count = int(rng.integers(1, 5))
    return tuple(
        replace(
            rows[0],
            energy_ev=rng.uniform(40.0, 400.0),
            relative_height=0.1 * np.exp(rng.normal(0.0, 0.4)),
            width_ev=rng.uniform(5.0, 9.0),
            transition="unlisted",
            valence=True,
        )
        for _ in range(count)
    )


def _emission(row: PublishedLine, height: float, lean: float, setup: Setup, losses: Losses) -> Emission:
    """Turn a derivative minimum of a given depth into a line on this spectrum's axis."""
    handbook = np.hypot(row.width_ev, HANDBOOK_RESOLUTION * row.energy_ev) / FWHM
    here = np.hypot(row.width_ev, setup.recording.resolution * row.energy_ev) / FWHM
    depth = height * (max(row.energy_ev, 20.0) / 500.0) ** setup.tilt
    if row.element != "C":  # the film is carbon
        depth *= float(attenuation(row.energy_ev, setup.film_nm))
    return Emission(
        element=row.element,
        name=row.transition,
        peak_ev=setup.scale.place(row.energy_ev - handbook),
        sigma_ev=here,
        sigma_low_ev=here * lean,
        # a Gaussian's derivative is height / sigma * exp(-1/2) deep; the area stays at any resolution
        height=depth * np.exp(0.5) * handbook**2 / here,
        losses=losses,
    )
