// The star that is picked, and the start of the page; stands last.

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
