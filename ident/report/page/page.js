"use strict";
// Fills the empty plot with the curves of a spectrum, and answers pointer, keys and buttons. Texts are only ever
// copied from the page itself, as nodes or as text: nothing here turns text into markup.
(() => {
  const byId = (id) => document.getElementById(id);
  const told = JSON.parse(byId("curves").textContent);
  const root = document.documentElement;
  const viewer = byId("viewer"), plot = byId("plot"), tip = byId("tip"), readout = byId("readout");
  const articles = told.anchors.map(byId);
  const MARKERS = {disc: "circle", diamond: "diamond", ring: "circle", cross: "x", square: "square"};
  const HOLLOW = ["ring", "square"];
  const NEAR = 10;        // pixels from a minimum within which the pointer means it
  const LETTER = 6.7;     // pixels a letter of a label, upright; measured on the widest usual font
  const LINE = 14;        // pixels a line of a label
  const PAD = 10;         // pixels free above what is highest and below what is lowest
  const BELOW = 26;       // pixels between a minimum and where its label begins
  const MARGIN = 0.015;   // of the range, to either side of it
  const state = {sheet: -1, element: "", place: -1, gain: 1, magnified: true, waiting: false};
  let panels = {}, sources = {}, tools = [], ticks = null;
  const decoded = new Map();

  // ---- curves -------------------------------------------------------------------------------------------------
  function unpack(packed) {
    const text = atob(packed.data), count = text.length / 2, out = new Float64Array(count);
    for (let i = 0; i < count; i++) {
      let whole = text.charCodeAt(2 * i) | (text.charCodeAt(2 * i + 1) << 8);
      if (whole >= 32768) whole -= 65536;
      out[i] = whole === -32768 ? NaN : packed.from + packed.step * (whole + 32767);
    }
    return out;
  }

  function unpackRuns(packed, size) {
    const values = unpack(packed), out = new Float64Array(size).fill(NaN);
    let used = 0;
    for (const [at, length] of packed.at) {
      out.set(values.subarray(used, used + length), at);
      used += length;
    }
    return out;
  }

  function energiesOf(packed) {
    if (packed.each) return Float64Array.from(packed.each);
    return Float64Array.from({length: packed.n}, (_, i) => packed.first + i * packed.step);
  }

  // windows one after the other, with nothing between them
  function joined(parts) {
    const out = new Float64Array(parts.reduce((sum, part) => sum + part.length + 1, 0)).fill(NaN);
    let at = 0;
    for (const part of parts) {
      out.set(part, at);
      at += part.length + 1;
    }
    return out;
  }

  function curvesOf(number) {
    if (decoded.has(number)) return decoded.get(number);
    const raw = told.sheets[number], windows = raw.windows;
    const grids = windows.map((w) => energiesOf(w.energy));
    const direct = windows.every((w) => w.direct);
    // weak stretches are magnified, as in the printed figure
    const gains = joined(grids.map((grid, i) => grid.map((ev) => (state.magnified ? gainAt(raw, ev, i) : 1))));
    const times = (values) => values.map((value, i) => value * gains[i]);
    const curves = {
      raw,
      ranges: merged(grids.map((grid) => [grid[0], grid[grid.length - 1]])),
      energy: joined(grids),
      measured: times(joined(windows.map((w) => unpack(w.measured)))),
      together: times(joined(windows.map((w, i) => unpackRuns(w.together, grids[i].length)))),
      pattern: (element) => times(joined(windows.map((w, i) =>
        w.patterns[element] ? unpackRuns(w.patterns[element], grids[i].length) : new Float64Array(grids[i].length).fill(NaN)))),
      direct: direct ? {
        energy: joined(windows.map((w) => energiesOf(w.direct.energy))),
        value: joined(windows.map((w) => unpack(w.direct.value))),
      } : null,
    };
    decoded.set(number, curves);
    return curves;
  }

  function gainAt(raw, ev, number) {
    const found = raw.stretches.find(([low, high, , at]) => at === number && ev >= low && ev <= high);
    return found ? found[2] : 1;
  }

  function merged(ranges) {
    const out = [];
    for (const [low, high] of [...ranges].sort((a, b) => a[0] - b[0])) {
      const last = out[out.length - 1];
      if (last && low <= last[1]) last[1] = Math.max(last[1], high);
      else out.push([low, high]);
    }
    return out;
  }

  const minus = (value, less) => (Number.isNaN(less) ? value : value - less);

  // ---- what is in view ----------------------------------------------------------------------------------------
  const span = () => [panels.differential.x_range.start, panels.differential.x_range.end];

  function inView(energy, values) {
    const [low, high] = span(), out = [];
    for (let i = 0; i < energy.length; i++) {
      if (energy[i] >= low && energy[i] <= high && Number.isFinite(values[i])) out.push(values[i]);
    }
    return out;
  }

  const lowest = (values) => values.reduce((a, b) => Math.min(a, b), Infinity);
  const highest = (values) => values.reduce((a, b) => Math.max(a, b), -Infinity);

  // heights of the differential panel: what is in view, with room for the labels under it
  function heights(curves) {
    const measured = inView(curves.energy, curves.measured);
    if (!measured.length) return [-1, 1];
    const lines = [...inView(curves.energy, curves.together)];
    if (state.element) lines.push(...inView(curves.energy, curves.pattern(state.element)));
    const sorted = Float64Array.from(measured).sort();
    const part = (p) => sorted[Math.min(sorted.length - 1, Math.floor(p * sorted.length))];
    // spikes may stand out of the panel, lines may not
    const depths = minimaInView(curves).map((m) => valueAt(curves, m.ev));
    let low = lowest([part(0.002), ...depths]), high = Math.max(part(0.995), Math.min(highest(lines), 2 * part(1)));
    const middle = part(0.5);
    [low, high] = [middle - (middle - low) / state.gain, middle + (high - middle) / state.gain];
    if (!(high > low)) [low, high] = [low - 1, low + 1];
    // pixels are shared out so that the label under each minimum still ends inside the panel
    const height = panels.differential.inner_height || 380;
    let unit = (high - low) / (height - 2 * PAD);
    for (const minimum of minimaInView(curves)) {
      const room = height - PAD - BELOW - Math.min(LETTER * longest(minimum), 0.4 * height);
      unit = Math.max(unit, (high - valueAt(curves, minimum.ev)) / room);
    }
    return [high + (PAD - height) * unit, high + PAD * unit];
  }

  const longest = (minimum) => highest((minimum.label || [""]).map((line) => line.length));

  function minimaInView(curves) {
    const [low, high] = span();
    return curves.raw.minima.filter((m) => m.ev >= low && m.ev <= high);
  }

  function valueAt(curves, ev, half = 0) {
    let best = NaN, away = Infinity, under = Infinity;
    for (let i = 0; i < curves.energy.length; i++) {
      const off = Math.abs(curves.energy[i] - ev);
      if (off < away) [away, best] = [off, curves.measured[i]];
      if (off <= half) under = Math.min(under, curves.measured[i]);
    }
    return Math.min(best, under);
  }

  // ---- drawing ------------------------------------------------------------------------------------------------
  function later() {
    if (state.waiting) return;
    state.waiting = true;
    requestAnimationFrame(() => {
      state.waiting = false;
      fit();
    });
  }

  function setRange(range, low, high) {
    if (range.start !== low || range.end !== high) range.setv({start: low, end: high});
  }

  function fit() {
    if (state.sheet < 0) return;
    const curves = curvesOf(state.sheet), [low, high] = heights(curves);
    setRange(panels.differential.y_range, low, high);
    const rest = inView(curves.energy, sources.rest.data.y);
    const extent = highest(rest.map(Math.abs)) || 1;
    setRange(panels.residual.y_range, -1.08 * extent, 1.08 * extent);
    if (curves.direct) fitDirect(curves);
    placeMarks(curves);
    shadeGaps(curves);
  }

  function fitDirect(curves) {
    const values = inView(curves.direct.energy, curves.direct.value);
    if (!values.length) return;
    const low = lowest(values), high = highest(values);
    if (curves.raw.steep) {
      const margin = Math.max((high / low) ** 0.06, 1.02);
      setRange(panels["direct-log"].y_range, low / margin, high * margin);
      ticks.ticks = roundNumbers(low / margin, high * margin);
    } else {
      const margin = 0.07 * (high - low || Math.abs(high) || 1);
      setRange(panels.direct.y_range, low - margin, high + margin);
    }
  }

  // ticks of the logarithmic ordinate: few, and round
  function roundNumbers(low, high) {
    const digits = high > 12 * low ? [1, 2, 5] : high > 2 * low ? [1, 1.5, 2, 3, 4, 5, 7] : [];
    if (!digits.length) return [low + 0.2 * (high - low), low + 0.8 * (high - low)].map((v) => Number(v.toPrecision(2)));
    const out = [];
    for (let decade = Math.floor(Math.log10(low)); decade <= Math.log10(high); decade++) {
      out.push(...digits.map((digit) => digit * 10 ** decade).filter((v) => v >= low && v <= high));
    }
    return out;
  }

  function markOf(role) {
    const mark = told.palette[role];
    if (!mark) return {marker: "dot", fill: told.faint, edge: told.faint};
    const hollow = HOLLOW.includes(mark.shape);
    return {marker: MARKERS[mark.shape], fill: hollow ? told.paper : mark.colour, edge: mark.colour};
  }

  function placeMarks(curves) {
    const range = panels.differential.y_range, height = panels.differential.inner_height || 380;
    const unit = (range.end - range.start) / height;
    const [low, high] = span(), pixel = (high - low) / (panels.differential.inner_width || 600);
    const marks = {x: [], y: [], marker: [], fill: [], edge: []}, rings = {x: [], y: []};
    const labels = {x: [], y: [], text: []}, wanted = [];
    for (const minimum of minimaInView(curves)) {
      const y = valueAt(curves, minimum.ev, 4 * pixel) - 9 * unit;
      const mark = markOf(minimum.role);
      marks.x.push(minimum.ev);
      marks.y.push(y);
      marks.marker.push(mark.marker);
      marks.fill.push(mark.fill);
      marks.edge.push(mark.edge);
      if (minimum.shared) {
        rings.x.push(minimum.ev);
        rings.y.push(y);
      }
      if (minimum.label) wanted.push(minimum);
    }
    // labels side by side: those of the highest rank first, the rest where there is room left
    const taken = [];
    for (const minimum of wanted.sort((a, b) => b.rank - a.rank)) {
      const half = 0.5 * LINE * minimum.label.length + 1, at = minimum.ev / pixel;
      if (taken.some(([from, to]) => at - half < to && at + half > from)) continue;
      taken.push([at - half, at + half]);
      labels.x.push(minimum.ev);
      labels.y.push(valueAt(curves, minimum.ev, (half + 2) * pixel) - 19 * unit);
      labels.text.push(minimum.label.join("\n"));
    }
    sources.marks.data = marks;
    sources.shared.data = rings;
    placeGains(curves, range.end - 20 * unit, unit, pixel);
    sources.labels.data = labels;
  }

  // how much each stretch is magnified, where any is
  function placeGains(curves, y, unit, pixel) {
    const {stretches} = curves.raw, told = {x: [], y: [], text: []}, [low, high] = span();
    if (state.magnified && stretches.some((one) => one[2] !== 1)) {
      for (const [from, to, gain] of stretches) {
        if (to < low || from > high) continue;
        const at = Math.max(from, low), last = told.x.length - 1;
        const lower = last >= 0 && at - told.x[last] < 36 * pixel && told.y[last] === y;
        told.x.push(at);
        told.y.push(lower ? y - 15 * unit : y);
        told.text.push(`× ${gain}`);
      }
    }
    sources.stretches.data = {x: told.x.filter((at) => at > low)};
    sources.gains.data = told;
  }

  function shadeGaps(curves) {
    const left = [], right = [];
    for (let i = 1; i < curves.ranges.length; i++) {
      left.push(curves.ranges[i - 1][1]);
      right.push(curves.ranges[i][0]);
    }
    for (const [name, panel] of Object.entries(panels)) {
      const {start, end} = panel.y_range;
      sources[`gaps ${name}`].data = {left, right, bottom: left.map(() => start), top: left.map(() => end)};
    }
  }

  function drawCurves() {
    const curves = curvesOf(state.sheet), {energy, measured, together} = curves;
    const chosen = state.element ? curves.pattern(state.element) : null;
    const extra = chosen && !curves.raw.called.includes(state.element) ? chosen : null;
    const rest = measured.map((value, i) => minus(minus(value, together[i]), extra ? extra[i] : NaN));
    sources.measured.data = {x: energy, y: measured};
    sources.together.data = {x: energy, y: together};
    sources.rest.data = {x: energy, y: rest};
    sources.chosen.data = chosen ? {x: energy, y: chosen, zero: chosen.map((v) => (Number.isNaN(v) ? NaN : 0))} : {x: [], y: [], zero: []};
    for (const kind of ["direct", "direct-log"]) {
      const shown = curves.direct && (kind === "direct-log") === curves.raw.steep;
      panels[kind].visible = Boolean(shown);
      sources[`${kind} curve`].data = shown ? {x: curves.direct.energy, y: curves.direct.value} : {x: [], y: []};
      const mark = markOf("artefact"), at = shown ? curves.raw.artefacts : [];
      sources[`${kind} artefacts`].data = {
        x: at, y: at.map((ev) => directAt(curves, ev)),
        marker: at.map(() => mark.marker), fill: at.map(() => mark.fill), edge: at.map(() => mark.edge),
      };
    }
    later();
  }

  function directAt(curves, ev) {
    const {energy, value} = curves.direct;
    let best = 0;
    energy.forEach((e, i) => { if (Math.abs(e - ev) < Math.abs(energy[best] - ev)) best = i; });
    return value[best];
  }

  // ---- moving about -------------------------------------------------------------------------------------------
  function limits() {
    const {ranges} = curvesOf(state.sheet), low = ranges[0][0], high = ranges[ranges.length - 1][1];
    const margin = MARGIN * (high - low);
    return [Math.max(0, low - margin), high + margin];
  }

  function look(low, high) {
    const [least, most] = limits(), width = Math.min(Math.max(high - low, 4), most - least);
    let from = Math.max(least, 0.5 * (low + high - width));
    from = Math.min(from, most - width);
    setRange(panels.differential.x_range, from, from + width);
  }

  function zoom(factor) {
    const [low, high] = span(), middle = 0.5 * (low + high), half = 0.5 * (high - low) * factor;
    look(middle - half, middle + half);
  }

  function pan(part) {
    const [low, high] = span(), by = part * (high - low);
    look(low + by, high + by);
  }

  function whole() {
    state.gain = 1;
    look(...limits());
    later();
  }

  function magnify(factor) {
    state.gain = Math.min(200, Math.max(1, state.gain * factor));
    later();
  }

  const actions = {
    whole, in: () => zoom(0.6), out: () => zoom(1 / 0.6), left: () => pan(-0.25), right: () => pan(0.25),
    taller: () => magnify(1.6), flatter: () => magnify(1 / 1.6), before: () => step(-1), after: () => step(1), drag, magnified,
  };

  function magnified() {
    state.magnified = !state.magnified;
    viewer.querySelector("[data-do=magnified]").setAttribute("aria-pressed", String(state.magnified));
    decoded.clear();
    drawCurves();
  }

  function drag() {
    const button = viewer.querySelector("[data-do=drag]"), on = button.getAttribute("aria-pressed") !== "true";
    button.setAttribute("aria-pressed", String(on));
    for (const tool of tools) {
      if (tool.type === "BoxZoomTool") tool.active = on;
    }
    for (const tool of tools) {
      if (tool.type === "PanTool") tool.active = !on;
    }
  }

  // ---- minima and elements ------------------------------------------------------------------------------------
  const rowOf = (place) => byId(`${told.anchors[state.sheet]}-m${place}`);

  // what the table says of a minimum, as nodes
  function tellMinimum(place, into) {
    const row = rowOf(place), head = document.createElement("p"), name = document.createElement("b");
    name.textContent = row.cells[0].textContent.replace("±", "eV ±");
    head.append(name, `, ${row.cells[1].textContent} times the noise: ${row.cells[2].textContent.trim()}`);
    const body = document.createElement("div");
    body.append(...row.querySelector(".who").cloneNode(true).childNodes);
    into.replaceChildren(head, body);
  }

  function tellElement(element) {
    const head = document.createElement("p"), list = document.createElement("p");
    const row = byId(`${told.anchors[state.sheet]}-${element}`);
    const name = document.createElement("b");
    name.textContent = element;
    head.append(name, `: ${row.cells[1].textContent.trim()}, probability ${row.cells[2].textContent}; its expected pattern is drawn in the spectrum`);
    const details = row.nextElementSibling;
    const lines = [...(details ? details.querySelectorAll(".lines tbody tr") : [])].map((line) => {
      const [transition, expected, found, , , status] = [...line.cells].map((cell) => cell.textContent);
      return `${transition} ${expected}: ${status}${found ? ` at ${found}` : ""}`;
    });
    list.textContent = lines.slice(0, 8).join("; ") + (lines.length > 8 ? `; and ${lines.length - 8} weaker` : "");
    readout.replaceChildren(head, list);
  }

  function setCursor(ev) {
    for (const name of Object.keys(panels)) sources[`cursor ${name}`].data = {x: ev === null ? [] : [ev]};
  }

  function goTo(place, near = true) {
    const minimum = curvesOf(state.sheet).raw.minima[place];
    if (!minimum) return;
    state.place = place;
    const [low, high] = span();
    if (near && (minimum.ev < low || minimum.ev > high || high - low > 260)) look(minimum.ev - 60, minimum.ev + 60);
    setCursor(minimum.ev);
    tellMinimum(place, readout);
  }

  function step(by) {
    const count = curvesOf(state.sheet).raw.minima.length;
    if (!count) return;
    const at = state.place < 0 ? (by > 0 ? 0 : count - 1) : state.place + by;
    goTo(Math.min(count - 1, Math.max(0, at)));
  }

  function choose(element) {
    const article = articles[state.sheet];
    state.element = element;
    for (const button of article.querySelectorAll(".choice")) {
      button.setAttribute("aria-pressed", String(button.dataset.element === element));
    }
    drawCurves();
    if (!element) {
      readout.replaceChildren();
      return;
    }
    const curves = curvesOf(state.sheet);
    if (!inView(curves.energy, curves.pattern(element)).length) whole();
    tellElement(element);
  }

  // ---- the pointer --------------------------------------------------------------------------------------------
  let pointer = [0, 0];

  function hover(panel, x) {
    const [low, high] = span(), pixel = (high - low) / (panel.inner_width || 600);
    const {minima} = curvesOf(state.sheet).raw;
    let best = -1;
    minima.forEach((m, i) => {
      if (Math.abs(m.ev - x) <= NEAR * pixel && (best < 0 || Math.abs(m.ev - x) < Math.abs(minima[best].ev - x))) best = i;
    });
    return best;
  }

  function showTip(place) {
    if (place < 0) {
      hideTip();
      return;
    }
    setCursor(curvesOf(state.sheet).raw.minima[place].ev);
    tellMinimum(place, tip);
    tip.hidden = false;
    const room = plot.clientWidth, width = Math.min(tip.offsetWidth, room), [x, y] = pointer;
    const left = x + 18 + width <= room ? x + 18 : Math.max(0, x - 18 - width);
    tip.style.left = `${left}px`;
    tip.style.top = `${Math.max(0, Math.min(y + 14, plot.clientHeight - tip.offsetHeight))}px`;
  }

  function hideTip() {
    if (tip.hidden) return;
    tip.hidden = true;
    const minimum = state.place < 0 ? null : curvesOf(state.sheet).raw.minima[state.place];
    setCursor(minimum ? minimum.ev : null);
  }

  // ---- spectra ------------------------------------------------------------------------------------------------
  function open(number) {
    if (number === state.sheet) return;
    Object.assign(state, {sheet: number, element: "", place: -1, gain: 1});
    articles.forEach((article, i) => { article.hidden = i !== number; });
    articles[number].querySelector(".plot-place").append(viewer);
    viewer.hidden = false;
    readout.replaceChildren();
    hideTip();
    setCursor(null);
    const curves = curvesOf(number), axis = panels.residual.below[0];
    axis.major_label_text_font_size = curves.direct ? "0px" : "12px";
    axis.axis_label = curves.direct ? null : panels.direct.below[0].axis_label;
    windowButtons(curves);
    for (const row of document.querySelectorAll(".matrix tbody tr")) {
      row.toggleAttribute("aria-current", false);
      if (row.querySelector("a").hash === `#${told.anchors[number]}`) row.setAttribute("aria-current", "true");
    }
    choose("");
    panels.differential.x_range.bounds = limits();
    whole();
  }

  function windowButtons(curves) {
    const place = viewer.querySelector(".windows");
    place.replaceChildren();
    if (curves.ranges.length < 2) return;
    for (const [low, high] of curves.ranges) {
      const button = document.createElement("button");
      button.type = "button";
      button.textContent = `${low.toFixed(0)} to ${high.toFixed(0)} eV`;
      button.addEventListener("click", () => look(low - MARGIN * (high - low), high + MARGIN * (high - low)));
      place.append(button);
    }
  }

  function follow() {
    const found = /^#s(\d+)(?:-(m\d+|[A-Z][a-z]?))?$/.exec(location.hash);
    if (!found || !articles[Number(found[1])]) return;
    const number = Number(found[1]), target = found[2] || "";
    open(number);
    const article = articles[number];
    if (/^m\d/.test(target)) goTo(Number(target.slice(1)));
    else if (article.querySelector(`.choice[data-element="${target}"]`)) choose(target);
    const to = article.querySelector("h2") || article;
    (target ? article.querySelector(".beside") : to).scrollIntoView();
    article.tabIndex = -1;
    article.focus({preventScroll: true});
  }

  // ---- wiring -------------------------------------------------------------------------------------------------
  const keys = {
    "+": "in", "=": "in", "-": "out", ArrowLeft: "left", ArrowRight: "right", ArrowUp: "taller", ArrowDown: "flatter",
    n: "after", N: "after", p: "before", P: "before", 0: "whole",
  };

  function wire() {
    viewer.querySelector(".tools").addEventListener("click", (event) => {
      const button = event.target.closest("[data-do]");
      if (button) actions[button.dataset.do]();
    });
    plot.addEventListener("keydown", (event) => {
      if (event.key === "Escape") hideTip();
      const action = keys[event.key];
      if (!action || event.ctrlKey || event.altKey || event.metaKey) return;
      event.preventDefault();
      actions[action]();
    });
    for (const [name, on] of [["focusin", true], ["focusout", false]]) {
      plot.addEventListener(name, () => {
        for (const tool of tools) if (tool.type === "WheelZoomTool") tool.active = on;
      });
    }
    plot.addEventListener("pointerdown", () => plot.focus({preventScroll: true}), true);
    plot.addEventListener("mousemove", (event) => {
      const box = plot.getBoundingClientRect();
      pointer = [event.clientX - box.left, event.clientY - box.top];
    }, true);
    plot.addEventListener("mouseleave", hideTip);
    for (const panel of Object.values(panels)) {
      panel.on_event("mousemove", (event) => showTip(hover(panel, event.x)));
      panel.on_event("tap", (event) => {
        const place = hover(panel, event.x);
        if (place >= 0) goTo(place, false);
      });
    }
    document.addEventListener("click", (event) => {
      const choice = event.target.closest(".choice"), go = event.target.closest(".go");
      if (choice) choose(choice.dataset.element === state.element ? "" : choice.dataset.element);
      if (go) {
        goTo(Number(go.dataset.place));
        viewer.scrollIntoView({block: "nearest"});
      }
    });
    panels.differential.x_range.change.connect(later);
    for (const name of ["inner_width", "inner_height"]) panels.differential.properties[name].change.connect(later);
    window.addEventListener("hashchange", follow);
    const opened = [];
    window.addEventListener("beforeprint", () => {
      for (const details of document.querySelectorAll("details:not([open])")) {
        details.open = true;
        opened.push(details);
      }
    });
    window.addEventListener("afterprint", () => {
      for (const details of opened.splice(0)) details.open = false;
    });
  }

  async function start() {
    viewer.hidden = false;
    articles[0].querySelector(".plot-place").append(viewer);
    root.classList.add("live");
    const views = await Bokeh.embed.embed_item(JSON.parse(byId("plot-item").textContent), "plot-host");
    const doc = [...views][0].model.document;
    const named = (name) => doc.get_model_by_name(name);
    for (const name of ["differential", "residual", "direct", "direct-log"]) {
      panels[name] = named(name);
      tools.push(...panels[name].toolbar.tools);
      for (const one of ["gaps", "cursor"]) sources[`${one} ${name}`] = named(`${one} ${name}`);
    }
    for (const name of ["measured", "together", "chosen", "rest", "marks", "shared", "labels", "gains", "stretches"]) sources[name] = named(name);
    for (const kind of ["direct", "direct-log"]) {
      for (const what of ["curve", "artefacts"]) sources[`${kind} ${what}`] = named(`${kind} ${what}`);
    }
    ticks = named("ticks");
    wire();
    open(0);
    follow();
    root.dataset.ready = "yes";
  }

  start().catch((failed) => {
    root.classList.remove("live");
    viewer.remove();
    console.error("the interactive spectrum could not be drawn", failed);
  });
})();
