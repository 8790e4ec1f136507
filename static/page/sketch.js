// The structure: its points as a plane view, each marked by the worst that stands at it.

import { digits, make, put, some } from "./format.js";
import { standOf, words } from "./pointstate.js";
import { fit, label, name, planes, shape, widest } from "./projection.js";
import { roving } from "./roving.js";
import { draw as element, picture } from "./svg.js";

const tallest = 15; // in heights of type; more would push the channels away
const mostNames = 60; // beyond that names hide one another, and only those asked for are shown
const brief = { fault: "fault", limit: "at limit", low: "low coherence", well: "well", unknown: "unknown" };
const markMs = 500; // marks need not change faster

const panel = document.getElementById("sketch");
const plane = document.getElementById("plane");
const ruler = document.getElementById("ruler");
const about = document.getElementById("point");
const settle = roving(plane, ".place");

let places = []; // { name, at_m, channels: indices }
let channels = [];
let view = planes[0];
let dots = []; // elements, by place
let chosen = null; // index of the place whose channels are listed
let choose = () => {};
let shown = null; // name of the point whose response the plots show
let marked = 0;

// build draws the points of a description; show(channel) shows a channel in the plots.
export function build(description, show) {
  choose = show;
  channels = description.channels;
  places = description.points.map((point) => ({
    ...point, channels: channels.map((_, i) => i).filter((i) => channels[i].point === point.name),
  }));
  panel.hidden = places.length === 0;
  if (panel.hidden) {
    return;
  }
  plane.classList.toggle("crowded", places.length > mostNames);
  view = widest(places);
  document.getElementById("planes").replaceChildren(...planes.map((option) => {
    const button = make("button", "", name(option));
    button.type = "button";
    button.onclick = () => turn(option);
    return button;
  }));
  turn(view);
  new ResizeObserver(lay).observe(panel);
}

// next turns to the next view.
export function next() {
  if (!panel.hidden) {
    turn(planes[(planes.indexOf(view) + 1) % planes.length]);
  }
}

// follow marks the point whose response the plots show.
export function follow(response, forces) {
  const point = channels[forces + response]?.point;
  if (point !== shown) {
    shown = point;
    dots.forEach((dot, i) => dot.classList.toggle("shown", places[i].name === shown));
  }
}

// mark shows how the points stand, at most so often; now at once.
export function mark(now) {
  if (panel.hidden || (!now && performance.now() - marked < markMs)) {
    return;
  }
  marked = performance.now();
  places.forEach((place, i) => {
    const state = standOf(place.channels);
    const dot = dots[i];
    if (dot.dataset.state !== state) {
      dot.dataset.state = state;
      dot.querySelector("use").setAttribute("href", `#mark-${state}`);
    }
    const said = `point ${place.name}: ${words(state, place.channels)}; ${place.channels.map((c) => channels[c].name).join(", ") || "no channels"}`;
    if (dot.getAttribute("aria-label") !== said) {
      dot.setAttribute("aria-label", said);
      put(dot.querySelector("title"), said);
    }
  });
  tell();
}

function turn(option) {
  view = option;
  [...document.getElementById("planes").children].forEach((button, i) => {
    button.ariaPressed = String(planes[i] === view);
  });
  lay();
}

// lay draws the view anew for the panel's size.
function lay() {
  const size = parseFloat(getComputedStyle(plane).fontSize);
  const width = plane.clientWidth || plane.parentElement.clientWidth;
  const height = Math.round(Math.min(shape(places, view) * width + 2.8 * size, tallest * size));
  plane.setAttribute("viewBox", `0 0 ${width} ${height}`);
  plane.setAttribute("height", height);
  const { scale, at } = fit(places, view, width, height, 1.6 * size);
  const names = label(at, places.map(({ name }) => 0.6 * size * name.length), size, width, height);
  const focused = dots.indexOf(document.activeElement);
  dots = places.map((place, i) => dot(place, i, at[i], names[i], size));
  plane.replaceChildren(...dots);
  measure(scale, size);
  mark(true);
  settle();
  dots[focused]?.focus();
}

function dot(place, i, [x, y], [nx, ny, anchor], size) {
  const wide = size * (places.length > mostNames ? 0.7 : 1.1);
  const pushed = place.channels.some((c) => channels[c].kind === "force");
  const g = element("g", { class: `place${place.name === shown ? " shown" : ""}`, role: "button", tabindex: "-1" },
    element("title"),
    element("circle", { cx: x, cy: y, r: size * 0.95, class: "reach" }),
    ...(pushed ? [element("rect", { x: x - size * 0.8, y: y - size * 0.8, width: size * 1.6, height: size * 1.6, class: "pushed" })] : []),
    element("use", { x: x - wide / 2, y: y - wide / 2, width: wide, height: wide }),
    element("text", { x: nx, y: ny, "text-anchor": anchor }, place.name));
  g.onclick = () => list(i);
  g.onkeydown = (event) => {
    if (event.key === "Enter" || event.key === " ") {
      event.preventDefault();
      list(i);
    }
  };
  return g;
}

// measure shows a length to compare with, 1, 2 or 5 times a power of ten, and which way the axes go.
function measure(scale, size) {
  const [right, up] = name(view);
  const text = make("span", "", `${right} →, ${up} ↑ · □ shaker`);
  if (!(scale > 0)) {
    ruler.replaceChildren(text);
    return;
  }
  const most = 4 * size / scale;
  const power = 10 ** Math.floor(Math.log10(most));
  const metres = [5, 2, 1].map((step) => step * power).find((length) => length <= most);
  const wide = scale * metres;
  const line = element("svg", { width: wide + 2, height: 8, viewBox: `0 0 ${wide + 2} 8`, "aria-hidden": "true" }, element("path", { d: `M1 1v5h${wide}v-5` }));
  ruler.replaceChildren(line, `${length(metres)} · `, text);
}

function length(metres) {
  return metres >= 1 ? `${Math.round(metres)} m` : metres >= 0.01 ? `${Math.round(100 * metres)} cm` : `${digits(1000 * metres, 1)} mm`;
}

// list lists the channels of a place and shows the first response there in the plots.
function list(i) {
  chosen = i;
  const first = places[i].channels.find((c) => channels[c].kind === "response") ?? places[i].channels[0];
  if (first !== undefined) {
    choose(first);
  }
  const buttons = places[i].channels.map((c) => {
    const button = make("button", "", `${channels[c].name} ${channels[c].axis}`);
    button.type = "button";
    button.onclick = () => choose(c);
    return button;
  });
  about.replaceChildren(picture("mark-unknown"), make("b"), " ", ...buttons);
  dots.forEach((other, n) => other.classList.toggle("chosen", n === chosen));
  tell();
}

// tell says how the listed place, or all of them, stand.
function tell() {
  if (chosen !== null) {
    const state = standOf(places[chosen].channels);
    about.dataset.state = state;
    about.querySelector("use").setAttribute("href", `#mark-${state}`);
    put(about.querySelector("b"), `Point ${places[chosen].name}: ${words(state, places[chosen].channels)}`);
    return;
  }
  if (about.children.length === 0) {
    about.replaceChildren(...legend());
  }
}

// legend says what the marks mean, and which points have no place.
function legend() {
  const marks = ["fault", "limit", "low", "well", "unknown"].map((state) => {
    const item = make("span", "sign", brief[state]);
    item.dataset.state = state;
    item.prepend(picture(`mark-${state}`));
    return item;
  });
  const placed = new Set(places.map((place) => place.name));
  const unplaced = [...new Set(channels.map(({ point }) => point).filter((point) => !placed.has(point)))];
  const missing = unplaced.length === 0 ? "" : `${some(unplaced.length, "point")} without a place in the rig file: ${unplaced.slice(0, 6).join(", ")}${unplaced.length > 6 ? ", …" : ""}`;
  return [...marks, make("span", "", missing)];
}
