// A group of controls as one stop of the Tab key: arrow keys go through it.

const steps = { ArrowRight: 1, ArrowDown: 1, ArrowLeft: -1, ArrowUp: -1 };

// roving makes one of the elements in root that match selector, at any time, the stop.
export function roving(root, selector) {
  const all = () => [...root.querySelectorAll(selector)];
  root.addEventListener("keydown", (event) => {
    const list = all();
    const at = list.indexOf(event.target);
    const to = { Home: 0, End: list.length - 1 }[event.key] ?? at + (steps[event.key] ?? NaN);
    if (at >= 0 && list[to] !== undefined) {
      event.preventDefault();
      list[to].focus();
    }
  });
  root.addEventListener("focusin", (event) => {
    if (event.target.matches(selector)) {
      stop(all(), event.target);
    }
  });
  // settle is to be called when elements came or went.
  return function settle() {
    const list = all();
    stop(list, list.find((element) => element.getAttribute("tabindex") === "0") ?? list[0]);
  };
}

function stop(list, chosen) {
  for (const element of list) {
    element.setAttribute("tabindex", element === chosen ? "0" : "-1");
  }
}
