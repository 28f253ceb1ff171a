// The programs of the graphics card, GLSL ES 3.00. Places are mm in local axes.

/** What every drawing of pieces shares: a point of the part's frame carried to its place, and the cut planes. */
const PLACED = `
layout(location = 0) in vec3 point;
layout(location = 2) in vec4 rowX;
layout(location = 3) in vec4 rowY;
layout(location = 4) in vec4 rowZ;
uniform mat4 toClip;
vec3 carried(vec3 p) {
  vec4 q = vec4(p, 1.0);
  return vec3(dot(rowX, q), dot(rowY, q), dot(rowZ, q));
}
vec3 turned(vec3 d) { return vec3(dot(rowX.xyz, d), dot(rowY.xyz, d), dot(rowZ.xyz, d)); }
`;

const CUT = `
uniform vec4 cuts[6];
uniform int cutCount;
/** The share by which far places turn towards the paper. */
float hazed(float depth, vec2 haze) {
  return 0.34 * clamp((depth - haze.x) / max(haze.y - haze.x, 1.0), 0.0, 1.0);
}
vec3 greyed(vec3 colour, float share) { return mix(colour, vec3(dot(colour, vec3(0.3, 0.6, 0.1))), share); }
void keepOrLeave(vec3 place) {
  for (int i = 0; i < cutCount; i++) if (dot(cuts[i].xyz, place) + cuts[i].w < 0.0) discard;
}
/** The share of the pixel that the cuts leave, for a soft rim. */
float keptShare(vec3 place) {
  float share = 1.0;
  for (int i = 0; i < cutCount; i++) {
    float inside = dot(cuts[i].xyz, place) + cuts[i].w;
    share = min(share, inside / max(fwidth(inside), 1e-6) + 0.5);
  }
  if (share <= 0.0) discard;
  return min(share, 1.0);
}
`;

/**
 * Faces. Parts are closed solids, so where a cut plane opens one, the first thing seen behind the plane is a
 * back face: painted flat in the colour of cuts it fills the cut face exactly.
 */
const FACES = {
  vertex: `#version 300 es
${PLACED}
layout(location = 1) in vec3 normal;
layout(location = 5) in vec4 tint;
out vec3 place;
out vec3 facing;
out vec4 colour;
void main() {
  place = carried(point);
  facing = turned(normal);
  colour = tint;
  gl_Position = toClip * vec4(place, 1.0);
}`,
  fragment: `#version 300 es
precision highp float;
in vec3 place;
in vec3 facing;
in vec4 colour;
uniform vec4 eye;        // xyz place and w 1, or direction to the eye and w 0
uniform vec3 right, up;  // of the picture
uniform vec3 accent, cutColour, paper;
uniform vec2 haze;       // depths mm between which far pieces turn towards the paper
uniform float dimmed;    // share by which pieces that are not selected turn grey
uniform vec4 ghost;      // a colour laid over everything, by its alpha
out vec4 result;
${CUT}
void main() {
  float share = keptShare(place);
  bool selected = colour.a < 0.75;
  if (ghost.a > 0.0) { result = vec4(ghost.rgb, ghost.a); return; }
  if (!gl_FrontFacing) {
    result = vec4(selected ? mix(accent, cutColour, 0.25) : cutColour, share);
    return;
  }
  vec3 toEye = eye.w > 0.5 ? normalize(eye.xyz - place) : eye.xyz;
  vec3 n = normalize(facing);
  vec3 light = normalize(toEye * 0.62 + up * 0.66 - right * 0.42);
  float sky = 0.5 + 0.5 * n.z;
  float shade = 0.50 + 0.38 * max(dot(n, light), 0.0) + 0.17 * sky;
  vec3 base = selected ? accent : greyed(colour.rgb, dimmed);
  vec3 lit = base * shade;
  float depth = eye.w > 0.5 ? distance(eye.xyz, place) : -dot(eye.xyz, place);
  float far = selected ? 0.0 : hazed(depth, haze);
  result = vec4(mix(lit, paper, far), share);
}`,
};

/**
 * Edges, drawn a little nearer to the eye than their faces. Their strength goes with how many pixels the
 * section is deep, so that a model seen from afar does not turn black.
 */
const EDGES = {
  vertex: `#version 300 es
${PLACED}
layout(location = 5) in vec4 tint;
uniform vec4 eye;
uniform float mmAtOne;   // mm a pixel shows at depth 1 mm, or everywhere where w of the eye is 0
uniform float depth;     // of the part's section, mm
uniform vec2 fade;       // pixels of section between which edges gain their strength
out vec3 place;
out float strength;
out float selected;
void main() {
  place = carried(point);
  vec3 way = eye.w > 0.5 ? eye.xyz - place : eye.xyz;
  float far = length(way);
  float pixel = eye.w > 0.5 ? mmAtOne * far : mmAtOne;
  strength = smoothstep(fade.x, fade.y, depth / pixel);
  selected = tint.a < 0.75 ? 1.0 : 0.0;
  gl_Position = toClip * vec4(place + way / max(far, 1e-6) * pixel * 0.8, 1.0);
}`,
  fragment: `#version 300 es
precision highp float;
in vec3 place;
in float strength;
in float selected;
uniform vec3 ink, accentInk;
uniform float most;
out vec4 result;
${CUT}
void main() {
  keepOrLeave(place);
  if (strength <= 0.004) discard;
  result = vec4(mix(ink, accentInk, selected), most * strength);
}`,
};

/**
 * Axes of pieces whose section is thinner than a pixel or two: without them such pieces would break up into dots.
 * With \`pick\` they are drawn as numbers.
 */
const axes = (pick) => ({
  vertex: `#version 300 es
precision highp int;
${PLACED}
layout(location = 5) in vec4 tint;
layout(location = 6) in uint piece;
uniform vec4 eye;
uniform float mmAtOne, depth;
out vec3 place;
out float strength;
out float far;
out vec4 colour;
flat out uint number;
void main() {
  place = carried(point);
  vec3 way = eye.w > 0.5 ? eye.xyz - place : eye.xyz;
  float pixels = depth / (eye.w > 0.5 ? mmAtOne * length(way) : mmAtOne);
  far = eye.w > 0.5 ? length(way) : -dot(eye.xyz, place);
  strength = (1.0 - smoothstep(1.2, 2.4, pixels)) * clamp(pixels * 1.4, 0.3, 0.9);
  colour = tint;
  number = piece + 1u;
  gl_Position = toClip * vec4(place, 1.0);
}`,
  fragment: `#version 300 es
precision highp float;
precision highp int;
in vec3 place;
in float strength;
in float far;
in vec4 colour;
flat in uint number;
uniform vec3 accent, paper;
uniform vec2 haze;
uniform float dimmed;
out ${pick ? 'uint' : 'vec4'} result;
${CUT}
void main() {
  keepOrLeave(place);
  if (strength <= 0.02) discard;
  ${pick ? 'result = number;' : 'result = colour.a < 0.75 ? vec4(accent, 1.0) : vec4(mix(greyed(colour.rgb, dimmed) * 0.8, paper, hazed(far, haze)), strength);'}
}`,
});

/** The number of the piece, plus one, at each pixel: hidden and cut-away pieces leave no number. */
const NUMBERS = {
  vertex: `#version 300 es
precision highp int;
${PLACED}
layout(location = 6) in uint piece;
out vec3 place;
flat out uint number;
void main() {
  place = carried(point);
  number = piece + 1u;
  gl_Position = toClip * vec4(place, 1.0);
}`,
  fragment: `#version 300 es
precision highp float;
precision highp int;
in vec3 place;
flat in uint number;
out uint result;
${CUT}
void main() {
  keepOrLeave(place);
  result = number;
}`,
};

/** Lines of the grid on the floor. */
const LINES = {
  vertex: `#version 300 es
layout(location = 0) in vec3 point;
uniform mat4 toClip;
void main() { gl_Position = toClip * vec4(point, 1.0); }`,
  fragment: `#version 300 es
precision highp float;
uniform vec4 line;
out vec4 result;
void main() { result = line; }`,
};

/** A program with its uniforms by name. */
function compiled(gl, source) {
  const program = gl.createProgram();
  for (const [kind, text] of [
    [gl.VERTEX_SHADER, source.vertex],
    [gl.FRAGMENT_SHADER, source.fragment],
  ]) {
    const shader = gl.createShader(kind);
    gl.shaderSource(shader, text);
    gl.compileShader(shader);
    if (!gl.getShaderParameter(shader, gl.COMPILE_STATUS) && !gl.isContextLost()) {
      throw new Error(`a shader does not compile: ${gl.getShaderInfoLog(shader)}`);
    }
    gl.attachShader(program, shader);
  }
  gl.linkProgram(program);
  if (!gl.getProgramParameter(program, gl.LINK_STATUS) && !gl.isContextLost()) {
    throw new Error(`a program does not link: ${gl.getProgramInfoLog(program)}`);
  }
  const at = {};
  const count = gl.getProgramParameter(program, gl.ACTIVE_UNIFORMS) ?? 0;
  for (let index = 0; index < count; index++) {
    const { name } = gl.getActiveUniform(program, index);
    at[name.replace('[0]', '')] = gl.getUniformLocation(program, name);
  }
  return { program, at };
}
