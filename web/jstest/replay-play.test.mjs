import assert from 'node:assert/strict';
import { readFileSync } from 'node:fs';
import { test } from 'node:test';

import { unpack } from '../replay/js/core/film.js';
import { axis, badges, blocks, gapPath, gapY, layout, tickOf, xOf } from '../replay/js/core/lanes.js';
import { momentAt } from '../replay/js/core/moment.js';
import { Player, SPEEDS } from '../replay/js/core/player.js';
import { pathTo, piecesOf, thinned } from '../replay/js/core/ways.js';

const film = unpack(readFileSync(new URL('../replay/testdata/film.txt', import.meta.url), 'utf8'));
const numbers = (d) => d.split(/[ML]/).slice(1).map((p) => p.trim().split(' ').map(Number));

test('play, pause and the end', () => {
  let told = 0;
  const p = new Player(10, () => told++);
  p.pass(1);
  assert.equal(p.now, 0, 'time stands still before it plays');
  p.play();
  p.pass(0.1);
  assert.ok(Math.abs(p.now - 0.1) < 1e-12);
  p.setSpeed(4);
  p.pass(0.1);
  assert.ok(Math.abs(p.now - 0.5) < 1e-12);
  p.pass(1000);
  assert.ok(Math.abs(p.now - 1.5) < 1e-12, 'a page that slept does not leap');
  p.toggle();
  p.pass(0.1);
  assert.ok(Math.abs(p.now - 1.5) < 1e-12);
  p.seek(9.9);
  p.toggle();
  p.pass(0.1);
  assert.deepEqual([p.now, p.playing], [10, false], 'it ends');
  p.toggle();
  assert.deepEqual([p.now, p.playing], [0, true], 'and starts anew');
  assert.ok(told > 5);
});

test('seeking keeps within the film and goes on playing', () => {
  const p = new Player(10, () => {});
  p.play();
  p.seek(99);
  assert.deepEqual([p.now, p.playing], [10, true]);
  p.seek(-1);
  assert.equal(p.now, 0);
});

test('speeds, step by step', () => {
  const p = new Player(10, () => {});
  for (const want of SPEEDS.slice(SPEEDS.indexOf(1) + 1)) (p.shift(1), assert.equal(p.speed, want));
  p.shift(1);
  assert.equal(p.speed, SPEEDS.at(-1));
  for (let k = 0; k < 20; k++) p.shift(-1);
  assert.equal(p.speed, SPEEDS[0]);
});

test('a film of no length does not play', () => {
  const p = new Player(0, () => {});
  p.play();
  assert.equal(p.playing, false);
});

test('a piece of way for each mode, and none from where it was carried', () => {
  const pieces = piecesOf(film, 0, false);
  assert.deepEqual(pieces.map((p) => [Math.round(p.from), p.to, p.mode]), [[0, 41, 0], [41, 50, 1], [50, 90, 1], [90, film.head.length, 2]]);
  const whole = piecesOf(film, 1, true);
  assert.deepEqual(whole.map((p) => [Math.round(p.from), p.to]), [[0, 50], [50, film.head.models[1].end]]);
  for (const p of [...pieces, ...whole]) {
    assert.equal(p.ticks[0], p.from);
    assert.equal(p.ticks.at(-1), p.to);
    assert.ok(p.ticks.every((t, k) => k === 0 || t > p.ticks[k - 1]), 'in order');
  }
});

test('a way up to now ends where the model is', () => {
  const [piece] = piecesOf(film, 1, true).slice(-1);
  for (const tick of [51, 123, 456.7, piece.to]) {
    const now = momentAt(film, tick).models[1];
    const points = numbers(pathTo(piece, tick, now));
    const [x, y] = points.at(-1);
    assert.ok(Math.hypot(x - now.x, y - now.y) < 0.002, `${tick}`);
  }
  assert.equal(pathTo(piece, piece.from - 1, { x: 0, y: 0 }), '');
});

test('a thinned way is nowhere far from the whole', () => {
  let seed = 5;
  const random = () => (seed = (seed * 16807) % 2147483647) / 2147483647;
  let [x, y] = [0, 0];
  const way = Array.from({ length: 500 }, (_, k) => ({ x: (x += 0.02 * Math.cos(k / 30)), y: (y += 0.02 * Math.sin(k / 30) + 0.001 * random()) }));
  const kept = thinned(way.length, (k) => way[k]);
  assert.ok(kept.length < 250 && kept[0] === 0 && kept.at(-1) === 499);
  for (const p of way) {
    let least = Infinity;
    for (let k = 1; k < kept.length; k++) {
      const [a, b] = [way[kept[k - 1]], way[kept[k]]];
      const [dx, dy] = [b.x - a.x, b.y - a.y];
      const t = Math.min(Math.max(((p.x - a.x) * dx + (p.y - a.y) * dy) / (dx * dx + dy * dy), 0), 1);
      least = Math.min(least, Math.hypot(p.x - a.x - t * dx, p.y - a.y - t * dy));
    }
    assert.ok(least < 0.0041);
  }
  assert.deepEqual(thinned(0, () => ({ x: 0, y: 0 })), []);
  assert.deepEqual(thinned(1, () => ({ x: 0, y: 0 })), [0]);
});

for (const width of [320, 390, 900, 1440, 2560]) {
  test(`the tape at ${width} pixels`, () => {
    const l = layout(width);
    assert.ok(l.left < l.right && l.right < width);
    for (const tick of [0, 100, film.head.length]) assert.ok(Math.abs(tickOf(l, film, xOf(l, film, tick)) - tick) < 1e-6);
    assert.equal(tickOf(l, film, -50), 0);
    assert.equal(tickOf(l, film, width + 50), film.head.length);

    for (const who of [0, 1, 2]) {
      const all = blocks(l, film, who);
      assert.equal(all.length, film.spans[who].length);
      assert.ok(all.every((b) => b.width > 0 && b.x >= l.left && b.x + b.width <= l.right + 1));
      assert.ok(all.every((b) => b.word.length * 6.6 < b.width), 'words have room');
      const points = numbers(gapPath(l, film, who));
      assert.ok(points.every(([x, y]) => x >= l.left - 1 && x <= l.right + 1 && y >= l.gaps && y <= l.gaps + l.strip));
      const least = Math.min(...film.tracks[who].gap.filter((_, k) => film.ticks[k] <= film.head.models[who].end));
      assert.ok(Math.abs(Math.max(...points.map((p) => p[1])) - gapY(l, film, least)) < 0.06, 'the nearest approach is drawn');
    }
    const times = axis(l, film);
    assert.ok(times.length >= 2 && times.every((t, k) => k === 0 || t.x - times[k - 1].x > 30), 'times do not touch');
    assert.equal(times[0].text, '0:00');
  });
}

test('badges stand beside each other', () => {
  const l = layout(900);
  const crowded = { ...film, marks: Array.from({ length: 40 }, (_, k) => ({ kind: 'parting', who: 1, tick: 100 + k, text: '' })) };
  const all = badges(l, crowded);
  assert.ok(all.length >= 3 && all.length < 40);
  assert.ok(all.every((b, k) => k === 0 || b.x - all[k - 1].x >= 17.9));
  assert.deepEqual(all.slice(0, 3).map((b) => b.text), ['1', '2', '3']);
});

test('a side stands with the mode where there is room', () => {
  const long = { ...film, spans: [[{ who: 0, tick: 0, mode: 1, side: -1 }], [], []] };
  assert.equal(blocks(layout(900), long, 0)[0].word, 'wall-following, right');
});
