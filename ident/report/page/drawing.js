// What is in view of the spectrum that is open: heights, marks, labels that keep clear of each other.

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
  // labels side by side: those of the highest rank first, the rest where there is room left, a little aside if need be
  const taken = [], leaders = {x0: [], y0: [], x1: [], y1: []};
  for (const minimum of wanted.sort((a, b) => b.rank - a.rank)) {
    const half = 0.5 * LINE * minimum.label.length + 1, at = minimum.ev / pixel;
    const aside = ASIDE.find((by) => !taken.some(([from, to]) => at + by - half < to && at + by + half > from));
    if (aside === undefined) continue;
    taken.push([at + aside - half, at + aside + half]);
    const x = minimum.ev + aside * pixel, foot = valueAt(curves, minimum.ev, 4 * pixel);
    const y = Math.min(foot, valueAt(curves, x, (half + 2) * pixel)) - (aside ? 25 : 19) * unit;
    labels.x.push(x);
    labels.y.push(y);
    labels.text.push(minimum.label.join("\n"));
    if (!aside) continue;
    leaders.x0.push(minimum.ev);
    leaders.y0.push(foot - 14 * unit);
    leaders.x1.push(x);
    leaders.y1.push(y + 2 * unit);
  }
  sources.leaders.data = leaders;
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
