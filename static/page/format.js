// Numbers as people read them. What cannot be had is null and becomes a dash or "unknown".

// digits is a number with so many significant digits, without trailing zeros.
export function digits(value, count = 3) {
  return value === null || value === undefined ? "–" : String(Number(value.toPrecision(count)));
}

// duration is a time in words: "75 s", "12 min", "2 h 05 min".
export function duration(seconds) {
  if (seconds === null) {
    return "unknown";
  }
  if (seconds < 100) {
    return `${Math.ceil(seconds)} s`;
  }
  const minutes = Math.ceil(seconds / 60);
  if (minutes < 100) {
    return `${minutes} min`;
  }
  return `${Math.floor(minutes / 60)} h ${String(minutes % 60).padStart(2, "0")} min`;
}

// some is "1 gap", "2 gaps".
export function some(count, one, many = one + "s") {
  return `${count} ${count === 1 ? one : many}`;
}

// put sets an element's text, only when it changes, so that nothing is laid out anew for nothing.
export function put(element, text) {
  if (element.textContent !== text) {
    element.textContent = text;
  }
}

// make is a new element with a class and a text. Texts from outside only ever come in this way.
export function make(tag, className = "", text = "") {
  const element = document.createElement(tag);
  element.className = className;
  element.textContent = text;
  return element;
}
