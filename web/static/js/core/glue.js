// Glue: keeps a comma with the number or choice before it. A field is a box of
// its own, and a browser may break the line between a box and what follows it.

/** @typedef {import('./protocol.js').Part} Part */

/**
 * The parts, each with the punctuation that belongs right behind it, which is
 * taken from the text that follows.
 * @param {Part[]} parts
 * @returns {{part: Part, tail: string}[]}
 */
export function glue(parts) {
  const glued = [];
  for (let i = 0; i < parts.length; i++) {
    const before = parts[i - 1];
    const taken = before && !isText(before) && isText(parts[i]) ? tailOf(parts[i]) : '';
    const next = parts[i + 1];
    const tail = !isText(parts[i]) && next && isText(next) ? tailOf(next) : '';
    const part = taken ? { ...parts[i], text: (parts[i].text ?? '').slice(taken.length) } : parts[i];
    glued.push({ part, tail });
  }
  return glued;
}

/** @param {Part} p */
const isText = (p) => !p.number && !p.choice;

/** @param {Part} p */
const tailOf = (p) => /^[,.;:!?)]*/.exec(p.text ?? '')?.[0] ?? '';
