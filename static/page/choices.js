// What the plots show: frequency response, responses whose coherence is shown, reciprocity pair, band, scales.

import { button, group, number, options, rounded, toggle } from "./fields.js";
import { make, put } from "./format.js";
import { Picker } from "./picker.js";

const root = document.getElementById("choices");
const note = make("span", "quiet");
note.title = "Narrow the band, or drag across a plot, to see every line.";
const chips = make("span", "chips");
const wholeButton = button("Whole", () => look(null, null));
const widerButton = button("Wider", () => widen());
const logButton = toggle("log Hz", "frequency: equal ratios are equally far apart", () => toggleLog());
const sizesButton = toggle("no dB", "frequency responses and spectra as they are, in place of dB", () => toggleSizes());
const stillButton = button("Stop plots", () => {});
const keepButton = button("Keep all", () => {});
const fields = {}; // force, pair: select elements
const ends = [number("band from, Hz"), number("band to, Hz")];

let choice = { type: "select", response: null, force: 0, pair: 0, coherence: [], from_hz: null, to_hz: null, log: false }; // as the program is asked
let view = { coherence: [] }; // as the program shows it
let plots = []; // in view
let wanted = { parts: null, points: null }; // of the program
let held = false; // the plots stand still
let sizes = false;
let send = () => {};
let responses = []; // channels
let most = 0;
let lines = 0;
let response = null; // pickers
let adder = null;
let doing = { still() {}, keep() {}, sizes() {} };
let band = () => {};
let refused = () => {};

// build makes the controls of a description; ask(choice) asks the program.
export function build(description, ask) {
  const forces = description.channels.slice(0, description.forces).map(({ name }) => name);
  send = ask;
  most = description.shown;
  lines = description.lines;
  responses = description.channels.slice(description.forces);
  response = new Picker("response of the frequency response", responses, (o) => change({ response: o }), () => want());
  adder = new Picker("show the coherence of a response", responses, (o) => change({ coherence: [...choice.coherence, o] }), () => want());
  fields.force = options("force of the frequency response", forces);
  fields.pair = options("reciprocity pair", description.pairs.map(([a, b]) => `${forces[a]} and ${forces[b]}`));
  for (const [key, control] of Object.entries(fields)) {
    control.onchange = () => change({ [key]: Number(control.value) });
  }
  for (const control of ends) {
    control.onchange = () => look(...ends.map(({ value }) => Number(value)));
  }
  root.replaceChildren(
    group("Frequency response", response.element, "to", fields.force),
    group("Coherence of", chips, adder.element),
    ...(description.pairs.length > 1 ? [group("Reciprocity", fields.pair)] : []),
    group("Band", ends[0], "to", ends[1], "Hz", widerButton, wholeButton, logButton),
    group("", sizesButton, stillButton, keepButton),
    note,
  );
  stillButton.dataset.key = "T";
  keepButton.dataset.key = "K";
  logButton.dataset.key = "L";
  sizesButton.dataset.key = "D";
  wholeButton.dataset.key = "B";
  listChips();
}

// tools sets what the buttons for all plots do: { still, keep, sizes(is) }.
export function tools(does) {
  doing = does;
  stillButton.onclick = does.still;
  keepButton.onclick = does.keep;
}

// onBand sets who is told of each band that is asked for, onRefused who is told what was not done.
export function onBand(tell) {
  band = tell;
}

export function onRefused(tell) {
  refused = tell;
}

// hold says that the plots stand still: what they show then stays chosen, but for the band.
export function hold(is) {
  held = is;
  for (const control of [...Object.values(fields), logButton, response.button, adder.button, ...chips.children]) {
    control.disabled = is;
  }
  put(stillButton, is ? "Let them run" : "Stop plots");
  stillButton.classList.toggle("strong", is);
  if (!is) {
    listChips();
  }
}

// look shows a band, with nulls the whole.
export function look(fromHz, toHz) {
  ask({ from_hz: fromHz, to_hz: toHz });
  band(fromHz, toHz);
}

// widen shows three times as much around the band.
function widen() {
  const [from, to] = ends.map(({ value }) => Number(value));
  look(Math.max(2 * from - to, 0), 2 * to - from);
}

// choose shows another { response, force, pair, from_hz, to_hz }, responses and forces given by index.
export function choose(part) {
  change(part);
}

// again asks anew, on a new connection.
export function again() {
  if (wanted.parts !== null) {
    send({ ...choice, ...wanted });
  }
}

// want says which plots are to be sent, with at most how many points; without, the same as before.
export function want(parts = plots, points = wanted.points) {
  plots = parts;
  const next = { parts: response.open || adder.open ? [...parts, "ranking"] : parts, points };
  if (JSON.stringify(next) !== JSON.stringify(wanted)) {
    wanted = next;
    again();
  }
}

export function toggleLog() {
  if (!logButton.disabled) {
    change({ log: !choice.log });
    logButton.setAttribute("aria-pressed", String(choice.log));
  }
}

export function toggleSizes() {
  sizes = !sizes;
  sizesButton.setAttribute("aria-pressed", String(sizes));
  doing.sizes(sizes);
}

// shown takes the view that a refresh has, and the errors of the responses, if they came with it.
export function shown(next, spacingHz, errors) {
  response.rank(errors);
  adder.rank(errors);
  const before = JSON.stringify(view);
  view = next;
  if (JSON.stringify(view) === before) {
    return;
  }
  response.show(responses[view.response].name);
  for (const [key, control] of Object.entries(fields)) {
    control.value = String(view[key]);
  }
  ends[0].value = rounded(view.first * spacingHz);
  ends[1].value = rounded(view.last * spacingHz);
  const whole = view.first <= (view.log ? 1 : 0) && view.last === lines - 1;
  wholeButton.className = whole ? "whole" : "whole strong"; // a part must not be taken for the whole
  const coarsest = Math.max(...view.runs.map(([, width]) => width));
  put(note, coarsest === 1 ? "" : `${view.log ? "up to " : ""}${coarsest} lines a point`);
  listChips();
}

function change(part) {
  if (held) {
    refused("another selection");
    return;
  }
  ask(part);
  if (part.from_hz !== undefined) {
    band(part.from_hz, part.to_hz);
  }
}

// ask has the program show something else.
function ask(part) {
  choice = { ...choice, ...part };
  send({ ...choice, ...wanted });
}

function listChips() {
  const focused = chips.contains(document.activeElement);
  chips.replaceChildren(...view.coherence.map((o) => {
    const { name } = responses[o];
    const chip = button(`${name} ✕`, () => change({ coherence: choice.coherence.filter((other) => other !== o) }));
    chip.className = "chip";
    chip.setAttribute("aria-label", `stop showing the coherence of ${name}`);
    return chip;
  }));
  const full = view.coherence.length >= most;
  adder.show(full ? `${most} at most` : view.coherence.length === 0 ? "add a response…" : "add…");
  adder.leave(view.coherence);
  adder.button.disabled = full || held;
  if (focused) {
    (chips.lastElementChild ?? adder.button).focus();
  }
}
