// Format: how times, lengths and shares are written. The decimal mark is a
// point everywhere, as in scenario files. Values that cannot be written as a
// number become an en dash.

const NONE = '–';

/**
 * Seconds as minutes and seconds: 93.44 → "1:33.4".
 * @param {number | null | undefined} s
 * @param {number} [decimals]
 */
export function clock(s, decimals = 1) {
  if (!finite(s)) return NONE;
  const unit = 10 ** decimals;
  // Rounded before it is split, so that 59.96 is 1:00.0 and never 0:60.0.
  const ticks = Math.round(Math.abs(s) * unit);
  const minutes = Math.floor(ticks / (60 * unit));
  const rest = (ticks - minutes * 60 * unit) / unit;
  const seconds = rest.toFixed(decimals).padStart(decimals > 0 ? decimals + 3 : 2, '0');
  return `${s < 0 && ticks > 0 ? '−' : ''}${minutes}:${seconds}`;
}

/**
 * A length with its unit: 0.047 → "0.05 m". The space does not break.
 * @param {number | null | undefined} m
 * @param {number} [decimals]
 */
export const metres = (m, decimals = 2) => (finite(m) ? `${fixed(m, decimals)}\u00a0m` : NONE);

/**
 * @param {number | null | undefined} s
 * @param {number} [decimals]
 */
export const seconds = (s, decimals = 1) => (finite(s) ? `${fixed(s, decimals)}\u00a0s` : NONE);

/**
 * A share as a percentage: 0.114 → "11 %". Something is never written as 0 %.
 * @param {number | null | undefined} share
 */
export function percent(share) {
  if (!finite(share)) return NONE;
  if (share > 0 && share < 0.005) return '<\u00a01\u00a0%';
  return `${fixed(share * 100, 0)}\u00a0%`;
}

/** @param {number | null | undefined} n */
export const count = (n) => (finite(n) ? fixed(n, 0).replace(/\B(?=(\d{3})+(?!\d))/g, ',') : NONE);

/**
 * A place as it is read out: "9.10, 2.00 m".
 * @param {number} x
 * @param {number} y
 */
export const place = (x, y) => `${fixed(x, 2)}, ${fixed(y, 2)}\u00a0m`;

/**
 * A speed of the run: 0.25 → "×¼"; 0 means as fast as it goes.
 * @param {number} v
 */
export function speed(v) {
  if (v === 0) return 'as fast as it goes';
  return `×${v === 0.25 ? '¼' : v === 0.5 ? '½' : v}`;
}

/**
 * Fixed decimals with a true minus sign, and no minus before a zero.
 * @param {number} v
 * @param {number} decimals
 */
export function fixed(v, decimals) {
  const s = Math.abs(v).toFixed(decimals);
  return v < 0 && Number(s) !== 0 ? `−${s}` : s;
}

/**
 * @param {number | null | undefined} v
 * @returns {v is number}
 */
function finite(v) {
  return typeof v === 'number' && Number.isFinite(v);
}

/**
 * Splits a sentence into plain pieces and numbers with their units, so that the
 * numbers can be set in the monospaced face.
 * @param {string} sentence
 * @returns {{text: string, number: boolean}[]}
 */
export function numbersIn(sentence) {
  const found = /(?<![\p{L}\d])[−-]?\d+(?::\d{2})?(?:[.,]\d+)*(?:[ \u00a0](?:m\/s|rad\/s|m|s|%|rad)(?!\p{L})|°)?/gu;
  const parts = [];
  let end = 0;
  for (const match of sentence.matchAll(found)) {
    if (match.index > end) parts.push({ text: sentence.slice(end, match.index), number: false });
    parts.push({ text: match[0].replace(' ', '\u00a0'), number: true });
    end = match.index + match[0].length;
  }
  if (end < sentence.length) parts.push({ text: sentence.slice(end), number: false });
  return parts;
}
