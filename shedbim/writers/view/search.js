// Finding pieces by mark, section or key.

const MOST_FOUND = 60;

/** Gives what a query finds: {kind, label, detail, pieces}, marks first, then sections, then keys. */
function find(model, query) {
  const words = query.toLowerCase().split(/\s+/).filter(Boolean);
  if (!words.length) return [];
  const holds = (text) => words.every((word) => text.toLowerCase().includes(word));
  const whole = (text) => text.toLowerCase() === query.trim().toLowerCase();
  const marks = model.parts
    .filter((part) => holds(part.mark))
    .map((part) => ({
      kind: 'mark',
      label: part.mark,
      detail: `${part.role}, ${part.section}, ${counted(part.pieces.length, 'piece')}`,
      pieces: part.pieces,
      exact: whole(part.mark),
    }));
  const sections = grouped(
    model.parts.filter((part) => holds(part.section)),
    (part) => part.section,
  ).map(([section, parts]) => {
    const pieces = parts.flatMap((part) => part.pieces);
    return { kind: 'section', label: section, detail: counted(pieces.length, 'piece'), pieces, exact: whole(section) };
  });
  const keys = [];
  for (let piece = 0; piece < model.pieces.count && keys.length < MOST_FOUND; piece++) {
    const key = model.pieces.keys[piece];
    if (holds(key))
      keys.push({
        kind: 'key',
        label: key,
        detail: model.parts[model.pieces.part[piece]].mark,
        pieces: [piece],
        exact: whole(key),
      });
  }
  const found = [...marks, ...sections, ...keys];
  return [...found.filter((each) => each.exact), ...found.filter((each) => !each.exact)].slice(0, MOST_FOUND);
}

function createSearch(model, state, stage, say) {
  const input = byId('search');
  const list = byId('found');
  let found = [];
  let current = -1;

  function close() {
    list.hidden = true;
    input.setAttribute('aria-expanded', 'false');
    input.removeAttribute('aria-activedescendant');
  }

  function show() {
    found = find(model, input.value);
    current = -1;
    list.replaceChildren(
      ...found.map((each, index) =>
        element(
          'li',
          {
            role: 'option',
            id: `found-${index}`,
            'aria-selected': 'false',
            onpointerdown: (event) => {
              event.preventDefault();
              choose(index);
            },
          },
          element('span', { class: 'kind' }, each.kind),
          element('span', { class: 'label' }, each.label),
          element('span', { class: 'detail' }, each.detail),
        ),
      ),
    );
    if (input.value.trim() && !found.length)
      list.append(
        element(
          'li',
          { class: 'hint', role: 'option', 'aria-disabled': 'true', 'aria-selected': 'false' },
          'No mark, section or key holds this.',
        ),
      );
    const open = input.value.trim() !== '';
    list.hidden = !open;
    input.setAttribute('aria-expanded', String(open));
    if (open) say(found.length ? counted(found.length, 'result') : 'Nothing found');
  }

  function mark(index) {
    current = clamp(index, 0, found.length - 1);
    [...list.children].forEach((row, at) => row.setAttribute('aria-selected', String(at === current)));
    list.children[current]?.scrollIntoView({ block: 'nearest' });
    input.setAttribute('aria-activedescendant', `found-${current}`);
  }

  function choose(index) {
    const each = found[index];
    if (!each) return;
    if (each.pieces.some((piece) => !state.shown[piece])) state.show(each.pieces);
    state.select(each.pieces);
    stage.fit(each.pieces);
    close();
  }

  input.addEventListener('input', show);
  input.addEventListener('focus', () => input.value.trim() && show());
  input.addEventListener('blur', close);
  input.addEventListener('keydown', (event) => {
    if (event.key === 'ArrowDown' && found.length) mark(current + 1);
    else if (event.key === 'ArrowUp' && found.length) mark(current - 1);
    else if (event.key === 'Enter') choose(Math.max(current, 0));
    else if (event.key === 'Escape' && !list.hidden) close();
    else return;
    event.preventDefault();
    event.stopPropagation();
  });
}
