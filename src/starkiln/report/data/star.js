// One star: its diagram entry, spectrum, posterior and photometry.

function drawsOf(star) {
  const kept = DATA.draws[star];
  if (!kept) return null;
  const bytes = decode(kept.data, Uint8Array);
  const count = bytes.length / kept.keys.length;
  const found = {};
  kept.keys.forEach((key, k) => {
    const [low, high] = kept.range[k];
    found[key] = Array.from(bytes.slice(k * count, (k + 1) * count), (b) => low + (b / 255) * (high - low));
  });
  return found;
}

function spectrumOf(star) {
  const text = DATA.spectra[star];
  if (!text) return null;
  const values = Array.from(decode(text, Uint16Array), (v) => 10 ** (DATA.spectrumRange[0] +
    (v / 65535) * (DATA.spectrumRange[1] - DATA.spectrumRange[0])));
  const n = DATA.wavelengths.length;
  return { low: values.slice(0, n), middle: values.slice(n, 2 * n), high: values.slice(2 * n) };
}

function photometryOf(star) {
  return (DATA.photometry[star] || []).map(([band, flux, error, model, limit, used, note]) => ({
    ...DATA.bands[band], flux: flux ?? NaN, error: error ?? NaN, model: model ?? NaN, limit: ["", "upper", "lower"][limit], used: Boolean(used),
    note: note ? DATA.notes[note - 1] : "",
  }));
}

function sedPlot(star) {
  const photometry = photometryOf(star), spectrum = spectrumOf(star);
  if (!photometry.length) return null;
  const name = label(star);
  const root = canvas(560, 430, `Spectral energy distribution of ${name}: ${photometry.length} bands; the table of its photometry below holds the same`);
  const box = [92, 14, 548, 270], lower = [92, 290, 548, 390];
  const wl = photometry.map((p) => p.wavelength);
  const margin = Math.max((Math.max(...wl) / Math.min(...wl)) ** 0.06, 1.2);
  const x = scale([Math.min(...wl) / margin, Math.max(...wl) * margin], [box[0], box[2]], true);
  const heights = photometry.flatMap((p) => [p.flux * p.wavelength, p.model * p.wavelength]).filter((v) => v > 0);
  if (!heights.length) return null;
  const top = Math.max(...heights) * 2.2;
  const y = scale([Math.min(Math.min(...heights) / 2.5, top / 20), top], [box[3], box[1]], true);
  const clip = svg("clipPath", { id: "sed-clip" });
  clip.append(svg("rect", { x: box[0], y: box[1], width: box[2] - box[0], height: box[3] - box[1] }));
  root.append(clip);
  if (spectrum) {
    const at = (values) => DATA.wavelengths.map((w, i) => [x(w), y(Math.max(values[i] * w, 1e-300))]);
    const group = svg("g", { "clip-path": "url(#sed-clip)" });
    group.append(svg("path", { d: line([...at(spectrum.high), ...at(spectrum.low).reverse()]) + "Z", class: "narrow" }));
    group.append(svg("path", { d: line(at(spectrum.middle)), class: "median" }));
    root.append(group);
  }
  const residuals = photometry.map((p) => (100 * (p.flux - p.model)) / p.model);
  const fitted = residuals.filter((r, i) => photometry[i].used && !photometry[i].limit && Number.isFinite(r));
  const misfit = 100 * (DATA.values.misfit?.[star] || 0);
  const reach = 1.3 * Math.max(1, misfit, ...fitted.map(Math.abs));
  const v = scale([-reach, reach], [lower[3], lower[1]], false);
  if (misfit) root.append(svg("rect", { x: lower[0], y: v(misfit), width: lower[2] - lower[0], height: v(-misfit) - v(misfit), class: "wide" }));
  root.append(svg("path", { d: `M${lower[0]} ${v(0)}H${lower[2]}`, class: "median" }));
  photometry.forEach((p, i) => sedPoint(root, p, residuals[i], x, y, v, reach));
  axes(root, box, x, y, [null, "λF (W m⁻²)"]);
  axes(root, lower, x, v, ["wavelength (µm)", "residual (%)"], [7, 4]);
  return root;
}

function sedPoint(root, p, residual, x, y, v, reach) {
  const kind = p.limit ? "limit" : p.used ? "point" : "left";
  const bar = p.limit ? "limit" : p.used ? "bar" : "left-bar";
  const cx = x(p.wavelength);
  const group = svg("g");
  group.append(svg("title", {}, `${p.name}${p.note ? ": " + p.note : ""}`));
  if (p.flux > 0) {
    const cy = y(p.flux * p.wavelength);
    const half = p.width / 2;
    group.append(svg("path", { d: `M${x(Math.max(p.wavelength - half, x.domain[0]))} ${cy}H${x(Math.min(p.wavelength + half, x.domain[1]))}`, class: bar }));
    if (p.limit) {
      const s = p.limit === "upper" ? 1 : -1;
      group.append(svg("path", { d: `M${cx} ${cy}v${16 * s}l-4 ${-6 * s}h8l-4 ${6 * s}`, class: bar }));
    } else {
      const error = p.error || 0;
      const low = Math.max(p.flux - error, p.flux * 0.1);
      group.append(svg("path", { d: `M${cx} ${y(low * p.wavelength)}V${y((p.flux + error) * p.wavelength)}`, class: bar }));
      group.append(svg("circle", { cx, cy, r: 4, class: kind }));
    }
  }
  if (Number.isFinite(residual)) {
    const shown = Math.max(-reach * 0.93, Math.min(reach * 0.93, residual));
    if (shown !== residual || p.limit) {
      const s = (p.limit ? p.limit === "lower" : residual > 0) ? -1 : 1;
      group.append(svg("path", { d: `M${cx - 5} ${v(shown) - 4 * s}h10l-5 ${8 * s}Z`, class: kind }));
    } else {
      const e = (100 * (p.error || 0)) / p.model;
      group.append(svg("path", { d: `M${cx} ${v(Math.max(shown - e, -reach))}V${v(Math.min(shown + e, reach))}`, class: bar }));
      group.append(svg("circle", { cx, cy: v(shown), r: 4, class: kind }));
    }
  }
  root.append(group);
}

function posteriorPlot(star, keys) {
  const draws = drawsOf(star);
  if (!draws) return null;
  const [qx, qy] = keys.map((key) => DATA.quantities.find((q) => q.key === key));
  const root = canvas(380, 400, `Posterior of ${label(star)}: ${qx.text} against ${qy.text}; the table of its quantities above holds their intervals`);
  const box = [78, 60, 318, 350];
  const sorted = keys.map((key) => [...draws[key]].sort((a, b) => a - b));
  const domain = sorted.map((s) => {
    const margin = 0.08 * (s[s.length - 1] - s[0]) || Math.abs(s[0]) * 0.01 || 1;
    return [s[0] - margin, s[s.length - 1] + margin];
  });
  const x = scale(domain[0], [box[0], box[2]], false), y = scale(domain[1], [box[3], box[1]], false);
  draws[keys[0]].forEach((value, i) => root.append(svg("circle", { cx: x(value), cy: y(draws[keys[1]][i]), r: 2.4, class: "draw" })));
  for (const q of [0.16, 0.5, 0.84]) {
    root.append(svg("path", { d: `M${x(quantile(sorted[0], q))} ${box[1]}V${box[3]}`, class: q === 0.5 ? "median" : "cut" }));
    root.append(svg("path", { d: `M${box[0]} ${y(quantile(sorted[1], q))}H${box[2]}`, class: q === 0.5 ? "median" : "cut" }));
  }
  histogram(root, sorted[0], x, (at, share) => ({ x: at, y: box[1] - share * 50, height: share * 50 }));
  histogram(root, sorted[1], y, (at, share) => ({ y: at, x: box[2], width: share * 50 }));
  axes(root, box, x, y, [withUnit(qx), withUnit(qy)], [4, 6]);
  return root;
}

function histogram(root, values, map, place) {
  const bins = 16, [a, b] = map.range, size = (b - a) / bins;
  const counts = new Array(bins).fill(0);
  for (const value of values) counts[Math.min(bins - 1, Math.max(0, Math.floor((map(value) - a) / size)))]++;
  const most = Math.max(...counts);
  counts.forEach((count, i) => {
    const at = Math.min(a + i * size, a + (i + 1) * size), wide = Math.abs(size);
    const bar = place(at, count / most);
    root.append(svg("rect", { width: wide, height: wide, ...bar, class: "narrow" }));
  });
}
