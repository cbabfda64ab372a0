// Camera: the one place that knows how metres on the floor become pixels on the
// screen. World y points up, screen y points down. A camera is a plain value;
// every function returns a new one.

/**
 * @typedef {object} Camera
 * @property {number} x world point in the middle of the view, m
 * @property {number} y
 * @property {number} scale pixels a metre
 * @property {number} width of the view, px
 * @property {number} height of the view, px
 */

/** @typedef {[number, number, number, number]} Bounds x0, y0, x1, y1 in metres */

/** Pixels kept free round the floor when it is fitted into the view, and more below it, for the scale bar. */
const MARGIN = 14;
const BELOW = 14;
/** The closest look: pixels a metre. */
const CLOSEST = 2000;

/**
 * The camera that shows all of bounds.
 * @param {Bounds} bounds
 * @param {number} width
 * @param {number} height
 * @returns {Camera}
 */
export function fit(bounds, width, height) {
  const [x0, y0, x1, y1] = bounds;
  const scale = fittedScale(bounds, width, height);
  return { x: (x0 + x1) / 2, y: (y0 + y1) / 2 - BELOW / 2 / scale, scale, width, height };
}

/**
 * @param {Bounds} bounds
 * @param {number} width
 * @param {number} height
 */
function fittedScale([x0, y0, x1, y1], width, height) {
  const across = Math.max(width - 2 * MARGIN, 1) / Math.max(x1 - x0, 1e-6);
  const up = Math.max(height - 2 * MARGIN - BELOW, 1) / Math.max(y1 - y0, 1e-6);
  return Math.min(across, up, CLOSEST);
}

/**
 * @param {Camera} c
 * @param {number} x
 * @param {number} y
 * @returns {[number, number]} pixels from the upper left corner of the view
 */
export function toScreen(c, x, y) {
  return [c.width / 2 + (x - c.x) * c.scale, c.height / 2 - (y - c.y) * c.scale];
}

/**
 * @param {Camera} c
 * @param {number} sx
 * @param {number} sy
 * @returns {[number, number]} metres
 */
export function toWorld(c, sx, sy) {
  return [c.x + (sx - c.width / 2) / c.scale, c.y - (sy - c.height / 2) / c.scale];
}

/**
 * Zooms by factor so that the world point under (sx, sy) stays there, between
 * half the fitted scale and CLOSEST.
 * @param {Camera} c
 * @param {Bounds} bounds
 * @param {number} sx
 * @param {number} sy
 * @param {number} factor
 * @returns {Camera}
 */
export function zoomAbout(c, bounds, sx, sy, factor) {
  const least = fittedScale(bounds, c.width, c.height) / 2;
  const scale = Math.min(Math.max(c.scale * factor, least), CLOSEST);
  const [wx, wy] = toWorld(c, sx, sy);
  const zoomed = { ...c, scale, x: wx - (sx - c.width / 2) / scale, y: wy + (sy - c.height / 2) / scale };
  return keepInSight(zoomed, bounds);
}

/**
 * Moves the picture by (dx, dy) pixels.
 * @param {Camera} c
 * @param {Bounds} bounds
 * @param {number} dx
 * @param {number} dy
 * @returns {Camera}
 */
export function pan(c, bounds, dx, dy) {
  return keepInSight({ ...c, x: c.x - dx / c.scale, y: c.y + dy / c.scale }, bounds);
}

/**
 * The same look in a view of another size: fitted stays fitted, and otherwise
 * the middle and the scale stay.
 * @param {Camera} c
 * @param {Bounds} bounds
 * @param {number} width
 * @param {number} height
 * @returns {Camera}
 */
export function resize(c, bounds, width, height) {
  return isFitted(c, bounds) ? fit(bounds, width, height) : { ...c, width, height };
}

/**
 * @param {Camera} c
 * @param {Bounds} bounds
 */
export function isFitted(c, bounds) {
  const f = fit(bounds, c.width, c.height);
  const near = 0.5 / f.scale;
  return Math.abs(c.scale / f.scale - 1) < 1e-3 && Math.abs(c.x - f.x) < near && Math.abs(c.y - f.y) < near;
}

/**
 * Keeps the middle of the view over the floor, so that it cannot be lost.
 * @param {Camera} c
 * @param {Bounds} bounds
 * @returns {Camera}
 */
function keepInSight(c, [x0, y0, x1, y1]) {
  return { ...c, x: Math.min(Math.max(c.x, x0), x1), y: Math.min(Math.max(c.y, y0), y1) };
}

/**
 * The transform attribute of the group that is drawn in metres.
 * @param {Camera} c
 */
export function matrix(c) {
  const [tx, ty] = toScreen(c, 0, 0);
  return `matrix(${round(c.scale)} 0 0 ${round(-c.scale)} ${round(tx)} ${round(ty)})`;
}

/** @param {number} v */
const round = (v) => Math.round(v * 1000) / 1000;

/**
 * The smallest of 1, 2, 5 times a power of ten, in metres, that is at least
 * px pixels long.
 * @param {number} scale
 * @param {number} px
 */
export function niceLength(scale, px) {
  const least = px / scale;
  const decade = 10 ** Math.floor(Math.log10(least));
  const step = [1, 2, 5, 10].find((k) => k * decade >= least * (1 - 1e-9)) ?? 10;
  return step * decade;
}
