"use strict";
// Small drawing helpers: elements of SVG, logarithmic and linear axes.

const SVG = "http://www.w3.org/2000/svg";

function svg(name, attributes = {}, text = "") {
  const element = document.createElementNS(SVG, name);
  for (const [key, value] of Object.entries(attributes)) element.setAttribute(key, value);
  if (text) element.textContent = text;
  return element;
}

function canvas(width, height, title) {
  const broad = width > 500 ? "broad" : "";
  const root = svg("svg", { viewBox: `0 0 ${width} ${height}`, role: "img", "aria-label": title, class: broad });
  root.append(svg("title", {}, title));
  return root;
}

function scale(domain, range, logarithmic) {
  const f = logarithmic ? Math.log10 : (x) => x;
  const [a, b] = domain.map(f);
  const map = (x) => range[0] + ((f(x) - a) / (b - a)) * (range[1] - range[0]);
  map.domain = domain;
  map.range = range;
  map.logarithmic = logarithmic;
  return map;
}

function ticks(domain, logarithmic, most) {
  const low = Math.min(...domain), high = Math.max(...domain);
  const inside = (x) => x >= low * (1 - 1e-9) && x <= high * (1 + 1e-9);
  if (logarithmic) {
    const powers = [];
    for (let p = Math.floor(Math.log10(low)); p <= Math.ceil(Math.log10(high)); p++) powers.push(p);
    for (const steps of [[1, 1.5, 2, 3, 4, 5, 6, 8], [1, 2, 3, 5], [1, 2, 5], [1, 3], [1]]) {
      const marks = powers.flatMap((p) => steps.map((s) => Number(`${s}e${p}`))).filter(inside);
      if (marks.length <= most && marks.length > 1) return marks;
    }
    const step = Math.ceil(powers.length / most);
    const marks = powers.filter((p) => p % step === 0).map((p) => Number(`1e${p}`)).filter(inside);
    if (marks.length > 1) return marks;
  }
  const rough = (high - low) / most;
  const unit = 10 ** Math.floor(Math.log10(rough));
  const step = [1, 2, 5, 10].map((s) => s * unit).find((s) => s >= rough);
  const marks = [];
  for (let k = Math.ceil(low / step); k * step <= high; k++) marks.push(Number((k * step).toPrecision(12)));
  return marks;
}

function plain(x) {
  const size = Math.abs(x);
  if (size !== 0 && (size < 1e-3 || size >= 1e6)) {
    const [digits, power] = x.toExponential().split("e");
    const raised = String(Number(power)).replace(/./g, (c) => "⁰¹²³⁴⁵⁶⁷⁸⁹"[c] || "⁻");
    return digits === "1" ? `10${raised}` : `${digits}×10${raised}`;
  }
  return String(Number(x.toPrecision(6))).replace("-", "−");
}

function axes(root, box, x, y, labels, most = [6, 6]) {
  const [left, top, right, bottom] = box;
  root.append(svg("rect", { x: left, y: top, width: right - left, height: bottom - top, class: "axis" }));
  if (labels[0] !== null) {
    for (const mark of ticks(x.domain, x.logarithmic, most[0])) {
      root.append(svg("path", { d: `M${x(mark)} ${bottom}v-5`, class: "axis" }));
      root.append(svg("text", { x: x(mark), y: bottom + 15, "text-anchor": "middle" }, plain(mark)));
    }
    root.append(svg("text", { x: (left + right) / 2, y: bottom + 33, "text-anchor": "middle" }, labels[0]));
  }
  for (const mark of ticks(y.domain, y.logarithmic, most[1])) {
    root.append(svg("path", { d: `M${left} ${y(mark)}h5`, class: "axis" }));
    root.append(svg("text", { x: left - 5, y: y(mark) + 4, "text-anchor": "end" }, plain(mark)));
  }
  const middle = (top + bottom) / 2;
  root.append(svg("text", { transform: `translate(14 ${middle}) rotate(-90)`, "text-anchor": "middle" }, labels[1]));
}

function line(points) {
  return points.map(([x, y], i) => `${i ? "L" : "M"}${x.toFixed(1)} ${y.toFixed(1)}`).join("");
}

function decode(text, Kind) {
  const bytes = Uint8Array.from(atob(text), (c) => c.charCodeAt(0));
  return new Kind(bytes.buffer);
}

function quantile(sorted, q) {
  const at = q * (sorted.length - 1), i = Math.floor(at);
  return sorted[i] + (at - i) * ((sorted[i + 1] ?? sorted[i]) - sorted[i]);
}
