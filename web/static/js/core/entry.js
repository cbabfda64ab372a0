// Entry: what typing, stepping and scrubbing do to one number of the brief. Free
// of the DOM; ui/brief.js draws it.

/**
 * @typedef {object} Range
 * @property {number} min
 * @property {number} max
 * @property {number} step what one arrow key or one notch of a sideways drag adds
 * @property {number} decimals shown, unless the value needs more
 * @property {string} [unit]
 */

/** More decimals than this are never shown or sent. */
const MOST_DECIMALS = 6;

/**
 * Reads what a person typed: "0.21", "0,21", "0.21 m", "−3", "1e-3". Returns
 * null for anything else; the unit, when typed, must be the number's own.
 * @param {string} text
 * @param {string} [unit]
 * @returns {number | null}
 */
export function parse(text, unit = '') {
  let s = text.trim().replaceAll('\u00a0', ' ').replaceAll('\u2009', ' ').replace('−', '-');
  if (unit && s.toLowerCase().endsWith(unit.toLowerCase())) s = s.slice(0, -unit.length).trim();
  if (/^[^.]*,[^.,]*$/.test(s)) s = s.replace(',', '.');
  if (!/^[+-]?(\d+\.?\d*|\.\d+)(e[+-]?\d+)?$/i.test(s)) return null;
  const v = Number(s);
  return Number.isFinite(v) ? v : null;
}

/**
 * The value as text: the usual decimals, more where they carry something.
 * @param {number} v
 * @param {Range} range
 */
export function format(v, range) {
  const usual = v.toFixed(range.decimals);
  const full = String(Number(v.toFixed(MOST_DECIMALS)));
  const text = Number(usual) === Number(full) || !/^-?\d*\.?\d*$/.test(full) ? usual : full;
  return Number(text) === 0 ? text.replace('-', '') : text;
}

/**
 * What is wrong with v, in words, or null.
 * @param {number | null} v
 * @param {Range} range
 */
export function problem(v, range) {
  if (v === null) return `That is not a number. It can be ${rangeText(range)}.`;
  if (v < range.min || v > range.max) return `Out of range: it can be ${rangeText(range)}.`;
  if (range.decimals === 0 && range.step >= 1 && !Number.isInteger(v)) return `It must be a whole number, ${rangeText(range)}.`;
  return null;
}

/**
 * The range in words: "0.05 to 1.00 m".
 * @param {Range} range
 */
export function rangeText(range) {
  const unit = range.unit ? `\u00a0${range.unit}` : '';
  return `${format(range.min, range)} to ${format(range.max, range)}${unit}`;
}

/**
 * The value n steps on, on the grid of the steps when it was on it, inside the
 * range.
 * @param {number} v
 * @param {number} n steps, negative: down
 * @param {Range} range
 */
export function step(v, n, range) {
  return clamp(tidy(v + n * range.step), range);
}

/**
 * The value after dragging sideways by dx pixels from where it was v.
 * @param {number} v
 * @param {number} dx
 * @param {boolean} fast ten steps a notch
 * @param {Range} range
 */
export function scrub(v, dx, fast, range) {
  const notches = Math.trunc(dx / PIXELS_A_NOTCH);
  return step(v, notches * (fast ? 10 : 1), range);
}

/** How far to drag for one step. */
export const PIXELS_A_NOTCH = 5;

/**
 * @param {number} v
 * @param {Range} range
 */
export const clamp = (v, range) => Math.min(Math.max(v, range.min), range.max);

/**
 * Takes off what adding decimal steps in binary leaves behind: 0.30000000000000004.
 * @param {number} v
 */
const tidy = (v) => Number(v.toFixed(MOST_DECIMALS));
