// Curves as messages bring them, turned into numbers by point.

// frequencies are those of a view's points, in Hz: each stands in the middle of its lines.
export function frequencies({ first, runs }, spacingHz) {
  return points(first, runs).map(({ from, to }) => spacingHz * (from + to) / 2);
}

// points are the first and the last line of each point.
export function points(first, runs) {
  const list = [];
  let from = first;
  for (const [count, lines] of runs) {
    for (let i = 0; i < count; i++, from += lines) {
      list.push({ from, to: from + lines - 1 });
    }
  }
  return list;
}

// column is what the message has for a curve, an array, empty where it has nothing. A curve over averages is a
// list of pairs.
export function column(curves, { from, index, step }, count) {
  const found = index < 0 ? curves[from] : curves[from]?.[index];
  return found === undefined ? [] : scaled(found, step, count);
}

// scaled turns whole numbers of a step into values; one alone stands for count of them. Step 0 leaves numbers
// as they are.
export function scaled(found, step, count) {
  const value = (n) => n === null || step === 0 ? n : n * step;
  return Array.isArray(found) ? (step === 0 ? found : found.map(value)) : new Array(count).fill(value(found));
}

// sizes turns dB into sizes; decade is how many dB are a factor of ten.
export function sizes(column, decade) {
  return column.map((value) => value === null ? null : 10 ** (value / decade));
}

// nearest is the index in an ascending list of numbers of the one nearest to x.
export function nearest(list, x) {
  let lo = 0;
  let hi = list.length - 1;
  while (hi - lo > 1) {
    const middle = (lo + hi) >> 1;
    [lo, hi] = list[middle] <= x ? [middle, hi] : [lo, middle];
  }
  return Math.abs(list[hi] - x) < Math.abs(list[lo] - x) ? hi : lo;
}
