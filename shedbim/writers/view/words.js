// How numbers are written, and how elements of the page are made and put in place.

/** Writes a number with a narrow space between thousands and a fixed count of decimals. */
function written(value, decimals = 0) {
  const fixed = Math.abs(value).toFixed(decimals);
  const [whole, part] = fixed.split('.');
  const grouped = whole.replace(/\B(?=(\d{3})+$)/g, '\u202f');
  const sign = value < 0 && Number(fixed) !== 0 ? '\u2212' : '';
  return sign + grouped + (part ? `.${part}` : '');
}

/** Writes a mass: kg below ten tonnes, tonnes above. */
const writtenMass = (kg) => (kg < 1e4 ? `${written(kg, kg < 100 ? 2 : 0)} kg` : `${written(kg / 1000, 1)} t`);

const range = (count) => Array.from({ length: count }, (_, index) => index);

/** Writes a count with its word, in the plural where that is due. */
const counted = (count, word, many = `${word}s`) => `${written(count)} ${count === 1 ? word : many}`;

/** Gives an element with properties and children; texts are always put in as text. */
function element(name, properties = {}, ...children) {
  const made = document.createElement(name);
  for (const [key, value] of Object.entries(properties)) {
    if (key === 'class') made.className = value;
    else if (key === 'data') Object.assign(made.dataset, value);
    else if (key.startsWith('on')) made.addEventListener(key.slice(2), value);
    else if (key in made && !key.includes('-')) made[key] = value;
    else made.setAttribute(key, value);
  }
  made.append(...children);
  return made;
}

const byId = (id) => document.getElementById(id);

/** Puts an element of the overlay in the middle of a pixel of the picture. */
function pin(made, x, y) {
  made.style.transform = `translate(${x.toFixed(1)}px, ${y.toFixed(1)}px) translate(-50%, -50%)`;
}
