// Gauge: the exits of a mode as groups of gauges, one group for each mode that it
// can be left for. Two exits to the same mode that share conditions show those
// once, and below them what sets the exits apart, of which one must hold.

/** @typedef {import('./protocol.js').Exit} Exit */
/** @typedef {import('./protocol.js').Gauge} Gauge */
/** @typedef {import('./protocol.js').Mode} Mode */

/**
 * @typedef {object} Group
 * @property {number} to
 * @property {string} name of the mode
 * @property {string} when behind the name
 * @property {Gauge[]} all must be met
 * @property {Gauge[]} one of these must be met besides
 * @property {number} hold s for which they must have been met; 0: none
 * @property {number} held s for which they have been
 */

/**
 * The modes that end the run come last; otherwise the order is that of the exits.
 * @param {Exit[]} exits
 * @param {Mode[]} modes
 * @returns {Group[]}
 */
export function groups(exits, modes) {
  /** @type {Map<number, Exit[]>} */
  const by = new Map();
  for (const x of exits) by.set(x.to, [...(by.get(x.to) ?? []), x]);
  /** @type {Group[]} */
  const out = [];
  for (const same of by.values()) out.push(...merged(same));
  const weight = (/** @type {Group} */ g) => (ends(modes[g.to]?.look) ? 1000 : 0) - g.all.length - g.one.length;
  return out.map((g, i) => ({ g, i })).sort((a, b) => weight(a.g) - weight(b.g) || a.i - b.i).map(({ g }) => g);
}

/** @param {string | undefined} look */
const ends = (look) => look === 'done' || look === 'fail';

/**
 * @param {Exit[]} same exits to one mode
 * @returns {Group[]}
 */
function merged(same) {
  const alike = (/** @type {Gauge} */ a) => (/** @type {Gauge} */ b) => a.label === b.label && a.text === b.text && a.met === b.met;
  const all = same[0].gauges.filter((g) => same.every((x) => x.gauges.some(alike(g))));
  const rests = same.map((x) => x.gauges.filter((g) => !all.some(alike(g))));
  const held = Math.max(...same.map((x) => x.held));
  const hold = Math.max(...same.map((x) => x.hold));
  if (same.length > 1 && rests.every((r) => r.length === 1)) {
    return [{ to: same[0].to, name: same[0].name, when: all.length > 0 ? 'when all hold' : 'when one holds', all, one: rests.map((r) => r[0]), hold, held }];
  }
  return same.map((x) => ({
    to: x.to, name: x.name, when: x.gauges.length > 1 ? 'when all hold' : 'when', all: x.gauges, one: [], hold: x.hold, held: x.held,
  }));
}

/**
 * Where the parts of a gauge are, in percent of its length. The band reaches from
 * the threshold to where a condition that is met is given up again.
 * @param {Gauge} g
 */
export function places(g) {
  const at = (/** @type {number} */ v) => Math.round(Math.min(Math.max(v, 0), 1) * 1000) / 10;
  return { fill: at(g.share), mark: at(g.mark), band: at(Math.min(g.mark, g.release)), width: at(Math.abs(g.release - g.mark)) };
}
