// The vertical range of a pane: it grows at once, and shrinks only when it has been too wide for a while, so
// that a plot does not jump while it is read.

const patienceMs = 15000; // some blocks: what comes back within that was no reason to shrink
const ticks = 5;

export class Span {
  // pane is one of a description's; least is how much the range spans at least.
  constructor({ log_base: base, ends, tick }, least) {
    this.base = base;
    this.fixed = ends === null ? null : { min: ends[0], max: ends[1], interval: tick };
    this.least = least;
    this.range = null;
    this.tooWideSince = null;
  }

  // refit has the next range fit what is shown then.
  refit() {
    this.range = null;
  }

  // of is the range, { min, max, interval }, for values from lo to hi at a time in milliseconds. It is null
  // until there are values.
  of(lo, hi, nowMs) {
    if (this.fixed !== null || !(lo <= hi)) {
      return this.fixed ?? this.range;
    }
    const fitting = this.around(lo, hi);
    if (this.range === null || this.wideFor(fitting, nowMs) > patienceMs) {
      this.range = fitting;
      this.tooWideSince = null;
    } else if (fitting.min < this.range.min || fitting.max > this.range.max) {
      this.range = this.around(Math.min(lo, this.range.min), Math.max(hi, this.range.max));
    }
    return this.range;
  }

  wideFor({ min, max }, nowMs) {
    const inside = min >= this.range.min && max <= this.range.max;
    const tooWide = inside && (min > this.range.min || max < this.range.max);
    this.tooWideSince = tooWide ? this.tooWideSince ?? nowMs : null;
    return tooWide ? nowMs - this.tooWideSince : 0;
  }

  around(lo, hi) {
    if (this.base > 0) {
      const power = (value, round) => this.base ** round(Math.log(value) / Math.log(this.base));
      const min = power(lo * (1 + 1e-9), Math.floor);
      return { min, max: Math.max(power(hi * (1 - 1e-9), Math.ceil), min * this.base) };
    }
    const spare = Math.max(0, this.least - (hi - lo)) / 2;
    const interval = step((hi - lo + 2 * spare || Math.abs(hi) || 1) / ticks);
    const min = Math.floor((lo - spare) / interval + 1e-9) * interval;
    const max = Math.ceil((hi + spare) / interval - 1e-9) * interval;
    return { min, max: max > min ? max : min + interval, interval };
  }
}

// step is the nearest of 1, 2 and 5 times a power of ten that is not below a number.
function step(least) {
  const power = 10 ** Math.floor(Math.log10(least));
  return power * [1, 2, 5, 10].find((factor) => factor * power >= least * (1 - 1e-9));
}
