// Lines of the grid and their labels, and the scale. Labels are HTML over the canvas; those that would collide
// stay away.

/** How far lines of the grid run beyond the outermost ones, mm. */
const GRID_REACH = 4200;
const BUBBLE = 26; // pixels across

/** Gives the lines of the grid on the floor: {label, axis, from, to} in local axes, mm. */
function gridLines(model) {
  const { letters, x, numbers, y } = model.grid;
  const reach = GRID_REACH - 900;
  const local = (a, b) => sub([a, b, 0], model.middle);
  const across = letters.map((label, index) => ({
    label,
    axis: 0,
    from: local(x[index], y[0] - reach),
    to: local(x[index], y[y.length - 1] + reach),
  }));
  const along = numbers.map((label, index) => ({
    label,
    axis: 1,
    from: local(x[0] - reach, y[index]),
    to: local(x[x.length - 1] + reach, y[index]),
  }));
  return [...across, ...along];
}

/** Which of the labels of one end of a row of lines find room: all, every second, every fifth ... or none. */
function withRoom(places) {
  if (places.length < 2) return places.map(() => true);
  const near = (a, b) => Math.hypot(a[0] - b[0], a[1] - b[1]) < BUBBLE + 2;
  if (near(places[0], places[places.length - 1])) return places.map(() => false);
  const last = places.length - 1;
  for (const step of [1, 2, 5, 10, 20, 50, 100]) {
    const kept = places.map((_, index) => index % step === 0 || index === last);
    const chosen = places.filter((_, index) => kept[index]);
    // The last one counts more than its neighbour in the row of steps.
    if (step > 1 && chosen.length > 2 && near(chosen[chosen.length - 2], places[last])) {
      kept[last - (last % step || step)] = false;
    }
    const left = places.filter((_, index) => kept[index]);
    if (left.every((place, index) => index === 0 || !near(place, left[index - 1]))) return kept;
  }
  return places.map((_, index) => index === 0 || index === last);
}

/** Whether a box stands between the eye and a place; no box does when the eye is inside it. */
function isBehind(box, camera, place) {
  const { away } = camera.axes();
  const from = camera.parallel ? sub(place, times(away, 1e6)) : camera.eye();
  const way = sub(place, from);
  let [first, last] = [0, 1];
  for (let axis = 0; axis < 3; axis++) {
    const step = way[axis] || 1e-9;
    const ends = [(box.low[axis] - from[axis]) / step, (box.high[axis] - from[axis]) / step];
    first = Math.max(first, Math.min(...ends));
    last = Math.min(last, Math.max(...ends));
  }
  return first > 0 && first < last;
}

/** Puts labels at both ends of every line of the grid, and keeps the scale bar true. */
function createLabels(stage, state) {
  const layer = byId('labels');
  const lines = gridLines(stage.model);
  const rows = [0, 1].flatMap((axis) =>
    ['from', 'to'].map((end) =>
      lines
        .filter((line) => line.axis === axis)
        .map((line) => {
          const bubble = element('div', { class: 'bubble', data: { grid: line.label } }, line.label);
          layer.append(bubble);
          const way = unit(sub(line[end], end === 'from' ? line.to : line.from));
          return { bubble, line, place: add(line[end], times(way, 700)) };
        }),
    ),
  );

  function place() {
    const { camera } = stage;
    const taken = [];
    for (const row of rows) {
      const places = row.map(({ place }) => camera.project(place));
      const room = withRoom(places);
      // A line that is looked along is a point on the floor: its label hangs below.
      const endOn = row.map(({ line }) => {
        const [a, b] = [camera.project(line.from), camera.project(line.to)];
        return Math.hypot(a[0] - b[0], a[1] - b[1]) < 2 * BUBBLE;
      });
      row.forEach(({ bubble, place }, index) => {
        const [x, , depth] = places[index];
        const y = places[index][1] + (endOn[index] ? BUBBLE * 0.9 : 0);
        const inside = depth > 0 && x > 14 && y > 14 && x < camera.width - 14 && y < camera.height - 14;
        const free =
          inside &&
          room[index] &&
          state.gridOn &&
          !isBehind(stage.model.box, camera, place) &&
          taken.every(([a, b]) => Math.hypot(a - x, b - y) > BUBBLE + 1);
        if (free) taken.push([x, y]);
        bubble.hidden = !free;
        if (free) pin(bubble, x, y);
      });
    }
  }

  /** A bar of a round length of about a hundred pixels, as long as it is at the middle of the picture. */
  function measureScale() {
    const bar = byId('scale-bar');
    const most = 130 * stage.camera.scale();
    const power = 10 ** Math.floor(Math.log10(most));
    const length = [5, 2, 1].map((each) => each * power).find((each) => each <= most) ?? power;
    bar.style.width = `${(length / stage.camera.scale()).toFixed(1)}px`;
    byId('scale-text').textContent = length >= 1000 ? `${written(length / 1000)} m` : `${written(length)} mm`;
    byId('scale').title = stage.camera.parallel ? 'Scale of the picture' : 'Scale at the middle of the picture';
  }

  stage.onDraw(() => {
    place();
    measureScale();
  });
}
