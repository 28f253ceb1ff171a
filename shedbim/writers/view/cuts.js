// Cut planes square to the axes of the grid: one for each axis, at a line of the grid or anywhere.

const AXES = [
  { name: 'x', title: 'Across', ahead: 'keep the right', behind: 'keep the left', keep: 1 },
  { name: 'y', title: 'Along', ahead: 'keep the back', behind: 'keep the front', keep: 1 },
  { name: 'z', title: 'Height', ahead: 'keep above', behind: 'keep below', keep: -1 },
];

/**
 * Gives the cuts: for each axis {on, at, keep, depth}. `at` is mm in building axes, `keep` 1 for what lies ahead
 * along the axis and -1 for what lies behind, `depth` mm of what is kept, 0 for all of it.
 */
function createCuts(model, state) {
  const middle = (axis) => model.middle[axis] + (model.box.low[axis] + model.box.high[axis]) / 2;
  const axes = AXES.map((each, axis) => ({ ...each, on: false, at: Math.round(middle(axis)), depth: 0 }));
  let planes = [];
  return {
    axes,
    /** Planes in local axes: [x, y, z, w], kept where the sum with (place, 1) is 0 or more. */
    planes: () => planes,
    get any() {
      return planes.length > 0;
    },
    set(axis, change) {
      Object.assign(axes[axis], change);
      planes = axes.flatMap(({ on, at, keep, depth }, index) => {
        if (!on) return [];
        const plane = (side, value) =>
          [0, 1, 2].map((each) => (each === index ? side : 0)).concat(-side * (value - model.middle[index]));
        return depth > 0 ? [plane(keep, at), plane(-keep, at + keep * depth)] : [plane(keep, at)];
      });
      state.tell('cuts');
    },
    clear() {
      for (const each of axes) each.on = false;
      this.set(0, {});
    },
  };
}

/** Fills the panel of the cuts: for each axis a switch, a line of the grid, a place, a side and a depth. */
function createCutPanel(model, state, cuts, say) {
  const lines = [
    model.grid.letters.map((label, index) => [label, model.grid.x[index]]),
    model.grid.numbers.map((label, index) => [label, model.grid.y[index]]),
    [],
  ];
  const refresh = cuts.axes.map((axis, index) => axisControls(index));
  state.on('cuts', () => {
    for (const each of refresh) each();
    byId('cut-clear').disabled = !cuts.any;
    byId('cut').setAttribute('aria-pressed', String(cuts.any));
  });
  byId('cut-clear').addEventListener('click', () => {
    cuts.clear();
    say('No cuts');
  });

  function axisControls(index) {
    const axis = cuts.axes[index];
    const low = Math.floor(model.middle[index] + model.box.low[index]);
    const high = Math.ceil(model.middle[index] + model.box.high[index]);
    const id = `cut-${axis.name}`;
    const on = element('input', { type: 'checkbox', id, onchange: () => change({ on: on.checked }) });
    const line = element(
      'select',
      {
        id: `${id}-line`,
        onchange: () => line.value !== '' && change({ on: true, at: lines[index][Number(line.value)][1] }),
      },
      element('option', { value: '' }, 'anywhere'),
      ...lines[index].map(([label], at) => element('option', { value: String(at) }, `line ${label}`)),
    );
    const slider = element('input', {
      type: 'range',
      id: `${id}-slider`,
      min: String(low),
      max: String(high),
      step: '10',
      'aria-label': `${axis.title}: place of the cut`,
      oninput: () => change({ on: true, at: Number(slider.value) }),
    });
    const place = element('input', {
      type: 'number',
      id: `${id}-at`,
      step: '10',
      onchange: () => change({ on: true, at: Number(place.value) || 0 }),
    });
    const side = element(
      'select',
      { id: `${id}-side`, onchange: () => change({ on: true, keep: Number(side.value) }) },
      element('option', { value: '1' }, axis.ahead),
      element('option', { value: '-1' }, axis.behind),
    );
    const depth = element('input', {
      type: 'number',
      id: `${id}-depth`,
      min: '0',
      step: '100',
      placeholder: 'all',
      onchange: () => change({ on: true, depth: Math.max(0, Number(depth.value) || 0) }),
    });
    const labelled = (text, control) => element('label', { class: 'field' }, element('span', {}, text), control);
    const controls = [slider, labelled('at, mm', place), labelled('side', side), labelled('depth, mm', depth)];
    if (lines[index].length) controls.splice(1, 0, labelled('grid', line));
    byId('cut-axes').append(
      element(
        'fieldset',
        { class: 'cut-axis' },
        element('legend', {}, element('label', {}, on, ` ${axis.title} (${axis.name})`)),
        ...controls,
      ),
    );

    function change(what) {
      cuts.set(index, what);
      say(
        axis.on
          ? `Cut ${axis.title.toLowerCase()} at ${written(axis.at)} mm, ${axis.keep > 0 ? axis.ahead : axis.behind}`
          : `No cut ${axis.title.toLowerCase()}`,
      );
    }
    const show = () => {
      on.checked = axis.on;
      slider.value = String(axis.at);
      place.value = String(axis.at);
      side.value = String(axis.keep);
      depth.value = axis.depth ? String(axis.depth) : '';
      const at = lines[index].findIndex(([, value]) => Math.abs(value - axis.at) < 0.5);
      line.value = at < 0 ? '' : String(at);
    };
    show();
    return show;
  }
}
