// The page's data and state, and the table of stars with its filters.

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
