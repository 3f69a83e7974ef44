"""The electron image: PNG and JPEG are embedded, spots stand where they were said to be, anything else is refused."""

from __future__ import annotations

import base64
from pathlib import Path

import numpy as np
import pytest
from PIL import Image as Picture

from ident.errors import InputError
from ident.report.page import check_spots, read_image
from ident.report.page.about import Spot
from ident.report.page.image import image_figure, pixels

from .parsed import Parsed


def picture(path: Path, size: tuple[int, int] = (64, 48)) -> Path:
    Picture.fromarray(np.arange(size[0] * size[1], dtype=np.uint8).reshape(size[1], size[0])).save(path)
    return path


@pytest.mark.parametrize(("name", "kind"), [("a.png", "png"), ("a.jpg", "jpeg"), ("a.JPEG", "jpeg")])
def test_the_file_itself_is_embedded(tmp_path: Path, name: str, kind: str) -> None:
    path = picture(tmp_path / name)
    figure = Parsed(image_figure(read_image(path), [], [])).root
    href = figure.one("image").attributes["href"] or ""
    assert href.startswith(f"data:image/{kind};base64,")
    assert base64.b64decode(href.partition(",")[2]) == path.read_bytes()


def test_spots_in_pixels_and_in_parts(tmp_path: Path) -> None:
    image = read_image(picture(tmp_path / "a.png"))
    assert pixels(Spot(name="a", x=16, y=12), image) == (16, 12)
    assert pixels(Spot(name="a", x=0.25, y=0.25, parts=True), image) == (16, 12)  # quarters of 64 and of 48
    assert pixels(Spot(name="a"), image) is None


def test_spots_are_drawn_named_and_listed(tmp_path: Path) -> None:
    image = read_image(picture(tmp_path / "a.png"))
    spots = [Spot(name="<b>pit</b>", x=16, y=12, spectrum="a.csv"), Spot(name="no place"), Spot(name="edge", x=64, y=0)]
    figure = Parsed(image_figure(image, spots, ["#s0", None, None])).root
    rings = [(c.attributes["cx"], c.attributes["cy"]) for c in figure.all("circle", "spot-ring")]
    assert [(float(x or 0), float(y or 0)) for x, y in rings] == [(16.0, 12.0), (64.0, 0.0)]
    assert [t.text for t in figure.all("text")] == ["<b>pit</b>", "edge"]
    listed = list(figure.one("ul").all("li"))
    assert next(listed[0].all("a")).attributes["href"] == "#s0"
    assert "a.csv" in listed[0].text
    assert "<b>pit</b>" in (figure.one("svg").attributes["aria-label"] or "")


@pytest.mark.parametrize("place", [(65.0, 1.0), (1.0, 49.0)])
def test_a_spot_outside_the_image_is_refused(tmp_path: Path, place: tuple[float, float]) -> None:
    image = read_image(picture(tmp_path / "a.png"))
    with pytest.raises(InputError, match=r"outside the image .* 64 x 48 pixels"):
        check_spots([Spot(name="pit", x=place[0], y=place[1])], image, "about.toml")


def test_what_is_no_image_or_too_large_is_refused(tmp_path: Path) -> None:
    gif = tmp_path / "a.png"
    Picture.new("L", (8, 8)).save(gif, format="GIF")
    cut = picture(tmp_path / "cut.png", (640, 480))
    cut.write_bytes(cut.read_bytes()[:-200])
    large = tmp_path / "large.png"
    large.write_bytes(b"\x89PNG" + bytes(2_000_000))
    text = tmp_path / "text.png"
    text.write_text("<svg onload=alert(1)>", encoding="utf-8")
    for path, said in ((gif, "no PNG or JPEG"), (cut, "damaged"), (large, "larger than 2 MB"), (text, "no PNG")):
        with pytest.raises(InputError, match=said) as failed:
            read_image(path)
        assert path.name in str(failed.value)
    for path in (tmp_path, tmp_path / "nothing.png"):
        with pytest.raises(InputError, match="cannot be read"):
            read_image(path)
