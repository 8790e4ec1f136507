// The verdict band: the state, why, how far, how long still.

import { digits, duration, make, put, some } from "./format.js";
import { say } from "./say.js";

const states = {
  "settling": ["SETTLING", "Too few averages to judge anything yet."],
  "averaging": ["AVERAGING", "Sound so far; more averages are needed."],
  "enough": ["ENOUGH", "Every frequency response meets the target."],
  "stop-and-look": ["STOP AND LOOK", "A fault stands."],
};

// what is said of a run that has ended.
const ends = {
  "settling": "too few averages to judge",
  "averaging": "the target was not met",
  "enough": "enough: the target was met",
  "stop-and-look": "a fault stood",
};

// what takes the place of the state's word, over whatever it is.
const covers = { old: "OLD DATA", ended: "ENDED", paused: "PAUSED" };

const band = document.getElementById("verdict");
const word = document.getElementById("word");
const shape = document.getElementById("shape");
const known = document.getElementById("known");
const reason = document.getElementById("reason");
const reasons = document.getElementById("reasons");
const averaged = document.getElementById("averaged");
const needed = document.getElementById("needed");
const bar = document.getElementById("bar");
const togo = document.getElementById("togo");
const togoUnit = document.getElementById("togo-unit");
const aside = document.getElementById("aside");

let status = null;
let lagS = 0; // how far the estimates are behind the levels
let old = null; // how old the data are, in words, or null while they are fresh
let ended = false;
let said = null; // the state that was read out last

// show takes the status of a refresh, and by how many seconds it is late.
export function show(next, lag) {
  status = next;
  lagS = lag;
  draw();
}

// age says that the data are old, or with null that they are fresh.
export function age(words) {
  if (words !== old) {
    old = words;
    draw();
  }
}

// end says that the run has ended.
export function end() {
  ended = true;
  draw();
}

// title is the state for the browser's tab.
export function title() {
  return word.textContent;
}

function draw() {
  const [name, meaning] = states[status?.verdict.state] ?? ["WAITING", ""];
  // A word that may no longer be true must not stand there in large letters.
  const now = status?.verdict.state ?? "waiting";
  const state = old !== null ? "old" : ended ? "ended" : status?.paused && now !== "stop-and-look" ? "paused" : now;
  band.dataset.state = state;
  shape.setAttribute("href", `#shape-${state}`);
  put(word, covers[state] ?? name);
  put(known, { old: `last known, ${old}: ${name.toLowerCase()}`, ended: ends[now] ?? "", paused: `no block is averaged · before: ${name.toLowerCase()}` }[state] ?? (status?.paused ? "averaging is paused" : ""));
  if (status !== null) {
    drawReasons(status.verdict.reasons.length > 0 ? status.verdict.reasons : [meaning]);
    drawProgress();
    band.dataset.paused = String(status.paused);
    put(aside, blocks() + (lagS > 0 && !ended ? `. The estimates are ${duration(lagS)} behind the levels` : ""));
  }
  if (state !== said) {
    say(`${word.textContent}. ${status === null || state === "old" ? "" : reason.textContent}`);
    said = state;
  }
}

function drawReasons([first, ...others]) {
  put(reason, unbroken(first));
  if (others.length !== reasons.children.length) {
    reasons.replaceChildren(...others.map(() => make("li")));
  }
  others.forEach((text, i) => put(reasons.children[i], unbroken(text)));
}

// unbroken keeps a number and its percent sign on one line.
function unbroken(text) {
  return text.replaceAll(" %", "\u00a0%");
}

// range is within what the number of averages needed lies, as long as that is wide.
function range() {
  const { needed_low: low, needed_high: high } = status;
  const wide = low !== null && high !== null && high > 1.3 * low;
  return wide ? ` (${digits(low, 2)} to ${digits(high, 2)})` : "";
}

function drawProgress() {
  const met = status.verdict.state === "enough";
  put(averaged, String(status.averaged));
  if (met) {
    put(needed, "averages: target met");
  } else if (status.needed === null) {
    put(needed, "averages; how many are needed is not known yet");
  } else {
    put(needed, `of about ${digits(Math.max(status.needed, status.averaged), 3)} averages${range()}`);
  }
  const share = met ? 1 : status.needed > 0 ? Math.min(status.averaged / status.needed, 1) : 0;
  bar.dataset.known = String(met || status.needed !== null);
  bar.setAttribute("aria-valuenow", String(Math.round(100 * share)));
  bar.firstElementChild.style.transform = `scaleX(${share})`;
  put(togo, ended ? "" : status.paused ? "paused" : met ? "nothing" : status.to_go_s === null ? "unknown" : `about ${duration(status.to_go_s)}`);
  put(togoUnit, ended || status.paused ? "" : status.verdict.state === "stop-and-look" ? "once it is mended" : "still to go");
}

function blocks() {
  if (status.set_aside === 0) {
    return `${some(status.seen, "block")} seen, none set aside`;
  }
  const why = [
    [status.gaps, some(status.gaps, "gap")],
    [status.overranges, `${status.overranges} at the limit`],
    [status.overloads, `${status.overloads} too much for this computer`],
  ].filter(([count]) => count > 0).map(([, text]) => text).join(", ");
  return `${status.set_aside} of ${some(status.seen, "block")} set aside${why === "" ? "" : ": " + why}`;
}
