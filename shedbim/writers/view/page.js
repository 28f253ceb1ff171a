// The page itself: unpacks the model, puts the pieces together, listens to keys and switches.

/** Tells a screen reader, and whoever looks at the foot of the page, what happened. */
function say(text) {
  byId('say').textContent = text;
}

/** Lets one of some buttons be pressed and shows the panel that belongs to it. */
function createTabs(names) {
  const open = (name) => {
    for (const each of names) {
      byId(`tab-${each}`).setAttribute('aria-selected', String(each === name));
      byId(`tab-${each}`).tabIndex = each === name ? 0 : -1;
      byId(`panel-${each}`).hidden = each !== name;
    }
  };
  for (const name of names) byId(`tab-${name}`).addEventListener('click', () => open(name));
  byId('tabs').addEventListener('keydown', (event) => {
    const step = { ArrowRight: 1, ArrowLeft: -1 }[event.key];
    if (!step) return;
    event.stopPropagation();
    const offered = names.filter((name) => !byId(`tab-${name}`).hidden);
    const at = offered.findIndex((name) => byId(`tab-${name}`).getAttribute('aria-selected') === 'true');
    const next = offered[(at + step + offered.length) % offered.length];
    open(next);
    byId(`tab-${next}`).focus();
  });
  open(names[0]);
  return open;
}

/** Light, dark, or as the system has it. */
function createThemeSwitch(state) {
  const choice = byId('theme');
  const dark = matchMedia('(prefers-color-scheme: dark)');
  const apply = () => {
    const name = choice.value === 'system' ? (dark.matches ? 'dark' : 'light') : choice.value;
    document.documentElement.dataset.theme = name;
    state.tell('theme');
  };
  choice.addEventListener('change', apply);
  dark.addEventListener('change', apply);
  apply();
}

/** The list of colours: what each means, how many pieces have it; a line selects them. */
function createLegend(model, state) {
  const by = byId('colour-by');
  const offered = Object.entries(COLOURINGS).filter(([, each]) => each.offered(model));
  by.replaceChildren(...offered.map(([name, { label }]) => element('option', { value: name }, label)));
  by.addEventListener('change', () => state.setColour(by.value));
  const render = () => {
    by.value = state.colourBy;
    byId('legend').replaceChildren(...COLOURINGS[state.colourBy].entries(model).map(({ label, colour, pieces }) => {
      const swatch = element('span', { class: 'swatch', 'aria-hidden': 'true' });
      swatch.style.background = `rgb(${colour.join(' ')})`;
      return element('li', {}, element('button', { type: 'button', class: 'plain', title: 'Select these pieces', onclick: () => state.select(pieces) },
        swatch, element('span', { class: 'label' }, label), element('span', { class: 'count' }, written(pieces.length))));
    }));
  };
  state.on('colour', render);
  render();
}

/** Counts at the head of the page. */
function createCounts(model, state) {
  const refresh = () => {
    const shown = state.shownCount();
    byId('piece-count').textContent = counted(model.pieces.count, 'piece');
    byId('part-count').textContent = counted(model.parts.length, 'mark');
    byId('mass').textContent = writtenMass(model.mass);
    byId('shown-count').textContent = shown === model.pieces.count ? '' : `${written(shown)} shown`;
    byId('show-all').disabled = shown === model.pieces.count;
  };
  state.on('shown', refresh);
  refresh();
}

/** The buttons over the model. */
function createViewStrip(state, stage) {
  byId('views').append(...STANDARD_VIEWS.map(([name, label], index) => element('button', { type: 'button', id: `view-${name}`, title: `${label} (key ${index + 1})`, onclick: () => stage.fit(null, name) }, label)));
  byId('fit').addEventListener('click', () => stage.fit());
  byId('projection').addEventListener('change', () => stage.setParallel(byId('projection').value === 'parallel'));
  byId('grid-on').addEventListener('change', () => state.setGrid(byId('grid-on').checked));
  byId('show-all').addEventListener('click', () => state.showAll());
}

/** Opens one of the panels: on a wide page beside the model, on a narrow one below it. */
function createPanels(tabs) {
  const body = document.body;
  const open = (name) => {
    body.dataset.panel = name;
    for (const button of document.querySelectorAll('#foot-tabs button')) button.setAttribute('aria-pressed', String(button.dataset.panel === name));
    if (name === 'schedule') setSchedule(true);
  };
  const setSchedule = (on) => {
    byId('dock').hidden = !on;
    byId('schedule').setAttribute('aria-pressed', String(on));
  };
  for (const button of document.querySelectorAll('#foot-tabs button')) button.addEventListener('click', () => open(button.dataset.panel));
  byId('schedule').addEventListener('click', () => setSchedule(byId('dock').hidden));
  byId('schedule-close').addEventListener('click', () => { setSchedule(false); byId('schedule').focus(); });
  byId('cut').addEventListener('click', () => { open('side'); tabs('cut'); byId('cut-x').focus(); });
  byId('notes-open').addEventListener('click', () => { open('side'); tabs('notes'); byId('tab-notes').focus(); });
  open('side');
  return open;
}

/** Keys that work wherever no text is typed. */
function listenToKeys({ model, state, stage, measure, cuts }) {
  const step = (by) => {
    const shown = [];
    state.shown.forEach((on, piece) => on && leftOf(model, piece, cuts.planes()) && shown.push(piece));
    if (!shown.length) return;
    const at = shown.indexOf(state.lead);
    state.select([shown[(at + by + shown.length) % shown.length]]);
  };
  const chosen = () => [...state.selected];
  const projection = byId('projection');
  const keys = {
    f: () => stage.fit(state.selected.size ? chosen() : null),
    0: () => stage.fit(),
    p: () => { projection.value = stage.camera.parallel ? 'perspective' : 'parallel'; stage.setParallel(!stage.camera.parallel); },
    h: () => state.show(chosen(), false),
    o: () => state.selected.size && state.isolate(chosen()),
    a: () => state.showAll(),
    m: () => measure.setOn(!measure.on),
    x: () => byId('cut').click(),
    s: () => byId('schedule').click(),
    n: () => step(1),
    b: () => step(-1),
    '/': () => byId('search').focus(),
    '?': () => byId('help').showModal(),
    Escape: () => { if (measure.on) measure.setOn(false); else state.select([]); },
  };
  STANDARD_VIEWS.forEach(([name], index) => (keys[index + 1] = () => stage.fit(null, name)));
  document.addEventListener('keydown', (event) => {
    if (event.ctrlKey || event.metaKey || event.altKey || byId('help').open) return;
    if (event.target.closest('input:not([type=checkbox]):not([type=range]), select, textarea')) return;
    if (event.target === stage.canvas && moveByKey(stage, event)) event.preventDefault();
    else if (event.target === document.body && moveByKey(stage, event)) event.preventDefault();
    else if (event.key in keys) {
      event.preventDefault();
      keys[event.key]();
    }
  });
  // The ring around the model is for who steers by keys.
  document.addEventListener('keydown', () => (document.body.dataset.keys = ''), true);
  document.addEventListener('pointerdown', () => delete document.body.dataset.keys, true);
  byId('help-open').addEventListener('click', () => byId('help').showModal());
  byId('help-close').addEventListener('click', () => byId('help').close());
}

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
    get visibleCount() { return state.shownCount(); },
    /** Pieces shown and not wholly cut away. */
    get drawnCount() { return stage.drawnCount(); },
    get drawCalls() { return stage.renderer?.drawCalls ?? 0; },
    get frames() { return stage.frames; },
    get selection() { return Array.from(state.selected, (piece) => model.pieces.keys[piece]); },
    get cuts() { return cuts.axes.map(({ name, on, at, keep, depth }) => ({ axis: name, on, at, keep, depth })); },
    get colourBy() { return state.colourBy; },
    get theme() { return document.documentElement.dataset.theme; },
    get measurements() {
      return measure.done.map(({ distance, dx, dy, dz, faces, a, b }) => ({ distance, dx, dy, dz, faces, kinds: [a.kind, b.kind] }));
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
      const middle = [0, 1, 2].map((axis) => (model.pieces.low[3 * piece + axis] + model.pieces.high[3 * piece + axis]) / 2);
      const spots = [];
      for (let at = 0; at < mesh.triangles.length; at += 3) {
        const corners = [0, 1, 2].map((corner) => carried(model, piece, Array.from(mesh.points.subarray(3 * mesh.triangles[at + corner], 3 * mesh.triangles[at + corner] + 3))));
        for (const [u, v] of [[1, 1], [1, 4], [4, 1], [2, 3]]) {
          const place = [0, 1, 2].map((axis) => (corners[0][axis] * u + corners[1][axis] * v + corners[2][axis] * 2) / (u + v + 2));
          if (isKept(place, planes)) spots.push([size(sub(place, middle)), place]);
        }
      }
      spots.sort((a, b) => a[0] - b[0]);
      for (const [, place] of spots.slice(0, 120)) {
        const [x, y, depth] = stage.camera.project(place);
        if (depth > 0 && x > 0 && y > 0 && x < stage.camera.width && y < stage.camera.height && stage.pieceAt(x, y, true)?.piece === piece) return [x + box().left, y + box().top];
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
      return met && { key: model.pieces.keys[met.piece], place: add(met.point, model.middle), normal: met.normal, cut: met.cut };
    },
    isShown: (key) => state.shown[index(key)] === 1,
    isCutAway: (key) => leftOf(model, index(key), cuts.planes()) === 0,
    /** Places of a piece's axis ends in building axes, mm. */
    ends: (key) => {
      const piece = index(key);
      return [0, model.parts[model.pieces.part[piece]].length].map((x) => add(carried(model, piece, [x, 0, 0]), model.middle));
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

async function startPage() {
  if (typeof DecompressionStream === 'undefined') {
    byId('too-old').hidden = false;
    byId('loading').hidden = true;
    throw new Error('this browser cannot unpack the model');
  }
  const model = await unpackModel(byId('data').textContent);
  byId('data').remove();
  const state = createState(model);
  const cuts = createCuts(model, state);
  createThemeSwitch(state);
  const tabs = createTabs(['pieces', 'colours', 'cut', 'notes', 'findings']);
  const panels = createPanels(tabs);
  const stage = createStage(model, state, cuts);
  createLabels(stage, state);
  createCutPanel(model, state, cuts, say);
  const measure = createMeasure(stage, state, cuts, say);
  createTree(model, state, stage, say);
  createTable(model, state, stage, say);
  createDetails(model, state, stage, cuts, say);
  createSearch(model, state, stage, say);
  createFindings(model, state, stage, say);
  createLegend(model, state);
  createCounts(model, state);
  createViewStrip(state, stage);
  byId('defaults').append(...model.defaults.flatMap(([field, value]) => [element('dt', {}, field), element('dd', {}, value)]));
  byId('imprint').textContent = `shedbim ${model.imprint.version}, ${model.imprint.time}`;
  listenToPointer(stage, {
    tap(x, y, extend) {
      if (measure.on) {
        measure.tap(x, y);
        return;
      }
      const found = stage.pieceAt(x, y);
      state.select(found ? [found.piece] : [], { extend });
      if (found) panels('details');
    },
    open(x, y) {
      const found = measure.on ? null : stage.pieceAt(x, y);
      if (found) stage.fit([found.piece]);
    },
    hover: (x, y) => measure.hover(x, y),
  });
  const everything = { model, state, stage, cuts, measure };
  listenToKeys(everything);
  byId('loading').hidden = true;
  Object.defineProperties(window.shedView, Object.getOwnPropertyDescriptors(testHandle(everything)));
  await window.shedView.settle();
}

window.shedView = {};
window.shedView.ready = startPage();
