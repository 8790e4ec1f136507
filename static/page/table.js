// A plot's latest values as a table, for those who cannot see the plot or want its numbers. It changes at a calm
// rate.

import { digits, make, put } from "./format.js";

const calmMs = 3000; // time to read, and to listen to, a row
const rows = 16;

export class Table {
  // panel is the plot whose columns and names are shown.
  constructor(panel) {
    this.panel = panel;
    this.element = make("div", "values");
    this.element.hidden = true;
    this.element.tabIndex = 0;
    this.element.setAttribute("role", "region");
    this.element.setAttribute("aria-label", `${panel.plot.title}: latest values`);
    this.written = -Infinity;
    this.form = "";
  }

  // toggle shows or hides the table, and returns whether it is shown.
  toggle() {
    this.element.hidden = !this.element.hidden;
    this.written = -Infinity;
    this.take();
    return !this.element.hidden;
  }

  // take looks at the panel's newest values when it is time.
  take() {
    const now = performance.now();
    const content = this.element.hidden || this.panel.message === null ? null : this.panel.tabled?.() ?? this.cells();
    const form = content === null ? "" : JSON.stringify(content.head);
    if (content === null || (form === this.form && now - this.written < calmMs)) {
      return;
    }
    this.written = now;
    if (form !== this.form || this.body?.children.length !== content.body.length) {
      this.form = form;
      this.build(content);
    }
    put(this.caption, `${this.panel.plot.title}, after ${this.panel.message.status.averaged} averages`);
    content.body.forEach((texts, r) => texts.forEach((text, c) => put(this.body.children[r].children[c], text)));
  }

  build({ head, body }) {
    const table = make("table");
    this.caption = make("caption");
    const line = make("tr");
    line.append(...head.map((text) => headed("col", text)));
    const top = make("thead");
    top.append(line);
    this.body = make("tbody");
    this.body.append(...body.map((texts) => {
      const row = make("tr");
      row.append(headed("row", ""), ...texts.slice(1).map(() => make("td")));
      return row;
    }));
    table.append(this.caption, top, this.body);
    this.element.replaceChildren(table);
  }

  // cells are the texts of the table: { head, body }.
  cells() {
    const { plot, columns, names, x } = this.panel;
    const shown = plot.curves.map((curve, i) => ({ curve, i })).filter(({ i }) => columns[i].length > 0 && !this.panel.hides(i));
    const head = [x === null ? "averages" : "band, Hz", ...shown.map(({ curve, i }) => title(names[i], this.panel.unit(curve)))];
    if (x === null) {
      const newest = columns[0].slice(-rows);
      return { head, body: newest.map(([at]) => [digits(at, 6), ...shown.map(({ i }) => digits(columns[i].find(([other]) => other === at)?.[1]))]) };
    }
    const size = Math.ceil(x.length / rows);
    const parts = [[0, x.length]];
    for (let from = 0; from < x.length; from += size) {
      parts.push([from, Math.min(from + size, x.length)]);
    }
    return {
      head,
      body: parts.map(([from, to]) => [
        `${digits(x[from], 4)} to ${digits(x[to - 1], 4)}`,
        ...shown.map(({ curve, i }) => extent(columns[i].slice(from, to), curve.keeps)),
      ]),
    };
  }
}

function title(name, unit) {
  return unit === "" ? name : `${name}, ${unit}`;
}

// extent is of several values what their curve keeps.
function extent(values, keeps) {
  const known = values.filter((value) => value !== null);
  if (known.length === 0) {
    return "unknown";
  }
  const [lo, hi] = [digits(Math.min(...known)), digits(Math.max(...known))];
  switch (lo === hi ? "lowest" : keeps) {
    case "lowest": return lo;
    case "highest": return hi;
  }
  return `${lo} to ${hi}`;
}

function headed(scope, text) {
  const cell = make("th", "", text);
  cell.scope = scope;
  return cell;
}
