// The stage: canvas, camera and renderer together. It draws when something changed, and at no other time.

/** Reads a colour of the style sheet, such as --paper, as three numbers 0 to 1. */
function styleColour(name) {
  const text = getComputedStyle(document.documentElement).getPropertyValue(name).trim();
  return [1, 3, 5].map((at) => parseInt(text.slice(at, at + 2), 16) / 255);
}

/**
 * Gives the stage.
 * @param model the unpacked model  @param state see state.js  @param cuts see cuts.js
 */
function createStage(model, state, cuts) {
  const canvas = byId('canvas');
  const camera = new Camera();
  const still = matchMedia('(prefers-reduced-motion: reduce)');
  const solids = solidBuffers(model);
  const colours = new Uint8Array(3 * model.pieces.count);
  const drawn = []; // called after each picture
  let renderer = null;
  let theme = null;
  let shownBox = model.box;
  let drawnPieces = state.shown;
  let waiting = false;
  let flight = null;
  let restTimer = 0;
  let resting = true;
  let lastFrame = 0; // when the last picture of a movement was asked for, ms
  let hurried = false;

  const stage = {
    canvas,
    camera,
    model,
    /** How many pictures were drawn. */
    frames: 0,
    get renderer() {
      return renderer;
    },
    /** How many pieces are shown and not wholly cut away. */
    drawnCount: () => drawnPieces.reduce((sum, each) => sum + (each ? 1 : 0), 0),
    get idle() {
      return !waiting && !flight && resting;
    },
    onDraw: (call) => drawn.push(call),

    /** Asks for a picture. `moving` allows a slow machine to leave out the edges until the movement ends. */
    redraw(moving = false) {
      if (moving) {
        resting = false;
        clearTimeout(restTimer);
        restTimer = setTimeout(() => {
          resting = true;
          stage.redraw();
        }, 140);
      }
      if (waiting || !renderer) return;
      waiting = true;
      requestAnimationFrame(() => {
        waiting = false;
        drawNow();
      });
    },
    /** Tells the camera the size of the canvas; gives whether it changed. */
    resize() {
      const box = canvas.getBoundingClientRect();
      const ratio = Math.min(window.devicePixelRatio || 1, 2.5);
      const width = Math.max(1, Math.round(box.width * ratio));
      const height = Math.max(1, Math.round(box.height * ratio));
      camera.width = Math.max(1, box.width);
      camera.height = Math.max(1, box.height);
      if (canvas.width === width && canvas.height === height) return false;
      canvas.width = width;
      canvas.height = height;
      return true;
    },
    /** Moves the camera to another in a short flight, or at once for who wants no motion. */
    fly(to) {
      if (still.matches || !renderer) {
        Object.assign(camera, to, { width: camera.width, height: camera.height });
        flight = null;
        stage.redraw();
        return;
      }
      flight = { from: camera.copy(), to, start: performance.now() };
      stage.redraw();
    },
    /** Looks at the shown pieces, or at those given, from where the eye is or from a standard view. */
    fit(pieces = null, view = null) {
      const to = camera.copy();
      if (view) [, , to.yaw, to.pitch] = STANDARD_VIEWS.find(([name]) => name === view);
      const whole = state.gridOn && !cuts.any && state.shownCount() === model.pieces.count;
      const box = pieces ? boxOf(model, pieces) : whole ? withGrid(shownBox) : leftBox();
      to.fit(box, pieces ? 1.35 : 1.05, covered());
      stage.fly(to);
    },
    /** Flies to a place, local axes, with about `reach` mm around it in view. */
    flyTo(place, reach = 1500) {
      const to = camera.copy();
      to.fit({ low: place.map((value) => value - reach), high: place.map((value) => value + reach) }, 1, covered());
      stage.fly(to);
    },
    setParallel(on) {
      camera.parallel = on;
      stage.redraw();
    },
    /** Stops a flight: the hand of the user takes over. */
    takeOver() {
      flight = null;
    },
    /** What the line of sight through a canvas pixel meets first among what is shown and left by the cuts. */
    meet: (x, y) => meetAny(model, drawnPieces, camera.ray(x, y), cuts.planes()),
    /** The piece at a canvas pixel by the numbers the graphics card draws; near it unless `exact`. */
    pieceAt(x, y, exact = false) {
      if (!renderer) return null;
      const ratio = canvas.width / camera.width;
      const found = renderer.pieceAt(scene(), Math.floor(x * ratio), Math.floor(y * ratio), exact);
      return found && { piece: found.piece, x: x + found.dx / ratio, y: y + found.dy / ratio };
    },
    frameTimes: (count, separately) => renderer.frameTimes(scene(), count, separately),
    filledShare: () => renderer.filledShare(scene()),
    readTheme() {
      const [r, g, b] = styleColour('--grid-line');
      theme = {
        paper: styleColour('--paper'),
        ink: styleColour('--edge'),
        accent: styleColour('--accent'),
        accentInk: styleColour('--accent-edge'),
        cut: styleColour('--cut'),
        grid: [r, g, b, 0.85],
        edge: parseFloat(getComputedStyle(document.documentElement).getPropertyValue('--edge-strength')),
      };
      stage.redraw();
    },
  };

  /** The box of what is shown, as far as the cuts leave it. */
  function leftBox() {
    const box = { low: [...shownBox.low], high: [...shownBox.high] };
    for (const [x, y, z, w] of cuts.planes()) {
      const axis = [x, y, z].findIndex((value) => value !== 0);
      const at = -w / [x, y, z][axis];
      const side = [x, y, z][axis] > 0 ? 'low' : 'high';
      box[side][axis] = clamp(at, shownBox.low[axis], shownBox.high[axis]);
    }
    return box;
  }

  /**
   * How many pixels of the picture are covered: at the right by the card of the selection, at the left by the
   * list of measurements, below by the scale and what is said.
   */
  function covered() {
    const box = canvas.getBoundingClientRect();
    const card = byId('details').getBoundingClientRect();
    const list = byId('measure-panel').getBoundingClientRect();
    const most = 0.4 * box.width;
    const over = card.width > 0 && card.left > box.left && card.top < box.bottom && card.left < box.right;
    return {
      left: list.width > 0 ? Math.min(list.right - box.left, most) : 0,
      right: over ? Math.min(box.right - card.left, most) : 0,
      below: Math.min(36, box.height / 8),
    };
  }

  /** A box widened to hold the lines of the grid as well. */
  function withGrid(box) {
    const { x, y } = model.grid;
    const low = sub([x[0] - GRID_REACH, y[0] - GRID_REACH, 0], model.middle);
    const high = sub([x[x.length - 1] + GRID_REACH, y[y.length - 1] + GRID_REACH, 0], model.middle);
    return {
      low: box.low.map((value, axis) => Math.min(value, low[axis])),
      high: box.high.map((value, axis) => Math.max(value, high[axis])),
    };
  }

  function scene() {
    const { toClip, near, far } = camera.matrix(state.gridOn ? withGrid(shownBox) : shownBox);
    const { right, up, away } = camera.axes();
    const eye = camera.parallel ? [...times(away, -1), 0] : [...camera.eye(), 1];
    const from = camera.parallel ? near + dot(camera.eye(), away) : near;
    const ratio = canvas.width / camera.width;
    return {
      toClip,
      eye,
      right,
      up,
      theme,
      cuts: cuts.planes(),
      haze: [from, from + (far - near)],
      mmAtOne: (camera.parallel ? camera.scale() : camera.scale(1)) / ratio,
      grid: state.gridOn,
      edges: resting || !hurried,
    };
  }

  function drawNow() {
    if (!renderer) return;
    if (flight) {
      const share = clamp((performance.now() - flight.start) / 420, 0, 1);
      const eased = share * share * (3 - 2 * share);
      const { width, height } = camera;
      Object.assign(camera, between(flight.from, flight.to, eased), { width, height });
      if (share === 1) flight = null;
    }
    stage.resize();
    // Pictures that follow one another slowly while the model moves are drawn without edges.
    const now = performance.now();
    if (!resting && now - lastFrame < 1000) hurried = now - lastFrame > (hurried ? 25 : 60);
    lastFrame = now;
    renderer.draw(scene());
    stage.frames++;
    for (const call of drawn) call();
    if (flight) stage.redraw();
  }

  function fillColours() {
    for (const { colour, pieces } of COLOURINGS[state.colourBy].entries(model)) {
      for (const piece of pieces) colours.set(colour, 3 * piece);
    }
  }

  function fillPieces() {
    const planes = cuts.planes();
    drawnPieces = state.shown.map((on, piece) => (on ? leftOf(model, piece, planes) : 0));
    renderer?.setPieces(drawnPieces, colours, state.selected);
    stage.redraw();
  }

  function start() {
    renderer = createRenderer(canvas, model, solids);
    byId('no-webgl').hidden = renderer !== null;
    for (const id of ['canvas', 'labels', 'scale', 'measure-drawing'])
      byId(id).toggleAttribute('hidden', renderer === null);
    if (!renderer) return;
    renderer.setGrid(gridLines(model).flatMap((line) => [line.from, line.to]));
    fillPieces();
  }

  canvas.addEventListener('webglcontextlost', (event) => {
    event.preventDefault();
    renderer = null;
    byId('lost').hidden = false;
  });
  canvas.addEventListener('webglcontextrestored', () => {
    byId('lost').hidden = true;
    start();
  });
  state.on('shown', () => {
    const pieces = [];
    state.shown.forEach((on, piece) => on && pieces.push(piece));
    shownBox = boxOf(model, pieces);
    fillPieces();
  });
  state.on('selection', fillPieces);
  state.on('colour', () => {
    fillColours();
    fillPieces();
  });
  state.on('cuts', fillPieces);
  state.on('grid', () => stage.redraw());
  state.on('theme', () => stage.readTheme());
  new ResizeObserver(() => stage.redraw()).observe(canvas);

  stage.resize();
  stage.readTheme();
  fillColours();
  start();
  camera.fit(withGrid(shownBox), 1.0, covered());
  stage.redraw();
  return stage;
}
