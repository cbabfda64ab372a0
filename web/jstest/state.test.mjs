import assert from 'node:assert/strict';
import { test } from 'node:test';
import { decode, encode } from '../static/js/core/protocol.js';
import { initial, step } from '../static/js/core/state.js';
import { frame, hello } from './kit.mjs';

/** Plays a script of events and returns the state and all effects. */
function play(...events) {
  let state = initial();
  const effects = [];
  for (const e of events) {
    const next = step(state, e);
    state = next.state;
    effects.push(...next.effects);
  }
  return { state, effects };
}
const told = (message) => ({ type: 'message', message });

test('texts become messages; what is not one is passed over', () => {
  assert.equal(decode('{'), null);
  assert.equal(decode('null'), null);
  assert.equal(decode('7'), null);
  assert.equal(decode('{"kind":"later than this page"}'), null);
  assert.deepEqual(decode('{"kind":"problem","about":"drag","text":"no"}'), { kind: 'problem', about: 'drag', text: 'no' });
  const f = decode('{"kind":"frame","tick":3,"moved":null,"trail":null}');
  assert.ok(f?.kind === 'frame');
  assert.deepEqual([f.tick, f.moved, f.trail, f.status], [3, [], [], 'running']);
  const h = decode('{"kind":"hello","solids":null,"asked":{"within_s":0,"leeway_m":0,"switches":-1}}');
  assert.ok(h?.kind === 'hello');
  assert.deepEqual(h.solids, []);
  assert.deepEqual(h.asked, { within_s: undefined, leeway_m: 0, switches: undefined });
});

test('commands are rounded to tenths of a millimetre', () => {
  assert.equal(
    encode({ kind: 'drag', what: 'goal', x: 1 / 3, y: 0.1 + 0.2, done: false }),
    '{"kind":"drag","what":"goal","x":0.3333,"y":0.3,"done":false}',
  );
  assert.equal(encode({ kind: 'number', path: 'x', value: 0.12345 }), '{"kind":"number","path":"x","value":0.12345}');
});

test('a hello makes the page live, and a frame moves it on', () => {
  const { state, effects } = play(told(hello()), told(frame({ tick: 8, trail_from: 1, trail: [[1.1, 1, 0]] })));
  assert.equal(state.link, 'live');
  assert.equal(state.frame?.tick, 8);
  assert.equal(state.trail.count, 2);
  assert.equal(state.things.length, 8);
  assert.deepEqual(effects, []);
});

test('a frame before any hello is passed over', () => {
  assert.equal(play(told(frame())).state.frame, null);
});

test('missing trail points are asked for once, until the whole picture has come', () => {
  const gap = told(frame({ trail_from: 9, trail: [[2, 2, 0]] }));
  const { state, effects } = play(told(hello()), gap, gap);
  assert.deepEqual(effects, ['resync']);
  assert.equal(state.frame?.trail_from, 9); // what it says else is shown
  const after = play(told(hello()), gap, told(hello()), gap);
  assert.deepEqual(after.effects, ['resync', 'resync']);
});

test('what the hand holds is where the hand is, whatever the server says meanwhile', () => {
  const hold = { type: 'hold', key: 'goal', anchor: [5, 5] };
  const { state } = play(told(hello()), hold, told(frame({ goal: [4, 4] })), told(hello()));
  assert.deepEqual(state.held, { key: 'goal', anchor: [5, 5], live: true });
});

test('what was let go of stays there until the server says where it is', () => {
  const hold = { type: 'hold', key: 'goal', anchor: [5, 5] };
  const let_go = play(told(hello()), hold, { type: 'release' }, told(frame({ goal: [4, 4] })));
  assert.deepEqual(let_go.state.held?.anchor, [5, 5]);
  const confirmed = play(told(hello()), hold, { type: 'release' }, told(hello()));
  assert.equal(confirmed.state.held, null);
});

test('a place that is refused gives the thing back', () => {
  const hold = { type: 'hold', key: 'goal', anchor: [5, 5] };
  const { state } = play(told(hello()), hold, { type: 'release' }, told({ kind: 'problem', about: 'drag', text: 'inside a wall' }));
  assert.equal(state.held, null);
  assert.equal(state.problem?.text, 'inside a wall');
});

test('a mover remembers where it was taken', () => {
  const hold = { type: 'hold', key: 'mover cart', anchor: [3, 6] };
  const { state } = play(told(hello()), hold, told(frame({ movers: [[9, 9], [5, 4]] })), { ...hold, anchor: [3, 5] });
  assert.deepEqual(state.taken, [4, 7]);
});

test('the same words twice are two sayings', () => {
  const notice = told({ kind: 'notice', text: 'the run begins again' });
  assert.equal(play(notice, notice).state.notice?.serial, 2);
});

test('lost, gone and ended', () => {
  const lost = play(told(hello()), { type: 'link', link: 'lost', retryAt: 99 });
  assert.deepEqual([lost.state.link, lost.state.retryAt, lost.state.hello?.name], ['lost', 99, 'Kit']);
  const ended = play(told(hello()), told({ kind: 'ended', text: 'put away' }));
  assert.deepEqual([ended.state.link, ended.state.linkText], ['ended', 'put away']);
  assert.equal(play(told(hello()), { type: 'link', link: 'gone' }, told(hello())).state.link, 'live');
});
