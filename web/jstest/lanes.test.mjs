import assert from 'node:assert/strict';
import { test } from 'node:test';
import { thinned } from '../static/js/core/curve.js';
import { boxes } from '../static/js/core/lanes.js';

const lane = [{ tick: 0, mode: 0, side: 0 }, { tick: 100, mode: 1, side: 1 }, { tick: 300, mode: 0, side: 0 }];

test('stretches are boxes from one to the next, and the last goes to the end', () => {
  assert.deepEqual(boxes(lane, 400, 0, 1000, 100), [
    { x0: 0, x1: 10, mode: 0, side: 0 }, { x0: 10, x1: 30, mode: 1, side: 1 }, { x0: 30, x1: 40, mode: 0, side: 0 },
  ]);
});

test('a closer look has the stretches that reach into it, cut at its edges', () => {
  assert.deepEqual(boxes(lane, 400, 150, 350, 200).map((b) => [b.x0, b.x1, b.mode]), [[0, 150, 1], [150, 200, 0]]);
  assert.deepEqual(boxes(lane, 400, 500, 600, 100), []);
  assert.deepEqual(boxes([], 400, 0, 600, 100), []);
});

test('thousands of stretches are no more boxes than pixels, without a gap', () => {
  const busy = Array.from({ length: 20000 }, (_, i) => ({ tick: i * 5, mode: i % 3 === 0 ? 1 : 0, side: 0 }));
  const all = boxes(busy, 100000, 0, 100000, 500);
  assert.ok(all.length <= 500);
  assert.equal(all[0].x0, 0);
  assert.equal(all.at(-1)?.x1, 500);
  for (let i = 1; i < all.length; i++) assert.equal(all[i].x0, all[i - 1].x1);
  // Two thirds of every pixel are mode 0.
  assert.ok(all.every((b) => b.mode === 0));
});

test('in a dense lane a long stretch keeps its place', () => {
  const busy = Array.from({ length: 400 }, (_, i) => ({ tick: i, mode: i % 2, side: 0 }));
  busy.push({ tick: 400, mode: 2, side: 0 });
  const long = boxes(busy, 1000, 0, 1000, 100).filter((b) => b.mode === 2);
  assert.deepEqual(long.map((b) => [b.x0, b.x1]), [[40, 100]]);
});

test('few values are drawn as they are', () => {
  const v = [3, 1, 2];
  assert.deepEqual(thinned(0, 3, (i) => i * 20, (i) => v[i], 0, 0.5), [[0, 3], [10, 1], [20, 2]]);
});

test('many values keep the least and the largest of every pixel', () => {
  const n = 36000;
  const value = (i) => (i === 17777 ? -9 : i === 20001 ? 9 : Math.sin(i / 50));
  const points = thinned(0, n, (i) => i * 20, value, 0, 1000 / (n * 20));
  assert.ok(points.length <= 4 * 1001, String(points.length));
  assert.equal(Math.min(...points.map((p) => p[1])), -9);
  assert.equal(Math.max(...points.map((p) => p[1])), 9);
  for (let i = 1; i < points.length; i++) assert.ok(points[i][0] >= points[i - 1][0] - 1e-9);
  assert.equal(points[0][1], value(0));
  assert.equal(points.at(-1)?.[1], value(n - 1));
});
