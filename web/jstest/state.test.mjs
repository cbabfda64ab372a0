import assert from 'node:assert/strict';
import { test } from 'node:test';
import { decode, encode } from '../static/js/core/protocol.js';
import { initial, step } from '../static/js/core/state.js';
import { frame, hello, row, tape } from './kit.mjs';

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
  const f = decode('{"kind":"frame","tick":3,"moved":null,"tape":null}');
  assert.ok(f?.kind === 'frame');
  assert.deepEqual([f.tick, f.length, f.at_head, f.moved, f.tape.rows, f.exits, f.verdict.models, f.status], [3, 3, true, [], [], [], [], 'running']);
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
  const { state, effects } = play(told(hello()), told(frame({ tick: 28, length: 28, tape: { from: 1, rows: [row(20)], spans_from: 3, spans: [[0, 24, 1, 1]] } })));
  assert.equal(state.link, 'live');
  assert.equal(state.frame?.tick, 28);
  assert.equal(state.tape.rows.length, 2);
  assert.equal(state.tape.length, 28);
  assert.deepEqual(state.tape.stretchAt(0, 28), { tick: 24, mode: 1, side: 1 });
  assert.equal(state.things.length, 8);
  assert.deepEqual(effects, []);
});

test('a frame before any hello is passed over', () => {
  assert.equal(play(told(frame())).state.frame, null);
});

test('missing rows of the tape are asked for once, until the whole picture has come', () => {
  const gap = told(frame({ tick: 180, length: 180, tape: { from: 9, rows: [row(180)] } }));
  const { state, effects } = play(told(hello()), gap, gap);
  assert.deepEqual(effects, ['resync']);
  assert.equal(state.frame?.tick, 180); // what it says else is shown
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

/** A tape of so many rows with a frame at its end. */
const taped = (rows, change = {}, at = (rows - 1) * 20) => {
  const length = (rows - 1) * 20;
  return hello({ tape: tape({ length, rows: Array.from({ length: rows }, (_, i) => row(i * 20)), ...change }), file: `{"rows":${rows}}` }, { tick: at, length, at_head: at === length });
};

test('a cut keeps the future that was given up, until the next change', () => {
  const long = told(taped(11));
  const short = told(taped(6));
  const cut = play(long, { type: 'seek', tick: 100, live: false }, told(frame({ tick: 100, length: 200 })), short);
  assert.equal(cut.state.old?.tick, 100);
  assert.match(cut.state.old?.ways[0] ?? '', /^M1 1L1\.2 1L.*L2 1$/);
  assert.equal(cut.state.tape.length, 100);
  // What goes on from there grows beside it.
  const grown = play(long, short, told(frame({ tick: 120, length: 120, tape: { from: 6, rows: [row(120)], spans_from: 3 } })));
  assert.equal(grown.state.old?.tick, 100);
  // The end of the drag that made the cut is no other change; a later one is.
  const hold = { type: 'hold', key: 'goal', anchor: [5, 5] };
  assert.equal(play(long, hold, short, { type: 'release' }, told(taped(7))).state.old?.tick, 100);
  assert.equal(play(long, short, told(taped(7))).state.old, null);
  // A restart is another run.
  assert.equal(play(long, short, told(hello())).state.old, null);
  assert.equal(play(long, told(hello())).state.old, null);
});

test('a tape that comes again because some of it was missed is no change', () => {
  const gap = told(frame({ tick: 300, length: 300, tape: { from: 40, rows: [row(300)] } }));
  const { state } = play(told(taped(11)), told(taped(6)), gap, told(taped(9)));
  assert.equal(state.old?.tick, 100);
});

test('a tape that has the same rows more coarsely is the same tape', () => {
  const coarse = tape({ every: 40, length: 100, rows: [row(0), row(40), row(80)] });
  const message = hello({ tape: coarse }, { tick: 100, length: 100 });
  assert.equal(play(told(taped(11)), told(message)).state.old?.tick, 100);
});
