// What tests ask of the page, as window.shedView. Not used by the page itself.

/** What a test needs to know of the page. Pixels are those of the page, places are mm in building axes. */
function testHandle({ model, state, stage, cuts, measure }) {
  const box = () => stage.canvas.getBoundingClientRect();
  const index = (key) => {
    const piece = model.pieces.keys.indexOf(key);
    if (piece < 0) throw new Error(`no piece ${key}`);
    return piece;
  };
  return {
    pieceCount: model.pieces.count,
    keys: model.pieces.keys,
    get visibleCount() {
      return state.shownCount();
    },
    /** Pieces shown and not wholly cut away. */
    get drawnCount() {
      return stage.drawnCount();
    },
    get drawCalls() {
      return stage.renderer?.drawCalls ?? 0;
    },
    get frames() {
      return stage.frames;
    },
    get selection() {
      return Array.from(state.selected, (piece) => model.pieces.keys[piece]);
    },
    get cuts() {
      return cuts.axes.map(({ name, on, at, keep, depth }) => ({ axis: name, on, at, keep, depth }));
    },
    get colourBy() {
      return state.colourBy;
    },
    get theme() {
      return document.documentElement.dataset.theme;
    },
    get measurements() {
      return measure.done.map(({ distance, dx, dy, dz, faces, a, b }) => ({
        distance,
        dx,
        dy,
        dz,
        faces,
        kinds: [a.kind, b.kind],
      }));
    },
    get camera() {
      const { yaw, pitch, distance, parallel, target } = stage.camera;
      return { yaw, pitch, distance, parallel, target: add(target, model.middle) };
    },
    /** The page pixel of a place, or null when it is behind the eye. */
    projectPlace(place) {
      const [x, y, depth] = stage.camera.project(sub(place, model.middle));
      return depth > 0 ? [x + box().left, y + box().top] : null;
    },
    /** The page pixel of the middle of a piece's box. */
    project: (key) => {
      const piece = index(key);
      const { low, high } = model.pieces;
      const middle = [0, 1, 2].map((axis) => (low[3 * piece + axis] + high[3 * piece + axis]) / 2);
      return window.shedView.projectPlace(add(middle, model.middle));
    },
    /** A page pixel where the piece is seen, nearest to its middle, or null when it is nowhere seen. */
    spotOf(key) {
      const piece = index(key);
      const { mesh } = model.parts[model.pieces.part[piece]];
      const planes = cuts.planes();
      const middle = [0, 1, 2].map(
        (axis) => (model.pieces.low[3 * piece + axis] + model.pieces.high[3 * piece + axis]) / 2,
      );
      const spots = [];
      for (let at = 0; at < mesh.triangles.length; at += 3) {
        const corners = [0, 1, 2].map((corner) =>
          carried(
            model,
            piece,
            Array.from(mesh.points.subarray(3 * mesh.triangles[at + corner], 3 * mesh.triangles[at + corner] + 3)),
          ),
        );
        for (const [u, v] of [
          [1, 1],
          [1, 4],
          [4, 1],
          [2, 3],
        ]) {
          const place = [0, 1, 2].map(
            (axis) => (corners[0][axis] * u + corners[1][axis] * v + corners[2][axis] * 2) / (u + v + 2),
          );
          if (isKept(place, planes)) spots.push([size(sub(place, middle)), place]);
        }
      }
      spots.sort((a, b) => a[0] - b[0]);
      for (const [, place] of spots.slice(0, 120)) {
        const [x, y, depth] = stage.camera.project(place);
        if (
          depth > 0 &&
          x > 0 &&
          y > 0 &&
          x < stage.camera.width &&
          y < stage.camera.height &&
          stage.pieceAt(x, y, true)?.piece === piece
        )
          return [x + box().left, y + box().top];
      }
      return null;
    },
    /** The key under a page pixel by the numbers the card draws, or null. */
    keyAt(x, y) {
      const found = stage.pieceAt(x - box().left, y - box().top, true);
      return found ? model.pieces.keys[found.piece] : null;
    },
    /** The same by the line of sight: {key, place, normal, cut} or null. */
    meetAt(x, y) {
      const met = stage.meet(x - box().left, y - box().top);
      return (
        met && {
          key: model.pieces.keys[met.piece],
          place: add(met.point, model.middle),
          normal: met.normal,
          cut: met.cut,
        }
      );
    },
    isShown: (key) => state.shown[index(key)] === 1,
    sortOn: (sort) => state.sortOn(sort),
    isCutAway: (key) => leftOf(model, index(key), cuts.planes()) === 0,
    /** Places of a piece's axis ends in building axes, mm. */
    ends: (key) => {
      const piece = index(key);
      return [0, model.parts[model.pieces.part[piece]].length].map((x) =>
        add(carried(model, piece, [x, 0, 0]), model.middle),
      );
    },
    select: (keys) => state.select(keys.map(index)),
    show: (keys, on = true) => state.show(keys.map(index), on),
    isolate: (keys) => state.isolate(keys.map(index)),
    showAll: () => state.showAll(),
    cut: (axis, change) => cuts.set('xyz'.indexOf(axis), change),
    look: (view) => stage.fit(null, view),
    fit: (keys) => stage.fit(keys ? keys.map(index) : null),
    filledShare: () => stage.filledShare(),
    frameTimes: (count, separately = false) => stage.frameTimes(count, separately),
    /** Resolves when nothing moves and the last picture is drawn. */
    async settle() {
      while (!stage.idle) await new Promise((done) => setTimeout(done, 15));
      await new Promise((done) => requestAnimationFrame(() => setTimeout(done)));
    },
  };
}
