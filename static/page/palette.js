// Colours and type sizes of the plots, taken from the style sheet, where light and dark are decided.

// watch calls changed when the page turns light or dark or its type changes size.
export function watch(changed) {
  for (const query of ["(prefers-color-scheme: dark)", "(prefers-contrast: more)"]) {
    matchMedia(query).addEventListener("change", changed);
  }
  let size = typeSize();
  addEventListener("resize", () => {
    if (typeSize() !== size) {
      size = typeSize();
      changed();
    }
  });
}

// typeSize is the size of the page's type in pixels.
export function typeSize() {
  return parseFloat(getComputedStyle(document.documentElement).fontSize);
}

// colour is the colour of a role, such as "worst" or "force-1".
export function colour(role) {
  return paint(`plot-${role}`);
}

// paint is a colour of the style sheet.
export function paint(name) {
  return getComputedStyle(document.documentElement).getPropertyValue(`--${name}`).trim();
}

// text is the type of everything that stands in a plot.
export function text() {
  return { color: colour("text"), fontSize: typeSize() * 0.86, fontFamily: getComputedStyle(document.body).fontFamily };
}

// margins are what lies around a plot's panes, in pixels.
export function margins() {
  const size = typeSize() * 0.86;
  return { left: 4.4 * size, right: 1.4 * size, top: 1.75 * size, bottom: 1.75 * size };
}

// grids are where so many panes stand, one above the other, in a chart of that height.
export function grids(count, height) {
  const { left, right, top, bottom } = margins();
  const gap = 1.2 * top; // the lower pane's quantity stands there
  const each = Math.max((height - top - bottom - (count - 1) * gap) / count, 1);
  return Array.from({ length: count }, (_, i) => ({ left, right, top: top + i * (each + gap), height: each, outerBoundsMode: "none" }));
}

// dress puts colours and type sizes into a plot's option, for a chart of that height. quantities are what the
// vertical axes show.
export function dress(option, curves, quantities, height) {
  const line = { lineStyle: { color: colour("axis") } };
  const own = text();
  const axis = (given, top) => ({
    ...given,
    nameTextStyle: { ...own, align: "left", padding: 0 },
    nameGap: top ? 6 : 3,
    axisLabel: { ...given.axisLabel, ...own, formatter: (value) => (given.axisLabel?.formatter ?? "{value}").replace("{value}", number(value)) },
    axisLine: { ...line, onZero: false, show: true },
    axisTick: line,
    splitLine: { show: true, lineStyle: { color: colour("grid") } },
    minorSplitLine: { show: false },
    axisPointer: { lineStyle: { color: colour("text"), width: 1 }, label: { show: false } },
  });
  return {
    ...option,
    textStyle: own,
    grid: grids(quantities.length, height),
    xAxis: option.xAxis.map((given) => axis(given, false)),
    yAxis: option.yAxis.map((given, i) => axis({ ...given, name: quantities[i] }, true)),
    series: option.series.map((given, i) => dressSeries(given, curves[i], i)),
  };
}

// number is a value as it stands at a tick.
export function number(value) {
  return String(Number(value.toPrecision(9))).replace("-", "−");
}

function dressSeries(given, curve, i) {
  const own = colour(curve.role);
  return {
    ...given,
    id: String(i),
    silent: true,
    symbol: "none",
    z: curve.quiet || curve.floor ? 1 : 3,
    lineStyle: { ...given.lineStyle, color: own },
    itemStyle: { color: own },
    ...(curve.above === "" ? {} : { areaStyle: { color: own, opacity: 0.28 } }),
    ...(curve.floor ? { areaStyle: { color: colour("shade"), opacity: 0.6, origin: "start" } } : {}),
    ...(given.markArea === undefined ? {} : {
      markArea: { ...given.markArea, silent: true, itemStyle: { color: colour("shade") } },
    }),
  };
}

const dashes = ["solid", [14, 7], [3, 5]]; // of what was kept first, second, third

// keptSeries is the series of a kept trace: as its curve, but broad and pale, behind what is of now.
export function keptSeries(curve, slot, data) {
  return {
    id: `kept-${slot}-${curve.from}-${curve.index}`,
    type: "line",
    xAxisIndex: curve.pane,
    yAxisIndex: curve.pane,
    silent: true,
    symbol: "none",
    connectNulls: false,
    z: 2,
    lineStyle: { color: colour(curve.role), width: 4, opacity: 0.42, type: dashes[slot] },
    data,
  };
}
