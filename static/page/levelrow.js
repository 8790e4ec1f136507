// The row of one channel.

import { grade, headroom, share } from "./decibels.js";
import { make, put } from "./format.js";
import { gravity, words } from "./kinds.js";
import { coherence, eventsAt } from "./marks.js";
import { picture } from "./svg.js";

const severity = ["fault", "limit", "low", "look"]; // a gap is on all channels and said elsewhere
const short = { fault: "FAULT", low: "low", look: "look" };

export class Row {
  // reset(channel) forgets the held peak of a channel; choose(channel) shows one in the plots.
  constructor(reset, choose) {
    this.channel = null;
    this.worst = "none";
    this.element = make("li");
    this.sign = picture("mark-fault");
    this.name = make("button", "name");
    this.where = make("span", "where");
    this.meter = make("span", "meter");
    this.left = make("button", "left");
    this.parts = { rms: make("i", "rms"), peak: make("i", "peak"), held: make("i", "held") };
    this.meter.append(...Object.values(this.parts));
    this.name.type = this.left.type = "button";
    this.name.onclick = () => choose(this.channel);
    this.left.onclick = () => this.may && reset(this.channel);
    this.element.append(this.sign, this.name, this.where, this.meter, this.left);
    this.mark();
  }

  control(may) {
    this.may = may;
    this.left.title = may ? "forget the held peak of this channel" : "";
  }

  // show makes it the row of a channel, null hides it.
  show(index, channel) {
    this.element.hidden = index === null;
    if (index === null || index === this.channel) {
      return;
    }
    this.channel = index;
    put(this.name, channel.name);
    this.name.title = `${channel.kind} ${channel.name}, point ${channel.point}, ${channel.axis}: show it in the plots`;
    put(this.where, `${channel.point} ${channel.axis}`);
    this.where.title = `point ${channel.point}, ${channel.axis}`;
    this.mark();
  }

  // draw shows levels; recent and held are peaks by channel, held null when nothing is held.
  draw(message, recent, held) {
    if (this.channel === null) {
      return;
    }
    const i = this.channel;
    const now = grade(recent[i].peak);
    const kept = held === null ? recent[i].peak : held[i];
    this.parts.rms.style.transform = `scaleX(${share(message.rms[i])})`;
    this.parts.peak.style.transform = `scaleX(${share(message.peak[i])})`;
    this.parts.held.style.left = `${100 * share(kept)}%`;
    const level = now === "limit" ? "limit" : grade(kept) === "limit" ? "was-limit" : now === "silent" || now === "unknown" ? now : grade(kept);
    if (this.element.dataset.level !== level) {
      this.element.dataset.level = level;
    }
    const text = { limit: "▲ AT LIMIT", "was-limit": "▲ was at limit", silent: "○ silent", unknown: "unknown" }[level] ?? headroom(kept);
    put(this.left, short[this.worst] === undefined ? text : `${short[this.worst]} · ${text}`);
  }

  // mark shows what stands against the channel.
  mark() {
    if (this.channel === null) {
      return;
    }
    const events = eventsAt(this.channel);
    const weak = coherence(this.channel) === "low";
    this.worst = severity.find((grave) => events.some((event) => gravity(event) === grave)) ?? (weak ? "weak" : "none");
    this.element.dataset.mark = this.worst;
    this.element.title = [...events.map(({ kind }) => words(kind)), ...(weak ? ["low coherence"] : [])].join(", ");
    this.sign.firstElementChild.setAttribute("href", `#mark-${{ weak: "low", none: "well" }[this.worst] ?? this.worst}`);
  }
}
