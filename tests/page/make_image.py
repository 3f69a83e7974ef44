"""Make the invented electron image of the demo spectra: `python -m tests.page.make_image`.

A worn track with grooves along it, a dark film on one part, grains and noise; nothing in it was ever measured.
"""

from __future__ import annotations

from pathlib import Path

import numpy as np
from PIL import Image, ImageDraw

FILE = Path(__file__).resolve().parents[2] / "demo_spectra" / "slip_ring_spots.png"
SIZE = (480, 360)  # pixels
GREYS = 12


def invented_image() -> Image.Image:
    """Draw it; the same on any machine."""
    rng = np.random.default_rng(20310314)
    width, height = SIZE
    y, x = np.mgrid[0:height, 0:width].astype(float)
    grooves = sum(rng.uniform(3, 9) * np.sin(y / rng.uniform(3, 11) + rng.uniform(0, 6)) for _ in range(6))
    track = 45.0 * np.exp(-(((y - 190.0) / 80.0) ** 4))
    film = -70.0 / (1.0 + np.exp((np.hypot((x - 170.0) / 1.5, y - 200.0) - 62.0 + 6.0 * np.sin(x / 9.0)) / 4.0))
    grains = np.zeros((height, width))
    for at_x, at_y, size in zip(
        rng.uniform(0, width, 60), rng.uniform(0, height, 60), rng.gamma(2, 1.6, 60), strict=True
    ):
        grains += 60.0 * np.exp(-((x - at_x) ** 2 + (y - at_y) ** 2) / (2 * size**2))
    grey = 105.0 + grooves + track + film + grains + rng.normal(0, 7, (height, width))
    picture = Image.fromarray(np.clip(grey, 0, 255).astype(np.uint8))
    draw = ImageDraw.Draw(picture)
    draw.rectangle((0, height - 24, width, height), fill=0)
    draw.text((8, height - 18), "INVENTED IMAGE: drawn, not measured", fill=255)
    draw.rectangle((width - 110, height - 14, width - 10, height - 10), fill=255)
    return picture.quantize(GREYS)


if __name__ == "__main__":
    invented_image().save(FILE, optimize=True)
