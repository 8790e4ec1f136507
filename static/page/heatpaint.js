// The cells of the map, and the key to their shades.

import { colour, number, paint, text } from "./palette.js";

const shades = 11; // from 0 to 1 in tenths
const lastOver = 5; // up to this shade a stroke is in the colour over the darkest, beyond in that of text

// paintCells paints all cells of a map.
export function paintCells(map) {
  const context = sized(map.surface, map.canvas.clientWidth, map.canvas.clientHeight);
  const paints = ramp();
  const limit = Number(map.limit.value);
  const { columns, values } = map.cells;
  const lines = columns.map((_, c) => map.edge(c));
  lines.push(columns.length > 0 ? map.edge(columns.length) : 0);
  values.forEach((row, r) => {
    const [top, bottom] = [map.top(r), map.top(r + 1)];
    row.forEach((value, c) => {
      const [x, width, height] = [lines[c], lines[c + 1] - lines[c], bottom - top];
      if (width > 0) {
        cell(context, { x, y: top, width, height, value, limit }, paints);
      }
    });
  });
  context.strokeStyle = colour("axis");
  context.lineWidth = 1;
  const { left, right, top, bottom } = map.area();
  context.strokeRect(left + 0.5, top + 0.5, right - left - 1, bottom - top - 1);
  names(context, map);
  frequencies(context, map);
}

// cell paints one: its shade, a stroke when it is below the limit, dots when it is unknown.
function cell(context, { x, y, width, height, value, limit }, paints) {
  const shade = Math.round(value * (shades - 1));
  context.fillStyle = value === null ? paints.unknown : paints.shades[shade];
  context.fillRect(x, y, width - (width > 5 ? 1 : 0), height - (height > 5 ? 1 : 0));
  if (value === null) {
    context.fillStyle = paints.mark;
    context.fillRect(x + width / 2 - 1, y + height / 2 - 1, 2, 2);
  } else if (value < limit) {
    context.strokeStyle = shade <= lastOver ? paints.over : paints.mark;
    context.lineWidth = 1.4;
    context.beginPath();
    context.moveTo(x + width * 0.2, y + height * 0.82);
    context.lineTo(x + width * 0.8, y + height * 0.18);
    context.stroke();
  }
}

// ramp are the shades: one hue, so that they are in order for every eye, and on grey paper too.
function ramp() {
  const [low, high] = ["heat-low", "heat-high"].map((name) => rgb(paint(name)));
  return {
    shades: Array.from({ length: shades }, (_, i) => mix(low, high, i / (shades - 1))),
    unknown: "transparent",
    mark: colour("text"),
    over: paint("heat-over"),
  };
}

function rgb(hex) {
  return [1, 3, 5].map((i) => parseInt(hex.slice(i, i + 2), 16));
}

function mix(low, high, share) {
  return `rgb(${low.map((value, i) => Math.round(value + share * (high[i] - value))).join(",")})`;
}

// names are those of as many rows as have room.
function names(context, map) {
  const { color, fontSize, fontFamily } = text();
  const size = Math.min(fontSize, 13);
  context.font = `${size}px ${fontFamily}`;
  context.fillStyle = color;
  context.textAlign = "right";
  context.textBaseline = "middle";
  const { left, top, bottom, rows } = map.area();
  const every = Math.ceil(rows * size * 1.15 / (bottom - top));
  for (let row = 0; row < rows && row < map.cells.values.length; row += every) {
    context.fillText(shortened(context, map.cells.first(row), left - 6), left - 4, (map.top(row) + map.top(row + 1)) / 2);
  }
}

function shortened(context, name, width) {
  let shown = name;
  while (shown.length > 1 && context.measureText(shown).width > width) {
    shown = `${shown.slice(0, shown.endsWith("…") ? -2 : -1)}…`;
  }
  return shown;
}

function frequencies(context, map) {
  const { fontSize } = text();
  context.font = context.font.replace(/^[\d.]+px/, `${fontSize}px`);
  context.textBaseline = "top";
  context.textAlign = "center";
  const { right, bottom } = map.area();
  let free = -Infinity;
  for (const hz of map.axis.ticks) {
    const label = number(hz);
    const half = context.measureText(label).width / 2;
    const x = map.pixel(hz);
    if (x - half > free && x + half < map.canvas.clientWidth) {
      context.fillText(label, x, bottom + 5);
      free = x + half + 8;
    }
  }
  context.textAlign = "left";
  context.textBaseline = "middle";
  context.fillText("Hz", right + 3, bottom);
}

// paintKey paints the shades with their numbers, and how a stroke looks.
export function paintKey(canvas, limit) {
  const { color, fontSize, fontFamily } = text();
  const [width, height] = [fontSize * 15, fontSize * 2.2];
  const context = sized(canvas, width, height);
  const paints = ramp();
  const each = (width - fontSize) / shades;
  context.font = `${fontSize * 0.85}px ${fontFamily}`;
  context.textAlign = "center";
  context.textBaseline = "top";
  for (let i = 0; i < shades; i++) {
    const value = i / (shades - 1);
    cell(context, { x: i * each, y: 0, width: each, height: height * 0.5, value, limit }, paints);
    if (i % 2 === 0) {
      context.fillStyle = color;
      context.fillText(String(value), i * each + each / 2, height * 0.55);
    }
  }
}

// sized readies a canvas of so many pixels of the page.
function sized(canvas, width, height) {
  const ratio = devicePixelRatio;
  canvas.width = Math.round(width * ratio);
  canvas.height = Math.round(height * ratio);
  canvas.style.width = `${width}px`;
  canvas.style.height = `${height}px`;
  const context = canvas.getContext("2d");
  context.scale(ratio, ratio);
  return context;
}
