import assert from 'node:assert/strict';
import { test } from 'node:test';
import { extent, inside, Places, solidGap, thingsOf } from '../static/js/core/things.js';
import { hello } from './kit.mjs';

const kit = hello();
const things = thingsOf(kit);
const named = (key) => things.find((t) => t.key === key);

test('what can be moved, in the order in which it was made; the border cannot', () => {
  assert.deepEqual(things.map((t) => t.key), ['start', 'goal', 'robot', 'solid w1', 'solid ell', 'solid post', 'mover cart', 'mover drum']);
  assert.deepEqual(things.map((t) => t.label).slice(3), ['wall w1', 'solid ell', 'solid post', 'mover cart', 'mover drum']);
});

test('anchors follow the frame, and before it the hand', () => {
  const { frame } = hello({}, { goal: [3, 3], pose: [2, 2, 0], moved: [['post', 5, 5]] });
  const places = new Places(kit, frame, { key: 'goal', anchor: [7, 7], live: true });
  assert.deepEqual(places.anchor(named('goal')), [7, 7]);
  assert.deepEqual(places.anchor(named('robot')), [2, 2]);
  assert.deepEqual(places.anchor(named('solid post')), [5, 5]);
  assert.deepEqual(places.anchor(named('solid w1')), [2, 2]);
  assert.deepEqual(places.shift(2), [-4, 1]);
  assert.equal(places.shift(0), null);
});

test('a held mover is drawn from where it was taken, not from where the server has brought it since', () => {
  const { frame } = hello({}, { movers: [[6, 6], [5, 4]] });
  const held = { key: 'mover cart', anchor: /** @type {[number, number]} */ ([3, 6]), live: true };
  const places = new Places(kit, frame, held, [4, 7]);
  assert.deepEqual(places.mover(0), { at: [4, 6], shift: [0, -1] });
  assert.deepEqual(places.mover(1), { at: [5, 4], shift: [0, 0] });
});

test('inside a polygon that is not convex', () => {
  const ell = kit.solids[1].points;
  assert.equal(inside(ell, 6.5, 2.5), true);
  assert.equal(inside(ell, 7.5, 1.5), true);
  assert.equal(inside(ell, 7.5, 2.5), false);
  assert.equal(inside(ell, 5.9, 2), false);
});

test('gaps to walls, polygons and discs', () => {
  const close = (a, b) => assert.ok(Math.abs(a - b) < 1e-12, `${a} is not ${b}`);
  close(solidGap(kit.solids[0], 2.3, 3), 0.3);
  close(solidGap(kit.solids[0], 4.3, 5.4), 0.5); // beyond its end
  close(solidGap(kit.solids[1], 7.25, 2.25), 0.25); // in the notch
  close(solidGap(kit.solids[1], 6.5, 2.9), 0);
  close(solidGap(kit.solids[2], 9, 4.75), 0.25);
  assert.deepEqual(extent(kit.solids[2]), [8.5, 3.5, 9.5, 4.5]);
});

test('picking: small before large, near before far, nothing on empty floor', () => {
  const { frame } = hello({}, { pose: [9, 4, 0] });
  const places = new Places(kit, frame, null);
  assert.equal(places.pick(things, 9.1, 4, 0.05)?.key, 'robot'); // on top of the post
  assert.equal(places.pick(things, 9, 4.45, 0.05)?.key, 'solid post');
  assert.equal(places.pick(things, 11.1, 7.1, 0.05)?.key, 'goal');
  assert.equal(places.pick(things, 1.02, 1, 0.05)?.key, 'start');
  assert.equal(places.pick(things, 4, 7.45, 0.01)?.key, 'mover cart'); // it stands on end
  assert.equal(places.pick(things, 4.45, 7, 0.01), null);
  assert.equal(places.pick(things, 5.29, 4, 0.01)?.key, 'mover drum');
  assert.equal(places.pick(things, 10, 2, 0.05), null);
  assert.equal(places.pick(things, 6, 0.001, 0.05), null); // the border
});
