import { share } from "./format.js";
import { svg } from "./dom.js";

// The reliability diagram: both axes logarithmic, as bad events are rare and all else would lie in one corner.

const size = 440, left = 62, right = 14, top = 14, bottom = 46;

export function reliability(rows) {
  const floor = lowest(rows);
  const place = (value) => Math.log10(Math.max(value, floor) / floor) / Math.log10(1 / floor);
  const x = (value) => left + place(value) * (size - left - right);
  const y = (value) => size - bottom - place(value) * (size - top - bottom);
  const parts = [];
  for (let tick = floor; tick <= 1.0001; tick *= 10) {
    parts.push(svg("line", { class: "grid", x1: x(tick), x2: x(tick), y1: top, y2: size - bottom }));
    parts.push(svg("line", { class: "grid", x1: left, x2: size - right, y1: y(tick), y2: y(tick) }));
    parts.push(svg("text", { x: x(tick), y: size - bottom + 18, "text-anchor": tick > 0.9 ? "end" : "middle" }, share(tick)));
    parts.push(svg("text", { x: left - 8, y: y(tick) + 4, "text-anchor": "end" }, share(tick)));
  }
  parts.push(svg("line", { class: "ideal", x1: x(floor), y1: y(floor), x2: x(1), y2: y(1) }));
  parts.push(svg("text", { x: (left + size - right) / 2, y: size - 8, "text-anchor": "middle" }, "promised"));
  parts.push(svg("text", { x: 0, y: 0, transform: `translate(13 ${(top + size - bottom) / 2}) rotate(-90)`, "text-anchor": "middle" }, "came"));
  for (const [promised, came, low, high] of rows) {
    const off = promised < low || promised > high;
    const mark = off ? " off" : "";
    parts.push(svg("line", { class: `range${mark}`, x1: x(promised), x2: x(promised), y1: y(low), y2: y(high) }));
    parts.push(off
      ? svg("path", { class: "point off", d: `M${x(promised)} ${y(came) - 6}l6 6l-6 6l-6 -6z` })
      : svg("circle", { class: "point", cx: x(promised), cy: y(came), r: 4.5 }));
  }
  return svg("svg", { class: "diagram", viewBox: `0 0 ${size} ${size}`, role: "img", "aria-label": describe(rows) }, ...parts);
}

function lowest(rows) {
  const smallest = Math.min(0.1, ...rows.map((row) => row[0]).filter((value) => value > 0));
  return Math.max(1e-5, 10 ** Math.floor(Math.log10(smallest)));
}

function describe(rows) {
  const off = rows.filter(([promised, , low, high]) => promised < low || promised > high).length;
  const ends = rows.length ? `, from ${share(rows[0][0])} promised and ${share(rows[0][1])} come to ${share(rows.at(-1)[0])} promised and ${share(rows.at(-1)[1])} come` : "";
  return `Reliability diagram of ${rows.length} groups${ends}. In ${off} of them the promised share lies outside the 95 % interval of what came.`;
}
