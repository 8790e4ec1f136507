// From where to where the values of a pane reach that ask to be seen.

// reach is the smallest and the largest value of a panel's pane: judged, and of a curve that has a line.
export function reach(panel, pane) {
  let lo = Infinity;
  let hi = -Infinity;
  const log = panel.plot.panes[pane].log_base > 0;
  const take = (x, value) => {
    if (value !== null && (!log || value > 0) && counts(panel, x)) {
      lo = Math.min(lo, value);
      hi = Math.max(hi, value);
    }
  };
  const takeAll = (x, values) => values.forEach((value, n) => x === null ? take(null, value[1]) : take(x[n], value));
  panel.plot.curves.forEach((curve, i) => {
    if (curve.pane === pane && !curve.quiet && !panel.hides(i)) {
      takeAll(panel.x, panel.columns[i]);
    }
  });
  for (const { traces } of panel.kept) {
    for (const { curve, x, values } of panel.compared(traces).filter((trace) => trace.curve.pane === pane)) {
      takeAll(x, panel.shown(curve, values));
    }
  }
  return [lo, hi];
}

// counts tells whether a frequency's values decide the range: one in view that is judged, as far as any is.
function counts({ axis, page }, x) {
  return x === null || (x >= axis.min && x <= axis.max && (x >= page.judgedHz || axis.max <= page.judgedHz));
}
