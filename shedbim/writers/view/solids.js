// The meshes of all parts as one set of buffers: corners with normals, triangles and edges. mm.

/**
 * Gives {vertices, triangles, edges, parts}: vertices hold x, y, z and a normal, six numbers each; parts say
 * for each part where its triangles and edges begin and how many indices they are, and where among the edges
 * the two ends of its axis stand.
 *
 * Triangles that share an edge which is not drawn are smooth there: round tubes and rolled corners shade
 * softly, sharp edges stay sharp.
 */
function solidBuffers(model) {
  const vertices = [];
  const triangles = [];
  const edges = [];
  const parts = model.parts.map(({ mesh, box, kind }) => {
    const corners = smoothCorners(mesh);
    const base = vertices.length / 6;
    const firstTriangle = triangles.length;
    const vertexOf = new Map();
    const anyVertex = new Map();
    mesh.triangles.forEach((point, corner) => {
      const name = corners.group[corner];
      if (!vertexOf.has(name)) {
        vertexOf.set(name, vertices.length / 6);
        anyVertex.set(point, vertices.length / 6);
        vertices.push(...mesh.points.subarray(3 * point, 3 * point + 3), ...corners.normal(name));
      }
      triangles.push(vertexOf.get(name));
    });
    const firstEdge = edges.length;
    for (const point of mesh.edges) edges.push(anyVertex.get(point) ?? base);
    const edgeCount = edges.length - firstEdge;
    const firstAxis = edges.length;
    for (const end of middleLine(box, kind)) {
      edges.push(vertices.length / 6);
      vertices.push(...end, 0, 0, 1);
    }
    return {
      firstTriangle,
      triangleCount: triangles.length - firstTriangle,
      firstEdge,
      edgeCount,
      firstAxis,
    };
  });
  return {
    vertices: new Float32Array(vertices),
    triangles: new Uint32Array(triangles),
    edges: new Uint32Array(edges),
    parts,
  };
}

/** The line a shape shrinks to from afar: a bar's axis, of others the middle of the box along its longest side. */
function middleLine({ low, high }, kind) {
  const middle = kind === 'bar' ? [0, 0, 0] : times(add(low, high), 0.5);
  const sides = sub(high, low);
  const longest = kind === 'bar' ? 0 : sides.indexOf(Math.max(...sides));
  return [low, high].map((end) => middle.map((value, axis) => (axis === longest ? end[axis] : value)));
}

/**
 * The kinds of surface, by the number they travel as: two faces that turn by more than the angle meet in an edge
 * that is drawn. Chords along a round bar never are, nor those of holes, which turn by 30 degrees, nor those of shanks
 * and washers, which turn by 45.
 */
const SURFACES = [
  { cosine: Math.cos((32 * Math.PI) / 180), round: false },
  { cosine: Math.cos((32 * Math.PI) / 180), round: true },
  { cosine: Math.cos((50 * Math.PI) / 180), round: false },
];

/** The normal of a triangle, as long as twice its area, mm². */
function areaNormal({ points, triangles }, triangle) {
  const [a, b, c] = [0, 1, 2].map((corner) => {
    const at = 3 * triangles[triangle + corner];
    return [points[at], points[at + 1], points[at + 2]];
  });
  return cross(sub(b, a), sub(c, a));
}

/** Gives the drawn edges of a closed mesh as pairs of points: where the surface turns sharply for its kind. */
function sharpEdges(mesh, surface) {
  const { cosine, round } = SURFACES[surface];
  const { points, triangles } = mesh;
  const pointCount = points.length / 3;
  const beside = new Map();
  const edges = [];
  for (let triangle = 0; triangle < triangles.length; triangle += 3) {
    const normal = unit(areaNormal(mesh, triangle));
    for (let corner = 0; corner < 3; corner++) {
      const [a, b] = [triangles[triangle + corner], triangles[triangle + ((corner + 1) % 3)]];
      const name = Math.min(a, b) * pointCount + Math.max(a, b);
      if (!beside.has(name)) {
        beside.set(name, normal);
        continue;
      }
      const across = Math.hypot(points[3 * a + 1] - points[3 * b + 1], points[3 * a + 2] - points[3 * b + 2]);
      if (dot(beside.get(name), normal) < cosine && !(round && across < 0.01)) edges.push(a, b);
    }
  }
  return Uint32Array.from(edges);
}

/** Groups the corners of triangles that share a normal: `group[corner]` and `normal(group)`. */
function smoothCorners(mesh) {
  const { points, triangles, edges } = mesh;
  const count = triangles.length;
  const root = Int32Array.from({ length: count }, (_, corner) => corner);
  const find = (corner) => {
    while (root[corner] !== corner) corner = root[corner] = root[root[corner]];
    return corner;
  };
  const pointCount = points.length / 3;
  const edgeName = (a, b) => Math.min(a, b) * pointCount + Math.max(a, b);
  const sharp = new Set();
  for (let edge = 0; edge < edges.length; edge += 2) sharp.add(edgeName(edges[edge], edges[edge + 1]));
  const beside = new Map();
  const sums = new Float64Array(3 * count);
  for (let triangle = 0; triangle < count; triangle += 3) {
    const normal = areaNormal(mesh, triangle);
    for (let corner = 0; corner < 3; corner++) {
      sums.set(normal, 3 * (triangle + corner));
      const here = triangle + corner;
      const next = triangle + ((corner + 1) % 3);
      const name = edgeName(triangles[here], triangles[next]);
      if (sharp.has(name)) continue;
      const other = beside.get(name);
      if (!other) beside.set(name, [here, next]);
      else {
        // The neighbour runs along the shared edge the other way round.
        root[find(here)] = find(other[1]);
        root[find(next)] = find(other[0]);
      }
    }
  }
  const group = Int32Array.from({ length: count }, (_, corner) => find(corner));
  const total = new Float64Array(3 * count);
  for (let corner = 0; corner < count; corner++) {
    for (let axis = 0; axis < 3; axis++) total[3 * group[corner] + axis] += sums[3 * corner + axis];
  }
  return { group, normal: (name) => unit(Array.from(total.subarray(3 * name, 3 * name + 3))) };
}
