import assert from 'node:assert/strict';
import { test } from 'node:test';
import { move, nudge, nudged, snap, take } from '../static/js/core/drag.js';
import { thingsOf } from '../static/js/core/things.js';
import { hello } from './kit.mjs';

/** @type {[number, number, number, number]} */
const bounds = [0, 0, 12, 8];
const [, goal] = thingsOf(hello());

test('a thing stays under the pointer where it was taken', () => {
  let d = take(goal, [11, 7], [11.1, 6.95]);
  d = move(d, [5.1, 2.95], false, bounds);
  assert.ok(Math.abs(d.anchor[0] - 5) < 1e-12 && Math.abs(d.anchor[1] - 3) < 1e-12);
  d = move(d, [11.1, 6.95], false, bounds);
  assert.ok(Math.abs(d.anchor[0] - 11) < 1e-12 && Math.abs(d.anchor[1] - 7) < 1e-12);
  assert.deepEqual(d.from, [11, 7]);
});

test('snapped, the anchor is on tenths of a metre; never beyond the floor', () => {
  const d = take(goal, [11, 7], [11, 7]);
  assert.deepEqual(move(d, [3.1415, 2.71828], true, bounds).anchor, [3.1, 2.7]);
  assert.deepEqual(move(d, [-4, 99], false, bounds).anchor, [0, 8]);
  assert.deepEqual(snap([0.30000000000000004, 0.75]), [0.3, 0.8]);
});

test('keys: tenths, with Shift half metres, with Alt centimetres', () => {
  const key = (k, more = {}) => nudge({ key: k, shiftKey: false, altKey: false, ...more });
  assert.deepEqual(key('ArrowRight'), [0.1, 0]);
  assert.deepEqual(key('ArrowUp', { shiftKey: true }), [0, 0.5]);
  assert.deepEqual(key('ArrowDown', { altKey: true }), [0, -0.01]);
  assert.deepEqual(key('ArrowLeft'), [-0.1, 0]);
  assert.equal(key('a'), null);
  assert.equal(key('ArrowLeft', { ctrlKey: true }), null);
});

test('many nudges there and back end where they began', () => {
  /** @type {[number, number]} */
  let p = [3.3, 4.7];
  for (let i = 0; i < 30; i++) p = nudged(p, [0.1, 0.01], bounds);
  assert.deepEqual(p, [6.3, 5]);
  for (let i = 0; i < 30; i++) p = nudged(p, [-0.1, -0.01], bounds);
  assert.deepEqual(p, [3.3, 4.7]);
  assert.deepEqual(nudged([11.95, 0.2], [0.5, -0.5], bounds), [12, 0]);
});
