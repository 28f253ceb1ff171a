// The model of the page, unpacked from its compressed text. The form of that text is told in columns.py.
//
// Places are mm in local axes: building axes moved to the middle of the building, so that 32-bit numbers of
// the graphics card keep a hundredth of a millimetre.

/** Reads columns of whole numbers one after another; see columns.py. */
class ColumnReader {
  /** @param {Uint8Array} bytes the columns  @param {[string, number, number][]} shapes name, rows, width */
  constructor(bytes, shapes) {
    this.columns = new Map();
    let start = 0;
    for (const [name, rows, width] of shapes) {
      const count = rows * width;
      this.columns.set(name, { rows, width, values: ColumnReader.values(bytes, start, rows, width) });
      start += 4 * count;
    }
  }

  /** Gives the whole numbers of one column, row after row. */
  static values(bytes, start, rows, width) {
    const count = rows * width;
    const values = new Int32Array(count);
    for (let column = 0; column < width; column++) {
      let sum = 0;
      for (let row = 0; row < rows; row++) {
        const at = start + column * rows + row;
        const step =
          (bytes[at] | (bytes[at + count] << 8) | (bytes[at + 2 * count] << 16) | (bytes[at + 3 * count] << 24)) >>> 0;
        sum = (sum + (step & 1 ? -((step - 1) / 2) - 1 : step / 2)) | 0;
        values[row * width + column] = sum;
      }
    }
    return values;
  }

  /** Gives the column of a name as {rows, width, values}. */
  get(name) {
    const column = this.columns.get(name);
    if (!column) throw new Error(`the data hold no column ${name}`);
    return column;
  }

  /** The same, without rows where the data do not hold it. */
  find(name) {
    return this.columns.get(name) ?? { rows: 0, width: 0, values: new Int32Array(0) };
  }
}

/** Unpacks base64 text of a zlib stream into bytes. */
async function inflated(text) {
  const raw = Uint8Array.from(atob(text.trim()), (letter) => letter.charCodeAt(0));
  const stream = new Blob([raw]).stream().pipeThrough(new DecompressionStream('deflate'));
  return new Uint8Array(await new Response(stream).arrayBuffer());
}

/** Gives the model that the page shows, from the text of its data. */
async function unpackModel(text) {
  const bytes = await inflated(text);
  const headSize = new DataView(bytes.buffer).getUint32(0, true);
  const head = JSON.parse(new TextDecoder().decode(bytes.subarray(4, 4 + headSize)));
  const columns = new ColumnReader(bytes.subarray(4 + headSize), head.columns);
  const parts = readParts(head, columns);
  const pieces = readPieces(head, columns);
  parts.forEach((part) => (part.pieces = []));
  pieces.part.forEach((part, piece) => parts[part].pieces.push(piece));
  const model = {
    project: head.project,
    imprint: head.imprint,
    defaults: head.defaults,
    grid: head.grid,
    roles: head.roles.map(([word, colour, sort]) => ({ word, colour, sort })),
    parts,
    pieces,
    assemblies: readAssemblies(head, columns, pieces),
    joints: readJoints(head, columns, pieces.count),
    findings: head.findings.map(([code, severity, sentence, point, about]) => ({
      code,
      severity,
      text: sentence,
      point,
      pieces: about,
    })),
    changes: head.changes.map(([word, about]) => ({ word, pieces: about })),
  };
  placeBoxes(model);
  model.mass = parts.reduce((sum, part) => sum + part.mass * part.pieces.length, 0);
  return model;
}

/**
 * Parts: mark, role, section ..., length in mm, mass in kg, surface in m², and the mesh in the part's frame. `sort` is
 * member, fitting or fastener, `kind` is bar, plate or bolts; `figures` are what else is told of it; `depth` and
 * `breadth`, mm, are what edges and all of it fade by from afar.
 */
function readParts(head, columns) {
  const sizes = columns.get('part sizes').values;
  const counts = columns.get('mesh counts').values;
  const points = columns.get('mesh points').values;
  const triangles = columns.get('mesh triangles').values;
  const used = [0, 0];
  return head.parts.map(([mark, role, section, grade, finish, assemblies], index) => {
    const [pointCount, triangleCount, surface] = counts.subarray(3 * index, 3 * index + 3);
    const mesh = {
      points: Float64Array.from(points.subarray(3 * used[0], 3 * (used[0] + pointCount)), (value) => value / 100),
      triangles: triangles.subarray(3 * used[1], 3 * (used[1] + triangleCount)),
    };
    used[0] += pointCount;
    used[1] += triangleCount;
    mesh.edges = sharpEdges(mesh, surface);
    return {
      index,
      mark,
      role: head.roles[role][0],
      sort: head.roles[role][2],
      kind: head.kinds[index],
      figures: head.figures[index],
      section,
      grade,
      finish,
      assemblies,
      mesh,
      length: sizes[4 * index] / 1000,
      mass: head.masses[index],
      surface: sizes[4 * index + 1] / 1e4,
      depth: sizes[4 * index + 2] / 100,
      breadth: sizes[4 * index + 3] / 100,
    };
  });
}

/** Pieces as columns: keys, part, assembly (-1 for none), and placement as twelve numbers x | y | z | origin. */
function readPieces(head, columns) {
  const count = head.keys.length;
  const turns = columns.get('turns').values;
  const turn = columns.get('piece turn').values;
  const place = columns.get('piece place').values;
  const placement = new Float64Array(12 * count);
  for (let piece = 0; piece < count; piece++) {
    // A turn travels row after row; its columns are the axes of the part.
    for (let axis = 0; axis < 3; axis++) {
      for (let row = 0; row < 3; row++)
        placement[12 * piece + 3 * axis + row] = turns[9 * turn[piece] + 3 * row + axis] / 1e9;
      placement[12 * piece + 9 + axis] = place[3 * piece + axis] / 100;
    }
  }
  return {
    count,
    keys: head.keys,
    part: columns.get('piece part').values,
    assembly: columns.get('piece assembly').values,
    placement,
  };
}

/** Assemblies with key, mark, kind, where they are made, the assembly they belong to (-1) and their own pieces. */
function readAssemblies(head, columns, pieces) {
  const parent = columns.get('assembly parent').values;
  const assemblies = head.assemblies.map(([key, mark, kind, made], index) => ({
    index,
    key,
    mark,
    kind,
    made,
    parent: parent[index],
    pieces: [],
    children: [],
  }));
  pieces.assembly.forEach((assembly, piece) => assembly >= 0 && assemblies[assembly].pieces.push(piece));
  assemblies.forEach((each) => each.parent >= 0 && assemblies[each.parent].children.push(each.index));
  return assemblies;
}

/**
 * Joints by piece: `of(piece)` gives [{kind, fastening, at, others, fittings}]: the other members, and the plates and
 * bolts that the joint adds. `at` is start, end or along, or `in` where the piece is itself one of those.
 */
function readJoints(head, columns, count) {
  const runs = head.joints.map(([kind, fastening], number) => ({
    kind,
    fastening,
    pieces: columns.get(`joint ${number} pieces`),
    at: columns.get(`joint ${number} at`).values,
    fittings: columns.find(`joint ${number} fittings`),
  }));
  /** Members first, then fittings, as one run of cells. */
  const cells = ({ pieces, fittings }) => [pieces, fittings];
  const first = new Int32Array(count + 1);
  for (const run of runs) for (const { values } of cells(run)) for (const piece of values) first[piece + 1]++;
  for (let piece = 0; piece < count; piece++) first[piece + 1] += first[piece];
  const next = first.slice();
  const places = new Int32Array(2 * first[count]);
  runs.forEach((run, number) => {
    let before = 0;
    for (const { values } of cells(run)) {
      values.forEach((piece, cell) => {
        const slot = next[piece]++;
        places[2 * slot] = number;
        places[2 * slot + 1] = before + cell;
      });
      before += values.length;
    }
  });
  const words = ['start', 'end', 'along'];
  const of = (piece) => {
    const found = [];
    for (let slot = first[piece]; slot < first[piece + 1]; slot++) {
      const run = runs[places[2 * slot]];
      const members = run.pieces.values.length;
      const cell = places[2 * slot + 1];
      const isMember = cell < members;
      const row = Math.floor(isMember ? cell / run.pieces.width : (cell - members) / run.fittings.width);
      const [others, fittings] = cells(run).map(({ values, width }) =>
        Array.from(values.subarray(row * width, (row + 1) * width)).filter((each) => each !== piece),
      );
      const at = isMember ? words[run.at[cell]] : 'in';
      found.push({ kind: run.kind, fastening: run.fastening, at, others, fittings });
    }
    return found;
  };
  return { count: runs.reduce((sum, run) => sum + run.pieces.rows, 0), of };
}

/** Moves all places to the middle of the building, and gives each piece its box: `pieces.low`, `pieces.high`. */
function placeBoxes(model) {
  const { pieces, parts } = model;
  for (const part of parts) {
    part.box = emptyBox();
    part.mesh.points.forEach((value, at) => {
      part.box.low[at % 3] = Math.min(part.box.low[at % 3], value);
      part.box.high[at % 3] = Math.max(part.box.high[at % 3], value);
    });
  }
  pieces.low = new Float64Array(3 * pieces.count);
  pieces.high = new Float64Array(3 * pieces.count);
  const whole = emptyBox();
  for (let piece = 0; piece < pieces.count; piece++) {
    const { low, high } = parts[pieces.part[piece]].box;
    for (let row = 0; row < 3; row++) {
      let middle = pieces.placement[12 * piece + 9 + row];
      let reach = 0;
      for (let axis = 0; axis < 3; axis++) {
        const entry = pieces.placement[12 * piece + 3 * axis + row];
        middle += (entry * (low[axis] + high[axis])) / 2;
        reach += (Math.abs(entry) * (high[axis] - low[axis])) / 2;
      }
      pieces.low[3 * piece + row] = middle - reach;
      pieces.high[3 * piece + row] = middle + reach;
      whole.low[row] = Math.min(whole.low[row], middle - reach);
      whole.high[row] = Math.max(whole.high[row], middle + reach);
    }
  }
  if (!pieces.count) Object.assign(whole, { low: [0, 0, 0], high: [1, 1, 1] });
  model.middle = times(add(whole.low, whole.high), 0.5);
  for (let at = 0; at < 3 * pieces.count; at++) {
    pieces.low[at] -= model.middle[at % 3];
    pieces.high[at] -= model.middle[at % 3];
    pieces.placement[12 * Math.floor(at / 3) + 9 + (at % 3)] -= model.middle[at % 3];
  }
  model.box = { low: sub(whole.low, model.middle), high: sub(whole.high, model.middle) };
}

/** Gives the box around some pieces, local axes, mm. */
function boxOf(model, chosen) {
  const box = emptyBox();
  for (const piece of chosen) {
    for (let axis = 0; axis < 3; axis++) {
      box.low[axis] = Math.min(box.low[axis], model.pieces.low[3 * piece + axis]);
      box.high[axis] = Math.max(box.high[axis], model.pieces.high[3 * piece + axis]);
    }
  }
  return box.low[0] <= box.high[0] ? box : model.box;
}

/** Carries a point of a part's own frame to local axes. */
function carried(model, piece, point) {
  const p = model.pieces.placement;
  const o = 12 * piece;
  return [0, 1, 2].map((r) => p[o + r] * point[0] + p[o + 3 + r] * point[1] + p[o + 6 + r] * point[2] + p[o + 9 + r]);
}

/** Carries a direction in local axes into a part's own frame. */
function turnedBack(model, piece, direction) {
  const p = model.pieces.placement;
  const o = 12 * piece;
  return [0, 1, 2].map(
    (axis) => p[o + 3 * axis] * direction[0] + p[o + 3 * axis + 1] * direction[1] + p[o + 3 * axis + 2] * direction[2],
  );
}
