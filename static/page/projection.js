// Places in metres as seen along one axis.

const axes = ["x", "y", "z"];

// planes are the three views, as [axis to the right, axis up].
export const planes = [[0, 1], [0, 2], [1, 2]];

// name is what a view is called.
export function name([right, up]) {
  return axes[right] + axes[up];
}

// widest is the view of the two axes along which the places reach furthest.
export function widest(places) {
  const [thin] = [0, 1, 2].sort((a, b) => extent(places, a) - extent(places, b) || b - a);
  return planes.find((plane) => !plane.includes(thin));
}

function ends(places, axis) {
  const values = places.map(({ at_m: at }) => at[axis]);
  return [values.reduce((a, b) => Math.min(a, b), Infinity), values.reduce((a, b) => Math.max(a, b), -Infinity)];
}

function extent(places, axis) {
  const [low, high] = ends(places, axis);
  return high - low;
}

// shape is height over width of the view, between flat and square.
export function shape(places, [right, up]) {
  const wide = extent(places, right);
  return wide > 0 ? Math.min(Math.max(extent(places, up) / wide, 0), 1) : 1;
}

// fit places all in a box with room around, to scale: [x, y] in pixels, in the order of the places, and the
// pixels to a metre.
export function fit(places, [right, up], width, height, room) {
  const [left, rightEnd] = ends(places, right);
  const [low, high] = ends(places, up);
  const scale = Math.min((width - 2 * room) / Math.max(rightEnd - left, 1e-9), (height - 2 * room) / Math.max(high - low, 1e-9));
  const bounded = Number.isFinite(scale) && (rightEnd > left || high > low) ? scale : 0;
  return {
    scale: bounded,
    at: places.map(({ at_m: at }) => [
      width / 2 + bounded * (at[right] - (left + rightEnd) / 2),
      height / 2 - bounded * (at[up] - (low + high) / 2),
    ]),
  };
}

// label finds for each dot the side on which its name of that width hides the least: dots and names that stand
// already keep their place, and leaving the box is bad only a little. It returns [x, y, anchor] of each name's baseline.
export function label(dots, widths, size, width, height) {
  const taken = dots.map(([x, y]) => [x - size * 0.8, y - size * 0.8, x + size * 0.8, y + size * 0.8]);
  return dots.map(([x, y], i) => {
    const w = widths[i];
    const sides = [
      [x + size, y + size * 0.35, "start", [x + size, y - size * 0.5, x + size + w, y + size * 0.5]],
      [x - size, y + size * 0.35, "end", [x - size - w, y - size * 0.5, x - size, y + size * 0.5]],
      [x, y - size, "middle", [x - w / 2, y - size * 2, x + w / 2, y - size]],
      [x, y + size * 1.8, "middle", [x - w / 2, y + size, x + w / 2, y + size * 2]],
    ];
    const out = ([left, top, right, bottom]) => left < 0 || top < 0 || right > width || bottom > height;
    const hidden = sides.map(([, , , box]) => taken.filter((other, n) => n !== i && meet(box, other)).length + 0.5 * Number(out(box)));
    const [nx, ny, anchor, box] = sides[hidden.indexOf(Math.min(...hidden))];
    taken.push(box);
    return [nx, ny, anchor];
  });
}

function meet(a, b) {
  return a[0] < b[2] && b[0] < a[2] && a[1] < b[3] && b[1] < a[3];
}
