// Moving about, minima and elements, the pointer, the keys. Texts are only ever copied from the page itself, as nodes or
// as text: nothing here turns text into markup.

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
  for (const name of ["measured", "together", "chosen", "rest", "marks", "shared", "labels", "gains", "stretches", "leaders"]) sources[name] = named(name);
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
