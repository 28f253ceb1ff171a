// Colours of pieces by what they are.

/** Gives [red, green, blue], 0 to 255, of a colour in the OKLCH space: lightness 0-1, chroma, hue in degrees. */
function oklch(lightness, chroma, hue) {
  const angle = (hue * Math.PI) / 180;
  const a = chroma * Math.cos(angle);
  const b = chroma * Math.sin(angle);
  // Matrices of the published OKLab colour space.
  const l = (lightness + 0.3963377774 * a + 0.2158037573 * b) ** 3;
  const m = (lightness - 0.1055613458 * a - 0.0638541728 * b) ** 3;
  const s = (lightness - 0.0894841775 * a - 1.291485548 * b) ** 3;
  const linear = [
    4.0767416621 * l - 3.3077115913 * m + 0.2309699292 * s,
    -1.2684380046 * l + 2.6097574011 * m - 0.3413193965 * s,
    -0.0041960863 * l - 0.7034186147 * m + 1.707614701 * s,
  ];
  return linear.map((value) => {
    const bounded = clamp(value, 0, 1);
    return Math.round(255 * (bounded <= 0.0031308 ? 12.92 * bounded : 1.055 * bounded ** (1 / 2.4) - 0.055));
  });
}

/** Gives colour number `index` of a row in which neighbours differ: the hue turns by the golden angle. */
const rowColour = (index) => oklch([0.7, 0.6, 0.78][index % 3], 0.105, 25 + index * 137.508);

const PLAIN_COLOUR = [176, 178, 174];
const SEVERITY_COLOURS = { error: [206, 58, 48], warning: [218, 142, 34], note: [74, 132, 186] };

/**
 * The ways to colour: each gives entries {label, colour, pieces} that together hold every piece once.
 * `offered(model)` says whether the data hold what it needs.
 */
const COLOURINGS = {
  role: {
    label: 'role',
    offered: () => true,
    entries: (model) =>
      byPart(
        model,
        (part) => part.role,
        (word) => model.roles.find((role) => role.word === word).colour,
      ),
  },
  section: {
    label: 'section',
    offered: () => true,
    entries: (model) =>
      byPart(
        model,
        (part) => part.section,
        (_, index) => rowColour(index),
      ),
  },
  mark: {
    label: 'mark',
    offered: () => true,
    entries: (model) =>
      byPart(
        model,
        (part) => part.mark,
        (_, index) => rowColour(index),
      ),
  },
  finding: {
    label: 'finding',
    offered: (model) => model.findings.length > 0,
    entries: (model) =>
      byPiece(
        model,
        SEVERITIES.map((word) => ({
          label: word,
          colour: SEVERITY_COLOURS[word],
          pieces: model.findings.filter((finding) => finding.severity === word).flatMap((finding) => finding.pieces),
        })),
        'no finding',
      ),
  },
  change: {
    label: 'change',
    offered: (model) => model.changes.length > 0,
    entries: (model) =>
      byPiece(
        model,
        model.changes.map(({ word, pieces }, index) => ({ label: word, colour: rowColour(index), pieces })),
        'unchanged',
      ),
  },
};

const SEVERITIES = ['error', 'warning', 'note'];

/** Entries by a word of the part, in the order of first use. */
function byPart(model, word, colour) {
  const entries = new Map();
  for (const part of model.parts) {
    const label = word(part);
    if (!entries.has(label)) entries.set(label, { label, colour: colour(label, entries.size), pieces: [] });
    for (const piece of part.pieces) entries.get(label).pieces.push(piece);
  }
  return [...entries.values()];
}

/** Entries of listed pieces, each piece in the first that names it, and one for the rest. */
function byPiece(model, entries, rest) {
  const taken = new Uint8Array(model.pieces.count);
  const result = entries.map((entry) => ({
    ...entry,
    pieces: entry.pieces.filter((piece) => !taken[piece] && (taken[piece] = 1)),
  }));
  const others = Array.from(taken.keys()).filter((piece) => !taken[piece]);
  return [...result, { label: rest, colour: PLAIN_COLOUR, pieces: others }].filter((entry) => entry.pieces.length);
}
