// Mouse, touch and keys on the model.

const TAP_REACH = 5; // pixels a pointer may wander while it still is a tap

/**
 * Lets the pointer turn, move and zoom the model.
 * @param call {tap(x, y, extend), open(x, y) for a double tap, hover(x, y)} in canvas pixels
 */
function listenToPointer(stage, call) {
  const { canvas, camera } = stage;
  const down = new Map();
  let start = null;
  let gesture = null;

  const spot = (event) => {
    const box = canvas.getBoundingClientRect();
    return [event.clientX - box.left, event.clientY - box.top];
  };
  /** The place under a pixel, or the one in the plane of the target where nothing is there. */
  const anchorAt = (x, y) => {
    const met = stage.meet(x, y);
    if (met) return met.point;
    const { right, up } = camera.axes();
    const scale = camera.scale();
    return add(
      camera.target,
      add(times(right, (x - camera.width / 2) * scale), times(up, (camera.height / 2 - y) * scale)),
    );
  };
  const middleOf = (spots) => [(spots[0][0] + spots[1][0]) / 2, (spots[0][1] + spots[1][1]) / 2];
  const apart = (spots) => Math.max(1, Math.hypot(spots[0][0] - spots[1][0], spots[0][1] - spots[1][1]));

  function beginPinch() {
    const spots = [...down.values()];
    const [x, y] = middleOf(spots);
    gesture = { kind: 'pinch', middle: [x, y], apart: apart(spots), anchor: anchorAt(x, y) };
  }

  canvas.addEventListener('pointerdown', (event) => {
    canvas.setPointerCapture(event.pointerId);
    canvas.focus({ preventScroll: true });
    down.set(event.pointerId, spot(event));
    stage.takeOver();
    if (down.size === 1) {
      const [x, y] = spot(event);
      start = { x, y, time: performance.now(), moved: false };
      const move = event.button === 1 || event.button === 2 || event.shiftKey;
      gesture = { kind: move ? 'pan' : 'orbit', last: [x, y], anchor: null, extend: event.ctrlKey || event.metaKey };
    } else if (down.size === 2) {
      start = null;
      beginPinch();
    }
    event.preventDefault();
  });

  canvas.addEventListener('pointermove', (event) => {
    const [x, y] = spot(event);
    if (!down.has(event.pointerId)) {
      if (event.pointerType !== 'touch') call.hover(x, y);
      return;
    }
    down.set(event.pointerId, [x, y]);
    if (!gesture) return;
    if (gesture.kind === 'pinch') {
      if (down.size < 2) return;
      const spots = [...down.values()];
      const middle = middleOf(spots);
      camera.pan(middle[0] - gesture.middle[0], middle[1] - gesture.middle[1], camera.depth(gesture.anchor));
      camera.zoom(gesture.apart / apart(spots), gesture.anchor);
      Object.assign(gesture, { middle, apart: apart(spots) });
      stage.redraw(true);
      return;
    }
    if (start && !start.moved && Math.hypot(x - start.x, y - start.y) < TAP_REACH) return;
    if (start && !start.moved) {
      start.moved = true;
      gesture.anchor = anchorAt(start.x, start.y);
      gesture.last = [start.x, start.y];
    }
    const [dx, dy] = [x - gesture.last[0], y - gesture.last[1]];
    gesture.last = [x, y];
    if (gesture.kind === 'pan') camera.pan(dx, dy, camera.depth(gesture.anchor));
    else camera.orbit(dx * 0.0062, dy * 0.0062, gesture.anchor);
    stage.redraw(true);
  });

  const end = (event) => {
    const tapped = start && !start.moved && down.size === 1 && event.type === 'pointerup' && event.button !== 2;
    down.delete(event.pointerId);
    if (tapped) call.tap(start.x, start.y, gesture?.extend || event.shiftKey);
    start = null;
    gesture = null;
    if (down.size === 1) {
      // One finger stays after a pinch: it turns the model from where it is.
      const [left] = down.values();
      gesture = { kind: 'orbit', last: left, anchor: anchorAt(...left), extend: false };
    }
  };
  canvas.addEventListener('pointerup', end);
  canvas.addEventListener('pointercancel', end);
  canvas.addEventListener('dblclick', (event) => call.open(...spot(event)));
  canvas.addEventListener('contextmenu', (event) => event.preventDefault());

  let wheel = null;
  canvas.addEventListener(
    'wheel',
    (event) => {
      event.preventDefault();
      stage.takeOver();
      const [x, y] = spot(event);
      const now = performance.now();
      // One place holds for one turn of the wheel, so that the zoom goes straight to it.
      if (!wheel || now - wheel.time > 400 || Math.hypot(wheel.x - x, wheel.y - y) > 3)
        wheel = { anchor: anchorAt(x, y), x, y };
      wheel.time = now;
      const lines = event.deltaMode === 1 ? 30 : event.deltaMode === 2 ? 400 : 1;
      camera.zoom(Math.exp(clamp(event.deltaY * lines, -300, 300) * 0.0016), wheel.anchor);
      stage.redraw(true);
    },
    { passive: false },
  );
}

/** Keys that move the eye while the model has the focus; gives whether the key was one of them. */
function moveByKey(stage, event) {
  const { camera } = stage;
  const arrows = { ArrowLeft: [1, 0], ArrowRight: [-1, 0], ArrowUp: [0, 1], ArrowDown: [0, -1] };
  if (event.key in arrows) {
    const [x, y] = arrows[event.key];
    if (event.shiftKey) camera.pan(x * 60, y * 60);
    else camera.orbit(x * 0.12, y * 0.12, camera.target);
  } else if (event.key === '+' || event.key === '=') camera.zoom(0.8, camera.target);
  else if (event.key === '-' || event.key === '_') camera.zoom(1.25, camera.target);
  else return false;
  stage.takeOver();
  stage.redraw(true);
  return true;
}
