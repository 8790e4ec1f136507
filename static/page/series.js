// The curves of a panel, of now and kept, as ECharts takes them.

import { column } from "./columns.js";
import { keptSeries } from "./palette.js";

const pointedOut = 2.4; // how much broader a curve is drawn while its place in the legend is pointed at

// series are all of them. Those of kept traces that are no longer shown are emptied.
export function series(panel) {
  const own = panel.plot.curves.map((curve, i) => ({
    id: String(i),
    name: panel.names[i],
    data: panel.hides(i) ? [] : data(panel, i, curve),
    lineStyle: { width: panel.plot.option.series[i].lineStyle.width * (panel.legend.points(curve, panel.names[i]) ? pointedOut : 1) },
  }));
  const kept = panel.kept.flatMap(({ slot, traces }) => panel.compared(traces).map(({ curve, x, values }) =>
    keptSeries(curve, slot, x === null ? values : panel.shown(curve, values).map((value, n) => [x[n], value]))));
  const gone = [...(panel.keptIds ?? [])].filter((id) => !kept.some((one) => one.id === id));
  panel.keptIds = new Set(kept.map(({ id }) => id));
  return [...own, ...kept, ...gone.map((id) => ({ id, data: [] }))];
}

// data is curve i; one that fills a band is stacked upon the curve below.
function data(panel, i, curve) {
  if (panel.x === null) {
    return panel.columns[i];
  }
  const floor = curve.above === "" ? null : panel.columns[panel.plot.curves.findIndex(({ from }) => from === curve.above)];
  return panel.columns[i].map((value, n) => [panel.x[n], floor === null || value === null ? value : value - floor[n]]);
}

// traces are what can be kept of a message's curves, at x: those with a line, and with numbers to compare with.
export function traces(list, curves, view, x) {
  return list
    .filter(({ quiet, floor, role, weight }) => !quiet && !floor && role !== "target" && weight !== "fine")
    .map((curve) => ({ curve, name: nameOf(curve, view), x, values: column(curves, curve, x?.length ?? 0) }))
    .filter(({ values }) => values.length > 0);
}

// nameOf is the name of a curve, which can come with the numbers.
export function nameOf(curve, view) {
  return curve.name || (view.names[curve.from]?.[Math.max(curve.index, 0)] ?? "");
}
