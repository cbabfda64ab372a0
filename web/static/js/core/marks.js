// Marks: what happened on the tape, in bunches where several would lie on top of
// one another.

/** @typedef {import('./protocol.js').Mark} Mark */

/** @typedef {{x: number, marks: Mark[]}} Bunch */

/** Kinds from the gravest: that of a bunch is its gravest. */
const KINDS = ['contact', 'parting', 'chatter', 'ceiling'];
const WORDS = { contact: 'contact', parting: 'parting', chatter: 'chatter', ceiling: 'past the ceiling', end: 'end' };

/**
 * @param {Mark[]} marks
 * @param {(tick: number) => number} x px; marks outside of 0 … width are left out
 * @param {number} width
 * @param {number} apart px between bunches, at the least
 * @returns {Bunch[]}
 */
export function bunches(marks, x, width, apart) {
  /** @type {Bunch[]} */
  const out = [];
  for (const m of inOrder(marks)) {
    const at = x(m.tick);
    if (at < 0 || at > width) continue;
    const last = out.at(-1);
    if (last && at - last.x < apart) last.marks.push(m);
    else out.push({ x: at, marks: [m] });
  }
  return out;
}

/** Ends have badges of their own. @param {Mark[]} marks */
const inOrder = (marks) => marks.filter((m) => m.kind !== 'end').sort((a, b) => a.tick - b.tick);

/** @param {Bunch} b */
export const kindOf = (b) => KINDS.find((k) => b.marks.some((m) => m.kind === k)) ?? 'contact';

/** What a bunch says when it is pointed at. @param {Bunch} b */
export function wordsOf(b) {
  const texts = b.marks.slice(0, 4).map((m) => m.text || WORDS[m.kind]);
  const more = b.marks.length - texts.length;
  return texts.join('\n') + (more > 0 ? `\nand ${more} more here` : '');
}

/**
 * Where a bunch leads to: the next of its marks after now, and from the last of
 * them on the first again.
 * @param {Bunch} b
 * @param {number} now
 */
export const leadsTo = (b, now) => (b.marks.find((m) => m.tick > now) ?? b.marks[0]).tick;

/**
 * The tick of the mark next to now, or null.
 * @param {Mark[]} marks
 * @param {number} now
 * @param {1 | -1} way
 * @returns {number | null}
 */
export function nextTo(marks, now, way) {
  const ticks = marks.map((m) => m.tick).filter((t) => (way > 0 ? t > now : t < now));
  return ticks.length > 0 ? (way > 0 ? Math.min : Math.max)(...ticks) : null;
}
