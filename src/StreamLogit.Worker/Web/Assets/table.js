import { cell } from "./format.js";
import { el, setText } from "./dom.js";

// Shows a table of the view. Rows are kept and rewritten, so that the place to which somebody scrolled or tabbed stays.
export class Table {
  constructor(caption, render = {}) {
    this.render = render;
    this.head = el("thead");
    this.body = el("tbody");
    this.element = el("table", {}, el("caption", { class: "unseen" }, caption), this.head, this.body);
    this.keys = "";
  }

  update(data) {
    const keys = JSON.stringify(data.columns);
    if (keys !== this.keys) {
      this.keys = keys;
      this.head.replaceChildren(el("tr", {}, ...data.columns.map((column) => el("th", { scope: "col", class: column.kind === "text" ? "text" : null }, column.title))));
      this.body.replaceChildren();
    }
    while (this.body.rows.length > data.rows.length) this.body.deleteRow(-1);
    data.rows.forEach((row, index) => {
      const line = this.body.rows[index] ?? this.addRow(data.columns);
      row.forEach((value, column) => {
        const { key, kind } = data.columns[column];
        const own = this.render[key];
        if (own) own(line.cells[column], value, row);
        else setText(line.cells[column], cell(kind, value));
      });
    });
  }

  addRow(columns) {
    const line = this.body.insertRow();
    columns.forEach((column, index) => {
      const classes = [column.kind === "text" ? "text" : null, column.kind === "time" ? "plain" : null, column.key === "sentence" || column.key === "record" ? "long" : null, column.key === "record" ? "raw" : null];
      line.append(el(index === 0 ? "th" : "td", { scope: index === 0 ? "row" : null, class: classes.filter(Boolean).join(" ") || null }));
    });
    return line;
  }
}
