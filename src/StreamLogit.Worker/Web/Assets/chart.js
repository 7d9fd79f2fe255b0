import uPlot from "./uPlot.esm.js";
import { el, svg } from "./dom.js";

// Curves. Colours are names of custom properties of the style sheet, read again when the colour scheme changes.

const scheme = matchMedia("(prefers-color-scheme: dark)");
const colour = (name) => getComputedStyle(document.documentElement).getPropertyValue(`--${name}`).trim();
const axisFont = "12px ui-sans-serif, system-ui, sans-serif";

// series: { label, colour, kind: "line" | "band" | "points" | "step", dash, key (whether it stands in the key) }
export class Chart {
  constructor({ label, height = 230, series, readout, x = "time", values, isOff, range, xValues }) {
    Object.assign(this, { label, height, series, readout, x, values, isOff, range, xValues });
    this.data = null;
    this.plot = null;
    this.keys = el("ul", { class: "keys" });
    this.box = el("div", { class: "chart", tabindex: 0, role: "group", "aria-roledescription": "chart" });
    this.text = el("p", { class: "readout", "aria-live": "polite" });
    this.element = el("div", {}, this.keys, this.box, this.text);
    this.box.addEventListener("keydown", (event) => this.step(event));
    this.box.addEventListener("blur", () => this.plot?.setCursor({ left: -10, top: -10 }));
    new ResizeObserver(() => this.resize()).observe(this.box);
    scheme.addEventListener("change", () => this.create());
    this.setSeries(series);
  }

  setSeries(series) {
    this.series = series;
    const shown = series.filter((one) => one.key !== false);
    this.keys.replaceChildren(...shown.map((one) => el("li", {}, sample(one), el("span", {}, one.label))));
    if (this.data) this.create();
  }

  update(data) {
    const isNew = this.data === null || this.data.length !== data.length;
    this.data = data;
    const last = data[0].length - 1;
    this.box.setAttribute("aria-label", `${this.label}. ${last < 0 ? "No points." : `${last + 1} points; the arrow keys read them. The last: ${this.readout(last, data)}`}`);
    if (isNew || !this.plot) this.create();
    else if (this.plot.cursor.idx === null || this.plot.cursor.idx === undefined) this.plot.setData(data);
    else {
      const { left, top } = this.plot.cursor;
      this.plot.setData(data);
      this.plot.setCursor({ left, top });
    }
    this.tell(this.plot?.cursor.idx ?? null);
  }

  create() {
    this.plot?.destroy();
    this.plot = null;
    if (!this.data || this.box.clientWidth === 0) return;
    const axis = { stroke: colour("soft"), font: axisFont, grid: { stroke: colour("grid"), width: 1 }, ticks: { stroke: colour("rule"), width: 1, size: 5 } };
    const bands = [];
    const series = this.series.map((one, index) => {
      if (one.kind === "band") bands.push({ series: [index + 2, index + 1], fill: colour(one.colour) });
      const common = { label: one.label, spanGaps: false };
      if (one.kind === "band" || one.kind === "edge") return { ...common, stroke: "transparent", width: 0, points: { show: false } };
      if (one.kind === "points") return { ...common, stroke: colour(one.colour), paths: () => null, points: { show: false } };
      return { ...common, stroke: colour(one.colour), width: one.width ?? 2, dash: one.dash, points: { show: (plot) => plot.data[0].length < 3, size: 6 } };
    });
    this.plot = new uPlot({
      width: this.box.clientWidth,
      height: this.height,
      tzDate: (seconds) => uPlot.tzDate(new Date(seconds * 1000), "Etc/UTC"),
      legend: { show: false },
      cursor: { y: false, drag: { setScale: false, x: false, y: false }, points: { size: 7 } },
      scales: { x: this.x === "time" ? { time: true } : { time: false, distr: 3, range: (plot, low, high) => (low < high ? [low, high] : [low / 2, low * 2]) }, y: { range: this.range ?? yRange } },
      axes: [{ ...axis, ...(this.xValues ?? { space: 70, values: timeTicks }) }, { ...axis, size: 62, values: this.values }],
      series: [{}, ...series],
      bands,
      hooks: { draw: [(plot) => this.drawPoints(plot)], setCursor: [(plot) => this.tell(plot.cursor.idx ?? null)] },
    }, this.data, this.box);
  }

  resize() {
    const width = this.box.clientWidth;
    if (width === 0) return;
    if (!this.plot) this.create();
    else if (Math.abs(this.plot.width - width) > 1) this.plot.setSize({ width, height: this.height });
  }

  // Points that are off have another shape and not only another colour.
  drawPoints(plot) {
    const { ctx } = plot;
    const scale = devicePixelRatio;
    this.series.forEach((one, index) => {
      if (one.kind !== "points") return;
      plot.data[index + 1].forEach((value, point) => {
        if (value === null) return;
        const x = plot.valToPos(plot.data[0][point], "x", true), y = plot.valToPos(value, "y", true);
        const off = this.isOff?.(point, this.data);
        ctx.fillStyle = colour(off ? "bad" : one.colour);
        ctx.beginPath();
        if (off) {
          const r = 6 * scale;
          ctx.moveTo(x, y - r); ctx.lineTo(x + r, y); ctx.lineTo(x, y + r); ctx.lineTo(x - r, y);
        } else ctx.arc(x, y, 3.2 * scale, 0, 2 * Math.PI);
        ctx.fill();
      });
    });
  }

  tell(index) {
    const last = this.data[0].length - 1;
    const point = index ?? last;
    if (point < 0 || point > last) return;
    const text = this.readout(point, this.data) + (point === last && this.x === "time" ? " so far" : "");
    if (this.text.textContent !== text) this.text.textContent = text;
  }

  step(event) {
    if (!this.plot || !this.data[0].length) return;
    const last = this.data[0].length - 1, at = this.plot.cursor.idx ?? last + (event.key === "ArrowRight" ? -1 : 1);
    const next = { ArrowLeft: at - 1, ArrowRight: at + 1, Home: 0, End: last }[event.key];
    if (next === undefined) return;
    event.preventDefault();
    const index = Math.min(last, Math.max(0, next));
    this.plot.setCursor({ left: this.plot.valToPos(this.data[0][index], "x"), top: 10 });
  }
}

// The day, or the hour of it, and the year where it begins.
function timeTicks(plot, ticks, axis, space, step) {
  let shownYear = null;
  return ticks.map((tick) => {
    const date = new Date(tick * 1000), year = date.getUTCFullYear();
    const day = date.toLocaleDateString("en-GB", { day: "numeric", month: "short", timeZone: "UTC" });
    const clock = date.toISOString().slice(11, 16);
    const text = step >= 86400 || clock === "00:00" ? day : clock;
    const line = shownYear === year ? text : `${text}\n${step >= 86400 ? year : clock === "00:00" ? year : day}`;
    shownYear = year;
    return line;
  });
}

function yRange(plot, low, high) {
  if (low === null || high === null) return [0, 1];
  const bottom = Math.min(0, low);
  return [bottom, high <= bottom ? bottom + 1 : high + (high - bottom) * 0.06];
}

function sample({ kind, colour: name, dash }) {
  const line = (attributes) => svg("line", { x1: 1, x2: 25, y1: 6, y2: 6, "stroke-width": 2.5, stroke: `var(--${name})`, ...attributes });
  const shape = kind === "band" ? svg("rect", { x: 1, y: 0, width: 24, height: 12, fill: `var(--${name})` })
    : kind === "points" ? svg("circle", { cx: 13, cy: 6, r: 4, fill: `var(--${name})` })
    : line({ "stroke-dasharray": dash ? dash.join(" ") : null });
  return svg("svg", { viewBox: "0 0 26 12", "aria-hidden": "true", focusable: "false" }, shape);
}
