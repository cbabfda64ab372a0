import assert from 'node:assert/strict';
import { test } from 'node:test';
import { BASE, ENDED, GAP, Tape } from '../static/js/core/tape.js';
import { row, tape } from './kit.mjs';

/** A tape of n rows. */
function taped(n, change = {}) {
  const t = new Tape();
  t.reset(tape({ length: (n - 1) * 20, rows: Array.from({ length: n }, (_, i) => row(i * 20)), ...change }));
  return t;
}

test('the robot and both shadows stand where the bases say', () => {
  const r = row(20, 3, { gap: 0.7, ended: 1 });
  assert.deepEqual(BASE.map((b) => r[b]), [3, 3, 3]);
  assert.deepEqual(BASE.map((b) => r[b + GAP]), [0.7, 0.7, 0.7]);
  assert.deepEqual([r[BASE[1] + ENDED], r[BASE[2] + ENDED], r.length], [1, 1, BASE[2] + ENDED + 1]);
});

test('what comes again is passed over, and what is missing is noticed without a change', () => {
  const t = taped(3);
  const more = { from: 2, rows: [row(40), row(60)], spans_from: 2, spans: [[2, 0, 0, 0], [0, 50, 1, -1]], marks_from: 0, marks: [] };
  assert.equal(t.append(more, 60), true);
  assert.deepEqual([t.rows.length, t.length, t.lanes.map((l) => l.length)], [4, 60, [2, 1, 1]]);
  assert.equal(t.append(more, 60), true);
  assert.deepEqual([t.rows.length, t.lanes[0].length], [4, 2]);
  const { version } = t;
  assert.equal(t.append({ ...more, from: 4, rows: [], spans_from: 4, spans: [] }, 60), true);
  assert.equal(t.version, version); // nothing to be painted anew
  for (const gap of [{ from: 5 }, { spans_from: 5 }, { marks_from: 1 }]) assert.equal(t.append({ ...more, ...gap }, 99), false);
  assert.deepEqual([t.version, t.length], [version, 60]);
});

test('poses between rows are in proportion, and a turn goes the short way round', () => {
  const t = taped(3);
  const at = (who, tick) => t.poseAt(who, tick)?.map((v) => Math.round(v * 1e9) / 1e9);
  assert.deepEqual(at(0, 30), [0.3, 1, 0]);
  assert.deepEqual(at(1, 30), [0.3, 1.5, 0]);
  assert.deepEqual(at(0, 999), [0.4, 1, 0]);
  t.rows[1][3] = 3;
  t.rows[2][3] = -3;
  const turn = t.poseAt(0, 30)?.[2] ?? 0;
  assert.ok(Math.abs(Math.abs(turn) - Math.PI) < 1e-9, String(turn));
});

test('a tape without shadows has the robot alone', () => {
  const t = new Tape();
  t.reset(tape({ rows: [row(0).slice(0, 18), row(20).slice(0, 18)], length: 20 }));
  assert.equal(t.shadows, false);
  assert.equal(t.poseAt(1, 0), null);
  assert.equal(t.farthest(20), null);
  assert.equal(t.ways[1].chunks.length, 0);
  assert.equal(t.ways[0].chunks.length, 1);
});

test('an end ends a lane until the model is set going again', () => {
  const end = { kind: 'end', who: 1, tick: 60, text: 'It arrived.' };
  const t = taped(5, { marks: [end], spans: [[1, 0, 0, 0], [1, 60, 1, 0]] });
  assert.equal(t.endOf(1), t.marks[0]);
  assert.equal(t.endOf(0), null);
  t.append({ from: 5, rows: [], spans_from: 2, spans: [[1, 70, 0, 0]], marks_from: 1, marks: [] }, 80);
  assert.equal(t.endOf(1), null);
});

test('the stretch of a moment is the last that began', () => {
  const t = taped(5, { spans: [[0, 0, 0, 0], [0, 30, 1, 1], [0, 50, 0, 0]] });
  assert.deepEqual([0, 29, 30, 49, 50, 80].map((tick) => t.stretchAt(0, tick)?.mode), [0, 0, 1, 1, 0, 0]);
  assert.equal(t.stretchAt(1, 10), null);
});

test('point and unicycle are measured against each other as long as both are under way', () => {
  const t = new Tape();
  t.reset(tape({ length: 60, rows: [row(0, 0, { apart: 0.2 }), row(20, 0, { apart: 0.6 }), row(40, 0, { apart: 0.1 }), row(60, 0, { apart: 3, ended: 1 })] }));
  assert.deepEqual([0, 20, 40, 60].map((tick) => t.farthest(tick)?.toFixed(2)), ['0.20', '0.60', '0.60', '0.60']);
});

test('a tape cut short is known as such, and one that is another is not', () => {
  const t = taped(11);
  const of = (n, x) => tape({ length: (n - 1) * 20, rows: Array.from({ length: n }, (_, i) => row(i * 20, x?.(i))) });
  assert.equal(t.isCutTo(of(6)), true);
  assert.equal(t.isCutTo(of(11)), false);
  assert.equal(t.isCutTo(of(6, (i) => i)), false);
  assert.equal(t.isCutTo(of(1)), false); // a restart
  assert.equal(t.goesOnAs(of(12)), true);
  assert.equal(t.goesOnAs(of(12, (i) => i)), false);
  assert.equal(t.goesOnAs(of(6)), false);
});
