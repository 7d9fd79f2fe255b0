import { Chart } from "./chart.js";
import { Table } from "./table.js";
import { cell, duration, seconds, share, time } from "./format.js";
import { el, setText } from "./dom.js";
import { reliability } from "./reliability.js";

// The sections of the page: each draws some tables of the view and offers them as a table, as CSV and as JSON.

const column = (table, key) => {
  const index = table.columns.findIndex((one) => one.key === key);
  return table.rows.map((row) => row[index]);
};

class Panel {
  // span: of how many of the twelve columns. isTable: the table is what it shows, and not hidden behind a button.
  constructor({ title, text, span = 6, table, body, isTable = false, render }) {
    this.table = table;
    this.heading = el("h2", { id: `panel-${table}` }, title);
    this.body = el("div", { class: "body" }, ...(body ?? []));
    this.full = new Table(title, render);
    this.scroll = el("div", { class: "scroll", id: `table-${table}`, tabindex: 0, role: "region", "aria-label": `${title}, as a table`, hidden: !isTable }, this.full.element);
    if (isTable) this.body.append(this.scroll);
    this.files = this.more(title, isTable);
    this.element = el("section", { class: `panel span-${span}`, "aria-labelledby": `panel-${table}` }, this.heading, text ? el("p", {}, text) : null, this.body, this.files);
  }

  more(title, isTable) {
    this.csv = el("a", { download: true }, "CSV");
    this.json = el("a", {}, "JSON");
    this.csv.setAttribute("aria-label", `${title}: CSV`);
    this.json.setAttribute("aria-label", `${title}: JSON`);
    const links = el("span", { class: "files" }, this.csv, " ", this.json);
    if (isTable) return el("div", { class: "more" }, links);
    this.button = el("button", { type: "button", "aria-expanded": "false", "aria-controls": this.scroll.id }, "Show the table");
    this.button.append(el("span", { class: "unseen" }, ` of ${title}`));
    this.button.addEventListener("click", () => {
      this.scroll.hidden = !this.scroll.hidden;
      this.button.setAttribute("aria-expanded", String(!this.scroll.hidden));
      this.button.firstChild.textContent = this.scroll.hidden ? "Show the table" : "Hide the table";
      if (!this.scroll.hidden && this.last) this.full.update(this.last);
    });
    return el("div", { class: "more" }, this.button, links, this.scroll);
  }

  update(view, query) {
    this.last = view.tables[this.table];
    this.csv.href = `/data/tables/${this.table}.csv${query}`;
    this.json.href = `/data/tables/${this.table}.json${query}`;
    if (!this.scroll.hidden) this.full.update(this.last);
    this.draw(view, this.last);
  }

  draw() {}
}

class PromisedPanel extends Panel {
  constructor() {
    const chart = new Chart({
      label: "Bad outcomes, promised and happened, over time",
      height: 270,
      series: [
        { label: "80 % range", colour: "band", kind: "band" },
        { kind: "edge", key: false },
        { label: "promised", colour: "promised" },
        { label: "came (a diamond: outside the 95 % range)", colour: "came", kind: "points" },
      ],
      isOff: (point, data) => data[4][point] < data[5][point] || data[4][point] > data[6][point],
      readout: (point, data) => `${time(data[0][point] * 1000)}: promised ${cell("amount", data[3][point])} (80 % range ${cell("amount", data[1][point])} to ${cell("amount", data[2][point])}), ${cell("amount", data[4][point])} came`,
    });
    super({
      title: "Promised and happened", span: 12, table: "promised", body: [chart.element],
      text: "The bad outcomes that the published probabilities add up to, counted when the labels came, and how many there were.",
    });
    this.chart = chart;
  }

  draw(view, table) {
    const data = ["low80", "high80", "promised", "came", "low95", "high95"].map((key) => column(table, key));
    this.chart.update([column(table, "from").map(seconds), ...data]);
  }
}

class LogLossPanel extends Panel {
  constructor() {
    const chart = new Chart({
      label: "Log-loss over time, against the base rate",
      height: 310,
      series: [
        { label: "published", colour: "came" },
        { label: "base rate", colour: "promised", dash: [6, 4] },
      ],
      readout: (point, data) => `${time(data[0][point] * 1000)}: ${cell("figure", data[1][point])}, base rate ${cell("figure", data[2][point])}`,
    });
    super({
      title: "Log-loss against the base rate", table: "log-loss", body: [chart.element],
      text: "In nats a label; lower is better. Above the base rate’s line the scores do harm.",
    });
    this.chart = chart;
  }

  draw(view, table) {
    this.chart.update([column(table, "from").map(seconds), column(table, "logLoss"), column(table, "baseRateLogLoss")]);
  }
}

class ReliabilityPanel extends Panel {
  constructor() {
    super({
      title: "Reliability", table: "reliability",
      text: "Labels in groups that were promised about equally many bad outcomes, with 95 % intervals of what came. On the dashed line probabilities mean what they say; a diamond is off it.",
    });
  }

  draw(view, table) {
    const shown = JSON.stringify(table.rows);
    if (shown === this.shown) return;
    this.shown = shown;
    this.body.replaceChildren(table.rows.length ? reliability(table.rows) : el("p", { class: "empty" }, "No labels yet."));
  }
}

class DriftPanel extends Panel {
  constructor() {
    const empty = el("p", { class: "empty" });
    const list = el("table", { class: "bars" }, el("caption", { class: "unseen" }, "Features by how far they moved"));
    const body = el("tbody");
    list.append(el("thead", {}, el("tr", {}, el("th", { scope: "col", class: "text" }, "feature"), el("th", { scope: "col" }, "index"), el("th", { scope: "col", class: "text" }, "from 0 to 0.5"))), body);
    super({
      title: "What moved", table: "drift", body: [empty, list],
      text: "Population stability index against the reference period, ranked. Ranked by how far it lies beyond the mark, up to which chance explains it; by convention 0.1 is some and 0.25 is much.",
    });
    this.list = list;
    this.rows = body;
    this.empty = empty;
  }

  draw(view, table) {
    const known = table.rows.filter((row) => row[1] !== null);
    this.empty.hidden = known.length > 0;
    this.list.hidden = known.length === 0;
    setText(this.empty, table.rows.length ? "Nothing is compared before the reference period is over." : "No events yet.");
    const shown = known.slice(0, 8);
    while (this.rows.rows.length > shown.length) this.rows.deleteRow(-1);
    shown.forEach(([feature, index, , limit], at) => {
      const line = this.rows.rows[at] ?? this.addRow();
      setText(line.cells[0], feature);
      setText(line.cells[1], cell("figure", Math.round(index * 1000) / 1000));
      const [fill, mark] = line.cells[2].firstChild.children;
      fill.style.inlineSize = `${Math.min(100, (Math.max(index, 0) / 0.5) * 100)}%`;
      fill.className = `bar-fill${index > limit && index > 0.25 ? " far" : index > limit && index > 0.1 ? " moved" : ""}`;
      mark.style.insetInlineStart = `${Math.min(100, (limit / 0.5) * 100)}%`;
    });
  }

  addRow() {
    const line = this.rows.insertRow();
    line.append(el("th", { scope: "row" }), el("td"), el("td", { class: "bar-cell" }, el("div", { class: "bar-track" }, el("div", { class: "bar-fill" }), el("div", { class: "bar-mark" }))));
    return line;
  }
}

// A share that grows with a length of time, which is told on a logarithmic axis.
const growth = (label, name, words) => new Chart({
  label,
  x: "log",
  series: [{ label: name, colour: "came" }],
  values: (plot, ticks) => ticks.map((tick) => share(tick)),
  range: () => [0, 1],
  xValues: { splits: delayTicks, filter: (plot, ticks) => ticks, values: (plot, ticks) => ticks.map((tick) => duration(tick)) },
  readout: (point, data) => words(share(data[1][point]), duration(data[0][point])),
});

class AgePanel extends Panel {
  constructor() {
    const chart = growth("Share of events that have their label, by their age", "events that have their label", (part, age) => `${part} at an age of ${age}`);
    super({
      title: "What is known by now", table: "labelled-by-age", body: [chart.element, el("p", { class: "none", hidden: true }, "No events yet.")],
      text: "The share of all events of an age whose label has come. Where it ends below 100 %, some labels never come.",
    });
    this.chart = chart;
  }

  draw(view, table) {
    this.body.lastChild.hidden = table.rows.length > 0;
    this.chart.element.hidden = table.rows.length === 0;
    if (table.rows.length) this.chart.update([column(table, "youngerSeconds"), column(table, "share")]);
  }
}

class DelayPanel extends Panel {
  constructor() {
    const chart = growth("Share of late labels that had come after a time", "labels that had come", (part, time) => `${part} within ${time}`);
    super({
      title: "How long labels take", table: "delays", body: [chart.element, el("p", { class: "none", hidden: true }, "No label came after its event yet.")],
      text: "From an event to its label, on the stream’s clock; of those labels that came in records of their own.",
    });
    this.chart = chart;
  }

  draw(view, table) {
    this.body.lastChild.hidden = table.rows.length > 0;
    this.chart.element.hidden = table.rows.length === 0;
    if (table.rows.length) this.chart.update([column(table, "afterSeconds"), column(table, "share")]);
  }
}

function delayTicks(plot, axis, low, high) {
  const all = [0.001, 0.01, 0.1, 1, 10, 60, 600, 3600, 4 * 3600, 12 * 3600, 86400, 2 * 86400, 5 * 86400, 10 * 86400, 20 * 86400, 50 * 86400, 100 * 86400, 365 * 86400];
  return all.filter((tick) => tick >= low && tick <= high);
}

class StreamPanel extends Panel {
  constructor() {
    const chart = new Chart({
      label: "Share of events that are alerts, over time",
      height: 190,
      series: [{ label: "share of events that are alerts", colour: "came" }],
      values: (plot, ticks) => ticks.map((tick) => share(tick)),
      readout: (point, data) => `${time(data[0][point] * 1000)}: ${share(data[1][point])} of ${cell("count", data[2][point])} events, ${cell("count", data[3][point])} labels came`,
    });
    super({ title: "Alerts and events", span: 12, table: "stream", body: [chart.element], text: "Of the whole stream." });
    this.chart = chart;
  }

  draw(view, table) {
    this.chart.update([column(table, "from").map(seconds), column(table, "alertRate"), column(table, "events"), column(table, "labels")]);
  }
}

class BlendPanel extends Panel {
  constructor() {
    const chart = new Chart({
      label: "Weights of the settings in the blend, over time",
      series: [],
      values: (plot, ticks) => ticks.map((tick) => share(tick)),
      range: () => [0, 1.02],
      readout: (point, data) => `${time(data[0][point] * 1000)}: ${this.names.map((name, i) => [name, data[i + 1][point]]).sort((a, b) => b[1] - a[1]).slice(0, 2).map(([name, weight]) => `${name} ${share(weight)}`).join("; ")}`,
    });
    super({
      title: "The bank: weights in the blend", table: "blend", body: [chart.element],
      text: "The settings that learn side by side, by how much of the published probability is theirs.",
    });
    this.chart = chart;
    this.names = [];
  }

  draw(view, table) {
    showLines(this, table);
  }
}

// A line for every column behind the first. Dashes tell lines apart where colours do not.
function showLines(panel, table) {
  const names = table.columns.slice(1).map((one) => one.title);
  if (names.join("\n") !== panel.names.join("\n")) {
    panel.names = names;
    const dashes = [null, [8, 4], [2, 3], [10, 3, 2, 3], [5, 5], [1, 4], [12, 4]];
    panel.chart.data = null;
    panel.chart.setSeries(names.map((label, i) => ({ label, colour: `c${i + 1}`, dash: dashes[i] })));
  }
  panel.chart.update([table.rows.map((row) => seconds(row[0])), ...names.map((_, i) => table.rows.map((row) => row[i + 1]))]);
}

class CoefficientPanel extends Panel {
  constructor() {
    const chart = new Chart({
      label: "The largest coefficients over time",
      series: [],
      range: (plot, low, high) => [Math.min(0, low ?? 0), Math.max(0, high ?? 0) || 1].map((end) => end * 1.06),
      readout: (point, data) => `${time(data[0][point] * 1000)}: ${this.names.map((name, i) => `${name} ${cell("figure", data[i + 1][point])}`).join("; ")}`,
    });
    super({
      title: "The largest coefficients and how they moved", table: "coefficient-moves", body: [chart.element],
      text: "What a value adds to the log-odds of a score. Since this worker started; of what is published.",
    });
    this.chart = chart;
    this.names = [];
  }

  draw(view, table) {
    showLines(this, table);
  }
}

class TablePanel extends Panel {
  constructor(options) {
    super({ ...options, isTable: true });
    this.empty = el("p", { class: "none", hidden: true }, options.none ?? "");
    this.body.append(this.empty);
  }

  draw(view, table) {
    const isEmpty = table.rows.length === 0;
    this.empty.hidden = !isEmpty;
    this.scroll.hidden = isEmpty;
    this.files.hidden = isEmpty;
    if (!isEmpty) this.full.update(table);
  }
}

const flag = (place, value) => {
  setText(place, value);
  place.className = `text flag ${value}`;
};

// A number of outcomes that came, marked where it is more than three standard deviations off; the 80 % range is 1.28 of them to each side.
const strays = (place, value, [, , promised, , high]) => {
  setText(place, cell("amount", value));
  place.className = Math.abs(value - promised) > (3 / 1.28) * (high - promised) + 0.5 ? "off" : "";
};

export function createPanels(choose) {
  const slice = (place, value) => {
    if (place.dataset.slice === value) return;
    place.dataset.slice = value;
    const link = el("a", { href: `?slice=${encodeURIComponent(value)}` }, value);
    link.addEventListener("click", (event) => {
      event.preventDefault();
      choose({ slice: value });
    });
    place.replaceChildren(link);
  };
  return [
    new PromisedPanel(),
    new LogLossPanel(),
    new ReliabilityPanel(),
    new TablePanel({ title: "Slices", span: 12, table: "slices", none: "The definition names no slices.", render: { slice, came: strays }, text: "The same figures for the events that have one value of a field. A diamond: three standard deviations off or more." }),
    new DriftPanel(),
    new TablePanel({
      title: "Changes found", table: "changes", none: "The detectors found no change.",
      text: "By detectors that watch the published log-loss label by label, whatever the window.",
    }),
    new DelayPanel(),
    new AgePanel(),
    new BlendPanel(),
    new TablePanel({ title: "The bank: settings", table: "settings", none: "No labels yet.", text: "How each setting would have done, had it been published alone." }),
    new StreamPanel(),
    new TablePanel({ title: "Alarms", span: 12, table: "alarms", none: "The definition has no alarms.", render: { state: flag } }),
    new TablePanel({ title: "When alarms were raised", span: 12, table: "alarm-changes", none: "No alarm was ever raised.", render: { state: flag } }),
    new TablePanel({ title: "Rejects", span: 4, table: "rejects", none: "No record was rejected." }),
    new TablePanel({
      title: "Examples of rejects", span: 8, table: "reject-examples", none: "No record was rejected since this worker started.",
      text: "The latest of every reason, since this worker started; the first 400 bytes.",
    }),
    new CoefficientPanel(),
    new TablePanel({ title: "Coefficients", table: "coefficients", none: "Nothing was learned yet.", text: "The largest now, and what they were when the window began or this worker started." }),
    new TablePanel({ title: "All windows", span: 12, table: "windows", render: { came: strays } }),
  ];
}
