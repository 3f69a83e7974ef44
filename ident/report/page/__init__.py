"""The report page: one HTML file with an interactive spectrum, the assignments and their reasons."""

from __future__ import annotations

from .about import REPORT_KEYS, About, check_spectra, read_about, report_value
from .image import Image, check_spots, read_image
from .whole import MOST_BYTES, Page, check_library

__all__ = [
    "MOST_BYTES",
    "REPORT_KEYS",
    "About",
    "Image",
    "Page",
    "check_library",
    "check_spectra",
    "check_spots",
    "read_about",
    "read_image",
    "report_value",
]
