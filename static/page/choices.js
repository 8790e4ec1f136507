// What the plots show: frequency response, responses whose coherence is shown, reciprocity pair, band.

import { make, put } from "./format.js";

const root = document.getElementById("choices");
const note = make("span", "quiet");
note.title = "Narrow the band, or drag across a plot, to see every line.";
const chips = make("span", "chips");
const wholeButton = make("button", "whole", "Whole band");
const adder = make("select");
const fields = {}; // response, force, pair: select elements
const ends = [end("band from, Hz"), end("band to, Hz")];

let choice = null; // as the program is asked; null until something was chosen
let view = { coherence: [] }; // as the program shows it
let send = () => {};
let responses = [];
let most = 0;
let lines = 0;

// build makes the controls of a description; ask(choice) asks the program.
export function build(description, ask) {
  const forces = description.channels.slice(0, description.forces).map(({ name }) => name);
  send = ask;
  most = description.shown;
  responses = description.channels.slice(description.forces).map(({ name }) => name);
  fields.response = options("response of the frequency response", responses);
  fields.force = options("force of the frequency response", forces);
  fields.pair = options("reciprocity pair", description.pairs.map(([a, b]) => `${forces[a]} and ${forces[b]}`));
  for (const [key, control] of Object.entries(fields)) {
    control.onchange = () => change({ [key]: Number(control.value) });
  }
  adder.setAttribute("aria-label", "show the coherence of a response");
  adder.onchange = () => change({ coherence: [...current().coherence, Number(adder.value)] });
  for (const control of ends) {
    control.onchange = () => look(...ends.map(({ value }) => Number(value)));
  }
  lines = description.lines;
  wholeButton.type = "button";
  wholeButton.onclick = () => look(null, null);

  root.replaceChildren(
    group("Frequency response", fields.response, "to", fields.force),
    group("Coherence of", chips, adder),
    ...(description.pairs.length > 1 ? [group("Reciprocity", fields.pair)] : []),
    group("Band", ends[0], "to", ends[1], "Hz", wholeButton),
    note,
  );
  listChips();
}

// look shows a band, with nulls the whole.
export function look(fromHz, toHz) {
  change({ from_hz: fromHz, to_hz: toHz });
}

// again asks anew, on a new connection.
export function again() {
  if (choice !== null) {
    send(choice);
  }
}

// shown takes the view that a refresh has.
export function shown(next, spacingHz) {
  const before = JSON.stringify(view);
  view = next;
  if (JSON.stringify(view) === before) {
    return;
  }
  for (const [key, control] of Object.entries(fields)) {
    control.value = String(view[key]);
  }
  ends[0].value = rounded(view.first * spacingHz);
  ends[1].value = rounded(view.last * spacingHz);
  const whole = view.first === 0 && view.last === lines - 1;
  wholeButton.className = whole ? "whole" : "whole strong"; // a part must not be taken for the whole
  put(note, view.step === 1 ? "" : `${view.step} lines a point`);
  listChips();
}

function change(part) {
  choice = { ...current(), ...part };
  send(choice);
}

function current() {
  return choice ?? { type: "select", response: view.response ?? 0, force: view.force ?? 0, pair: view.pair ?? 0, coherence: [], from_hz: null, to_hz: null };
}

function listChips() {
  const focused = chips.contains(document.activeElement);
  chips.replaceChildren(...view.coherence.map((response) => {
    const chip = make("button", "chip", `${responses[response]} ✕`);
    chip.type = "button";
    chip.setAttribute("aria-label", `stop showing the coherence of ${responses[response]}`);
    chip.onclick = () => change({ coherence: view.coherence.filter((other) => other !== response) });
    return chip;
  }));
  const full = view.coherence.length >= most;
  const first = new Option(full ? `${most} at most` : view.coherence.length === 0 ? "add a response…" : "add…", "");
  const others = responses.map((name, i) => new Option(name, i)).filter((_, i) => !view.coherence.includes(i));
  adder.replaceChildren(first, ...others);
  adder.disabled = full;
  if (focused) {
    adder.focus();
  }
}

function options(label, names) {
  const control = make("select");
  control.setAttribute("aria-label", label);
  control.replaceChildren(...names.map((name, i) => new Option(name, i)));
  return control;
}

function end(label) {
  const control = make("input");
  control.type = "number";
  control.min = "0";
  control.step = "any";
  control.setAttribute("aria-label", label);
  return control;
}

function group(title, ...parts) {
  const element = make("span", "group");
  element.append(make("b", "", title), ...parts);
  return element;
}

function rounded(value) {
  return String(Number(value.toPrecision(6)));
}
