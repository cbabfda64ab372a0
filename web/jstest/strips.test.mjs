import assert from 'node:assert/strict';
import { test } from 'node:test';
import { order, shades } from '../static/js/core/fan.js';
import { charts, columns, scale, values } from '../static/js/core/strips.js';
import { Tape } from '../static/js/core/tape.js';
import { hello, row, tape } from './kit.mjs';

/** A row with the robot's wheels as they are and as they are commanded. */
function wheeled(tick, left, right, left2, right2, v = 0, w = 0) {
  const r = row(tick);
  [r[12], r[13], r[14], r[15], r[16], r[17]] = [v, w, left, right, left2, right2];
  return r;
}

test('commanded speed and turning follow from the wheels as commanded', () => {
  const h = hello({ wheel: 0.05, track: 0.3, ceiling: 0.5 });
  const [speed, turning] = charts('speed', h);
  const r = wheeled(0, 0, 0, 8, 10, 0.41, 0.2);
  assert.deepEqual(speed.lines.map((l) => Number(l.of(r)?.toFixed(6))), [0.45, 0.41]);
  assert.deepEqual(turning.lines.map((l) => Number(l.of(r)?.toFixed(6))), [0.333333, 0.2]);
  assert.deepEqual(speed.limits, [{ label: 'ceiling', at: 0.5 }]);
});

test('what a robot does not have is not charted', () => {
  const point = hello({ motion: 'point' });
  assert.deepEqual(charts('wheels', point), []);
  assert.deepEqual(charts('speed', point).map((c) => c.lines.length), [1, 1]);
  assert.deepEqual(charts('wheels', hello())[0].limits, []);
  assert.deepEqual(charts('no such strip', hello()), []);
});

test('estimate error and deviation are distances at the same time', () => {
  const r = row(0, 3, { apart: 0.5 });
  r[7] += 0.3;
  r[8] += 0.4;
  const [estimate] = charts('estimate', hello());
  assert.ok(Math.abs((estimate.lines[0].of(r) ?? 0) - 0.5) < 1e-12);
  const [deviation] = charts('deviation', hello());
  assert.deepEqual(deviation.lines.map((l) => l.of(r)), [0.5, 1]);
  // A shadow that has ended is nothing to be measured from, and neither is one that is off.
  assert.deepEqual(deviation.lines.map((l) => l.of(row(0, 3, { ended: 1 }))), [null, null]);
  assert.deepEqual(deviation.lines.map((l) => l.of(row(0).slice(0, 18))), [null, null]);
});

test('columns end where the robot does', () => {
  const t = new Tape();
  const end = { kind: 'end', who: 0, tick: 40, text: '' };
  t.reset(tape({ length: 80, rows: [0, 20, 40, 60, 80].map((tick) => row(tick)), marks: [end] }));
  const [c] = charts('deviation', hello());
  assert.deepEqual(columns(c, t, 0.005), [[0, 0.1, 0.2], [0.5, 0.5, 0.5], [1, 1, 1]]);
});

test('a scale has room for its lines, and for limits that are near', () => {
  const [c] = charts('wheels', hello({ wheel_max: 14 }));
  const [low, high] = scale(c, -3, 9);
  assert.ok(high > 14 && low < -3 && low > -14, `${low} ${high}`);
  assert.ok(scale(c, 0, 2)[1] < 14);
  assert.deepEqual(scale(charts('deviation', hello())[0], null, null).map((v) => Number(v.toFixed(3))), [0, 0.212]);
});

test('values are written with a true minus, and no minus before nothing', () => {
  const [, turning] = charts('speed', hello());
  assert.deepEqual(values(turning, wheeled(0, 0, 0, 2, 0, 0, -0.001)), ['−0.33', '0.00']);
  assert.deepEqual(values(turning, undefined), [null, null]);
});

test('beams stand from left to right', () => {
  const deg = (d) => (d * Math.PI) / 180;
  assert.deepEqual(order([0, 90, 180 - 1, 181, 270, 360 - 10].map(deg)), [2, 1, 0, 5, 4, 3]);
});

test('near is one, far is nothing, and what was not seen is neither', () => {
  const seen = { ticks: [0, 20, 40], ranges: [[0, 3], [1.5, null], [6, 3]] };
  const near = [...shades(seen, [1, 0], 3, 0, 100, 5)];
  assert.deepEqual(near.slice(0, 5), [0, 0, 0, -1, -1]);
  assert.deepEqual(near.slice(5), [1, 0.5, 0, -1, -1]);
});

test('of many moments in one pixel the nearest return is kept', () => {
  const n = 4000;
  const seen = { ticks: Array.from({ length: n }, (_, i) => i * 20), ranges: Array.from({ length: n }, (_, i) => [i === 1234 ? 0.3 : 3]) };
  const near = shades(seen, [0], 3, 0, n * 20, 100);
  assert.equal(near.length, 100);
  assert.ok(Math.abs(near[Math.floor(1234 / 40)] - 0.9) < 1e-6);
  assert.equal(near.filter((v) => v > 0).length, 1);
});
