// A list of the responses to choose one from: worst first, found by name, point or axis.

import { digits, make, put, some } from "./format.js";

const mostRows = 60; // more nobody reads: typing finds the others
let made = 0; // for names of elements

export class Picker {
  // label says what is chosen; responses are channels; pick(index) is called with the one that was chosen, and
  // changed when the list was opened or closed.
  constructor(label, responses, pick, changed) {
    this.responses = responses;
    this.pick = pick;
    this.changed = changed;
    this.errors = null; // % by response, null where unknown; null as a whole until it has come
    this.left = new Set(); // responses that are not offered
    this.open = false;
    const name = `picker-${++made}`;
    this.element = make("span", "picker");
    this.button = make("button", "picked");
    this.button.type = "button";
    this.button.setAttribute("aria-haspopup", "listbox");
    this.button.setAttribute("aria-label", label);
    this.button.onclick = () => this.set(!this.open);
    this.box = make("div", "pickbox");
    this.box.hidden = true;
    this.search = make("input");
    this.list = make("ul");
    this.count = make("p", "quiet");
    this.list.id = name;
    this.list.setAttribute("role", "listbox");
    this.list.setAttribute("aria-label", label);
    for (const [key, value] of Object.entries({ type: "search", placeholder: "name, point or axis", role: "combobox", autocomplete: "off", spellcheck: "false", "aria-label": `${label}: name, point or axis`, "aria-controls": name, "aria-expanded": "true", "aria-autocomplete": "list" })) {
      this.search.setAttribute(key, value);
    }
    this.search.oninput = () => this.fill();
    this.search.onkeydown = (event) => this.press(event);
    this.box.append(this.search, this.list, this.count);
    this.element.append(this.button, this.box);
    this.element.addEventListener("focusout", (event) => {
      if (this.open && !this.element.contains(event.relatedTarget)) {
        this.set(false);
      }
    });
  }

  // show writes what is chosen now onto the button.
  show(text) {
    put(this.button, text);
    this.button.title = text;
  }

  // leave says which responses are not offered.
  leave(indices) {
    this.left = new Set(indices);
  }

  // rank takes the errors of the responses. A list that is open keeps its order: rows that jump can't be hit.
  rank(errors) {
    if (errors === undefined || !this.open) {
      return;
    }
    const first = this.errors === null;
    this.errors = Array.isArray(errors) ? errors : this.responses.map(() => errors);
    if (first) {
      this.fill();
    }
    for (const item of this.list.children) {
      put(item.lastElementChild, this.error(Number(item.dataset.response)));
    }
  }

  error(o) {
    return this.errors === null ? "" : this.errors[o] === null ? "error unknown" : `error ${digits(this.errors[o])} %`;
  }

  set(open) {
    this.open = open;
    this.box.hidden = !open;
    this.button.setAttribute("aria-expanded", String(open));
    this.changed();
    if (open) {
      this.errors = null;
      this.search.value = "";
      this.fill();
      this.search.focus();
    }
  }

  fill() {
    const words = this.search.value.toLowerCase().split(/\s+/).filter((word) => word !== "");
    const found = this.responses.map((_, o) => o).filter((o) => {
      const { name, point, axis } = this.responses[o];
      return !this.left.has(o) && words.every((word) => `${name} ${point} ${axis}`.toLowerCase().includes(word));
    });
    const bad = (o) => this.errors[o] ?? Infinity;
    if (this.errors !== null) {
      found.sort((a, b) => bad(a) === bad(b) ? 0 : bad(b) - bad(a));
    }
    this.list.replaceChildren(...found.slice(0, mostRows).map((o) => this.item(o)));
    put(this.count, found.length > mostRows ? `worst ${mostRows} of ${found.length}: type to find the others` : some(found.length, "response"));
    this.go(0);
  }

  item(o) {
    const { name, point, axis } = this.responses[o];
    const item = make("li");
    item.id = `${this.list.id}-${o}`;
    item.dataset.response = String(o);
    item.setAttribute("role", "option");
    item.append(make("b", "", name), make("span", "quiet", `${point} ${axis}`), make("span", "error", this.error(o)));
    item.onpointerdown = (event) => event.preventDefault(); // the focus stays
    item.onclick = () => this.choose(o);
    return item;
  }

  press(event) {
    const step = { ArrowDown: 1, ArrowUp: -1, PageDown: 10, PageUp: -10 }[event.key];
    if (step !== undefined) {
      event.preventDefault();
      this.go(this.at + step);
    } else if (event.key === "Enter") {
      event.preventDefault();
      const item = this.list.children[this.at];
      if (item !== undefined) {
        this.choose(Number(item.dataset.response));
      }
    } else if (event.key === "Escape") {
      event.preventDefault();
      event.stopPropagation();
      this.button.focus();
      this.set(false);
    }
  }

  // go makes a row the one that Enter chooses.
  go(row) {
    const items = [...this.list.children];
    this.at = Math.min(Math.max(row, 0), items.length - 1);
    items.forEach((item, i) => item.setAttribute("aria-selected", String(i === this.at)));
    items[this.at]?.scrollIntoView({ block: "nearest" });
    this.search.setAttribute("aria-activedescendant", items[this.at]?.id ?? "");
  }

  choose(o) {
    this.button.focus();
    this.set(false);
    this.pick(o);
  }
}
