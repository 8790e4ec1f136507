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
  return getComputedStyle(document.documentElement).getPropertyValue(`--plot-${role}`).trim();
}

// dress puts colours and type sizes into a plot's option, for a chart of that height.
export function dress(option, curves) {
  const size = typeSize() * 0.86;
  const text = { color: colour("text"), fontSize: size, fontFamily: getComputedStyle(document.body).fontFamily };
  const line = { lineStyle: { color: colour("axis") } };
  const axis = (own, top) => ({
    ...own,
    nameTextStyle: { ...text, align: top ? "left" : "right", padding: 0 },
    nameGap: 6,
    axisLabel: { ...own.axisLabel, ...text, formatter: (value) => (own.axisLabel?.formatter ?? "{value}").replace("{value}", String(Number(value.toPrecision(9)))) },
    axisLine: { ...line, onZero: false, show: true },
    axisTick: line,
    splitLine: { show: true, lineStyle: { color: colour("grid") } },
    minorSplitLine: { show: false },
    axisPointer: { lineStyle: { color: colour("text"), width: 1 }, label: { show: false } },
  });
  return {
    ...option,
    textStyle: text,
    grid: option.grid.map((grid) => ({ ...grid, left: 4.4 * size, right: 1.4 * size, outerBoundsMode: "none" })),
    xAxis: option.xAxis.map((own) => axis(own, false)),
    yAxis: option.yAxis.map((own) => axis(own, true)),
    series: option.series.map((own, i) => dressSeries(own, curves[i])),
  };
}

function dressSeries(own, curve) {
  const paint = colour(curve.role);
  return {
    ...own,
    silent: true,
    symbol: "none",
    lineStyle: { ...own.lineStyle, color: paint },
    itemStyle: { color: paint },
    ...(curve.above === "" ? {} : { areaStyle: { color: paint, opacity: 0.28 } }),
    ...(own.markArea === undefined ? {} : {
      markArea: { ...own.markArea, silent: true, itemStyle: { color: colour("shade") } },
    }),
  };
}
