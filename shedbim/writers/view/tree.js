// The tree of the pieces, by grid, by role or by assembly, with show, hide and isolate.

const TICK_WORDS = { true: 'shown', false: 'hidden', mixed: 'partly shown' };
const SORT_WORDS = { member: 'Members', fitting: 'Fittings', fastener: 'Fasteners' };
const ROWS_AT_ONCE = 200; // pieces of one branch that are listed before the reader asks for more

/** Gives the roots of the tree for a way to group; children are made when a branch opens. */
const GROUPINGS = {
  grid(model) {
    const roots = grouped(range(model.pieces.count), (piece) => model.pieces.keys[piece].split('/')[0]);
    return roots.map(([place, pieces]) =>
      branch(`g/${place}`, placeName(place), pieces, () => byRole(model, `g/${place}`, pieces, true)),
    );
  },
  role(model) {
    const sort = (piece) => model.parts[model.pieces.part[piece]].sort;
    const sorts = grouped(range(model.pieces.count), sort);
    if (sorts.length === 1) return byRole(model, 'r', sorts[0][1], false);
    sorts.sort(([a], [b]) => SORTS.indexOf(a) - SORTS.indexOf(b));
    return sorts.map(([word, pieces]) =>
      branch(`s/${word}`, SORT_WORDS[word], pieces, () => byRole(model, `s/${word}`, pieces, false)),
    );
  },
  assembly(model) {
    const all = (index) => model.assemblies[index].pieces.concat(...model.assemblies[index].children.map(all));
    const node = (index) => {
      const { key, mark, kind, pieces, children, made } = model.assemblies[index];
      const inside = () => [...children.map(node), ...byRole(model, `a/${key}`, pieces, false)];
      return { ...branch(`a/${key}`, `${key}`, all(index), inside), detail: `${mark} ${kind}, ${made}` };
    };
    const roots = model.assemblies.filter(({ parent }) => parent < 0).map(({ index }) => node(index));
    const loose = range(model.pieces.count).filter((piece) => model.pieces.assembly[piece] < 0);
    if (loose.length) roots.push(branch('a/', 'Loose pieces', loose, () => byRole(model, 'a/', loose, false)));
    return roots;
  },
};

/** Branches of some pieces by role, and in each by mark; short ones go straight to the pieces. */
function byRole(model, id, pieces, shortKeys) {
  const part = (piece) => model.parts[model.pieces.part[piece]];
  return grouped(pieces, (piece) => part(piece).role).map(([role, ofRole]) => {
    const name = `${id}/${role}`;
    const marks = grouped(ofRole, (piece) => part(piece).mark);
    const leaves = (list) => list.map((piece) => leaf(model, piece, shortKeys));
    const inside = () =>
      marks.length === 1 || shortKeys
        ? leaves(ofRole)
        : marks.map(([mark, ofMark]) => ({
            ...branch(`${name}/${mark}`, mark, ofMark, () => leaves(ofMark)),
            detail: part(ofMark[0]).section,
          }));
    return { ...branch(name, role, ofRole, inside), detail: marks.length === 1 ? marks[0][0] : '' };
  });
}

function grouped(items, name) {
  const groups = new Map();
  for (const item of items) {
    const word = name(item);
    if (!groups.has(word)) groups.set(word, []);
    groups.get(word).push(item);
  }
  return [...groups];
}

const branch = (id, label, pieces, inside) => ({ id, label, detail: '', pieces, inside });
const leaf = (model, piece, short) => ({
  id: `p/${piece}`,
  piece,
  pieces: [piece],
  inside: null,
  label: short ? model.pieces.keys[piece].split('/').slice(1).join('/') : model.pieces.keys[piece],
  detail: model.parts[model.pieces.part[piece]].mark,
});
/** A place on the grid in words: a line, or a bay between two lines. */
const placeName = (place) => (place.includes('-') ? `Bay ${place.replace('-', '\u2013')}` : `Line ${place}`);

/** Fills the tree and keeps it true to what is shown and selected. */
function createTree(model, state, stage, say) {
  const box = byId('tree');
  const open = new Set();
  const longer = new Map(); // how many rows of a branch are listed
  let roots = [];
  let rows = [];
  let current = 0;

  function setMode(mode) {
    for (const button of document.querySelectorAll('#tree-modes button')) {
      button.setAttribute('aria-pressed', String(button.dataset.mode === mode));
    }
    roots = GROUPINGS[mode](model);
    open.clear();
    current = 0;
    render();
  }

  function listRows() {
    const list = [];
    const walk = (nodes, level, parent) => {
      const most = longer.get(parent?.id) ?? ROWS_AT_ONCE;
      for (const node of nodes.slice(0, most)) {
        list.push({ node, level, parent });
        if (open.has(node.id)) walk((node.children ??= node.inside()), level + 1, node);
      }
      if (nodes.length > most) {
        const left = nodes.length - most;
        list.push({
          node: {
            id: `more/${parent?.id}`,
            label: `${written(Math.min(left, ROWS_AT_ONCE))} more of ${written(left)}`,
            pieces: [],
            more: () => longer.set(parent?.id, most + ROWS_AT_ONCE),
          },
          level,
          parent,
        });
      }
    };
    walk(roots, 1, null);
    return list;
  }

  function render(focus = false) {
    rows = listRows();
    current = clamp(current, 0, Math.max(rows.length - 1, 0));
    box.replaceChildren(...rows.map(rowElement));
    refresh();
    if (focus) rows[current]?.element.focus();
  }

  function rowElement(row, index) {
    const { node, level } = row;
    const made = element(
      'div',
      { class: 'row', role: 'treeitem', 'aria-level': String(level), tabindex: index === current ? '0' : '-1' },
      element('span', { class: 'twist', 'aria-hidden': 'true' }),
      element('span', { class: 'tick', 'aria-hidden': 'true', title: 'Show or hide' }),
      element('span', { class: 'label' }, node.label),
      element('span', { class: 'detail' }, node.detail ?? ''),
      element('span', { class: 'count' }, node.inside ? written(node.pieces.length) : ''),
      element(
        'button',
        { class: 'only', type: 'button', tabIndex: -1, 'aria-hidden': 'true', title: 'Show only this' },
        'Only',
      ),
    );
    made.style.setProperty('--level', String(level - 1));
    if (node.inside) made.setAttribute('aria-expanded', String(open.has(node.id)));
    if (node.more) made.classList.add('more');
    row.element = made;
    made.addEventListener('click', (event) => {
      moveTo(index);
      if (event.target.className === 'tick') toggleShown(node);
      else if (event.target.className === 'only') isolate(node);
      else if (event.target.className === 'twist' || node.more) toggleOpen(node);
      else choose(node, event.ctrlKey || event.metaKey || event.shiftKey);
    });
    made.addEventListener(
      'dblclick',
      (event) => event.target.className !== 'tick' && node.pieces.length && stage.fit(node.pieces),
    );
    return made;
  }

  function moveTo(index) {
    rows[current]?.element.setAttribute('tabindex', '-1');
    current = clamp(index, 0, rows.length - 1);
    rows[current].element.setAttribute('tabindex', '0');
    rows[current].element.focus();
  }

  function toggleOpen(node) {
    if (node.more) node.more();
    else if (!node.inside) return;
    else if (open.has(node.id)) open.delete(node.id);
    else open.add(node.id);
    render(true);
  }

  function choose(node, extend) {
    if (node.pieces.length) state.select(node.pieces, { extend });
  }

  function toggleShown(node) {
    const on = !state.switchedOn(node.pieces).every((piece) => state.shown[piece]);
    state.show(node.pieces, on);
    say(`${node.label}: ${on ? 'shown' : 'hidden'}`);
  }

  function isolate(node) {
    if (!node.pieces.length) return;
    state.isolate(node.pieces);
    stage.fit();
    say(`Only ${node.label}: ${counted(node.pieces.length, 'piece')}`);
  }

  /** Brings ticks and marks of selection up to date without making the rows anew. */
  function refresh() {
    for (const { node, element: made } of rows) {
      if (node.more) continue;
      // What is switched off altogether does not make a branch half shown.
      const counting = state.switchedOn(node.pieces);
      let shown = 0;
      for (const piece of counting) shown += state.shown[piece];
      let selected = 0;
      if (state.selected.size) for (const piece of node.pieces) if (state.selected.has(piece)) selected++;
      const ticked = shown === 0 ? 'false' : shown === counting.length ? 'true' : 'mixed';
      made.setAttribute('aria-checked', ticked);
      made.setAttribute('aria-selected', String(selected > 0 && selected === node.pieces.length));
      made.classList.toggle('holds', selected > 0 && selected < node.pieces.length);
      made.setAttribute(
        'aria-label',
        `${node.label} ${node.detail ?? ''}, ${counted(node.pieces.length, 'piece')}, ${TICK_WORDS[ticked]}`,
      );
    }
  }

  box.addEventListener('keydown', (event) => {
    const row = rows[current];
    if (!row || event.ctrlKey || event.metaKey || event.altKey) return;
    const { node } = row;
    const isOpen = open.has(node.id);
    const keys = {
      ArrowDown: () => moveTo(current + 1),
      ArrowUp: () => moveTo(current - 1),
      Home: () => moveTo(0),
      End: () => moveTo(rows.length - 1),
      ArrowRight: () => (node.inside && !isOpen ? toggleOpen(node) : node.inside && moveTo(current + 1)),
      ArrowLeft: () =>
        isOpen ? toggleOpen(node) : row.parent && moveTo(rows.findIndex((each) => each.node === row.parent)),
      Enter: () => (node.more ? toggleOpen(node) : choose(node, event.shiftKey)),
      ' ': () => toggleShown(node),
      o: () => isolate(node),
      f: () => node.pieces.length && stage.fit(node.pieces),
    };
    if (!(event.key in keys)) return;
    event.preventDefault();
    event.stopPropagation();
    keys[event.key]();
  });
  for (const button of document.querySelectorAll('#tree-modes button')) {
    button.addEventListener('click', () => setMode(button.dataset.mode));
  }
  state.on('shown', refresh);
  state.on('selection', refresh);
  setMode('grid');
  return { setMode };
}
