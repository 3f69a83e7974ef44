"""Name the elements on a surface from its Auger electron spectrum, with probabilities and reasons.

>>> from ident import identify, read_spectrum
>>> answer = identify(read_spectrum("part.csv"))  # doctest: +SKIP
>>> answer.to_frame()  # doctest: +SKIP

Names are loaded when they are first used, so that a question costs only what it needs.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from .contrasting import Contrast, contrast
    from .errors import IdentError
    from .identification import Identification, identify, identify_together
    from .lookup import candidates_at, element_card
    from .matching.settings import Settings
    from .readers import read_spectra, read_spectrum
    from .rechecking import Recheck, read_labels, recheck
    from .scale import ScaleCalibration, calibrate_scale, load_scale, save_scale
    from .spectrum import Spectrum

__version__ = "0.1.0"

__all__ = [
    "Contrast",
    "IdentError",
    "Identification",
    "Recheck",
    "ScaleCalibration",
    "Settings",
    "Spectrum",
    "__version__",
    "calibrate_scale",
    "candidates_at",
    "contrast",
    "element_card",
    "identify",
    "identify_together",
    "load_scale",
    "read_labels",
    "read_spectra",
    "read_spectrum",
    "recheck",
    "save_scale",
]

_HOMES = {
    "Contrast": "contrasting",
    "IdentError": "errors",
    "Identification": "identification",
    "Recheck": "rechecking",
    "ScaleCalibration": "scale",
    "Settings": "matching.settings",
    "Spectrum": "spectrum",
    "calibrate_scale": "scale",
    "candidates_at": "lookup",
    "contrast": "contrasting",
    "element_card": "lookup",
    "identify": "identification",
    "identify_together": "identification",
    "load_scale": "scale",
    "read_labels": "rechecking",
    "read_spectra": "readers",
    "read_spectrum": "readers",
    "recheck": "rechecking",
    "save_scale": "scale",
}


def __getattr__(name: str) -> Any:
    home = _HOMES.get(name)
    if home is None:
        raise AttributeError(f"module 'ident' has no attribute {name!r}")
    from importlib import import_module

    value = getattr(import_module(f"{__name__}.{home}"), name)
    globals()[name] = value
    return value


def __dir__() -> list[str]:
    return sorted([*globals(), *_HOMES])
