// Whether what the page shows is fresh, said so that nobody can overlook it.

import { duration, put } from "./format.js";

const oldS = 3; // levels come ten times a second

const banner = document.getElementById("old");
const [alarm, details] = banner.children; // the alarm is read out once, the details change every second
const mark = document.getElementById("link");

let ended = false;

// end says that the run has ended: from now on nothing new is expected.
export function end() {
  ended = true;
}

// told takes what the socket says of itself and returns how old the data are, in words, or null when
// they are fresh or nothing new is expected.
export function told({ open, ageS, nextS }) {
  const old = !ended && (!open && ageS > 1 || ageS > oldS);
  const age = `${duration(Math.floor(ageS))} ago`;
  document.documentElement.dataset.old = String(old);
  banner.hidden = !old;
  put(alarm, old ? "DATA ARE OLD." : "");
  if (old) {
    const next = open ? "The connection stands, but nothing comes." : nextS > 0 ? `Next try in ${Math.ceil(nextS)} s.` : "Trying to connect.";
    put(details, `The last news came ${age}. Do not go by what is shown. ${next}`);
  }
  mark.dataset.link = old ? "old" : open ? "fresh" : "closed";
  put(mark, old ? "✕ no connection" : !open ? "○ program closed" : ended ? "■ ended" : "● receiving");
  return old ? age : null;
}
