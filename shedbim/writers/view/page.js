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
    byId('legend').replaceChildren(
      ...COLOURINGS[state.colourBy].entries(model).map(({ label, colour, pieces }) => {
        const swatch = element('span', { class: 'swatch', 'aria-hidden': 'true' });
        swatch.style.background = `rgb(${colour.join(' ')})`;
        return element(
          'li',
          {},
          element(
            'button',
            { type: 'button', class: 'plain', title: 'Select these pieces', onclick: () => state.select(pieces) },
            swatch,
            element('span', { class: 'label' }, label),
            element('span', { class: 'count' }, written(pieces.length)),
          ),
        );
      }),
    );
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
  byId('views').append(
    ...STANDARD_VIEWS.map(([name, label], index) =>
      element(
        'button',
        {
          type: 'button',
          id: `view-${name}`,
          title: `${label} (key ${index + 1})`,
          onclick: () => stage.fit(null, name),
        },
        label,
      ),
    ),
  );
  byId('fit').addEventListener('click', () => stage.fit());
  byId('projection').addEventListener('change', () => stage.setParallel(byId('projection').value === 'parallel'));
  byId('grid-on').addEventListener('change', () => state.setGrid(byId('grid-on').checked));
  byId('show-all').addEventListener('click', () => state.showAll());
}

/** The switches of fittings and bolts, which stand only where the building has any. */
function createSortSwitches(model, state) {
  const switches = [
    ['fitting', byId('fittings-on'), 'Fittings'],
    ['fastener', byId('fasteners-on'), 'Bolts, anchors and nuts'],
  ].flatMap(([sort, box, word]) => {
    const pieces = model.parts.flatMap((part) => (part.sort === sort ? part.pieces : []));
    box.closest('label').hidden = !pieces.length;
    return pieces.length ? [{ sort, box, word, pieces }] : [];
  });
  byId('sorts').hidden = !switches.length;
  const set = (some, on) => {
    for (const { sort } of some) state.setSort(sort, on);
    say(`${some.map(({ word }) => word).join(', ')} ${on ? 'shown' : 'hidden'}`);
  };
  const refresh = () => {
    for (const { box, pieces } of switches) {
      const shown = pieces.reduce((sum, piece) => sum + state.shown[piece], 0);
      box.checked = shown > 0;
      box.indeterminate = shown > 0 && shown < pieces.length;
    }
  };
  for (const each of switches) each.box.addEventListener('change', () => set([each], each.box.checked));
  state.on('shown', refresh);
  return {
    /** Switches all of them off, or on where none is on. */
    toggle: () => switches.length && set(switches, !switches.some(({ box }) => box.checked)),
  };
}

/** Opens one of the panels: on a wide page beside the model, on a narrow one below it. */
function createPanels(tabs) {
  const body = document.body;
  const open = (name) => {
    body.dataset.panel = name;
    for (const button of document.querySelectorAll('#foot-tabs button'))
      button.setAttribute('aria-pressed', String(button.dataset.panel === name));
    if (name === 'schedule') setSchedule(true);
  };
  const setSchedule = (on) => {
    byId('dock').hidden = !on;
    byId('schedule').setAttribute('aria-pressed', String(on));
  };
  for (const button of document.querySelectorAll('#foot-tabs button'))
    button.addEventListener('click', () => open(button.dataset.panel));
  byId('schedule').addEventListener('click', () => setSchedule(byId('dock').hidden));
  byId('schedule-close').addEventListener('click', () => {
    setSchedule(false);
    byId('schedule').focus();
  });
  byId('cut').addEventListener('click', () => {
    open('side');
    tabs('cut');
    byId('cut-axes').querySelector('input').focus();
  });
  byId('notes-open').addEventListener('click', () => {
    open('side');
    tabs('notes');
    byId('tab-notes').focus();
  });
  open('side');
  return open;
}

/** Keys that work wherever no text is typed. */
function listenToKeys({ model, state, stage, measure, cuts, sorts }) {
  const step = (by) => {
    const { count } = model.pieces;
    // On from the piece picked last, even when that has been hidden since.
    let at = state.lead < 0 && by < 0 ? 0 : state.lead;
    for (let passed = 0; passed < count; passed++) {
      at = (at + by + count) % count;
      if (state.shown[at] && leftOf(model, at, cuts.planes())) {
        state.select([at]);
        return;
      }
    }
  };
  const chosen = () => [...state.selected];
  const projection = byId('projection');
  const keys = {
    f: () => stage.fit(state.selected.size ? chosen() : null),
    0: () => stage.fit(),
    p: () => {
      projection.value = stage.camera.parallel ? 'perspective' : 'parallel';
      stage.setParallel(!stage.camera.parallel);
    },
    h: () => state.show(chosen(), false),
    o: () => state.selected.size && state.isolate(chosen()),
    a: () => state.showAll(),
    c: () => sorts.toggle(),
    m: () => measure.setOn(!measure.on),
    x: () => byId('cut').click(),
    s: () => byId('schedule').click(),
    n: () => step(1),
    b: () => step(-1),
    '/': () => byId('search').focus(),
    '?': () => byId('help').showModal(),
    Escape: () => {
      if (measure.on) measure.setOn(false);
      else state.select([]);
    },
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
  const sorts = createSortSwitches(model, state);
  byId('defaults').append(
    ...model.defaults.flatMap(([field, value]) => [element('dt', {}, field), element('dd', {}, value)]),
  );
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
  const everything = { model, state, stage, cuts, measure, sorts };
  listenToKeys(everything);
  byId('loading').hidden = true;
  Object.defineProperties(window.shedView, Object.getOwnPropertyDescriptors(testHandle(everything)));
  await window.shedView.settle();
}

window.shedView = {};
window.shedView.ready = startPage();
