// The keys of the page, in one place.

import { make } from "./format.js";

const box = document.getElementById("key-box");
const letters = document.getElementById("letters");
const others = { Escape: "closes a question, a readout or the wall screen", "Arrow keys": "in a plot: read values; among channels or points: the next one", "+ − 0": "in a plot: the band narrower, wider, whole", Enter: "on a cell of the map: its frequency response and band", Tab: "the next control" };

let table = []; // [key, meaning, act]

// build takes the page's keys: [key, what it does, function]. A key whose button is hidden or disabled does
// nothing.
export function build(keys) {
  table = [...keys, ["?", "shows all keys", () => box.showModal()]];
  document.getElementById("keys").onclick = () => box.showModal();
  document.getElementById("key-list").replaceChildren(
    ...table.flatMap(([key, meaning]) => entry(key, meaning)),
    ...Object.entries(others).flatMap(([key, meaning]) => entry(key, meaning)),
  );
  for (const button of document.querySelectorAll("[data-key]")) {
    button.setAttribute("aria-keyshortcuts", button.dataset.key);
  }
  letters.checked = remembered() !== "off";
  letters.onchange = () => remember(letters.checked ? "on" : "off");
  addEventListener("keydown", press);
}

// click is an action that presses a button, when it can be pressed.
export function click(id) {
  return () => {
    const button = document.getElementById(id);
    if (!button.disabled && button.checkVisibility()) {
      button.click();
    }
  };
}

function press(event) {
  if (event.ctrlKey || event.altKey || event.metaKey || event.repeat || event.defaultPrevented || document.querySelector("dialog[open]") !== null) {
    return;
  }
  if (event.target.closest?.("input, select, textarea") || (!letters.checked && event.key !== "?")) {
    return;
  }
  const found = table.find(([key]) => key.toLowerCase() === event.key.toLowerCase());
  if (found !== undefined) {
    event.preventDefault();
    found[2]();
  }
}

function entry(key, meaning) {
  const term = make("dt");
  term.append(make("kbd", "", key));
  return [term, make("dd", "", meaning)];
}

// Whether letters are keys is remembered where the browser lets it be.
function remembered() {
  try {
    return localStorage.getItem("letters");
  } catch {
    return null;
  }
}

function remember(value) {
  try {
    localStorage.setItem("letters", value);
  } catch {
    // a browser that keeps nothing forgets it with the page
  }
}
