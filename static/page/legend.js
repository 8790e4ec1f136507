// The legend of a plot: each curve, or group of curves, is a button that hides and shows it.

import { make, put } from "./format.js";
import { colour } from "./palette.js";
import { draw } from "./svg.js";

const dashes = { solid: "", dashed: "5 3", dotted: "1.5 2.5" };
const keptDashes = ["", "7 4", "2 3"];

export class Legend {
  // changed is called when a curve was hidden, shown or pointed at.
  constructor(curves, changed) {
    this.pointed = null;
    this.element = make("ul", "curves");
    this.element.setAttribute("aria-label", "curves: each button hides or shows one");
    this.changed = changed;
    this.listed = "";
    this.hidden = new Set(curves.filter(({ hidden }) => hidden).map((curve) => keyOf(curve, "")));
  }

  // points tells whether a curve is the one whose button is pointed at: it is drawn broader.
  points(curve, name) {
    return this.pointed === keyOf(curve, name);
  }

  // hides tells whether a curve, of that name, is hidden.
  hides(curve, name) {
    return this.hidden.has(keyOf(curve, name));
  }

  hidesKept(letter) {
    return this.hidden.has(`kept ${letter}`);
  }

  // show lists the curves that are there, with their names, and what is kept.
  show(curves, names, there, kept) {
    const entries = [];
    curves.forEach((curve, i) => {
      const key = keyOf(curve, names[i]);
      if (there[i] && !entries.some((entry) => entry.key === key)) {
        entries.push({ key, name: curve.group || names[i], picture: () => line(curve) });
      }
    });
    for (const { letter, slot, name } of kept) {
      entries.push({ key: `kept ${letter}`, name: `${letter} ${name}`, picture: () => keptLine(slot) });
    }
    const listed = JSON.stringify([entries.map(({ key, name }) => [key, name]), colour("text")]);
    if (listed !== this.listed) {
      this.listed = listed;
      const at = [...this.element.children].indexOf(document.activeElement?.parentElement);
      this.element.replaceChildren(...entries.map((entry) => this.item(entry)));
      this.element.children[at]?.firstChild.focus();
    }
  }

  item({ key, name, picture }) {
    const item = make("li");
    const button = make("button");
    button.type = "button";
    button.append(picture(), make("span", "", name));
    button.title = name;
    button.setAttribute("aria-pressed", String(!this.hidden.has(key)));
    button.onclick = () => {
      const hide = !this.hidden.delete(key);
      if (hide) {
        this.hidden.add(key);
      }
      button.setAttribute("aria-pressed", String(!hide));
      this.changed();
    };
    const point = (at) => {
      if (this.pointed !== at) {
        this.pointed = at;
        this.changed();
      }
    };
    button.onpointerenter = () => point(key);
    button.onpointerleave = () => point(null);
    button.onfocus = () => point(button.matches(":focus-visible") ? key : null);
    button.onblur = () => point(null);
    item.append(button);
    return item;
  }
}

// keyOf tells curves apart. The same place in a list can come to show another response, which is not hidden
// because the former one was.
function keyOf(curve, name) {
  return curve.group || (curve.index >= 0 && curve.name === "" ? `${curve.from} ${name}` : `${curve.from} ${curve.index}`);
}

function line(curve) {
  const thick = curve.above !== "" || curve.quiet ? 9 : ({ fine: 1.2, bold: 3.5 }[curve.weight] ?? 2);
  return picture({ "stroke-width": thick, "stroke-dasharray": dashes[curve.dash], stroke: colour(curve.role), "stroke-opacity": thick === 9 ? 0.35 : 1 });
}

function keptLine(slot) {
  return picture({ "stroke-width": 6, "stroke-dasharray": keptDashes[slot], stroke: colour("text"), "stroke-opacity": 0.5 });
}

function picture(attributes) {
  return draw("svg", { viewBox: "0 0 22 10", "aria-hidden": "true" }, draw("line", { x1: 0, x2: 22, y1: 5, y2: 5, ...attributes }));
}
