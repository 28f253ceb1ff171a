// The eye: where it stands, where it looks, and how places fall on the picture.
//
// Yaw is the heading from the building's y axis towards x, pitch is positive looking down; radians. The eye
// stands `distance` mm before the target, which lies in the middle of the picture. Pixels are CSS pixels, y down.

const FIELD = Math.tan((17.5 * Math.PI) / 180); // half the field of view, up and down
const UPRIGHT = Math.PI / 2;
/** True isometric: all three axes foreshortened alike. */
const ISOMETRIC_PITCH = Math.asin(1 / Math.sqrt(3));

/** The standard views: [name, label, yaw, pitch]. */
const STANDARD_VIEWS = [
  ['front', 'Front', 0, 0],
  ['back', 'Back', Math.PI, 0],
  ['left', 'Left', UPRIGHT, 0],
  ['right', 'Right', -UPRIGHT, 0],
  ['plan', 'Plan', 0, UPRIGHT],
  ['isometric', 'Isometric', Math.PI / 4, ISOMETRIC_PITCH],
];

class Camera {
  constructor() {
    this.yaw = 0.66;
    this.pitch = 0.42;
    this.target = [0, 0, 0];
    this.distance = 50000;
    this.parallel = false;
    this.width = 1;
    this.height = 1;
  }

  copy() {
    return Object.assign(new Camera(), this, { target: [...this.target] });
  }

  /** The axes of the picture in local axes: right, up, and away from the eye. */
  axes() {
    const away = [
      Math.cos(this.pitch) * Math.sin(this.yaw),
      Math.cos(this.pitch) * Math.cos(this.yaw),
      -Math.sin(this.pitch),
    ];
    const right = [Math.cos(this.yaw), -Math.sin(this.yaw), 0];
    return { right, up: cross(right, away), away };
  }

  eye() {
    return sub(this.target, times(this.axes().away, this.distance));
  }

  /** How many mm one pixel shows at `depth` mm before the eye (at the target where not given). */
  scale(depth = this.distance) {
    return (2 * FIELD * (this.parallel ? this.distance : Math.max(depth, 1))) / this.height;
  }

  /** Depth of a place before the eye, mm. */
  depth(place) {
    return dot(sub(place, this.target), this.axes().away) + this.distance;
  }

  /** Gives the matrix to clip space, its near and far planes tight around a box, and those two depths. */
  matrix(box) {
    const { right, up, away } = this.axes();
    const depths = boxCorners(box).map((corner) => this.depth(corner));
    const most = Math.max(...depths);
    const least = Math.min(...depths);
    let near = least - 1;
    const far = Math.max(most, least + 1) + 1;
    // With 24 bits of depth a ratio of 4000 keeps sheets 2 mm thick apart where the eye is among them.
    if (!this.parallel) near = Math.max(near, far / 4000, 5);
    const end = Math.max(far, near + 10);
    const eye = this.eye();
    const look = [];
    for (let axis = 0; axis < 3; axis++) look.push(right[axis], up[axis], -away[axis], 0);
    look.push(-dot(right, eye), -dot(up, eye), dot(away, eye), 1);
    const aspect = this.width / this.height;
    const lens = new Array(16).fill(0);
    if (this.parallel) {
      lens[0] = 1 / (FIELD * aspect * this.distance);
      lens[5] = 1 / (FIELD * this.distance);
      lens[10] = -2 / (end - near);
      lens[14] = -(end + near) / (end - near);
      lens[15] = 1;
    } else {
      lens[0] = 1 / (FIELD * aspect);
      lens[5] = 1 / FIELD;
      lens[10] = -(end + near) / (end - near);
      lens[11] = -1;
      lens[14] = (-2 * end * near) / (end - near);
    }
    return { toClip: product(lens, look), near, far: end };
  }

  /** Where a place falls on the picture: [x, y, depth]; depth is below 0 behind the eye. */
  project(place) {
    const { right, up, away } = this.axes();
    const from = sub(place, this.target);
    const depth = dot(from, away) + this.distance;
    const scale = this.parallel ? this.scale() : (2 * FIELD * depth) / this.height;
    return [
      this.width / 2 + dot(from, right) / scale,
      this.height / 2 - dot(from, up) / scale,
      this.parallel ? Math.max(depth, 1) : depth,
    ];
  }

  /** The line of sight through a pixel: {origin, direction}, direction of length 1 mm. */
  ray(x, y) {
    const { right, up, away } = this.axes();
    const scale = this.scale();
    const across = add(times(right, (x - this.width / 2) * scale), times(up, (this.height / 2 - y) * scale));
    if (this.parallel)
      return { origin: sub(add(this.target, across), times(away, this.distance + 1e6)), direction: away };
    const origin = this.eye();
    return { origin, direction: unit(sub(add(this.target, across), origin)) };
  }

  /** Turns about a place that stays where it is on the picture; radians. */
  orbit(yaw, pitch, pivot) {
    const before = this.axes();
    const from = sub(this.target, pivot);
    const parts = [dot(from, before.right), dot(from, before.up), dot(from, before.away)];
    this.yaw += yaw;
    this.pitch = clamp(this.pitch + pitch, -UPRIGHT, UPRIGHT);
    const { right, up, away } = this.axes();
    this.target = add(pivot, add(times(right, parts[0]), add(times(up, parts[1]), times(away, parts[2]))));
  }

  /** Moves the picture by pixels, exact for places `depth` mm before the eye. */
  pan(x, y, depth = this.distance) {
    const { right, up } = this.axes();
    const scale = this.scale(depth);
    this.target = add(this.target, add(times(right, -x * scale), times(up, y * scale)));
  }

  /** Comes nearer (factor below 1) or goes back, while a place stays where it is on the picture. */
  zoom(factor, anchor) {
    const distance = clamp(this.distance * factor, 50, 5e6);
    const share = distance / this.distance;
    this.target = add(anchor, times(sub(this.target, anchor), share));
    this.distance = distance;
  }

  /**
   * Looks at the whole of a box with a margin, from where it looks now; some pixels at the left, at the right
   * and below are left free.
   *
   * With x to the right and z towards the eye, a corner is inside the right edge of the picture, whose slope is
   * k, where x - ex <= k (distance - z). The corners that bind on both sides give the nearest eye.
   */
  fit(box, margin = 1.07, covered = {}) {
    const { right, up, away } = this.axes();
    const free = (pixels = 0, all = 1) => 1 - (2 * pixels) / all;
    const middle = times(add(box.low, box.high), 0.5);
    const corners = boxCorners(box).map((corner) => sub(corner, middle));
    const most = (axis, slope) =>
      Math.max(...corners.map((from) => dot(from, axis) - (this.parallel ? 0 : slope * dot(from, away))));
    const half = (FIELD * this.width) / this.height / margin;
    const sides = [
      {
        axis: right,
        ahead: half * free(covered.right, this.width),
        behind: half * free(covered.left, this.width),
      },
      { axis: up, ahead: FIELD / margin, behind: (FIELD / margin) * free(covered.below, this.height) },
    ].map((side) => ({ ...side, most: most(side.axis, side.ahead), least: most(times(side.axis, -1), side.behind) }));
    this.distance = Math.max(300, ...sides.map((side) => (side.most + side.least) / (side.ahead + side.behind)));
    // What room is left is shared by both sides.
    const shifts = sides.map((side) => (side.most - side.least + this.distance * (side.behind - side.ahead)) / 2);
    this.target = add(middle, add(times(right, shifts[0]), times(up, shifts[1])));
  }
}

/** Gives the camera a share of the way from one to another; the heading turns the short way round. */
function between(from, to, share) {
  const made = to.copy();
  const turn = Math.atan2(Math.sin(to.yaw - from.yaw), Math.cos(to.yaw - from.yaw));
  made.yaw = from.yaw + turn * share;
  made.pitch = from.pitch + (to.pitch - from.pitch) * share;
  made.target = mix(from.target, to.target, share);
  made.distance = from.distance * (to.distance / from.distance) ** share;
  return made;
}
