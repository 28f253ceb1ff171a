// What is shown, selected and how it is coloured; whoever listens is told what changed.

/** What pieces may be, as the roles say it. */
const SORTS = ['member', 'fitting', 'fastener'];

/**
 * Gives the state of the page.
 *
 * It tells of 'shown', 'selection', 'colour', 'grid', 'cuts' and 'theme'. Pieces are indices.
 *
 * A piece is shown where it is wanted and its sort is not switched off. Who switches bolts off and then asks for a
 * frame gets the frame without its bolts; who asks for nothing but bolts gets them.
 */
function createState(model) {
  const listeners = new Map();
  const count = model.pieces.count;
  const wanted = new Uint8Array(count).fill(1);
  const off = new Set();
  const sortOf = (piece) => model.parts[model.pieces.part[piece]].sort;
  const tellShown = () => {
    for (let piece = 0; piece < count; piece++) state.shown[piece] = wanted[piece] && !off.has(sortOf(piece)) ? 1 : 0;
    state.tell('shown');
  };
  /** Wants pieces; where all of them are switched off, they are switched on, and they alone of their sort. */
  const want = (pieces) => {
    const asked = new Set(Array.from(pieces, sortOf));
    if (asked.size && [...asked].every((sort) => off.has(sort))) {
      for (let piece = 0; piece < count; piece++) if (asked.has(sortOf(piece))) wanted[piece] = 0;
      for (const sort of asked) off.delete(sort);
    }
    for (const piece of pieces) wanted[piece] = 1;
  };
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
      if (on) want(pieces);
      else for (const piece of pieces) wanted[piece] = 0;
      tellShown();
    },
    /** Shows these pieces and no others. */
    isolate(pieces) {
      wanted.fill(0);
      state.show(pieces);
    },
    showAll() {
      off.clear();
      wanted.fill(1);
      tellShown();
    },
    /** Whether a sort is not switched off. */
    sortOn: (sort) => !off.has(sort),
    /** Switches a sort on or off; where none of it would be seen although it is on, all of it is wanted. */
    setSort(sort, on) {
      if (!on) off.add(sort);
      else {
        const ofSort = range(count).filter((piece) => sortOf(piece) === sort);
        if (!off.delete(sort) || !ofSort.some((piece) => wanted[piece])) for (const piece of ofSort) wanted[piece] = 1;
      }
      tellShown();
    },
    /** Those of some pieces that are not switched off, or all where none is left. */
    switchedOn(pieces) {
      if (!off.size) return pieces;
      const left = pieces.filter((piece) => !off.has(sortOf(piece)));
      return left.length ? left : pieces;
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
