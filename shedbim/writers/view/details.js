// What is known of the selected piece, or a summary of several.

/** What a part is and how large, as [name, text] pairs, by the kind of its shape. */
const SIZES = {
  bar: ({ section, length, figures }) => [
    ['section', section],
    ['length', `${written(length, 1)} mm`],
    ['holes', figures.holes ? written(figures.holes) : ''],
  ],
  plate: ({ section, figures }) => [
    ['plate', section],
    ['thickness', `${written(figures.thickness_mm, 1)} mm`],
    ['cut from', `${figures.size_mm.map((side) => written(side, 1)).join(' × ')} mm`],
    ['holes', written(figures.holes ?? 0)],
  ],
  bolts: ({ figures }) => [
    ['fastener', figures.designation],
    ['in this group', written(figures.count)],
    ['length', figures.length_mm ? `${written(figures.length_mm, 1)} mm` : ''],
    ['grip', `${written(figures.grip_mm, 1)} mm`],
    ['nuts each', written(figures.nuts)],
    ['washers each', written(figures.washers)],
  ],
};

function createDetails(model, state, stage, cuts, say) {
  const box = byId('details-body');
  const MANY = 40;

  const pairs = (list) =>
    element(
      'dl',
      { class: 'pairs' },
      ...list
        .filter(([, value]) => value !== '')
        .map(([name, value]) => element('div', {}, element('dt', {}, name), element('dd', {}, value))),
    );
  const link = (label, pieces, title) =>
    element(
      'button',
      { type: 'button', class: 'link', title: title ?? 'Select and show', onclick: () => go(pieces) },
      label,
    );

  /** Selects pieces and brings them into view when they are outside of it. */
  function go(pieces) {
    state.select(pieces);
    stage.fit(pieces);
  }

  function actions(pieces, mark) {
    const hidden = pieces.every((piece) => !state.shown[piece]);
    const act = (id, label, call) => element('button', { type: 'button', id, onclick: call }, label);
    const list = [
      act('piece-fly', 'Fly to', () => stage.fit(pieces)),
      hidden
        ? act('piece-show', 'Show', () => state.show(pieces))
        : act('piece-hide', 'Hide', () => state.show(pieces, false)),
      act('piece-only', 'Only this', () => {
        state.isolate(pieces);
        stage.fit();
      }),
    ];
    if (mark) list.push(act('piece-same', `All ${mark.mark}`, () => state.select(mark.pieces)));
    return element('div', { class: 'actions' }, ...list);
  }

  function assemblyLine(piece) {
    const line = [];
    for (let index = model.pieces.assembly[piece]; index >= 0; index = model.assemblies[index].parent)
      line.push(model.assemblies[index]);
    if (!line.length) return 'none: a loose piece';
    const within = (assembly) =>
      assembly.pieces.concat(...assembly.children.map((child) => within(model.assemblies[child])));
    return element(
      'ul',
      { class: 'lines' },
      ...line.map((assembly) =>
        element(
          'li',
          {},
          link(`${assembly.mark} ${assembly.key}`, within(assembly), 'Select the whole assembly'),
          element('span', { class: 'detail' }, ` made ${assembly.made === 'shop' ? 'in the shop' : 'on site'}`),
        ),
      ),
    );
  }

  /** The marks of some fittings, each once with how many there are. */
  function fittingWords(pieces) {
    const marks = grouped(pieces, (piece) => model.parts[model.pieces.part[piece]].mark);
    return marks.map(([mark, ofMark]) => (ofMark.length > 1 ? `${ofMark.length} × ${mark}` : mark)).join(', ');
  }

  function jointList(piece) {
    const joints = model.joints.of(piece);
    const order = { start: 0, end: 1, along: 2, in: 3 };
    joints.sort((a, b) => order[a.at] - order[b.at]);
    return element(
      'ul',
      { id: 'piece-joints', class: 'lines' },
      ...joints.map(({ kind, fastening, at, others, fittings }) =>
        element(
          'li',
          {},
          element('span', { class: 'at' }, at),
          ` ${kind}`,
          fastening === 'none' ? '' : element('span', { class: 'detail' }, ` ${fastening}`),
          ...others.map((other) =>
            element(
              'div',
              {},
              link(model.pieces.keys[other], [other]),
              element('span', { class: 'detail' }, ` ${model.parts[model.pieces.part[other]].mark}`),
            ),
          ),
          ...(fittings.length
            ? [element('div', {}, 'with ', link(fittingWords(fittings), fittings, 'Select these'))]
            : []),
        ),
      ),
    );
  }

  const places = (place) =>
    add(place, model.middle)
      .map((value) => written(value))
      .join(', ');

  function one(piece) {
    const part = model.parts[model.pieces.part[piece]];
    const state_ = !state.shown[piece] ? 'hidden' : !leftOf(model, piece, cuts.planes()) ? 'cut away' : '';
    return [
      element('h3', { id: 'piece-mark' }, part.mark, element('span', { class: 'detail' }, ` ${part.role}`)),
      element('p', { id: 'piece-key', class: 'key' }, model.pieces.keys[piece]),
      actions([piece], part),
      pairs([
        ['state', state_],
        ...SIZES[part.kind](part),
        ['mass', `${written(part.mass, 3)} kg`],
        ['surface', part.surface ? `${written(part.surface, 4)} m²` : ''],
        ['grade', part.grade],
        ['finish', part.finish],
        ['pieces of this mark', written(part.pieces.length)],
        ...(part.kind === 'bar'
          ? [
              ['from, mm', places(carried(model, piece, [0, 0, 0]))],
              ['to, mm', places(carried(model, piece, [part.length, 0, 0]))],
            ]
          : [['middle, mm', places(carried(model, piece, times(add(part.box.low, part.box.high), 0.5)))]]),
      ]),
      element('h4', {}, 'Assembly'),
      assemblyLine(piece),
      element('h4', {}, 'Joints'),
      jointList(piece),
    ];
  }

  function many(pieces) {
    const parts = new Map();
    for (const piece of pieces) parts.set(model.pieces.part[piece], (parts.get(model.pieces.part[piece]) ?? 0) + 1);
    const mass = pieces.reduce((sum, piece) => sum + model.parts[model.pieces.part[piece]].mass, 0);
    const single = parts.size === 1 ? model.parts[[...parts.keys()][0]] : null;
    return [
      element('h3', { id: 'piece-mark' }, counted(pieces.length, 'piece')),
      actions(pieces, null),
      pairs([
        ['mass of all', writtenMass(mass)],
        ...(single
          ? [
              ['mark', single.mark],
              ['role', single.role],
              ...SIZES[single.kind](single),
              ['mass each', `${written(single.mass, 3)} kg`],
              ['grade', single.grade],
              ['finish', single.finish],
            ]
          : []),
      ]),
      ...(single
        ? []
        : [
            element('h4', {}, 'Marks'),
            element(
              'ul',
              { class: 'lines' },
              ...[...parts].map(([index, count]) =>
                element(
                  'li',
                  {},
                  link(
                    model.parts[index].mark,
                    pieces.filter((piece) => model.pieces.part[piece] === index),
                  ),
                  ` ${written(count)} × ${model.parts[index].section}`,
                ),
              ),
            ),
          ]),
      element('h4', {}, 'Pieces'),
      element(
        'ul',
        { class: 'lines' },
        ...pieces.slice(0, MANY).map((piece) => element('li', {}, link(model.pieces.keys[piece], [piece]))),
        ...(pieces.length > MANY
          ? [element('li', { class: 'detail' }, `and ${written(pieces.length - MANY)} more`)]
          : []),
      ),
    ];
  }

  function spoken(pieces) {
    if (!pieces.length) return 'Nothing selected';
    if (pieces.length > 1) return `${counted(pieces.length, 'piece')} selected`;
    const part = model.parts[model.pieces.part[pieces[0]]];
    const length = part.kind === 'bar' ? `${written(part.length, 1)} mm, ` : '';
    const sizes = `${length}${written(part.mass, 3)} kg`;
    return `Selected ${model.pieces.keys[pieces[0]]}: mark ${part.mark}, ${part.section}, ${sizes}`;
  }

  function render() {
    const pieces = [...state.selected];
    box.replaceChildren(
      ...(pieces.length === 0
        ? [element('p', { class: 'hint' }, 'Pick a piece in the model, the tree or the schedule to read what it is.')]
        : pieces.length === 1
          ? one(pieces[0])
          : many(pieces)),
    );
    byId('details').classList.toggle('empty', !pieces.length);
  }

  state.on('selection', () => {
    render();
    box.scrollTop = 0;
    say(spoken([...state.selected]));
  });
  state.on('shown', render);
  state.on('cuts', () => state.selected.size === 1 && render());
  render();
}
