import assert from 'node:assert/strict';
import { test } from 'node:test';
import { Trail } from '../static/js/core/trail.js';

/** @returns {[number, number, number]} */
const at = (i, mode = 0) => [i * 0.02, 0, mode];

test('a change of mode begins a chunk where the one before ended', () => {
  const t = new Trail();
  t.reset([[0, 0, 0], [0.1, 0, 0], [0.2, 0.1, 1], [0.3, 0.1, 1]]);
  assert.deepEqual(t.chunks.map((c) => [c.mode, c.d]), [
    [0, 'M0 0L0.1 0'],
    [1, 'M0.1 0L0.2 0.1L0.3 0.1'],
  ]);
});

test('points that come again are passed over, and missing ones are noticed', () => {
  const t = new Trail();
  t.reset([at(0), at(1)]);
  assert.equal(t.append(2, [at(2), at(3)]), true);
  const before = t.chunks.map((c) => c.d);
  assert.equal(t.append(1, [at(1), at(2), at(3)]), true);
  assert.deepEqual(t.chunks.map((c) => c.d), before);
  assert.equal(t.append(3, [at(3), at(4)]), true);
  assert.equal(t.count, 5);
  assert.equal(t.append(6, [at(6)]), false);
  assert.equal(t.count, 5);
  assert.equal(t.append(6, []), false);
  assert.equal(t.append(5, []), true);
});

test('a long stretch is cut, and only the last chunk ever changes', () => {
  const t = new Trail();
  t.reset([]);
  let frozen = [];
  for (let i = 0; i < 2000; i++) {
    t.append(i, [at(i)]);
    const done = t.chunks.slice(0, -1).map((c) => c.d);
    assert.deepEqual(done.slice(0, frozen.length), frozen);
    frozen = done;
  }
  assert.ok(t.chunks.length >= 7);
  assert.ok(t.chunks.every((c) => c.points <= 256));
  for (let i = 1; i < t.chunks.length; i++) {
    const end = t.chunks[i - 1].d.split('L').at(-1);
    assert.equal(t.chunks[i].d.split('L')[0], `M${end}`);
  }
});

test('points too close to see are counted and not drawn', () => {
  const t = new Trail();
  t.reset([[0, 0, 0], [0.001, 0, 0], [0.002, 0, 0], [0.01, 0, 0]]);
  assert.equal(t.count, 4);
  assert.equal(t.chunks[0].d, 'M0 0L0.01 0');
});

test('a robot that was carried leaves a gap', () => {
  const t = new Trail();
  t.reset([[0, 0, 0], [0.02, 0, 0], [5, 3, 0], [5.02, 3, 0]]);
  assert.deepEqual(t.chunks.map((c) => c.d), ['M0 0L0.02 0', 'M5 3L5.02 3']);
});

test('starting anew changes the epoch', () => {
  const t = new Trail();
  const before = t.epoch;
  t.reset([at(0)]);
  assert.notEqual(t.epoch, before);
  assert.equal(t.count, 1);
});
