import assert from 'node:assert/strict';
import { test } from 'node:test';
import { cut, upTo, Way, whole } from '../static/js/core/way.js';

/** A way along the x axis, a point every 20 ticks. */
function straight(n, mode = () => 0) {
  const way = new Way();
  for (let i = 0; i < n; i++) way.add(i * 20, i * 0.05, 0, mode(i));
  return way;
}

test('a change of mode begins a chunk where the one before ended', () => {
  const way = straight(4, (i) => (i < 2 ? 0 : 1));
  assert.deepEqual(way.chunks.map((c) => [c.mode, whole(c)]), [[0, 'M0 0L0.05 0'], [1, 'M0.05 0L0.1 0L0.15 0']]);
  assert.deepEqual(way.chunks[1].ticks, [20, 40, 60]);
});

test('a long stretch is cut, and only the last chunk ever changes', () => {
  const way = new Way();
  let final = [];
  for (let i = 0; i < 1000; i++) {
    way.add(i * 20, i * 0.05, 0, 0);
    const done = way.chunks.slice(0, -1).map(whole);
    assert.deepEqual(done.slice(0, final.length), final);
    final = done;
  }
  assert.ok(way.chunks.length >= 5);
  for (let i = 1; i < way.chunks.length; i++) assert.equal(way.chunks[i].points[0], way.chunks[i - 1].points.at(-1));
});

test('points too close to see are left out, and a hull that was carried leaves a gap', () => {
  const way = new Way();
  way.add(0, 0, 0);
  way.add(20, 0.001, 0);
  way.add(40, 0.02, 0);
  way.add(60, 5, 3);
  way.add(80, 5.02, 3);
  assert.deepEqual(way.chunks.map(whole), ['M0 0L0.02 0', 'M5 3L5.02 3']);
});

test('the chunk of a moment is found', () => {
  const way = straight(500);
  assert.equal(way.chunkAt(-1), -1);
  assert.equal(way.chunkAt(0), 0);
  for (const tick of [10, 3000, 4001, 9979, 1e6]) {
    const i = way.chunkAt(tick);
    assert.ok(way.chunks[i].ticks[0] <= tick);
    assert.ok(i === way.chunks.length - 1 || way.chunks[i + 1].ticks[0] > tick);
  }
});

test('a chunk is cut where the model is, and both halves meet there', () => {
  const [chunk] = straight(4).chunks;
  assert.deepEqual(cut(chunk, 30, [0.075, 0]), ['M0 0L0.05 0L0.075 0', 'M0.075 0L0.1 0L0.15 0']);
  assert.deepEqual(cut(chunk, 60, [0.15, 0]), ['M0 0L0.05 0L0.1 0L0.15 0', '']);
  assert.deepEqual(cut(chunk, 0, [0, 0]), ['M0 0', 'M0 0L0.05 0L0.1 0L0.15 0']);
  // Carried by a hand: no line to there.
  assert.deepEqual(cut(chunk, 60, [9, 9])[0], 'M0 0L0.05 0L0.1 0L0.15 0');
});

test('a test that holds up to some place is counted', () => {
  for (let n = 0; n < 9; n++) for (let k = 0; k <= n; k++) assert.equal(upTo(n, (i) => i < k), k);
});
