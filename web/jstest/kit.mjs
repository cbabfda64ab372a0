// Kit: a small floor for the tests, as the server would tell of it.

import { hello as asHello } from '../static/js/core/protocol.js';

/**
 * @param {any} [change]
 * @param {any} [frameChange]
 */
export function hello(change = {}, frameChange = {}) {
  return asHello({
    session: 's1', name: 'Kit', file: '{}', tick_s: 0.005, playing: true, speed: 1, viewers: 1,
    bounds: [0, 0, 12, 8], start: [1, 1, 0], goal: [11, 7, 0.15], hull: 0.2, track: 0.3, wheel: 0.05, mount: 0.18,
    range_max: 3, bearings: [0, Math.PI], motion: 'two_wheels',
    modes: [{ name: 'goal-seeking', look: 'goal' }, { name: 'wall-following', look: 'wall' }],
    solids: [
      { id: 'w1', shape: 'wall', points: [[2, 2], [2, 5], [4, 5]] },
      { id: 'ell', shape: 'polygon', points: [[6, 1], [8, 1], [8, 2], [7, 2], [7, 3], [6, 3]] },
      { id: 'post', shape: 'disc', points: [[9, 4]], radius: 0.5 },
      { id: 'border', shape: 'wall', points: [[0, 0], [12, 0]], fixed: true },
    ],
    movers: [
      { id: 'cart', half: [0.5, 0.2], heading: Math.PI / 2, route: [[3, 7], [9, 7]] },
      { id: 'drum', radius: 0.3, route: [[5, 4]] },
    ],
    brief: [], asked: { within_s: 90, leeway_m: 0.1, switches: 10 }, shadows: true, tape: tape(),
    frame: frame(frameChange),
    ...change,
  });
}

/** @param {any} [change] */
export function frame(change = {}) {
  return {
    kind: 'frame', tick: 0, time: 0, playing: true, speed: 1, viewers: 1, pose: [1, 1, 0], belief: [1, 1, 0], mode: 0, side: 0,
    since: 0, why: '', ranges: [], hits: '', gap: 1, leeway: null, closest: null, way: 0, switches: 0, contacts: 0, saturated: 0,
    estimate_error: 0, movers: [[4, 7], [5, 4]], goal: [11, 7], moved: [], status: 'running', reason: '',
    length: 0, at_head: true, shadows: [], exits: [], verdict: { shortest: null, models: [] },
    ...change,
    tape: { from: 1, rows: [], spans_from: 0, spans: [], marks_from: 0, marks: [], ...change.tape },
  };
}

/**
 * A row of the tape: the robot, and its shadows half a metre and a metre to the left.
 * @param {number} tick
 * @param {number} [x]
 * @param {{mode?: number, gap?: number, ended?: 0 | 1, apart?: number}} [change]
 */
export function row(tick, x = tick / 100, { mode = 0, gap = 1, ended = 0, apart = 0.5 } = {}) {
  return [
    tick, x, 1, 0, mode, 0, gap, x, 1, 0, 0.4, 0, 0.4, 0, 8, 8, 8, 8,
    x, 1 + apart, 0, mode, 0, gap, ended, x, 1 + 2 * apart, 0, mode, 0, gap, ended,
  ];
}

/** @param {any} [change] */
export const tape = (change = {}) => ({ every: 20, length: 0, rows: [row(0)], spans: [[0, 0, 0, 0], [1, 0, 0, 0], [2, 0, 0, 0]], marks: [], ...change });

/** What one model has come to. @param {any} [change] */
export const measures = (change = {}) => ({
  who: 0, status: 'running', time: 0, leeway: null, way: 0, switches: 0, contacts: 0, saturated: 0, estimate_error: 0,
  largest: 0, largest_at: 0, rms: 0, parting: '', parting_tick: 0, ...change,
});
