// The page: table of stars with its filters, diagram, and the star that is picked.

const DATA = JSON.parse(document.getElementById("data").textContent);
const PAGE = 100, MOST_PRINTED = 1000;
const byId = (id) => document.getElementById(id);
const label = (star) => DATA.names[star] || `row ${star + 1}`;
const withUnit = (q) => (q.unit ? `${q.symbol} (${q.unit})` : q.symbol);
const state = { picked: -1, shown: [], page: 0, sort: "row", down: false, pair: null };

function make(name, attributes = {}, ...children) {
  const element = document.createElement(name);
  for (const [key, value] of Object.entries(attributes)) element.setAttribute(key, value);
  element.append(...children);
  return element;
}

function value(star, key) {
  const text = DATA.texts[key]?.[star];
  if (!text) return make("span", {}, "–");
  const [middle, plus, minus, power] = text;
  const number = make("span", {}, middle);
  if (plus !== "0") number.append(make("span", { class: "error" }, make("span", {}, `+${plus}`), make("span", {}, `−${minus}`)));
  if (power) number.append(` ×10${plain(Number(`1e${power}`)).slice(2)}`);
  return number;
}

// ---- table

const COLUMNS = [
  { key: "row", title: "Row", sort: (s) => s },
  { key: "name", title: "Star", sort: (s) => label(s).toLowerCase() },
  { key: "status", title: "Status", sort: (s) => DATA.statuses[DATA.status[s]] },
  ...DATA.quantities.filter((q) => q.shown).map((q) => ({ key: q.key, title: withUnit(q), text: q.text, sort: (s) => DATA.values[q.key][s] })),
  { key: "flags", title: "Flags", sort: (s) => DATA.flags[s].length },
];

function cell(star, column) {
  if (column.key === "row") return make("td", { class: "number" }, String(star + 1));
  if (column.key === "status") return make("td", { class: `status-${DATA.statuses[DATA.status[star]]}` }, DATA.statuses[DATA.status[star]]);
  if (column.key === "flags") return make("td", {}, DATA.flags[star].map((f) => DATA.flagNames[f]).join(", "));
  if (column.key !== "name") return make("td", { class: "number" }, value(star, column.key));
  const button = make("button", { type: "button" }, label(star));
  button.addEventListener("click", () => pick(star, true));
  return make("td", { class: "name" }, button);
}

function heading(column) {
  const button = make("button", { type: "button" }, column.title);
  if (column.text) button.title = column.text;
  button.addEventListener("click", () => {
    state.down = state.sort === column.key ? !state.down : false;
    state.sort = column.key;
    arrange();
  });
  return make("th", { scope: "col" }, button);
}

function arrange() {
  const wanted = byId("filter-name").value.trim().toLowerCase();
  const status = byId("filter-status").value, flag = byId("filter-flag").value;
  const hot = parseFloat(byId("filter-hot").value), cool = parseFloat(byId("filter-cool").value);
  const t = DATA.values.temperature || [];
  const keep = (s) =>
    (!wanted || label(s).toLowerCase().includes(wanted)) &&
    (!status || DATA.statuses[DATA.status[s]] === status) &&
    (!flag || DATA.flags[s].some((f) => DATA.flagNames[f] === flag)) &&
    (!(hot >= 0) || t[s] > hot) && (!(cool >= 0) || (t[s] !== null && t[s] < cool));
  state.shown = DATA.names.map((_, s) => s).filter(keep);
  const column = COLUMNS.find((c) => c.key === state.sort), sign = state.down ? -1 : 1;
  const keys = new Map(state.shown.map((s) => [s, column.sort(s)]));
  state.shown.sort((a, b) => {
    const x = keys.get(a), y = keys.get(b);
    if (x === null || y === null) return (x === null) - (y === null) || a - b;
    return (x < y ? -sign : x > y ? sign : 0) || a - b;
  });
  state.page = 0;
  render();
}

function render(everything = false) {
  const from = everything ? 0 : state.page * PAGE;
  const rows = state.shown.slice(from, from + (everything ? MOST_PRINTED : PAGE));
  const body = byId("table").tBodies[0];
  body.replaceChildren(...rows.map((star) => {
    const row = make("tr", star === state.picked ? { class: "chosen" } : {});
    row.append(...COLUMNS.map((column) => cell(star, column)));
    row.dataset.star = star;
    return row;
  }));
  [...byId("table").tHead.rows[0].cells].forEach((th, i) => {
    const sorted = COLUMNS[i].key === state.sort;
    th.setAttribute("aria-sort", sorted ? (state.down ? "descending" : "ascending") : "none");
  });
  const n = state.shown.length;
  byId("table-count").textContent = n
    ? `Rows ${from + 1} to ${from + rows.length} of ${n} shown; ${DATA.names.length} stars in all.`
    : "No star matches the filter.";
  byId("page-back").disabled = state.page === 0;
  byId("page-on").disabled = from + PAGE >= n;
}

function turn(step) {
  state.page += step;
  render();
}

function save() {
  const quote = (text) => `"${String(text).replace(/"/g, '""')}"`;
  const keys = Object.keys(DATA.values);
  const lines = [["row", "name", "status", ...keys, "flags", "message"].join(",")];
  for (const s of state.shown) {
    const numbers = keys.map((key) => DATA.values[key][s] ?? "");
    lines.push([s + 1, quote(DATA.names[s]), DATA.statuses[DATA.status[s]], ...numbers,
      quote(DATA.flags[s].map((f) => DATA.flagNames[f]).join(" ")), quote(DATA.messages[s])].join(","));
  }
  const link = make("a", { download: "stars.csv" });
  link.href = URL.createObjectURL(new Blob([lines.join("\n") + "\n"], { type: "text/csv" }));
  link.click();
  URL.revokeObjectURL(link.href);
}

// ---- diagram

const chart = { x: null, y: null, stars: [], key: "luminosity", overlay: null };

function drawDiagram() {
  chart.key = DATA.diagram;
  const t = DATA.values.temperature, v = DATA.values[chart.key];
  chart.stars = DATA.names.map((_, s) => s).filter((s) => t?.[s] > 0 && v?.[s] > 0).sort((a, b) => t[a] - t[b]);
  if (!chart.stars.length) {
    byId("diagram-plot").append(make("p", {}, "No star has both values of this diagram."));
    return;
  }
  const quantity = DATA.quantities.find((q) => q.key === chart.key);
  const width = 640, height = 560, box = [74, 14, 626, 510];
  const root = canvas(width, height, `${quantity.text} against temperature of ${chart.stars.length} stars; the table below holds the same`);
  const ends = (values, low, high) => [Math.min(...values) / low, Math.max(...values) * high];
  const [cool, hot] = ends(chart.stars.map((s) => t[s]), 1.15, 1.2);
  const [faint, bright] = ends(chart.stars.map((s) => v[s]), 3, 3);
  const x = (chart.x = scale([Math.max(hot, cool * 1.8), cool], [box[0], box[2]], true));
  const y = (chart.y = scale([Math.min(faint, bright / 50), bright], [box[3], box[1]], true));
  const clip = svg("clipPath", { id: "diagram-clip" });
  clip.append(svg("rect", { x: box[0], y: box[1], width: box[2] - box[0], height: box[3] - box[1] }));
  const group = svg("g", { "clip-path": "url(#diagram-clip)" });
  root.append(clip, group);
  if (chart.key === "luminosity") guides(group, x, y, box);
  const dots = (chosen) => chosen.map((s) => `M${x(t[s]).toFixed(1)} ${y(v[s]).toFixed(1)}h0`).join("");
  const done = (s) => DATA.statuses[DATA.status[s]] === "ok";
  group.append(svg("path", { d: dots(chart.stars.filter((s) => !done(s))), class: "stars open" }));
  group.append(svg("path", { d: dots(chart.stars.filter(done)), class: "stars" }));
  chart.overlay = svg("g");
  group.append(chart.overlay);
  axes(root, box, x, y, ["temperature (K)", withUnit(quantity)]);
  byId("diagram-plot").append(root);
  const missing = DATA.names.length - chart.stars.length;
  const parts = ["Grey: not converged."];
  if (chart.key === "luminosity") parts.unshift("Thick line: zero-age main sequence (Tout et al. 1996); thin: main-sequence tracks by mass; dotted: constant radius.");
  if (missing) parts.push(`Without these values, and so in the table alone: ${missing}.`);
  byId("diagram-note").textContent = parts.join(" ");
  listen(root);
}

function guides(group, x, y, box) {
  for (const radius of [0.001, 0.01, 0.1, 1, 10, 100, 1000]) {
    const at = (t) => radius ** 2 * (t / DATA.sunTemperature) ** 4;
    const ends = x.domain.map((t) => [x(t), y(at(t))]);
    group.append(svg("path", { d: line(ends), class: "grid" }));
    const left = ends[0][1] > box[1] + 20 && ends[0][1] < box[3] - 20;
    if (left) group.append(svg("text", { x: box[0] + 8, y: ends[0][1] + 16, class: "faint" }, `${radius} R☉`));
    else if (ends[1][1] > box[1] + 20 && ends[1][1] < box[3] - 20)
      group.append(svg("text", { x: box[2] - 8, y: ends[1][1] - 8, "text-anchor": "end", class: "faint" }, `${radius} R☉`));
  }
  for (const [mass, points] of DATA.tracks) {
    const track = points.map(([t, l]) => [x(t), y(l)]);
    const end = track.reduce((a, b) => (b[0] > a[0] ? b : a));
    group.append(svg("path", { d: line(track), class: "mass" }));
    group.append(svg("text", { x: end[0] + 5, y: end[1] + 4, class: "faint" }, `${mass} M☉`));
  }
  group.append(svg("path", { d: line(DATA.zeroAge.map(([t, l]) => [x(t), y(l)])), class: "track" }));
}

function listen(root) {
  root.addEventListener("click", (event) => {
    const at = new DOMPoint(event.clientX, event.clientY).matrixTransform(root.getScreenCTM().inverse());
    let best = -1, least = 20 ** 2;
    for (const s of chart.stars) {
      const far = (chart.x(DATA.values.temperature[s]) - at.x) ** 2 + (chart.y(DATA.values[chart.key][s]) - at.y) ** 2;
      if (far < least) [best, least] = [s, far];
    }
    if (best >= 0) pick(best, false);
  });
  byId("diagram-plot").addEventListener("keydown", (event) => {
    const step = { ArrowLeft: 1, ArrowRight: -1 }[event.key];
    if (!step) return;
    event.preventDefault();
    const here = chart.stars.indexOf(state.picked);
    const next = here < 0 ? (step > 0 ? 0 : chart.stars.length - 1) : here + step;
    if (next >= 0 && next < chart.stars.length) pick(chart.stars[next], false);
  });
}

function markStar(star) {
  if (!chart.overlay) return;
  chart.overlay.replaceChildren();
  const t = DATA.values.temperature[star], v = DATA.values[chart.key][star];
  if (!(t > 0 && v > 0)) return;
  const draws = drawsOf(star);
  if (draws?.[chart.key]) chart.overlay.append(svg("path", { d: ellipse(draws.temperature, draws[chart.key]), class: "ellipse" }));
  chart.overlay.append(svg("circle", { cx: chart.x(t), cy: chart.y(v), r: 8, class: "ring" }));
}

// One standard deviation of the draws of ln x and ln y.
function ellipse(xs, ys) {
  const u = xs.map((x) => chart.x(x)), w = ys.map((y) => chart.y(y)), n = u.length;
  const mean = (values) => values.reduce((a, b) => a + b, 0) / n;
  const [mu, mw] = [mean(u), mean(w)];
  const a = mean(u.map((x) => (x - mu) ** 2)), c = mean(w.map((y) => (y - mw) ** 2));
  const b = mean(u.map((x, i) => (x - mu) * (w[i] - mw)));
  const root = Math.sqrt(((a - c) / 2) ** 2 + b * b), big = (a + c) / 2 + root, small = Math.max((a + c) / 2 - root, 0);
  const turn = Math.atan2(big - a, b || 1e-12);
  const points = [];
  for (let k = 0; k < 40; k++) {
    const p = Math.sqrt(big) * Math.cos((k * Math.PI) / 20), q = Math.sqrt(small) * Math.sin((k * Math.PI) / 20);
    points.push([mu + p * Math.cos(turn) - q * Math.sin(turn), mw + p * Math.sin(turn) + q * Math.cos(turn)]);
  }
  return line(points) + "Z";
}

// ---- the picked star

function pick(star, move) {
  state.picked = star;
  const body = byId("star-body");
  byId("star-head").textContent = label(star);
  body.replaceChildren(facts(star), quantitiesTable(star));
  const kept = DATA.draws[star]?.keys;
  const sed = sedPlot(star);
  const plots = make("div", { class: kept && sed ? "pair" : "single" });
  if (sed) plots.append(make("figure", {}, sed, make("figcaption", {}, "Filled: fitted; open: left out; arrow: limit. Band: 68 per cent of the model spectra. Grey: the misfit.")));
  if (kept) plots.append(posterior(star, kept));
  byId("star-plots").replaceChildren(plots);
  if (DATA.photometry[star]?.length) byId("star-plots").append(photometryTable(star));
  markStar(star);
  for (const row of byId("table").tBodies[0].rows) row.classList.toggle("chosen", Number(row.dataset.star) === star);
  if (move) {
    byId("star-head").scrollIntoView();
    byId("star-head").focus({ preventScroll: true });
  }
}

function facts(star) {
  const status = DATA.statuses[DATA.status[star]];
  const list = make("dl");
  const add = (term, ...what) => list.append(make("dt", {}, term), make("dd", {}, ...what));
  add("Row", String(star + 1));
  add("Status", make("span", { class: `status-${status}` }, status));
  if (DATA.messages[star]) add("Message", DATA.messages[star]);
  for (const flag of DATA.flags[star]) add(DATA.flagNames[flag], DATA.flagMeanings[flag]);
  return list;
}

function quantitiesTable(star) {
  const rows = DATA.quantities.filter((q) => DATA.texts[q.key]?.[star]);
  if (!rows.length) return make("p", {}, "No fit, and so no quantities.");
  const table = make("table", {}, make("caption", {}, "Median with 16th and 84th percentile"));
  const body = make("tbody");
  for (const q of rows) body.append(make("tr", {}, make("th", { scope: "row" }, q.text), make("td", { class: "number" }, value(star, q.key), ` ${q.unit}`)));
  table.append(body);
  return make("div", { class: "scroll wrap" }, table);
}

function posterior(star, kept) {
  const known = (pair) => pair && pair.every((key) => kept.includes(key));
  const usual = kept.includes("radius") ? ["temperature", "radius"] : ["temperature", "angular_diameter"];
  const pair = known(state.pair) ? state.pair : known(usual) ? usual : [kept[0], kept[1] || kept[0]];
  const box = make("figure");
  const controls = make("div", { class: "controls" });
  ["Across", "Up"].forEach((title, i) => {
    const select = make("select");
    for (const key of kept) select.append(new Option(DATA.quantities.find((q) => q.key === key).text, key, false, key === pair[i]));
    select.addEventListener("change", () => {
      pair[i] = select.value;
      state.pair = [...pair];
      box.replaceChild(posteriorPlot(star, pair), box.querySelector("svg"));
    });
    controls.append(make("label", {}, title, select));
  });
  box.append(posteriorPlot(star, pair), make("figcaption", {}, "Posterior draws; solid: median, dashed: 16th and 84th percentile."), controls);
  return box;
}

function photometryTable(star) {
  const head = ["Band", "Wavelength (µm)", "Flux (W m⁻² µm⁻¹)", "Error", "Model", "Residual (%)", "Use"];
  const known = (x) => (Number.isFinite(x) ? plain(x) : "–");
  const body = make("tbody");
  for (const p of photometryOf(star).sort((a, b) => a.wavelength - b.wavelength)) {
    const use = p.limit ? `${p.limit} limit` : p.used ? "fitted" : "left out";
    const residual = known(Number((100 * (p.flux / p.model - 1)).toFixed(1)));
    const numbers = [plain(Number(p.wavelength.toPrecision(4))), known(p.flux), known(p.error), known(p.model), residual];
    body.append(make("tr", {}, make("th", { scope: "row" }, p.name), ...numbers.map((n) => make("td", { class: "number" }, n)), make("td", {}, p.note ? `${use}: ${p.note}` : use)));
  }
  const table = make("table", {}, make("caption", {}, "Photometry as understood"), make("thead", {}, make("tr", {}, ...head.map((h) => make("th", { scope: "col" }, h)))), body);
  return make("div", { class: "scroll", tabindex: "0", role: "region", "aria-label": "Photometry" }, table);
}

// ---- begin

byId("no-script").remove();
byId("table").tHead.rows[0].append(...COLUMNS.map(heading));
for (const status of DATA.statuses) byId("filter-status").append(new Option(status, status));
for (const flag of DATA.flagNames) byId("filter-flag").append(new Option(flag, flag));
for (const id of ["filter-name", "filter-status", "filter-flag", "filter-hot", "filter-cool"]) byId(id).addEventListener("input", arrange);
byId("filter-clear").addEventListener("click", () => {
  for (const id of ["filter-name", "filter-status", "filter-flag", "filter-hot", "filter-cool"]) byId(id).value = "";
  arrange();
});
byId("page-back").addEventListener("click", () => turn(-1));
byId("page-on").addEventListener("click", () => turn(1));
byId("save").addEventListener("click", save);
document.addEventListener("click", (event) => {
  const link = event.target.closest("[data-pick]");
  if (!link) return;
  event.preventDefault();
  pick(Number(link.dataset.pick), true);
});
window.addEventListener("beforeprint", () => render(true));
window.addEventListener("afterprint", () => render());
arrange();
drawDiagram();
pick(DATA.first, false);
