// Bands of frequency that events accuse: hatched in every plot of frequency, and for each event a tag that
// says what it is and shows its bands.

import { make } from "./format.js";
import { gravity, words } from "./kinds.js";
import { picture } from "./svg.js";

const most = 24; // bands in a plot: of more nobody sees the plot
const lanes = 2;
const signRem = 1.8; // what a tag is wide without words
const letterRem = 0.43; // about as wide as a letter of a tag
const widestRem = 20;

// bandsOf are the bands of what stands, { from, to, kind, cause, channels }, the newest first; a band of which several
// events of a kind speak is one.
export function bandsOf(standing) {
  const found = new Map();
  for (const { kind, cause, channels, bands_hz: bands } of standing.toReversed()) {
    for (const [from, to] of bands.filter(([from, to]) => from !== null && to !== null)) {
      const key = `${kind} ${from} ${to}`;
      found.set(key, { from, to, kind, cause, channels: [...new Set([...(found.get(key)?.channels ?? []), ...channels])] });
    }
  }
  return [...found.values()];
}

// text is what a band's event is about.
export function text({ kind, channels }) {
  return channels.length === 0 ? words(kind) : `${words(kind)}: ${channels.join(", ")}`;
}

// at are the bands that hold a frequency.
export function at(standing, hz) {
  return bandsOf(standing).filter(({ from, to }) => hz >= from && hz <= to);
}

// flag puts the bands that stand into a panel.
export function flag(panel, standing) {
  const { min, max } = panel.axis;
  const all = bandsOf(standing).filter(({ from, to }) => to > min && from < max);
  const isFault = (band) => gravity(band) === "fault";
  const inView = [...all.filter(isFault), ...all.filter((band) => !isFault(band))].slice(0, most).sort((a, b) => a.from - b.from);
  const key = JSON.stringify([inView, min, max, panel.axis.log, panel.canvas.clientWidth]);
  if (key === panel.flagged) {
    return;
  }
  panel.flagged = key;
  const placed = inView.map((band) => {
    const left = panel.pixel(Math.max(band.from, min));
    return { band, left, width: Math.max(panel.pixel(Math.min(band.to, max)) - left, 2) };
  });
  panel.bands.replaceChildren(...placed.map(({ band, left, width }) => {
    const area = make("i", "flagged");
    area.dataset.gravity = gravity(band);
    area.style.left = `${left}px`;
    area.style.width = `${width}px`;
    return area;
  }));
  tag(panel, placed, all.length);
}

// tag writes a tag for each event into the lanes above a panel, as near to its first band as others leave room.
function tag(panel, placed, count) {
  const rem = parseFloat(getComputedStyle(document.documentElement).fontSize);
  const events = Map.groupBy(placed, ({ band }) => text(band));
  const ends = new Array(lanes).fill(0);
  const tags = [];
  let shown = 0;
  for (const bands of events.values()) {
    const words = label(bands);
    const width = Math.min(words.length * letterRem + signRem, widestRem) * rem;
    const left = Math.max(Math.min(bands[0].left, panel.canvas.clientWidth - width), 0);
    const row = ends.findIndex((end) => end <= left);
    if (row >= 0) {
      ends[row] = left + width + 2;
      shown += bands.length;
      tags.push(button(panel, bands.map(({ band }) => band), words, row, left));
    }
  }
  const more = count > shown ? [make("span", "more", `+${count - shown} more in the list of events`)] : [];
  panel.lane.replaceChildren(...tags, ...more);
  panel.lane.dataset.rows = String(ends.filter((end) => end > 0).length);
}

function label(bands) {
  return bands.length === 1 ? text(bands[0].band) : `${text(bands[0].band)} · ${bands.length} bands`;
}

function button(panel, bands, words, row, left) {
  const element = make("button", "tag");
  element.type = "button";
  element.dataset.gravity = gravity(bands[0]);
  element.dataset.row = String(row);
  element.style.left = `${left}px`;
  element.style.maxWidth = `${widestRem}rem`;
  element.append(picture(`mark-${gravity(bands[0])}`), make("span", "", words));
  element.title = `${text(bands[0])}, ${bands.map(({ from, to }) => `${from.toFixed(1)} to ${to.toFixed(1)} Hz`).join(", ")}: show this`;
  element.tabIndex = -1; // the list of events has a button for each band
  element.onclick = () => panel.page.look(Math.min(...bands.map(({ from }) => from)), Math.max(...bands.map(({ to }) => to)));
  return element;
}
