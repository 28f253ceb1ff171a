// What is shown, selected and how it is coloured; whoever listens is told what changed.

/**
 * Gives the state of the page.
 *
 * It tells of 'shown', 'selection', 'colour', 'grid', 'cuts' and 'theme'. Pieces are indices.
 */
function createState(model) {
  const listeners = new Map();
  const count = model.pieces.count;
  const state = {
    /** 1 for each piece that is not hidden. */
    shown: new Uint8Array(count).fill(1),
    /** The selected pieces, in the order in which they were picked. */
    selected: new Set(),
    colourBy: 'role',
    /** Whether the lines of the grid are drawn. */
    gridOn: true,

    /** Calls `call` whenever `what` changes. */
    on(what, call) {
      if (!listeners.has(what)) listeners.set(what, []);
      listeners.get(what).push(call);
    },
    tell(what, detail) {
      for (const call of listeners.get(what) ?? []) call(detail);
    },
    /** The piece picked last, or -1. */
    get lead() {
      let last = -1;
      for (const piece of state.selected) last = piece;
      return last;
    },
    /** Selects pieces instead of those before; with `extend` those that are not yet, while others leave. */
    select(pieces, { extend = false } = {}) {
      if (!extend) state.selected = new Set(pieces);
      else {
        const all = pieces.every((piece) => state.selected.has(piece));
        for (const piece of pieces) {
          if (all) state.selected.delete(piece);
          else state.selected.add(piece);
        }
      }
      state.tell('selection');
    },
    /** Shows or hides pieces. */
    show(pieces, on = true) {
      for (const piece of pieces) state.shown[piece] = on ? 1 : 0;
      state.tell('shown');
    },
    /** Shows these pieces and no others. */
    isolate(pieces) {
      state.shown.fill(0);
      state.show(pieces);
    },
    showAll() {
      state.shown.fill(1);
      state.tell('shown');
    },
    shownCount() {
      let sum = 0;
      for (const each of state.shown) sum += each;
      return sum;
    },
    setGrid(on) {
      state.gridOn = on;
      state.tell('grid');
    },
    setColour(by) {
      state.colourBy = by;
      state.tell('colour');
    },
  };
  return state;
}
