// The table of what the setup check has found, worst first.

import { digits, make, put, some } from "./format.js";
import { picture } from "./svg.js";

const marks = {
  stop: ["STOP", "stop-and-look", "to stop for"],
  look: ["LOOK", "look", "to look at"],
  unknown: ["UNKNOWN", "unknown", "unknown"],
  fine: ["IN ORDER", "enough", "in order"],
};
const mostBands = 3; // more are only counted

const rows = document.getElementById("finding-rows");
const count = document.getElementById("finding-count");

let names = {}; // of the stages, by code

// stages sets the names of the stages.
export function stages(list) {
  names = Object.fromEntries(list.map(({ code, name }, i) => [code, `${i + 1} · ${name}`]));
}

// take shows a message with findings in place of all before.
export function take({ findings }) {
  rows.replaceChildren(...findings.map(row));
  const counts = Object.entries(marks)
    .map(([mark, [, , words]]) => [findings.filter((finding) => finding.mark === mark).length, words])
    .filter(([number]) => number > 0)
    .map(([number, words]) => `${number} ${words}`);
  put(count, counts.length === 0 ? "none yet: a stage's findings come when it is measured" : counts.join(", "));
}

function row(finding) {
  const element = make("tr");
  element.dataset.mark = finding.mark;
  const head = make("th");
  head.scope = "row";
  head.append(badge(finding.mark));
  const text = make("td", "what", finding.text);
  const where = bands(finding.bands_hz);
  if (where !== "") {
    text.append(make("span", "quiet", ` (${where})`));
  }
  element.append(
    head,
    make("td", "stage", names[finding.stage] ?? finding.stage),
    make("td", "channels", finding.channels.length === 0 ? "all" : finding.channels.join(", ")),
    make("td", "number", finding.number === null ? "unknown" : `${digits(finding.number)}${finding.unit === "" ? "" : `\u00a0${finding.unit}`}`),
    text,
  );
  return element;
}

function badge(mark) {
  const [word, shape] = marks[mark] ?? [mark, "unknown"];
  const element = make("span", "badge");
  element.append(picture(`shape-${shape}`), make("b", "", word));
  return element;
}

function bands(list) {
  const known = list.filter(([from, to]) => from !== null && to !== null);
  const words = known.slice(0, mostBands).map(([from, to]) => (from === to ? digits(from, 4) : `${digits(from, 4)} to ${digits(to, 4)}`));
  const rest = known.length - words.length;
  return words.length === 0 ? "" : `at ${words.join(", ")} Hz${rest > 0 ? ` and in ${some(rest, "band")} more` : ""}`;
}
