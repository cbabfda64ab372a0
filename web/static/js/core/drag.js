// Drag: what a hand does to a thing, by pointer or by key. The grab offset is
// kept: a thing taken by its rim stays under the pointer by its rim.

/** @typedef {import('./protocol.js').Point} Point */
/** @typedef {import('./things.js').Thing} Thing */

/** The grid to snap to, m. */
export const SNAP = 0.1;

/**
 * @typedef {object} Drag
 * @property {Thing} thing
 * @property {Point} from the anchor when it was taken
 * @property {Point} offset from the pointer to the anchor
 * @property {Point} anchor now
 */

/**
 * @param {Thing} thing
 * @param {Point} anchor
 * @param {Point} pointer in metres
 * @returns {Drag}
 */
export function take(thing, anchor, pointer) {
  return { thing, from: anchor, offset: [anchor[0] - pointer[0], anchor[1] - pointer[1]], anchor };
}

/**
 * The pointer is at another place. Where it may go is limited to the bounds, so
 * that nothing is lost beyond the edge.
 * @param {Drag} drag
 * @param {Point} pointer
 * @param {boolean} snapped
 * @param {[number, number, number, number]} bounds
 * @returns {Drag}
 */
export function move(drag, pointer, snapped, bounds) {
  const at = /** @type {Point} */ ([pointer[0] + drag.offset[0], pointer[1] + drag.offset[1]]);
  return { ...drag, anchor: within(snapped ? snap(at) : at, bounds) };
}

/** @param {Point} p @returns {Point} */
export const snap = ([x, y]) => [onGrid(x), onGrid(y)];

/** @param {number} v */
const onGrid = (v) => Math.round(v / SNAP) / Math.round(1 / SNAP);

/**
 * @param {Point} p
 * @param {[number, number, number, number]} bounds
 * @returns {Point}
 */
export const within = ([x, y], [x0, y0, x1, y1]) => [Math.min(Math.max(x, x0), x1), Math.min(Math.max(y, y0), y1)];

/**
 * How far a key moves a thing: 0.1 m, with Shift 0.5 m, with Alt 0.01 m. Null
 * for every other key.
 * @param {{key: string, shiftKey: boolean, altKey: boolean, ctrlKey?: boolean, metaKey?: boolean}} event
 * @returns {Point | null}
 */
export function nudge(event) {
  if (event.ctrlKey || event.metaKey) return null;
  const far = event.altKey ? 0.01 : event.shiftKey ? 0.5 : 0.1;
  switch (event.key) {
    case 'ArrowLeft':
      return [-far, 0];
    case 'ArrowRight':
      return [far, 0];
    case 'ArrowUp':
      return [0, far];
    case 'ArrowDown':
      return [0, -far];
    default:
      return null;
  }
}

/**
 * The anchor after a nudge, without what binary addition leaves behind.
 * @param {Point} anchor
 * @param {Point} by
 * @param {[number, number, number, number]} bounds
 * @returns {Point}
 */
export function nudged(anchor, by, bounds) {
  const tidy = (/** @type {number} */ v) => Math.round(v * 1e4) / 1e4;
  return within([tidy(anchor[0] + by[0]), tidy(anchor[1] + by[1])], bounds);
}
