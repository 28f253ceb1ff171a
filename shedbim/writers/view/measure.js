// Measuring between two points, or between two faces that are parallel. Distances in mm.

const PARALLEL = Math.cos((0.5 * Math.PI) / 180);

/** Gives the measuring tool; it draws into the overlay of the stage. */
function createMeasure(stage, state, cuts, say) {
  const button = byId('measure');
  const panel = byId('measure-panel');
  const list = byId('measure-list');
  const marker = byId('snap');
  const lineOf = byId('measure-line-template').content.firstElementChild;
  const drawing = byId('measure-drawing');
  const tool = { on: false, first: null, done: [] };
  let hoverAt = null;
  let asked = false;

  /** What is under a pixel: a corner or an edge near it, or a point of a face; with the normal of the face. */
  function spotAt(x, y) {
    let met = stage.meet(x, y);
    if (!met) {
      const near = stage.pieceAt(x, y);
      if (near) met = stage.meet(near.x, near.y);
    }
    if (!met) return null;
    const planes = cuts.planes();
    const snap =
      byId('measure-what').value === 'points' ? snapped(stage.model, met, stage.camera, planes, x, y, 11) : null;
    return {
      piece: met.piece,
      point: snap ? snap.point : met.point,
      kind: snap ? snap.kind : 'face',
      normal: met.normal,
    };
  }

  /** Gives what lies between two spots: straight distance and its parts along the axes, and between faces. */
  function result(a, b) {
    const step = sub(b.point, a.point);
    const facing = a.kind === 'face' && b.kind === 'face' && Math.abs(dot(a.normal, b.normal)) > PARALLEL;
    return {
      distance: size(step),
      dx: Math.abs(step[0]),
      dy: Math.abs(step[1]),
      dz: Math.abs(step[2]),
      faces: facing ? Math.abs(dot(step, a.normal)) : null,
    };
  }

  function setOn(on) {
    tool.on = on;
    tool.first = null;
    button.setAttribute('aria-pressed', String(on));
    panel.hidden = !on && !tool.done.length;
    marker.hidden = true;
    stage.canvas.classList.toggle('measuring', on);
    if (on) say('Measuring: pick two points');
    stage.redraw();
  }

  /** Takes a tap at a canvas pixel while the tool is on. */
  function tap(x, y) {
    const spot = spotAt(x, y);
    if (!spot) {
      say('Nothing there to measure from');
      return;
    }
    if (!tool.first) {
      tool.first = spot;
      say('First point taken; pick the second');
    } else {
      const made = {
        a: tool.first,
        b: spot,
        ...result(tool.first, spot),
        between: byId('measure-what').value,
        shape: lineOf.cloneNode(true),
      };
      made.text = element('div', { class: 'dimension' }, '');
      drawing.append(made.shape);
      byId('labels').append(made.text);
      tool.done.push(made);
      tool.first = null;
      show();
      const faces = made.faces === null ? '' : `, between the faces ${written(made.faces, 1)} mm`;
      say(`Distance ${written(made.distance, 1)} mm${faces}`);
    }
    stage.redraw();
  }

  function show() {
    list.replaceChildren(
      ...tool.done.map((each, index) => {
        const value = (label, mm) =>
          element('div', {}, element('dt', {}, label), element('dd', {}, `${written(mm, 1)} mm`));
        const values = [
          value('distance', each.distance),
          value('dx', each.dx),
          value('dy', each.dy),
          value('dz', each.dz),
        ];
        if (each.faces !== null) values.unshift(value('between faces', each.faces));
        else if (each.between === 'faces')
          values.unshift(element('p', { class: 'hint' }, 'These faces are not parallel.'));
        return element(
          'li',
          {},
          element('dl', { class: 'pairs' }, ...values),
          element(
            'button',
            { type: 'button', 'aria-label': `Remove measurement ${index + 1}`, onclick: () => remove(each) },
            'Remove',
          ),
        );
      }),
    );
    byId('measure-clear').hidden = !tool.done.length;
  }

  function remove(each) {
    each.shape.remove();
    each.text.remove();
    tool.done = tool.done.filter((other) => other !== each);
    show();
    stage.redraw();
  }

  function draw() {
    for (const each of tool.done) {
      const [a, b] = [each.a.point, each.b.point].map((point) => stage.camera.project(point));
      const seen = a[2] > 0 && b[2] > 0;
      each.shape.style.display = seen ? '' : 'none';
      each.text.hidden = !seen;
      if (!seen) continue;
      const [line, start, end] = each.shape.children;
      line.setAttribute('x1', a[0]);
      line.setAttribute('y1', a[1]);
      line.setAttribute('x2', b[0]);
      line.setAttribute('y2', b[1]);
      start.setAttribute('cx', a[0]);
      start.setAttribute('cy', a[1]);
      end.setAttribute('cx', b[0]);
      end.setAttribute('cy', b[1]);
      each.text.textContent = `${written(each.faces ?? each.distance, 1)} mm`;
      pin(each.text, (a[0] + b[0]) / 2, (a[1] + b[1]) / 2);
    }
    mark(tool.first ?? hoverAt);
  }

  function mark(spot) {
    const at = tool.on && spot ? stage.camera.project(spot.point) : null;
    marker.hidden = !at;
    if (!at) return;
    marker.dataset.kind = spot.kind;
    pin(marker, at[0], at[1]);
  }

  /** Shows what would be taken at a pixel. */
  function hover(x, y) {
    if (!tool.on || asked) return;
    asked = true;
    requestAnimationFrame(() => {
      asked = false;
      hoverAt = spotAt(x, y);
      mark(hoverAt ?? tool.first);
    });
  }

  function clear() {
    for (const each of [...tool.done]) remove(each);
    tool.first = null;
    panel.hidden = !tool.on;
  }

  button.addEventListener('click', () => setOn(!tool.on));
  byId('measure-clear').addEventListener('click', clear);
  byId('measure-close').addEventListener('click', () => {
    clear();
    setOn(false);
    button.focus();
  });
  stage.onDraw(draw);
  return Object.assign(tool, { setOn, tap, hover, clear });
}
