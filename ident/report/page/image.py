"""An electron image with the spots marked: the file as it is, the marks drawn over it."""

from __future__ import annotations

import base64
import hashlib
import warnings
from collections.abc import Sequence
from dataclasses import dataclass
from io import BytesIO
from pathlib import Path

from ...errors import InputError
from .about import Spot
from .markup import Markup, el, group

MOST_BYTES = 2_000_000  # in base64 it is a third more, and a page holds 5 MB
MOST_PIXELS = 100_000_000
TYPES = {"PNG": "image/png", "JPEG": "image/jpeg"}
REMEDY = "--image takes a PNG or JPEG of at most 2 MB"


@dataclass(frozen=True, kw_only=True)
class Image:
    """An image file, checked."""

    name: str
    media_type: str
    width: int  # pixels
    height: int
    data: bytes

    @property
    def sha256(self) -> str:
        """Hash of the file, in hexadecimal."""
        return hashlib.sha256(self.data).hexdigest()


def read_image(path: str | Path) -> Image:
    """Read a PNG or JPEG file.

    Raises
    ------
    InputError
        When it cannot be read, is neither, is damaged or too large.
    """
    from PIL import Image as Picture
    from PIL import UnidentifiedImageError

    source = str(path)
    try:
        with Path(path).open("rb") as stream:
            data = stream.read(MOST_BYTES + 1)
    except OSError as failed:
        raise InputError(f"cannot be read ({failed.strerror or failed})", source=source, remedy=REMEDY) from None
    if len(data) > MOST_BYTES:
        raise InputError(
            "is larger than 2 MB", source=source, remedy="save it smaller, such as 1600 pixels wide and as JPEG"
        )
    try:
        with warnings.catch_warnings():
            warnings.simplefilter("ignore")  # of its own size limits; ours is below
            with Picture.open(BytesIO(data), formats=tuple(TYPES)) as picture:
                form, (width, height) = str(picture.format), picture.size
                if width * height > MOST_PIXELS:
                    raise InputError(f"has {width} x {height} pixels", source=source, remedy="save it smaller")
                picture.load()
    except UnidentifiedImageError:
        raise InputError("is no PNG or JPEG", source=source, remedy="save it as one of these") from None
    except (OSError, SyntaxError, ValueError, Picture.DecompressionBombError):
        raise InputError("is damaged, or cut short", source=source, remedy="save it again as PNG or JPEG") from None
    return Image(name=source, media_type=TYPES[form], width=width, height=height, data=data)


def check_spots(spots: Sequence[Spot], image: Image, source: str) -> None:
    """Refuse a spot outside the image."""
    for spot in spots:
        place = pixels(spot, image)
        if place is not None and not (0 <= place[0] <= image.width and 0 <= place[1] <= image.height):
            raise InputError(
                f"the spot {spot.name!r} lies outside the image {image.name}, "
                f"which has {image.width} x {image.height} pixels",
                source=source,
                remedy="count x to the right and y down from the upper left corner",
            )


def pixels(spot: Spot, image: Image) -> tuple[float, float] | None:
    """Where a spot is, in pixels of the image; None when it is not said."""
    if spot.x is None or spot.y is None:
        return None
    return (spot.x * image.width, spot.y * image.height) if spot.parts else (spot.x, spot.y)


def image_figure(image: Image, spots: Sequence[Spot], anchors: Sequence[str | None]) -> Markup:
    """Show the image with the spots on it, and list them; `anchors` lead to the spectrum of each spot."""
    marked = [(spot, place, to) for spot, to in zip(spots, anchors, strict=True) if (place := pixels(spot, image))]
    encoded = base64.b64encode(image.data).decode("ascii")
    picture = el(
        "svg",
        el("image", href=f"data:{image.media_type};base64,{encoded}", width=image.width, height=image.height),
        *(_mark(spot, place, to, image) for spot, place, to in marked),
        viewBox=f"0 0 {image.width} {image.height}",
        role="img",
        aria_label=f"electron image with {len(marked)} spots marked: {', '.join(spot.name for spot, _, _ in marked)}"
        if marked
        else "electron image; no spot is marked",
        cls="image",
    )
    listed = el("ul", *(_listed(spot, place, to) for spot, place, to in marked), cls="spots") if marked else ""
    file = el("span", f"{image.name}, {image.width} × {image.height} pixels", cls="faint")
    return el("figure", picture, el("figcaption", file, listed), cls="image-figure")


def _listed(spot: Spot, place: tuple[float, float], to: str | None) -> Markup:
    name = el("a", spot.name, href=to) if to else el("b", spot.name)
    said = f" at {place[0]:.0f}, {place[1]:.0f} pixels" + (f": {spot.spectrum}" if spot.spectrum else "")
    return el("li", name, said)


def _mark(spot: Spot, place: tuple[float, float], to: str | None, image: Image) -> Markup:
    """A ring with a gap of dark and light, so that it is seen on any grey, and the name beside it."""
    x, y = place
    unit = max(image.width, image.height) / 100.0
    right = x < 0.7 * image.width
    beside = {"x": f"{x + (2.2 if right else -2.2) * unit:.1f}", "y": f"{y + 0.9 * unit:.1f}"}
    ring = {"cx": f"{x:.1f}", "cy": f"{y:.1f}", "r": f"{1.5 * unit:.1f}"}
    drawn = group(
        el("circle", cls="spot-edge", stroke_width=f"{0.75 * unit:.2f}", **ring),
        el("circle", cls="spot-ring", stroke_width=f"{0.35 * unit:.2f}", **ring),
        el(
            "text",
            spot.name,
            cls="spot-name",
            font_size=f"{2.8 * unit:.1f}",
            stroke_width=f"{0.6 * unit:.2f}",
            text_anchor="start" if right else "end",
            **beside,
        ),
    )
    return el("a", drawn, href=to, tabindex="-1", aria_hidden="true") if to else el("g", drawn)
