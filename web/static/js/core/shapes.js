// Shapes: path data, in metres, of what stands on the floor.

/** @typedef {import('./protocol.js').Solid} Solid */
/** @typedef {import('./protocol.js').Mover} Mover */
/** @typedef {import('./protocol.js').Point} Point */

/**
 * One path for all solids of a kind but those left out: thousands of them cost
 * two elements.
 * @param {Solid[]} solids
 * @param {(index: number) => boolean} left_out
 * @returns {{walls: string, fills: string}}
 */
export function standing(solids, left_out) {
  /** @type {string[]} */
  const walls = [];
  /** @type {string[]} */
  const fills = [];
  for (let i = 0; i < solids.length; i++) {
    if (left_out(i)) continue;
    (solids[i].shape === 'wall' ? walls : fills).push(outline(solids[i]));
  }
  return { walls: walls.join(''), fills: fills.join('') };
}

/** @param {Solid} s */
export function outline(s) {
  if (s.shape === 'disc') return ring(s.points[0][0], s.points[0][1], s.radius ?? 0);
  return line(s.points) + (s.shape === 'polygon' ? 'Z' : '');
}

/**
 * The shape of a mover about its own centre.
 * @param {Mover} m
 */
export function moverOutline(m) {
  if (m.radius) return ring(0, 0, m.radius);
  const [a, b] = m.half ?? [0, 0];
  const [c, s] = [Math.cos(m.heading ?? 0), Math.sin(m.heading ?? 0)];
  const corners = /** @type {Point[]} */ ([[a, b], [-a, b], [-a, -b], [a, -b]]);
  return line(corners.map(([x, y]) => [c * x - s * y, s * x + c * y])) + 'Z';
}

/**
 * The way of a mover; nothing for one that stands still.
 * @param {Mover} m
 */
export function route(m) {
  if (m.route.length < 2) return '';
  return line(m.route) + (m.loop ? 'Z' : '');
}

/** @param {Point[]} points */
export const line = (points) => `M${points.map(([x, y]) => `${short(x)} ${short(y)}`).join('L')}`;

/**
 * A circle as two arcs.
 * @param {number} x
 * @param {number} y
 * @param {number} r
 */
export function ring(x, y, r) {
  const [left, right] = [short(x - r), short(x + r)];
  return `M${left} ${short(y)}A${short(r)} ${short(r)} 0 1 0 ${right} ${short(y)}A${short(r)} ${short(r)} 0 1 0 ${left} ${short(y)}Z`;
}

/** @param {number} v */
const short = (v) => Math.round(v * 1e4) / 1e4;
