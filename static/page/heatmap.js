// The map of coherence: a row a response or a group of them, a column a few lines of frequency, a cell the lowest
// coherence in it.

import { axis } from "./axis.js";
import { flag } from "./flags.js";
import { make, put } from "./format.js";
import { Frame } from "./frame.js";
import { Cells } from "./heatcells.js";
import { paintCells, paintKey } from "./heatpaint.js";
import { margins } from "./palette.js";
import { join, remark, tell } from "./readout.js";

const rise = () => margins().top / 3; // above the cells, in pixels

const limits = [0.2, 0.5, 0.8, 0.9, 0.95];
const firstLimit = 0.5; // less than half of the power explained; our own choice

export class Heatmap extends Frame {
  constructor(plot, page) {
    super(plot, page);
    this.cell = null; // { row, column } that is read
    this.key = make("div", "heatkey");
    this.ramp = make("canvas");
    this.ramp.setAttribute("role", "img");
    this.ramp.setAttribute("aria-label", "shades from coherence 0, which stands out most, to 1, which hardly does; cells below the limit carry a stroke");
    this.limit = make("select");
    this.limit.setAttribute("aria-label", "limit of coherence below which cells carry a stroke");
    this.limit.replaceChildren(...limits.map((value) => new Option(value, value, value === firstLimit, value === firstLimit)));
    this.limit.onchange = () => this.redraw();
    this.key.append(this.ramp, make("span", "", "stroke: below"), this.limit);
    this.value = make("output", "cell");
    this.frame(this.key);
    this.canvas.setAttribute("role", "application");
    this.canvas.setAttribute("aria-label", `${plot.title}. ${plot.help} Arrow keys go from cell to cell.`);
  }

  open() {
    this.surface = make("canvas", "surface");
    this.surface.setAttribute("aria-hidden", "true");
    this.canvas.append(this.surface);
    this.overlay();
    this.margin({ ...margins(), top: rise() });
    this.box = make("i", "pointed");
    this.box.hidden = true;
    this.canvas.append(this.box);
    this.canvas.addEventListener("pointermove", (event) => this.point(this.under(event)));
    this.canvas.addEventListener("pointerleave", () => this.point(null));
    this.canvas.addEventListener("click", (event) => this.go(this.under(event)));
    this.canvas.addEventListener("keydown", (event) => this.press(event));
    this.canvas.addEventListener("blur", () => this.point(null));
    join(this);
    this.watchSize(() => this.redraw());
  }

  recolour() {
    this.margin({ ...margins(), top: rise() });
    this.redraw();
  }

  scale() {}

  paint() {
    const { view } = this.message;
    this.element.dataset.number = String(this.message.number);
    this.axis = axis(view, this.page.spacingHz, this.page.band);
    this.cells = new Cells(this.message, this.page);
    this.note.hidden = this.cells.known();
    put(this.note, "Unknown as yet: more averages than forces are needed.");
    paintCells(this);
    paintKey(this.ramp, Number(this.limit.value));
    this.place();
    this.point(this.cell !== null && this.cells.has(this.cell) ? this.cell : null);
  }

  place() {
    if (this.axis !== undefined) {
      flag(this, this.page.standing);
      remark(this);
    }
  }

  pixel(hz) {
    const { left, right } = margins();
    return left + this.axis.at(hz) * (this.canvas.clientWidth - left - right);
  }

  // edge is where a column begins, half a line before its first, in pixels; behind the last, where that ends.
  edge(column) {
    const { columns } = this.cells;
    const line = column < columns.length ? columns[column].from - 0.5 : columns.at(-1).to + 0.5;
    const { left, right } = this.area();
    return Math.min(Math.max(this.pixel(Math.max(line, 0.25) * this.page.spacingHz), left), right);
  }

  // area is where the cells lie, in pixels.
  area() {
    const { left, right, bottom } = margins();
    const { clientWidth, clientHeight } = this.canvas;
    return { left, right: clientWidth - right, top: rise(), bottom: clientHeight - bottom, rows: Math.max(this.cells.values.length, 1) };
  }

  top(row) {
    const { top, bottom, rows } = this.area();
    return top + (bottom - top) * row / rows;
  }

  under(event) {
    if (this.cells === undefined || !this.cells.has({ row: 0, column: 0 })) {
      return null;
    }
    const box = this.canvas.getBoundingClientRect();
    const [x, y] = [event.clientX - box.left, event.clientY - box.top];
    const row = this.cells.values.findIndex((_, r) => y >= this.top(r) && y < this.top(r + 1));
    const column = this.cells.columns.findIndex((_, c) => x >= this.edge(c) && x < this.edge(c + 1));
    return row < 0 || column < 0 ? null : { row, column };
  }

  // point reads a cell, null none.
  point(cell) {
    if (cell === null && this.cell === null) {
      return;
    }
    this.cell = cell;
    this.box.hidden = cell === null;
    put(this.value, cell === null ? "" : this.cells.words(cell));
    this.value.title = this.value.textContent;
    if (cell === null) {
      tell(this, undefined);
      return;
    }
    const { row, column } = cell;
    const [left, top] = [this.edge(column), this.top(row)];
    Object.assign(this.box.style, { left: `${left}px`, top: `${top}px`, width: `${this.edge(column + 1) - left}px`, height: `${this.top(row + 1) - top}px` });
    const [from, to] = this.cells.band(column);
    tell(this, (from + to) / 2);
  }

  tabled() {
    return this.cells.table();
  }

  // go shows a cell's response and band.
  go(cell) {
    if (cell !== null) {
      const [from, to] = this.cells.band(cell.column);
      this.page.go({ response: this.cells.response(cell.row, cell.column), from_hz: from, to_hz: to });
    }
  }

  press(event) {
    const step = { ArrowLeft: [0, -1], ArrowRight: [0, 1], ArrowUp: [-1, 0], ArrowDown: [1, 0] }[event.key];
    if (step !== undefined && this.cells?.has({ row: 0, column: 0 })) {
      event.preventDefault();
      const by = event.shiftKey ? 5 : 1;
      const move = (at, d, n) => Math.min(Math.max(at + d * by, 0), n - 1);
      this.point(this.cell === null ? { row: 0, column: 0 } : {
        row: move(this.cell.row, step[0], this.cells.values.length),
        column: move(this.cell.column, step[1], this.cells.columns.length),
      });
    } else if (event.key === "Enter" && this.cell !== null) {
      event.preventDefault();
      this.go(this.cell);
    } else if (event.key === "0") {
      event.preventDefault();
      this.page.look(null, null);
    } else if (event.key === "Escape") {
      this.point(null);
    }
  }
}
