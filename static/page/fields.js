// Controls of a form.

import { make } from "./format.js";

// button does something when it is pressed; toggle says too whether what it does is on.
export function button(text, act) {
  const element = make("button", "", text);
  element.type = "button";
  element.onclick = act;
  return element;
}

export function toggle(text, title, act) {
  const element = button(text, act);
  element.title = title;
  element.setAttribute("aria-pressed", "false");
  return element;
}

// options is a choice among names, by their index.
export function options(label, names) {
  const control = make("select");
  control.setAttribute("aria-label", label);
  control.replaceChildren(...names.map((name, i) => new Option(name, i)));
  return control;
}

// number is a field for one.
export function number(label) {
  const control = make("input");
  control.type = "number";
  control.min = "0";
  control.step = "any";
  control.setAttribute("aria-label", label);
  return control;
}

// group is some controls with a title, or without.
export function group(title, ...parts) {
  const element = make("span", "group");
  element.append(...(title === "" ? [] : [make("b", "", title)]), ...parts);
  return element;
}

// rounded is a number as a field shows it.
export function rounded(value) {
  return String(Number(value.toPrecision(6)));
}
