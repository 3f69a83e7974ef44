"""From raw ordinates to a differential spectrum with its noise: kind, spikes, noise, differentiation."""

from __future__ import annotations

from .differential import Differential, differentiate, noise_kernels
from .kind import settle_kind
from .noise import NoiseModel, estimate_noise
from .saturation import find_saturation
from .spikes import Spike, find_spikes

__all__ = [
    "Differential",
    "NoiseModel",
    "Spike",
    "differentiate",
    "estimate_noise",
    "find_saturation",
    "find_spikes",
    "noise_kernels",
    "settle_kind",
]
