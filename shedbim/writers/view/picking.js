// Where a line of sight meets a piece, exactly: on a face, or on a face that a cut has made. Local axes, mm.

/** Gives the stretch of a ray that no plane cuts away: [from, to, plane it begins on or null]. */
function keptStretch(ray, cuts) {
  let from = 0;
  let to = Infinity;
  let plane = null;
  for (const cut of cuts) {
    const rate = dot(cut, ray.direction);
    const value = dot(cut, ray.origin) + cut[3];
    if (Math.abs(rate) < 1e-12) {
      if (value < 0) return [Infinity, -Infinity, null];
    } else if (rate > 0) {
      if (-value / rate > from) [from, plane] = [-value / rate, cut];
    } else to = Math.min(to, -value / rate);
  }
  return [from, to, plane];
}

/**
 * Gives where a ray first meets what is left of a piece: {along, point, normal, cut} or null.
 * `along` is mm from the origin of the ray, `normal` points out of the steel, `cut` says whether a cut made the face.
 */
function meetPiece(model, piece, ray, stretch) {
  const part = model.parts[model.pieces.part[piece]];
  const place = Array.from(model.pieces.placement.subarray(12 * piece + 9, 12 * piece + 12));
  const origin = turnedBack(model, piece, sub(ray.origin, place));
  const direction = turnedBack(model, piece, ray.direction);
  const [from, to, plane] = stretch;
  const { points, triangles } = part.mesh;
  const at = (corner) => [points[3 * corner], points[3 * corner + 1], points[3 * corner + 2]];
  let best = null;
  for (let triangle = 0; triangle < triangles.length; triangle += 3) {
    const a = at(triangles[triangle]);
    const ab = sub(at(triangles[triangle + 1]), a);
    const ac = sub(at(triangles[triangle + 2]), a);
    const p = cross(direction, ac);
    const scale = dot(ab, p);
    if (Math.abs(scale) < 1e-9) continue;
    const s = sub(origin, a);
    const u = dot(s, p) / scale;
    if (u < -1e-9 || u > 1 + 1e-9) continue;
    const q = cross(s, ab);
    const v = dot(direction, q) / scale;
    if (v < -1e-9 || u + v > 1 + 1e-9) continue;
    const along = dot(ac, q) / scale;
    if (along < from || along > to || (best && along >= best.along)) continue;
    best = { along, normal: unit(cross(ab, ac)), front: scale > 0 };
  }
  if (!best) return null;
  if (!best.front && !plane) return null;
  // Leaving the steel before entering it: the ray came in through the cut.
  const along = best.front ? best.along : from;
  const turn = model.pieces.placement;
  const normal = best.front
    ? [0, 1, 2].map((row) =>
        [0, 1, 2].reduce((sum, axis) => sum + turn[12 * piece + 3 * axis + row] * best.normal[axis], 0),
      )
    : times(plane, -1).slice(0, 3);
  return { piece, along, point: add(ray.origin, times(ray.direction, along)), normal: unit(normal), cut: !best.front };
}

/** Gives the first thing a ray meets among the pieces that `shown` holds, or null. */
function meetAny(model, shown, ray, cuts) {
  const stretch = keptStretch(ray, cuts);
  const { low, high } = model.pieces;
  const back = ray.direction.map((value) => 1 / (value || 1e-30));
  const near = [];
  for (let piece = 0; piece < model.pieces.count; piece++) {
    if (!shown[piece]) continue;
    let from = stretch[0];
    let to = stretch[1];
    for (let axis = 0; axis < 3 && from <= to; axis++) {
      const one = (low[3 * piece + axis] - 0.5 - ray.origin[axis]) * back[axis];
      const two = (high[3 * piece + axis] + 0.5 - ray.origin[axis]) * back[axis];
      from = Math.max(from, Math.min(one, two));
      to = Math.min(to, Math.max(one, two));
    }
    if (from <= to) near.push([from, piece]);
  }
  near.sort((a, b) => a[0] - b[0]);
  let best = null;
  for (const [from, piece] of near) {
    if (best && from > best.along) break;
    const met = meetPiece(model, piece, ray, stretch);
    if (met && (!best || met.along < best.along)) best = met;
  }
  return best;
}

/** Whether a place is left by all cuts. */
const isKept = (place, cuts) => cuts.every((cut) => dot(cut, place) + cut[3] >= -0.01);

/** What the cuts leave of a piece, by its box: 0 nothing, 1 all of it, 2 perhaps a part. */
function leftOf(model, piece, cuts) {
  const { low, high } = model.pieces;
  let left = 1;
  for (const cut of cuts) {
    let most = cut[3];
    let least = cut[3];
    for (let axis = 0; axis < 3; axis++) {
      const ends = [cut[axis] * low[3 * piece + axis], cut[axis] * high[3 * piece + axis]];
      most += Math.max(...ends);
      least += Math.min(...ends);
    }
    if (most <= 0) return 0;
    if (least < 0) left = 2;
  }
  return left;
}

/**
 * Gives the corner or edge of a piece nearest to the pointer, near the face that was met: {point, kind} where
 * kind is corner or edge, or null. `reach` is in pixels.
 */
function snapped(model, met, camera, cuts, x, y, reach) {
  const { points, edges } = model.parts[model.pieces.part[met.piece]].mesh;
  const tolerance = 2.5 * reach * camera.scale(camera.depth(met.point));
  const at = (index) => carried(model, met.piece, [points[3 * index], points[3 * index + 1], points[3 * index + 2]]);
  let corner = null;
  let edge = null;
  for (let each = 0; each < edges.length; each += 2) {
    const ends = [at(edges[each]), at(edges[each + 1])];
    for (const end of ends) {
      const [px, py, depth] = camera.project(end);
      const far = Math.hypot(px - x, py - y);
      if (depth > 0 && far < (corner?.far ?? reach) && size(sub(end, met.point)) < tolerance && isKept(end, cuts))
        corner = { far, point: end };
    }
    const along = sub(ends[1], ends[0]);
    const share = clamp(dot(sub(met.point, ends[0]), along) / dot(along, along), 0, 1);
    const point = mix(ends[0], ends[1], share);
    const [px, py, depth] = camera.project(point);
    const far = Math.hypot(px - x, py - y);
    if (depth > 0 && far < (edge?.far ?? reach * 0.7) && size(sub(point, met.point)) < tolerance && isKept(point, cuts))
      edge = { far, point };
  }
  if (corner) return { kind: 'corner', point: corner.point };
  return edge && { kind: 'edge', point: edge.point };
}
