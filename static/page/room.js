// How tall the plots are: as many rows of them as can be read fit below what stands above them, without
// scrolling.

const goodRem = 15; // of a plot with its title and legend
const leastRem = 11; // less cannot be read
const calmPx = 24; // what stands above may grow a little without a jump of all plots
const headRem = 3.6; // title, legend and borders of a plot

let taken = 0;
let rows = 0; // decided anew only with another window

// fit keeps an element's --room, the height of a plot's canvas, right.
export function fit(plots) {
  const measure = () => {
    const rem = parseFloat(getComputedStyle(document.documentElement).fontSize);
    const room = innerHeight - (plots.getBoundingClientRect().top + scrollY) - 0.5 * rem;
    if (Math.abs(room - taken) < calmPx) {
      return;
    }
    taken = room;
    rows = rows || Math.max(1, Math.floor(room / (goodRem * rem)));
    const tall = Math.max((room - (rows - 1) * 0.5 * rem) / rows, leastRem * rem) - headRem * rem;
    plots.style.setProperty("--room", `${Math.round(tall)}px`);
  };
  addEventListener("resize", () => {
    taken = rows = 0;
    measure();
  });
  new ResizeObserver(measure).observe(plots.parentElement.parentElement);
  measure();
}
