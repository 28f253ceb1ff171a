// The schedule: a row for each mark, sorted and filtered by the reader; it selects in the model and follows it.

/**
 * `of(part)` is what a column holds of a part, a number where it has decimals, or '' where the part has no such thing;
 * a rare column stands only where some part has it.
 */
const TABLE_COLUMNS = [
  { name: 'mark', of: (part) => part.mark },
  { name: 'role', of: (part) => part.role },
  { name: 'quantity', of: (part) => part.pieces.length, decimals: 0 },
  { name: 'section', of: (part) => part.section },
  { name: 'grade', of: (part) => part.grade },
  { name: 'length', unit: 'mm', of: (part) => part.length || '', decimals: 1 },
  { name: 'thickness', unit: 'mm', of: (part) => part.figures.thickness_mm ?? '', decimals: 1, rare: true },
  { name: 'grip', unit: 'mm', of: (part) => part.figures.grip_mm ?? '', decimals: 1, rare: true },
  { name: 'holes', of: (part) => part.figures.holes ?? '', decimals: 0, rare: true },
  { name: 'mass each', unit: 'kg', of: (part) => part.mass, decimals: 3 },
  { name: 'mass total', unit: 'kg', of: (part) => part.mass * part.pieces.length, decimals: 3 },
  { name: 'surface each', unit: 'm²', of: (part) => part.surface, decimals: 4 },
  { name: 'finish', of: (part) => part.finish },
  { name: 'assemblies', of: (part) => part.assemblies },
];

/** Compares words as people do: the numbers in them by their size. */
const compareWords = new Intl.Collator('en', { numeric: true }).compare;

function createTable(model, state, stage, say) {
  const body = byId('schedule-body');
  const filter = byId('schedule-filter');
  let sorted = { column: null, down: false };
  let listed = model.parts;
  const columns = TABLE_COLUMNS.filter(({ rare, of }) => !rare || model.parts.some((part) => of(part) !== ''));

  const rows = model.parts.map((part) => {
    const cells = columns.map(({ of, decimals }, index) => {
      const value = of(part);
      if (index > 0)
        return element(
          'td',
          { class: decimals === undefined ? '' : 'number' },
          decimals === undefined || value === '' ? value : written(value, decimals),
        );
      return element(
        'th',
        { scope: 'row' },
        element('button', { type: 'button', class: 'plain', 'aria-label': `Select all ${value}` }, value),
      );
    });
    const row = element('tr', { data: { mark: part.mark } }, ...cells);
    row.addEventListener('click', (event) => {
      state.select(part.pieces, { extend: event.ctrlKey || event.metaKey || event.shiftKey });
      if (event.detail === 2) stage.fit(part.pieces);
    });
    return row;
  });

  const heads = columns.map((column, index) => {
    const button = element(
      'button',
      { type: 'button', class: 'plain', onclick: () => sort(index) },
      column.name,
      column.unit ? element('span', { class: 'unit' }, ` ${column.unit}`) : '',
    );
    return element(
      'th',
      {
        scope: 'col',
        class: column.decimals === undefined ? '' : 'number',
        'aria-sort': 'none',
        data: { column: column.name },
      },
      button,
    );
  });
  byId('schedule-head').append(...heads);

  function sort(column) {
    sorted = { column, down: sorted.column === column && !sorted.down };
    heads.forEach((head, index) =>
      head.setAttribute('aria-sort', index !== column ? 'none' : sorted.down ? 'descending' : 'ascending'),
    );
    list();
    say(`Sorted by ${columns[column].name}, ${sorted.down ? 'largest' : 'smallest'} first`);
  }

  /** Lists the rows that hold all words of the filter. */
  function list() {
    const words = filter.value.toLowerCase().split(/\s+/).filter(Boolean);
    listed = model.parts.filter((part) => {
      const text = columns
        .map(({ of }) => String(of(part)))
        .concat(part.sort)
        .join(' ')
        .toLowerCase();
      return words.every((word) => text.includes(word));
    });
    if (sorted.column !== null) {
      const { of, decimals } = columns[sorted.column];
      // What a part does not have counts as less than any number.
      const amount = (value) => (value === '' ? -1 : value);
      const order = decimals === undefined ? compareWords : (a, b) => amount(a) - amount(b);
      listed = [...listed].sort((a, b) => (sorted.down ? order(of(b), of(a)) : order(of(a), of(b))));
    }
    body.replaceChildren(...listed.map((part) => rows[part.index]));
    const pieces = listed.reduce((sum, part) => sum + part.pieces.length, 0);
    const mass = listed.reduce((sum, part) => sum + part.pieces.length * part.mass, 0);
    byId('schedule-sum').textContent =
      `${written(listed.length)} of ${counted(model.parts.length, 'mark')}, ` +
      `${counted(pieces, 'piece')}, ${writtenMass(mass)}`;
  }

  function followSelection() {
    const picked = new Set(Array.from(state.selected, (piece) => model.pieces.part[piece]));
    rows.forEach((row, index) => {
      row.classList.toggle('picked', picked.has(index));
      if (picked.has(index)) row.setAttribute('aria-current', 'true');
      else row.removeAttribute('aria-current');
    });
    const lead = state.lead < 0 ? null : rows[model.pieces.part[state.lead]];
    if (lead?.isConnected && !byId('dock').hidden) lead.scrollIntoView({ block: 'nearest' });
  }

  filter.addEventListener('input', list);
  const pieces = () => listed.flatMap((part) => part.pieces);
  byId('schedule-select').addEventListener('click', () => state.select(pieces()));
  byId('schedule-only').addEventListener('click', () => {
    state.isolate(pieces());
    stage.fit();
  });
  state.on('selection', followSelection);
  list();
  return { list, followSelection };
}
