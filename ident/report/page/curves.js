// What the page holds of each spectrum, and how its packed numbers become curves again.

const byId = (id) => document.getElementById(id);
const told = JSON.parse(byId("curves").textContent);
const root = document.documentElement;
const viewer = byId("viewer"), plot = byId("plot"), tip = byId("tip"), readout = byId("readout");
const articles = told.anchors.map(byId);
const MARKERS = {disc: "circle", diamond: "diamond", ring: "circle", cross: "x", square: "square"};
const HOLLOW = ["ring", "square"];
const NEAR = 10;        // pixels from a minimum within which the pointer means it
const LETTER = 7.1;     // pixels a letter of a label, upright; measured on the widest usual font
const LINE = 14;        // pixels a line of a label
const ASIDE = [0, -7, 7, -14, 14, -21, 21, -28, 28, -36, 36]; // pixels that a label may stand beside its minimum
const PAD = 10;         // pixels free above what is highest and below what is lowest
const BELOW = 30;       // pixels between a minimum and where its label begins
const MARGIN = 0.015;   // of the range, to either side of it
const state = {sheet: -1, element: "", place: -1, gain: 1, magnified: true, waiting: false};
let panels = {}, sources = {}, tools = [], ticks = null;
const decoded = new Map();

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
