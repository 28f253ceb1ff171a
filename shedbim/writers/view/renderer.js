// Draws the pieces with WebGL2: few draw calls for each part, however many pieces it has.

const LEAST_HEAD = 1.5; // pixels: smaller heads of bolts are not drawn
const PICK_SIDE = 9; // pixels, odd: the square around the pointer in which pieces are looked for

/** Gives the renderer of a canvas, or null where there is no WebGL2. */
function createRenderer(canvas, model, solids) {
  const gl = canvas.getContext('webgl2', { antialias: true, alpha: false, powerPreference: 'high-performance' });
  return gl ? new Renderer(gl, model, solids) : null;
}

class Renderer {
  constructor(gl, model, solids) {
    this.gl = gl;
    this.model = model;
    this.faces = compiled(gl, FACES);
    this.edges = compiled(gl, EDGES);
    this.numbers = compiled(gl, NUMBERS);
    this.axes = compiled(gl, axes(false));
    this.axisNumbers = compiled(gl, axes(true));
    this.lines = compiled(gl, LINES);
    const filled = (kind, data) => {
      const buffer = gl.createBuffer();
      gl.bindBuffer(kind, buffer);
      gl.bufferData(kind, data, gl.STATIC_DRAW);
      return buffer;
    };
    gl.bindVertexArray(null);
    const buffers = {
      vertices: filled(gl.ARRAY_BUFFER, solids.vertices),
      triangles: filled(gl.ELEMENT_ARRAY_BUFFER, solids.triangles),
      edges: filled(gl.ELEMENT_ARRAY_BUFFER, solids.edges),
    };
    /** Pieces that no cut touches, and those that a cut may have opened. */
    this.whole = new InstanceSet(gl, model, solids, buffers);
    this.opened = new InstanceSet(gl, model, solids, buffers);
    this.selected = new InstanceSet(gl, model, solids, buffers);
    this.#makeGrid();
    this.#makePicking();
    /** Draw calls of the last picture. */
    this.drawCalls = 0;
  }

  #makeGrid() {
    const { gl } = this;
    this.gridArray = gl.createVertexArray();
    this.gridBuffer = gl.createBuffer();
    this.gridCount = 0;
    gl.bindVertexArray(this.gridArray);
    gl.bindBuffer(gl.ARRAY_BUFFER, this.gridBuffer);
    gl.enableVertexAttribArray(0);
    gl.vertexAttribPointer(0, 3, gl.FLOAT, false, 12, 0);
    gl.bindVertexArray(null);
  }

  /** Sets the lines of the grid: pairs of places, local axes, mm. */
  setGrid(points) {
    const { gl } = this;
    gl.bindBuffer(gl.ARRAY_BUFFER, this.gridBuffer);
    gl.bufferData(gl.ARRAY_BUFFER, new Float32Array(points.flat()), gl.STATIC_DRAW);
    this.gridCount = points.length;
  }

  #makePicking() {
    const { gl } = this;
    this.pickFrame = gl.createFramebuffer();
    this.pickNumbers = gl.createRenderbuffer();
    this.pickDepth = gl.createRenderbuffer();
    this.pickSize = '';
  }

  /**
   * Makes the picture of numbers as large as the canvas. Only a small square of it is ever drawn, but triangles
   * must fall on it as they do on the canvas: stretched to a picture of that square alone, they are clipped far
   * outside of it, and cracks open between them that show what stands behind.
   */
  #sizePicking(width, height) {
    const { gl } = this;
    if (this.pickSize === `${width} ${height}`) return;
    this.pickSize = `${width} ${height}`;
    const parts = [
      [this.pickNumbers, gl.R32UI, gl.COLOR_ATTACHMENT0],
      [this.pickDepth, gl.DEPTH_COMPONENT24, gl.DEPTH_ATTACHMENT],
    ];
    gl.bindFramebuffer(gl.FRAMEBUFFER, this.pickFrame);
    for (const [buffer, form, place] of parts) {
      gl.bindRenderbuffer(gl.RENDERBUFFER, buffer);
      gl.renderbufferStorage(gl.RENDERBUFFER, form, width, height);
      gl.framebufferRenderbuffer(gl.FRAMEBUFFER, place, gl.RENDERBUFFER, buffer);
    }
  }

  /**
   * Says which pieces are drawn: 0 not at all, 1 whole, 2 where the cuts leave them; in which colours (three
   * bytes a piece), and which are selected.
   */
  setPieces(drawn, colours, selected) {
    this.whole.fill(
      drawn.map((each) => (each === 1 ? 1 : 0)),
      colours,
      selected,
    );
    this.opened.fill(
      drawn.map((each) => (each === 2 ? 1 : 0)),
      colours,
      selected,
    );
    const kept = new Uint8Array(drawn.length);
    for (const piece of selected) kept[piece] = drawn[piece] ? 1 : 0;
    this.selected.fill(kept, colours, selected);
  }

  /** Uses a program with the matrix and the eye of a scene; what lies outside of `within` will not be drawn. */
  #use({ program, at }, scene, within = scene.toClip) {
    const { gl } = this;
    gl.useProgram(program);
    gl.uniformMatrix4fv(at.toClip, false, scene.toClip);
    this.sides = sidePlanes(within);
    if (at.eye) gl.uniform4fv(at.eye, scene.eye);
  }

  /** Says by which planes the program that is in use cuts. */
  #cutBy({ at }, cuts) {
    const { gl } = this;
    gl.uniform1i(at.cutCount, cuts.length);
    if (cuts.length) gl.uniform4fv(at.cuts, cuts.flat());
  }

  /** How many mm a pixel shows where a group is nearest to the eye. */
  #pixelAt(scene, { low, high }) {
    if (!scene.eye[3]) return scene.mmAtOne;
    const way = [0, 1, 2].map((axis) => Math.max(low[axis] - scene.eye[axis], 0, scene.eye[axis] - high[axis]));
    return scene.mmAtOne * Math.max(size(way), 1);
  }

  /** Draws the faces, edges or axes of a set; `each` is called with a group and may say false to leave it out. */
  #drawSet(set, what, each = () => true) {
    const { gl } = this;
    const mode = what === 'faces' ? gl.TRIANGLES : gl.LINES;
    for (const group of set.groups) {
      if (!mayBeSeen(group.box, this.sides) || each(group) === false) continue;
      gl.bindVertexArray(what === 'faces' ? group.faces : group.edges);
      const [start, count] = {
        faces: [group.firstTriangle, group.triangleCount],
        edges: [group.firstEdge, group.edgeCount],
        axes: [group.firstAxis, 2],
      }[what];
      const first = 4 * start;
      if (this.separately) this.#drawOneByOne(set, group, mode, count, first);
      else {
        gl.drawElementsInstanced(mode, count, gl.UNSIGNED_INT, first, group.count);
        this.drawCalls++;
      }
    }
    gl.bindVertexArray(null);
  }

  /** What instancing is compared with: one draw call for each piece, its placement set before. */
  #drawOneByOne(set, group, mode, count, first) {
    const { gl } = this;
    gl.bindBuffer(gl.ARRAY_BUFFER, set.buffer);
    const placed = (instance) => {
      const start = (group.first + instance) * INSTANCE_BYTES;
      for (let row = 0; row < 3; row++)
        gl.vertexAttribPointer(2 + row, 4, gl.FLOAT, false, INSTANCE_BYTES, start + 16 * row);
    };
    for (let instance = 0; instance < group.count; instance++) {
      placed(instance);
      gl.drawElementsInstanced(mode, count, gl.UNSIGNED_INT, first, 1);
      this.drawCalls++;
    }
    placed(0);
  }

  /**
   * Draws one picture.
   *
   * @param scene toClip, eye (place and 1, or direction to the eye and 0), right, up, cuts (planes: four
   *   numbers, kept where x, y, z and 1 give 0 or more), haze [from, to] depths in mm, mmAtOne,
   *   theme (colours 0-1), grid (whether to draw it), edges (whether to draw them)
   */
  draw(scene) {
    const { gl } = this;
    const { theme } = scene;
    this.drawCalls = 0;
    gl.bindFramebuffer(gl.FRAMEBUFFER, null);
    gl.viewport(0, 0, gl.drawingBufferWidth, gl.drawingBufferHeight);
    // A mask left off by the picture before would keep the depth of that picture: set it before clearing.
    gl.depthMask(true);
    gl.disable(gl.BLEND);
    gl.enable(gl.DEPTH_TEST);
    gl.depthFunc(gl.LEQUAL);
    gl.clearColor(...theme.paper, 1);
    gl.clear(gl.COLOR_BUFFER_BIT | gl.DEPTH_BUFFER_BIT);

    this.#use(this.faces, scene);
    const { at } = this.faces;
    gl.uniform3fv(at.right, scene.right);
    gl.uniform3fv(at.up, scene.up);
    gl.uniform3fv(at.accent, theme.accent);
    gl.uniform3fv(at.cutColour, theme.cut);
    gl.uniform3fv(at.paper, theme.paper);
    gl.uniform2fv(at.haze, scene.haze);
    gl.uniform1f(at.dimmed, this.#dimmed());
    gl.uniform4f(at.ghost, 0, 0, 0, 0);
    gl.enable(gl.CULL_FACE);
    this.#cutBy(this.faces, []);
    this.#drawSet(this.whole, 'faces', this.#largeEnough(scene));
    if (this.opened.count) this.#drawOpened(scene);

    gl.disable(gl.CULL_FACE);
    gl.enable(gl.BLEND);
    gl.blendFunc(gl.SRC_ALPHA, gl.ONE_MINUS_SRC_ALPHA);
    gl.depthMask(false);
    if (scene.grid) this.#drawGrid(scene);
    this.#drawAxes(scene, this.axes);
    if (scene.edges) this.#drawEdges(scene);
    if (this.selected.count) this.#drawGhost(scene);
    gl.depthMask(true);
  }

  /**
   * Says of a group whether its faces are drawn: one thinner than a pixel even where it is nearest is drawn by its
   * axes alone, and bolts whose heads are specks not at all.
   */
  #largeEnough(scene) {
    return (group) => group.breadth / this.#pixelAt(scene, group.box) > (group.kind === 'bolts' ? LEAST_HEAD : 0.9);
  }

  /** The same for bolts alone: all else can be picked however thin it is. */
  #boltsLargeEnough(scene) {
    const large = this.#largeEnough(scene);
    return (group) => group.kind !== 'bolts' || large(group);
  }

  /** By how much pieces that are not selected turn grey. */
  #dimmed() {
    return this.selected.count ? 0.45 : 0;
  }

  /** Draws the pieces that a cut may open, their back faces a little deeper, so that only openings show them. */
  #drawOpened(scene) {
    const { gl } = this;
    this.#cutBy(this.faces, scene.cuts);
    gl.enable(gl.SAMPLE_ALPHA_TO_COVERAGE);
    this.#drawSet(this.opened, 'faces', this.#boltsLargeEnough(scene));
    gl.cullFace(gl.FRONT);
    gl.enable(gl.POLYGON_OFFSET_FILL);
    gl.polygonOffset(1, 2);
    this.#drawSet(this.opened, 'faces', this.#boltsLargeEnough(scene));
    gl.disable(gl.POLYGON_OFFSET_FILL);
    gl.cullFace(gl.BACK);
    gl.disable(gl.SAMPLE_ALPHA_TO_COVERAGE);
  }

  #drawGrid(scene) {
    const { gl } = this;
    this.#use(this.lines, scene);
    gl.uniform4fv(this.lines.at.line, scene.theme.grid);
    gl.bindVertexArray(this.gridArray);
    gl.drawArrays(gl.LINES, 0, this.gridCount);
    gl.bindVertexArray(null);
    this.drawCalls++;
  }

  #drawEdges(scene) {
    const { gl } = this;
    this.#use(this.edges, scene);
    const { at } = this.edges;
    const fade = [2.2, 12];
    gl.uniform3fv(at.ink, scene.theme.ink);
    gl.uniform3fv(at.accentInk, scene.theme.accentInk);
    gl.uniform1f(at.mmAtOne, scene.mmAtOne);
    gl.uniform1f(at.most, scene.theme.edge);
    gl.uniform2fv(at.fade, fade);
    const each = (group) => {
      // Even the nearest piece of such a group is too thin to show an edge.
      if (group.depth / this.#pixelAt(scene, group.box) < fade[0]) return false;
      gl.uniform1f(at.depth, group.depth);
      return true;
    };
    this.#cutBy(this.edges, []);
    this.#drawSet(this.whole, 'edges', each);
    this.#cutBy(this.edges, scene.cuts);
    this.#drawSet(this.opened, 'edges', each);
  }

  /** Draws the axes of pieces so far away that their sections are no thicker than a pixel or two. */
  #drawAxes(scene, program, within = scene.toClip) {
    const { gl } = this;
    this.#use(program, scene, within);
    gl.uniform1f(program.at.mmAtOne, scene.mmAtOne);
    if (program === this.axes) {
      gl.uniform3fv(program.at.accent, scene.theme.accent);
      gl.uniform3fv(program.at.paper, scene.theme.paper);
      gl.uniform2fv(program.at.haze, scene.haze);
      gl.uniform1f(program.at.dimmed, this.#dimmed());
    }
    const farthest = scene.eye[3] ? scene.mmAtOne * scene.haze[1] : scene.mmAtOne;
    const each = (group) => {
      // Bolts too small to be seen leave no line, or every joint would be a knot of lines; but selected ones do.
      if (group.kind === 'bolts' && !group.selected) return false;
      const depth = Math.sqrt(group.depth * group.breadth);
      if (depth / farthest > 2.4) return false;
      gl.uniform1f(program.at.depth, depth);
      return true;
    };
    this.#cutBy(program, []);
    this.#drawSet(this.whole, 'axes', each);
    this.#cutBy(program, scene.cuts);
    this.#drawSet(this.opened, 'axes', each);
  }

  /** Lets the selected pieces shine faintly through what stands before them. */
  #drawGhost(scene) {
    const { gl } = this;
    gl.enable(gl.CULL_FACE);
    gl.depthFunc(gl.GREATER);
    this.#use(this.faces, scene);
    this.#cutBy(this.faces, scene.cuts);
    gl.uniform4f(this.faces.at.ghost, ...scene.theme.accent, 0.3);
    this.#drawSet(this.selected, 'faces');
    gl.depthFunc(gl.LEQUAL);
    gl.disable(gl.CULL_FACE);
  }

  /**
   * Gives the piece at a pixel, or the nearest one within four pixels: {piece, dx, dy} in device pixels, or null.
   * @param {number} x device pixels from the left  @param {number} y from the top  @param {boolean} exact
   */
  pieceAt(scene, x, y, exact = false) {
    const { gl } = this;
    const width = gl.drawingBufferWidth;
    const height = gl.drawingBufferHeight;
    // A matrix that lets the square around the pixel fill the picture: what it leaves outside is not drawn.
    const kx = width / PICK_SIDE;
    const ky = height / PICK_SIDE;
    const cx = (2 * (x + 0.5)) / width - 1;
    const cy = 1 - (2 * (y + 0.5)) / height;
    const closer = [kx, 0, 0, 0, 0, ky, 0, 0, 0, 0, 1, 0, -cx * kx, -cy * ky, 0, 1];
    const half = (PICK_SIDE - 1) / 2;
    const square = [x - half, height - 1 - y - half, PICK_SIDE, PICK_SIDE];
    this.#sizePicking(width, height);
    gl.bindFramebuffer(gl.FRAMEBUFFER, this.pickFrame);
    gl.viewport(0, 0, width, height);
    gl.enable(gl.SCISSOR_TEST);
    gl.scissor(...square);
    gl.depthMask(true);
    gl.disable(gl.BLEND);
    gl.enable(gl.DEPTH_TEST);
    gl.depthFunc(gl.LEQUAL);
    gl.clearBufferuiv(gl.COLOR, 0, [0, 0, 0, 0]);
    gl.clearBufferfv(gl.DEPTH, 0, [1]);
    const within = product(closer, scene.toClip);
    this.#use(this.numbers, scene, within);
    const calls = this.drawCalls;
    gl.enable(gl.CULL_FACE);
    this.#cutBy(this.numbers, []);
    this.#drawSet(this.whole, 'faces', this.#boltsLargeEnough(scene));
    gl.disable(gl.CULL_FACE);
    this.#cutBy(this.numbers, scene.cuts);
    this.#drawSet(this.opened, 'faces', this.#boltsLargeEnough(scene));
    this.#drawAxes(scene, this.axisNumbers, within);
    gl.disable(gl.SCISSOR_TEST);
    this.drawCalls = calls;
    const found = new Uint32Array(PICK_SIDE * PICK_SIDE);
    gl.readPixels(...square, gl.RED_INTEGER, gl.UNSIGNED_INT, found);
    gl.bindFramebuffer(gl.FRAMEBUFFER, null);
    let best = null;
    found.forEach((number, index) => {
      if (!number) return;
      const dx = (index % PICK_SIDE) - half;
      const dy = half - Math.floor(index / PICK_SIDE);
      const far = dx * dx + dy * dy;
      if ((!exact || far === 0) && (!best || far < best.far)) best = { piece: number - 1, dx, dy, far };
    });
    return best;
  }

  /**
   * Times of `count` pictures: {seconds, asking} each, `asking` being the part that the page itself takes before
   * the card is done. `separately` makes one draw call for each piece, to compare.
   */
  frameTimes(scene, count, separately) {
    const { gl } = this;
    const times = [];
    const pixel = new Uint8Array(4);
    for (let frame = 0; frame < count; frame++) {
      const start = performance.now();
      this.separately = separately;
      this.draw(scene);
      this.separately = false;
      const asked = performance.now();
      // Reading a pixel waits until the picture is done.
      gl.readPixels(0, 0, 1, 1, gl.RGBA, gl.UNSIGNED_BYTE, pixel);
      times.push({ seconds: (performance.now() - start) / 1000, asking: (asked - start) / 1000 });
    }
    return times;
  }

  /** The share of pixels that differ from the paper, 0 to 1; draws first. */
  filledShare(scene) {
    const { gl } = this;
    this.draw(scene);
    const width = gl.drawingBufferWidth;
    const pixels = new Uint8Array(4 * width * gl.drawingBufferHeight);
    gl.readPixels(0, 0, width, gl.drawingBufferHeight, gl.RGBA, gl.UNSIGNED_BYTE, pixels);
    const paper = scene.theme.paper.map((value) => Math.round(255 * value));
    let differ = 0;
    for (let at = 0; at < pixels.length; at += 4) {
      if (
        Math.abs(pixels[at] - paper[0]) + Math.abs(pixels[at + 1] - paper[1]) + Math.abs(pixels[at + 2] - paper[2]) >
        12
      )
        differ++;
    }
    return differ / (pixels.length / 4);
  }
}
