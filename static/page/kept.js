// Traces that were kept to compare with: at most three, each of one plot or of all, with a name that can be
// changed. They live as long as the page.

import { make } from "./format.js";

const letters = ["A", "B", "C"]; // more than that, behind all that is of now, nobody can tell apart
const longestName = 40;

export class Kept {
  // changed is called when something was kept, renamed or dropped.
  constructor(changed) {
    this.slots = letters.map(() => null);
    this.changed = changed;
    this.element = make("div", "kept");
    this.element.setAttribute("role", "group");
    this.element.setAttribute("aria-label", "kept traces");
    this.element.hidden = true;
  }

  full() {
    return !this.slots.includes(null);
  }

  // keep keeps traces, { plot id: traces }, of a message. It returns the letter, or null when there is no room.
  keep(traces, message) {
    const slot = this.slots.indexOf(null);
    if (slot < 0) {
      return null;
    }
    const time = new Date().toLocaleTimeString([], { hour12: false });
    this.slots[slot] = { slot, letter: letters[slot], name: `${time}, ${message.status.averaged} averages`, traces };
    this.list();
    this.changed();
    return letters[slot];
  }

  // of is what was kept of a plot: { slot, letter, name, traces }.
  of(plot) {
    return this.slots.filter((kept) => kept?.traces[plot] !== undefined).map((kept) => ({ ...kept, traces: kept.traces[plot] }));
  }

  list() {
    this.element.hidden = this.slots.every((kept) => kept === null);
    this.element.replaceChildren(make("b", "", "Kept"), ...this.slots.filter((kept) => kept !== null).map((kept) => this.item(kept)));
  }

  item(kept) {
    const item = make("span", "item");
    const name = make("input");
    name.value = kept.name;
    name.maxLength = longestName;
    name.spellcheck = false;
    name.setAttribute("aria-label", `name of what was kept as ${kept.letter}`);
    name.onchange = () => {
      kept.name = name.value.trim() || kept.letter;
      this.changed();
    };
    const drop = make("button", "", "✕");
    drop.type = "button";
    drop.setAttribute("aria-label", `drop ${kept.letter}`);
    drop.title = "drop it";
    drop.onclick = () => {
      this.slots[kept.slot] = null;
      this.list();
      this.changed();
    };
    item.append(make("b", "letter", kept.letter), name, drop);
    return item;
  }
}
