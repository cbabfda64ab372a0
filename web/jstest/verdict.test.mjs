import assert from 'node:assert/strict';
import { test } from 'node:test';
import { partings, spoken, verdict } from '../static/js/core/verdict.js';
import { frame, measures } from './kit.mjs';

const asked = { within_s: 90, leeway_m: 0.1, switches: 10 };
const of = (change, what = asked) => verdict(frame(change), what);
const plain = (s) => s.replaceAll('\u00a0', ' ');

test('a run that scrapes too close falls short at once', () => {
  const v = of({ leeway: 0.047 });
  assert.equal(plain(v.leeway), '0.05 m');
  assert.equal(plain(v.words), 'of leeway, where 0.10 m is asked.');
  assert.equal(v.judgement, 'This run falls short.');
  assert.equal(v.mark, 'bad');
});

test('a run that keeps what is asked says so, so far and at its end', () => {
  assert.match(of({ leeway: 0.2 }).judgement, /So far it holds/);
  const v = of({ leeway: 0.2, status: 'arrived', reason: 'It stood at the goal.' });
  assert.match(v.judgement, /This run keeps what is asked/);
  assert.deepEqual([v.mark, v.status, v.tone, v.reason], ['good', 'arrived', 'done', 'It stood at the goal.']);
});

test('late, restless or not there is short too', () => {
  const done = { leeway: 0.2, status: 'arrived' };
  const short = (change) => /falls short/.test(of({ ...done, ...change }).judgement);
  assert.equal(short({}), false);
  assert.equal(short({ time: 90.1 }), true);
  assert.equal(short({ switches: 11 }), true);
  for (const status of ['timed out', 'struck', 'gave up', 'missed', 'diverged']) assert.equal(short({ status }), true, status);
});

const three = (robot = {}, point = {}, unicycle = {}, shortest = 10) => ({
  shortest, models: [measures({ who: 0, ...robot }), measures({ who: 1, ...point }), measures({ who: 2, ...unicycle })],
});
const rowsOf = (change, apart = null) =>
  Object.fromEntries(verdict(frame(change), asked, apart).rows.map((r) => [r.key, r.cells.map((c) => plain(c.text))]));

test('point, unicycle and robot stand side by side', () => {
  const rows = rowsOf({
    verdict: three(
      { status: 'arrived', time: 60.4, leeway: 0.05, way: 19.4, switches: 30, saturated: 0.114, estimate_error: 0.19 },
      { status: 'arrived', time: 35.6, leeway: 0.29, way: 12.1, switches: 10, largest: 5.14 },
      { status: 'gave up', time: 83.8, leeway: 0.24, way: 27.1, switches: 10, largest: 3.3 },
    ),
  }, 6.9);
  assert.deepEqual(rows, {
    time: ['35.6 s', 'gave up', '60.4 s'],
    leeway: ['0.29 m', '0.24 m', '0.05 m'],
    way: ['1.21×', '2.71×', '1.94×'],
    switches: ['10', '10', '30'],
    farthest: ['–', '6.90 m', '5.14 m'],
    saturated: ['–', '–', '11 %'],
    lost: ['–', '–', '0.19 m'],
  });
});

test('only the robot is held to what is asked', () => {
  const same = { status: 'arrived', time: 91, leeway: 0.01, switches: 11 };
  const v = verdict(frame({ verdict: three(same, same, same) }), asked);
  const bad = v.rows.filter((r) => r.cells.some((c) => c.bad)).map((r) => [r.key, r.cells.map((c) => c.bad)]);
  assert.deepEqual(bad, [['time', [false, false, true]], ['leeway', [false, false, true]], ['switches', [false, false, true]]]);
});

test('without shadows and without a shortest way there is less to say', () => {
  const rows = rowsOf({ verdict: { shortest: null, shortest_why: 'There is none.', models: [measures({ way: 3.2 })] } });
  assert.deepEqual([rows.way, rows.farthest, rows.time], [['–', '–', '3.20 m'], ['–', '–', '–'], ['–', '–', '…']]);
  assert.equal(of({ verdict: { shortest: null, shortest_why: 'There is none.', models: [] } }).shortest, 'There is none.');
});

test('the time of a robot that has ended stands still', () => {
  const f = { time: 120, status: 'arrived', leeway: 0.2, verdict: three({ status: 'arrived', time: 60 }) };
  assert.match(of(f).judgement, /keeps what is asked/);
  assert.match(spoken(frame(f), asked), /^The run ended at 1:00\.0/);
});

test('partings are listed in order, and nothing else is', () => {
  const mark = (kind, tick) => ({ kind, who: 1, tick, text: '' });
  assert.deepEqual(partings([mark('parting', 9), mark('contact', 1), mark('parting', 4)]).map((m) => m.tick), [4, 9]);
});

test('nothing asked, nothing near: no judgement on the leeway', () => {
  const v = verdict(frame({ leeway: 0.01 }), {});
  assert.equal(v.mark, 'none');
  assert.equal(`${v.words} ${v.judgement}`, 'of leeway. So far it holds.');
  assert.equal(of({ leeway: null }).mark, 'none');
  assert.equal(of({ leeway: null }).leeway, '–');
});

test('the end of a run is read out', () => {
  assert.equal(spoken(frame(), asked), '');
  const words = spoken(frame({ status: 'gave up', time: 61, leeway: 0.2, reason: 'The goal is walled in.' }), asked);
  assert.match(words, /^The run ended at 1:01\.0: gave up\. The goal is walled in\. 0\.20 m of leeway/);
});
