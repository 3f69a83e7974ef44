"""The interactive plot: Bokeh's models, empty; `page.js` fills them with the curves of a spectrum.

One plot serves all spectra of a page. No callbacks in text are used, so that the page needs no `eval`.
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING, Any

from ..palette import FAINT_INK, GAP, INK, PAPER, PREDICTED, RULE

if TYPE_CHECKING:
    from bokeh.models import ColumnDataSource
    from bokeh.plotting import figure

FONT = "system-ui, 'Segoe UI', 'DejaVu Sans', sans-serif"
ENERGY = "kinetic energy, eV"
HEIGHTS = {"differential": 430, "residual": 130, "direct": 210, "direct-log": 210}
LEFT = 74  # pixels for the ordinate's numbers, alike in all panels so that energies stand under each other


def library() -> str:
    """Give the script of the plotting library, ready to stand inside a script element."""
    from bokeh.resources import Resources

    script: str = Resources(mode="inline", components=["bokeh"], minified=True).js_raw[0]
    return script.replace("</script", "<\\/script").replace("<!--", "<\\!--")


def plot_item() -> Any:
    """Give the empty plot as Bokeh's own description of it."""
    from bokeh.embed import json_item
    from bokeh.layouts import column
    from bokeh.models import Range1d

    shared = Range1d(start=0.0, end=1.0, min_interval=4.0, name="energies")
    differential = _differential(shared)
    residual = _residual(shared)
    direct = [_direct(shared, kind) for kind in ("direct", "direct-log")]
    whole = column(differential, residual, *direct, sizing_mode="stretch_width", spacing=0)
    item = json_item(whole)
    return {key: item[key] for key in ("doc", "root_id", "version")}


def _source(name: str, *columns: str) -> ColumnDataSource:
    from bokeh.models import ColumnDataSource

    return ColumnDataSource({column: [] for column in columns}, name=name)


def _panel(name: str, shared: Any, label: str, *, log: bool = False, last: bool = False) -> figure:
    """An empty panel in our own look, panned along the energies only; its height follows what is in view."""
    from bokeh.models import BoxZoomTool, PanTool, Range1d, WheelZoomTool
    from bokeh.plotting import figure

    drag: Any = PanTool(dimensions="width")
    tools = [drag, BoxZoomTool(dimensions="width"), WheelZoomTool(dimensions="width")]
    panel = figure(
        name=name, height=HEIGHTS[name], sizing_mode="stretch_width", x_range=shared, tools=tools,
        y_range=Range1d(start=0.0, end=1.0), y_axis_type="log" if log else "linear", toolbar_location=None,
        background_fill_color=PAPER, border_fill_color=PAPER, outline_line_color=None, min_border_left=LEFT,
        min_border_right=12, min_border_top=6, min_border_bottom=6, active_drag=drag, active_scroll=None,
        lod_threshold=None,
    )  # fmt: skip
    panel.grid.grid_line_color = None
    for axis in (panel.xaxis, panel.yaxis):
        axis.axis_line_color, axis.major_tick_line_color, axis.minor_tick_line_color = INK, INK, None
        axis.major_label_text_font, axis.axis_label_text_font = FONT, FONT
        axis.major_label_text_font_size, axis.axis_label_text_font_size = "12px", "13px"
        axis.major_label_text_color = axis.axis_label_text_color = INK
        axis.axis_label_text_font_style = "normal"
    panel.yaxis.axis_label = label
    panel.xaxis.axis_label = ENERGY if last else None
    panel.xaxis.major_label_text_font_size = "12px" if last else "0px"
    _gaps_and_cursor(panel)
    return panel


def _gaps_and_cursor(panel: figure) -> None:
    """What was not scanned, hatched; and where the minimum under the pointer stands."""
    gaps = _source(f"gaps {panel.name}", "left", "right", "bottom", "top")
    hatched: dict[str, Any] = {"hatch_pattern": "/", "hatch_color": RULE, "hatch_weight": 0.5}
    panel.quad(source=gaps, fill_color=GAP, line_color=None, level="underlay", **hatched)
    cursor = _source(f"cursor {panel.name}", "x")
    panel.vspan(x="x", source=cursor, line_color=FAINT_INK, line_width=1, line_dash=[2, 3], level="underlay")


def _differential(shared: Any) -> figure:
    """Measured differential, what was predicted, marks and labels of the minima."""
    from bokeh.core.properties import value

    panel = _panel("differential", shared, "differential")
    panel.yaxis.major_label_text_font_size = "0px"  # arbitrary units: the slope of the background is taken off
    panel.yaxis.major_tick_line_color = None
    together = _source("together", "x", "y")
    panel.line("x", "y", source=together, color=PREDICTED, line_width=1.2, line_dash=[3, 3])
    chosen = _source("chosen", "x", "y", "zero")
    panel.varea("x", "y", "zero", source=chosen, fill_color=PREDICTED, fill_alpha=0.28)
    panel.line("x", "y", source=chosen, color=PREDICTED, line_width=2.4, line_dash=[7, 3])
    panel.line("x", "y", source=_source("measured", "x", "y"), color=INK, line_width=1.1)
    rings = _source("shared", "x", "y")
    panel.scatter("x", "y", source=rings, marker="circle", size=16, fill_color=None, line_color=FAINT_INK)
    leaders = _source("leaders", "x0", "y0", "x1", "y1")
    panel.segment("x0", "y0", "x1", "y1", source=leaders, line_color=FAINT_INK, line_width=0.8)
    _marks(panel, "marks", 9)
    stretches = _source("stretches", "x")
    panel.vspan(x="x", source=stretches, line_color=RULE, line_width=1, line_dash=[1, 3], level="underlay")
    style: dict[str, Any] = {"text_font_size": "12px", "text_font": value(FONT), "text_color": INK}
    panel.text("x", "y", text="text", source=_source("gains", "x", "y", "text"), x_offset=3, **style)
    labels = _source("labels", "x", "y", "text")
    panel.text(
        "x", "y", text="text", source=labels, angle=0.5 * math.pi, text_align="right", text_baseline="middle",
        text_line_height=1.05, **style,
    )  # fmt: skip
    return panel


def _residual(shared: Any) -> figure:
    panel = _panel("residual", shared, "left over")
    panel.yaxis.major_label_text_font_size = "0px"
    panel.yaxis.major_tick_line_color = None
    panel.hspan(y=0.0, line_color=RULE, line_width=1, level="underlay")
    panel.line("x", "y", source=_source("rest", "x", "y"), color=FAINT_INK, line_width=1.0)
    return panel


def _direct(shared: Any, kind: str) -> figure:
    from bokeh.models import BasicTickFormatter, FixedTicker

    log = kind == "direct-log"
    panel = _panel(kind, shared, "direct, log scale" if log else "direct", log=log, last=True)
    panel.yaxis.formatter = BasicTickFormatter(precision=1, use_scientific=True, power_limit_high=4)
    if log:
        panel.yaxis.ticker = FixedTicker(ticks=[], name="ticks")
    panel.line("x", "y", source=_source(f"{kind} curve", "x", "y"), color=INK, line_width=1.1)
    _marks(panel, f"{kind} artefacts", 8)
    return panel


def _marks(panel: figure, name: str, size: int) -> None:
    """Marks of the palette: which one and in what colours is said with each."""
    source = _source(name, "x", "y", "marker", "fill", "edge")
    look: dict[str, Any] = {"marker": "marker", "fill_color": "fill", "line_color": "edge"}
    panel.scatter("x", "y", source=source, size=size, line_width=1.4, **look)
