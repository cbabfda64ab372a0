import assert from 'node:assert/strict';
import { test } from 'node:test';
import { ALL, extent, follow, pan, shown, ticks, zoom } from '../static/js/core/timeline.js';

test('all of a tape is shown, in steps that stand still for a while', () => {
  assert.deepEqual(shown(ALL, 0), { from: 0, to: 20 });
  assert.deepEqual(shown(ALL, 33.4), { from: 0, to: 45 });
  assert.equal(extent(45), 45);
  assert.equal(extent(45.005), 60);
  assert.equal(extent(9000), 10800);
});

test('the moment under the pointer stays there', () => {
  for (const share of [0, 0.3, 1]) {
    const before = shown(ALL, 60);
    const look = zoom(ALL, 60, share, 3);
    const after = shown(look, 60);
    assert.ok(Math.abs(after.to - after.from - 20) < 1e-9);
    assert.ok(Math.abs(after.from + share * 20 - (before.from + share * 60)) < 1e-9);
  }
  assert.equal(zoom(zoom(ALL, 60, 0.5, 2), 60, 0.5, 0.5), ALL);
  const close = shown(zoom(ALL, 60, 0.5, 1e9), 60);
  assert.ok(Math.abs(close.to - close.from - 0.5) < 1e-9);
});

test('a look stays on the tape', () => {
  const look = zoom(ALL, 60, 0.5, 4);
  assert.deepEqual(shown(pan(look, 60, -99), 60), { from: 0, to: 15 });
  assert.deepEqual(shown(pan(look, 60, 99), 60), { from: 45, to: 60 });
  assert.equal(pan(ALL, 60, 1), ALL);
});

test('now stays in sight, with room ahead while it plays', () => {
  const look = { from: 10, span: 10 };
  assert.equal(follow(look, 60, 15, true), look);
  assert.equal(follow(look, 60, 19, true).from, 11);
  assert.equal(follow(look, 60, 19, false), look);
  assert.equal(follow(look, 60, 25, false).from, 15);
  assert.equal(follow(look, 60, 3, false).from, 3);
  assert.equal(follow(ALL, 60, 3, true), ALL);
});

test('marks of the axis are round times that do not touch', () => {
  const texts = (from, to, width) => ticks({ from, to }, width).map((t) => t.text);
  assert.deepEqual(texts(0, 45, 900), ['0:00', '0:05', '0:10', '0:15', '0:20', '0:25', '0:30', '0:35', '0:40', '0:45']);
  assert.deepEqual(texts(50, 70, 500), ['0:50', '0:55', '1:00', '1:05', '1:10']);
  assert.deepEqual(texts(59.8, 60.3, 500), ['0:59.8', '0:59.9', '1:00.0', '1:00.1', '1:00.2', '1:00.3']);
  for (const [from, to] of [[0, 20], [3, 3.5], [0, 7200], [100, 400]]) {
    const width = 700;
    const all = ticks({ from, to }, width);
    assert.ok(all.length >= 2 && all.length <= 10, `${from} ${to} ${all.length}`);
    assert.ok(all.every((t) => t.time >= from - 1e-6 && t.time <= to + 1e-6));
  }
});
