// Elements of SVG, made by script.

const space = "http://www.w3.org/2000/svg";

// draw is a new element with attributes.
export function draw(tag, attributes = {}, ...children) {
  const element = document.createElementNS(space, tag);
  for (const [name, value] of Object.entries(attributes)) {
    element.setAttribute(name, value);
  }
  element.append(...children);
  return element;
}

// picture shows a symbol of the page; the words beside it say what it means.
export function picture(symbol) {
  return draw("svg", { "aria-hidden": "true" }, draw("use", { href: `#${symbol}` }));
}
