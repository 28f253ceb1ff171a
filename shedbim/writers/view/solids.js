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
  const parts = model.parts.map(({ mesh, box }) => {
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
    for (const x of [box.low[0], box.high[0]]) {
      edges.push(vertices.length / 6);
      vertices.push(x, 0, 0, 0, 0, 1);
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
    const at = [0, 1, 2].map((corner) =>
      Array.from(points.subarray(3 * triangles[triangle + corner], 3 * triangles[triangle + corner] + 3)),
    );
    const normal = cross(sub(at[1], at[0]), sub(at[2], at[0]));
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
