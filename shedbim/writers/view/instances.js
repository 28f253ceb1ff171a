// Pieces in buffers of the graphics card, and which of them a picture may show.

const INSTANCE_BYTES = 56; // three rows of four floats, a colour of four bytes, the number of the piece
const GROUP_SIZE = 160; // pieces of a part in one draw call, at most

/** Parts pieces into groups of at most GROUP_SIZE that lie close together: halved across the longest side of their box. */
function clustered(model, pieces) {
  if (pieces.length <= GROUP_SIZE) return [pieces];
  const { low, high } = boxOf(model, pieces);
  const sides = sub(high, low);
  const axis = sides.indexOf(Math.max(...sides));
  const middle = (piece) => model.pieces.low[3 * piece + axis] + model.pieces.high[3 * piece + axis];
  const sorted = [...pieces].sort((a, b) => middle(a) - middle(b) || a - b);
  const half = sorted.length >> 1;
  return [...clustered(model, sorted.slice(0, half)), ...clustered(model, sorted.slice(half))];
}

/**
 * Some pieces, sorted by part, in a buffer of their own. Those of one part that lie near one another are a group:
 * one draw call, left out where its box is outside of the picture.
 */
class InstanceSet {
  constructor(gl, model, solids, buffers) {
    this.gl = gl;
    this.model = model;
    this.solids = solids;
    this.buffer = gl.createBuffer();
    this.buffers = buffers;
    this.arrays = []; // pairs of vertex arrays, used again whenever the set is filled
    this.groups = [];
    this.count = 0;
  }

  /**
   * Fills the set with the pieces for which `kept` is not 0.
   * @param {Uint8Array} kept  @param {Uint8Array} colours three bytes a piece  @param {Set<number>} selected
   */
  fill(kept, colours, selected) {
    const { gl, model } = this;
    const total = kept.reduce((sum, each) => sum + each, 0);
    const bytes = new ArrayBuffer(Math.max(total, 1) * INSTANCE_BYTES);
    const floats = new Float32Array(bytes);
    const whole = new Uint32Array(bytes);
    const small = new Uint8Array(bytes);
    const p = model.pieces.placement;
    this.groups = [];
    let at = 0;
    this.#eachCluster((part, cluster) => {
      const group = {
        ...this.solids.parts[part.index],
        depth: part.depth,
        breadth: part.breadth,
        kind: part.kind,
        selected: 0,
        first: at,
        count: 0,
        pieces: [],
      };
      for (const piece of cluster) {
        if (!kept[piece]) continue;
        const slot = (at * INSTANCE_BYTES) / 4;
        for (let row = 0; row < 3; row++) {
          for (let axis = 0; axis < 4; axis++) floats[slot + 4 * row + axis] = p[12 * piece + 3 * axis + row];
        }
        small.set(colours.subarray(3 * piece, 3 * piece + 3), 4 * (slot + 12));
        small[4 * (slot + 12) + 3] = selected.has(piece) ? 128 : 255;
        whole[slot + 13] = piece;
        if (selected.has(piece)) group.selected++;
        group.count++;
        group.pieces.push(piece);
        at++;
      }
      if (group.count) this.groups.push(group);
    });
    gl.bindBuffer(gl.ARRAY_BUFFER, this.buffer);
    gl.bufferData(gl.ARRAY_BUFFER, bytes, gl.DYNAMIC_DRAW);
    this.groups.forEach((group, index) => {
      group.box = boxOf(model, group.pieces);
      this.arrays[index] ??= { faces: gl.createVertexArray(), edges: gl.createVertexArray() };
      Object.assign(group, this.arrays[index]);
      this.#describe(group.faces, this.buffers.triangles, group.first);
      this.#describe(group.edges, this.buffers.edges, group.first);
    });
    this.count = total;
  }

  /** Calls `call` with each part and each cluster of its pieces, which are found when they are first asked for. */
  #eachCluster(call) {
    for (const part of this.model.parts) {
      part.clusters ??= clustered(this.model, part.pieces);
      for (const cluster of part.clusters) call(part, cluster);
    }
  }

  #describe(array, indices, first) {
    const { gl } = this;
    gl.bindVertexArray(array);
    gl.bindBuffer(gl.ELEMENT_ARRAY_BUFFER, indices);
    gl.bindBuffer(gl.ARRAY_BUFFER, this.buffers.vertices);
    for (const place of [0, 1]) {
      gl.enableVertexAttribArray(place);
      gl.vertexAttribPointer(place, 3, gl.FLOAT, false, 24, 12 * place);
    }
    gl.bindBuffer(gl.ARRAY_BUFFER, this.buffer);
    const start = first * INSTANCE_BYTES;
    for (let place = 2; place <= 6; place++) {
      gl.enableVertexAttribArray(place);
      gl.vertexAttribDivisor(place, 1);
      if (place < 5) gl.vertexAttribPointer(place, 4, gl.FLOAT, false, INSTANCE_BYTES, start + 16 * (place - 2));
      else if (place === 5) gl.vertexAttribPointer(place, 4, gl.UNSIGNED_BYTE, true, INSTANCE_BYTES, start + 48);
      else gl.vertexAttribIPointer(place, 1, gl.UNSIGNED_INT, INSTANCE_BYTES, start + 52);
    }
    gl.bindVertexArray(null);
  }
}

/** Gives the four planes at the sides of what a matrix shows: inside where x, y, z and 1 give 0 or more. */
const sidePlanes = (m) =>
  [
    [0, 1],
    [0, -1],
    [1, 1],
    [1, -1],
  ].map(([row, side]) => [0, 1, 2, 3].map((column) => m[4 * column + 3] + side * m[4 * column + row]));

/** Whether any of a box lies inside of all planes, as far as each plane alone can tell. */
function mayBeSeen(box, planes) {
  return planes.every(([x, y, z, w]) => {
    const most = (value, axis) => value * (value > 0 ? box.high[axis] : box.low[axis]);
    return most(x, 0) + most(y, 1) + most(z, 2) + w >= 0;
  });
}
