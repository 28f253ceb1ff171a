// Vectors of three numbers as arrays, and 4 x 4 matrices as arrays of 16, column after column. Lengths in mm.

/** @typedef {number[]} Vec three numbers */

const add = (a, b) => [a[0] + b[0], a[1] + b[1], a[2] + b[2]];
const sub = (a, b) => [a[0] - b[0], a[1] - b[1], a[2] - b[2]];
const times = (a, k) => [a[0] * k, a[1] * k, a[2] * k];
const dot = (a, b) => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
const cross = (a, b) => [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]];
const size = (a) => Math.sqrt(dot(a, a));
const unit = (a) => times(a, 1 / (size(a) || 1));
const mix = (a, b, share) => add(a, times(sub(b, a), share));
const clamp = (value, low, high) => Math.min(Math.max(value, low), high);

/** Gives the product of two matrices: first `b`, then `a`. */
function product(a, b) {
  const result = new Array(16);
  for (let column = 0; column < 4; column++) {
    for (let row = 0; row < 4; row++) {
      let sum = 0;
      for (let k = 0; k < 4; k++) sum += a[4 * k + row] * b[4 * column + k];
      result[4 * column + row] = sum;
    }
  }
  return result;
}

/** A box that holds nothing yet: `low` and `high` corner in mm. */
const emptyBox = () => ({ low: [Infinity, Infinity, Infinity], high: [-Infinity, -Infinity, -Infinity] });

/** Gives the eight corners of a box. */
function boxCorners(box) {
  const corners = [];
  for (let pick = 0; pick < 8; pick++) {
    corners.push([0, 1, 2].map((axis) => ((pick >> axis) & 1 ? box.high : box.low)[axis]));
  }
  return corners;
}
