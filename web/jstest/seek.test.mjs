import assert from 'node:assert/strict';
import { test } from 'node:test';
import { answered, shown, to } from '../static/js/core/seek.js';
import { initial, step } from '../static/js/core/state.js';
import { frame, hello, row, tape } from './kit.mjs';

const told = (message) => ({ type: 'message', message });

/** A page on a tape of a second that is looked at where it ends. */
function at(...events) {
  const rows = Array.from({ length: 11 }, (_, i) => row(i * 20, i * 0.1, { gap: 1 - i * 0.05 }));
  const whole = hello({ tape: tape({ length: 200, rows, spans: [[0, 0, 0, 0], [0, 100, 1, 1], [1, 0, 0, 0], [2, 0, 0, 0]] }) }, {
    tick: 200, time: 1, length: 200, mode: 1, side: 1, pose: [1, 1, 0], ranges: [1, 2], hits: '11',
    shadows: [{ pose: [1, 1.5, 0], mode: 0, side: 0, status: 'running', gap: 1 }, { pose: [1, 2, 0], mode: 0, side: 0, status: 'running', gap: 1 }],
  });
  return [told(whole), ...events].reduce((s, e) => step(s, e).state, initial());
}
const seek = (tick, live = false) => ({ type: 'seek', tick, live });

test('a moment is looked for on the tape and nowhere else', () => {
  assert.equal(to(-5, 200, false).tick, 0);
  assert.equal(to(Infinity, 200, false).tick, 200);
  assert.equal(to(33.4, 200, false).tick, 33);
});

test('until the answer comes, what the tape knows is shown', () => {
  const s = at(seek(90, true));
  const { frame: f } = shown(s);
  assert.deepEqual(f?.pose.map((v) => Math.round(v * 1e6) / 1e6), [0.45, 1, 0]);
  assert.deepEqual([f?.tick, f?.mode, f?.side, f?.at_head, f?.playing, f?.time], [90, 0, 0, false, false, 0.45]);
  assert.ok(Math.abs((f?.gap ?? 0) - 0.8) < 1e-9);
  assert.deepEqual(f?.ranges, []); // what the beams saw half a second later is not shown here
  assert.deepEqual(f?.shadows.map((x) => x.pose[1]), [1.5, 2]);
  assert.equal(s.frame?.tick, 200); // the exact frame is kept as it is
});

test('the exact frame is shown as soon as it is there', () => {
  const s = at(seek(90), told(frame({ tick: 90, length: 200, why: 'exact' })));
  assert.equal(s.seek, null);
  assert.equal(shown(s).frame?.why, 'exact');
  const held = at(seek(90, true), told(frame({ tick: 90, length: 200, why: 'exact' })));
  assert.equal(held.seek?.live, true);
  assert.equal(shown(held).frame?.why, 'exact');
});

test('frames that were under way do not make the picture jump', () => {
  const s = at(seek(90, true), told(frame({ tick: 195, length: 200 })), told(frame({ tick: 60, length: 200 })));
  assert.equal(shown(s).frame?.tick, 90);
});

test('the newest moment wins, and is given up when somebody else drives on', () => {
  assert.equal(at(seek(90, true), seek(30, true)).seek?.tick, 30);
  let s = to(90, 200, false);
  let n = 0;
  for (let left = s; left; left = answered(left, frame({ tick: 500 })), n++) s = left;
  assert.ok(n > 5 && n < 40, String(n));
  const live = to(90, 200, true);
  assert.equal(answered(live, frame({ tick: 500 })), live);
});

test('a whole picture or a lost connection ends the search', () => {
  assert.equal(at(seek(90, true), told(hello())).seek, null);
  assert.equal(at(seek(90, true), { type: 'link', link: 'lost' }).seek, null);
});
