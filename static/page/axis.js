// The axis of frequency, the same in all plots: its ends, its ticks, and where on it a frequency stands.

// axis is of a view whose lines are spacingHz apart; band, [from, to] in Hz, is shown in place of the view's.
export function axis({ first, last, log }, spacingHz, band = null) {
  const [min, max] = band ?? [first * spacingHz, last * spacingHz];
  const scale = log ? Math.log : (hz) => hz;
  const [low, high] = [scale(min), scale(max)];
  return {
    min, max, log,
    ticks: log ? ratios(min, max) : even(min, max),
    // at is a frequency's place from 0, the left end, to 1.
    at: (hz) => (scale(hz) - low) / (high - low),
    // hz is the frequency at a place.
    hz: (at) => log ? Math.exp(low + at * (high - low)) : low + at * (high - low),
  };
}

// ratios are round frequencies at about equal ratios or, in a narrow band, evenly spaced ones.
function ratios(min, max) {
  const list = [];
  for (let power = 10 ** Math.floor(Math.log10(min)); power <= max; power *= 10) {
    list.push(...[1, 2, 5].map((factor) => round(factor * power)));
  }
  const inside = list.filter((hz) => hz >= min && hz <= max);
  return inside.length >= 3 ? inside : even(min, max);
}

const most = 6; // evenly spaced ticks: the narrowest plot has room for so many

// even are round frequencies, evenly spaced.
function even(min, max) {
  const least = (max - min) / most;
  const power = 10 ** Math.floor(Math.log10(least));
  const step = power * [1, 2, 5, 10].find((factor) => factor * power >= least * (1 - 1e-9));
  const list = [];
  for (let n = Math.ceil(min / step - 1e-9); n * step <= max * (1 + 1e-9); n++) {
    list.push(round(n * step));
  }
  return list;
}

function round(value) {
  return Number(value.toPrecision(9));
}
