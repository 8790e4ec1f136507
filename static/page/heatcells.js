// What the map of coherence holds, and what a cell of it says.

import { points, scaled } from "./columns.js";
import { at, text } from "./flags.js";
import { digits } from "./format.js";

const step = 0.01; // of the values

export class Cells {
  // It is that of a refresh; page is what all plots share.
  constructor({ curves, view }, page) {
    this.page = page;
    this.group = curves["map.group"] ?? 1; // responses in a row
    this.columns = points(view.first, curves["map.runs"] ?? []);
    const rows = (name, size) => (curves[name] ?? []).map((row) => scaled(row, size, this.columns.length));
    this.values = rows("map.cells", step);
    this.worst = rows("map.worst", 1); // place within the row
    this.unknown = scaled(curves["map.unknown"] ?? [], 1, this.values.length);
  }

  // known tells whether anything is.
  known() {
    return this.values.some((row) => row.some((value) => value !== null));
  }

  has({ row, column }) {
    return row < this.values.length && column < this.columns.length;
  }

  // band is what a column covers, in Hz.
  band(column) {
    const { from, to } = this.columns[column];
    return [from * this.page.spacingHz, to * this.page.spacingHz];
  }

  // response is the one that a cell shows.
  response(row, column) {
    return row * this.group + (this.worst[row]?.[column] ?? 0);
  }

  // first names the first response of a row, rowName all of them.
  first(row) {
    return this.page.responses[row * this.group];
  }

  rowName(row) {
    const last = this.page.responses[Math.min((row + 1) * this.group, this.page.responses.length) - 1];
    const unknown = this.group > 1 && this.unknown[row] > 0 ? ` (${this.unknown[row]} unknown)` : "";
    return (this.group === 1 ? last : `${this.first(row)} … ${last}`) + unknown;
  }

  // words are what a cell says, the value first.
  words({ row, column }) {
    const value = this.values[row][column];
    const [from, to] = this.band(column);
    const of = value === null ? this.rowName(row) : this.page.responses[this.response(row, column)];
    const group = this.group > 1 && value !== null ? ` · worst of ${this.rowName(row)}` : "";
    const flags = at(this.page.standing, (from + to) / 2).map((band) => ` · ▲ ${text(band)}`).join("");
    return `${value === null ? "unknown" : value.toFixed(2)} · ${of} · ${between(from, to)} Hz${group}${flags}`;
  }

  // table tells where each row is lowest.
  table() {
    const grouped = this.group > 1;
    return {
      head: ["responses", "lowest", ...(grouped ? ["of"] : []), "at, Hz"],
      body: this.values.map((values, row) => {
        const lowest = Math.min(...values.filter((value) => value !== null));
        const column = values.indexOf(lowest);
        const [value, of, where] = column < 0 ? ["unknown", "", ""]
          : [lowest.toFixed(2), this.page.responses[this.response(row, column)], between(...this.band(column))];
        return [this.rowName(row), value, ...(grouped ? [of] : []), where];
      }),
    };
  }
}

function between(from, to) {
  return from === to ? digits(from, 4) : `${digits(from, 4)} to ${digits(to, 4)}`;
}
