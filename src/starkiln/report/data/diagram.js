// The diagram of all stars, in which one can be picked by pointer or by keys.

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
