import assert from 'node:assert/strict';
import { readFileSync } from 'node:fs';
import { test } from 'node:test';
import { deflateRawSync, constants } from 'node:zlib';

import { inflate } from '../replay/js/core/inflate.js';
import { unpack } from '../replay/js/core/film.js';
import { captionAt, lastIndex, momentAt, spanAt, turn, whyAt } from '../replay/js/core/moment.js';

/** The film that the Go tests wrote: 50 frames, 20 ticks apart, of the film `sample`. */
const film = unpack(readFileSync(new URL('../replay/testdata/film.txt', import.meta.url), 'utf8'));
const near = (a, b, within = 1e-9) => assert.ok(Math.abs(a - b) <= within, `${a} is not ${b}`);

test('what is deflated in any way comes back', () => {
  let seed = 1;
  const random = () => (seed = (seed * 16807) % 2147483647) / 2147483647;
  const kinds = [
    () => Buffer.alloc(0),
    () => Buffer.from([7]),
    () => Buffer.alloc(100_000, 'abc'),
    () => Buffer.from(Array.from({ length: 70_000 }, () => Math.floor(random() * 256))),
    () => Buffer.from(Array.from({ length: 5000 }, () => Math.floor(random() ** 4 * 40))),
    () => Buffer.from('the robot was in wall-following since 0:05.3; '.repeat(300)),
  ];
  for (const kind of kinds) {
    const raw = kind();
    for (const level of [0, 1, 6, 9]) {
      for (const strategy of [constants.Z_DEFAULT_STRATEGY, constants.Z_FIXED, constants.Z_HUFFMAN_ONLY]) {
        const back = inflate(new Uint8Array(deflateRawSync(raw, { level, strategy })));
        assert.ok(raw.equals(back), `level ${level}, strategy ${strategy}, ${raw.length} bytes`);
      }
    }
  }
});

test('damaged data is an error, never an endless loop', () => {
  const good = new Uint8Array(deflateRawSync(Buffer.from('over the hills and far away, '.repeat(20))));
  for (let n = 0; n < good.length; n++) assert.throws(() => inflate(good.subarray(0, n)));
  assert.throws(() => inflate(new Uint8Array([7])));
  for (let k = 0; k < good.length; k++) {
    const bad = good.slice();
    bad[k] ^= 0xff;
    try {
      assert.ok(inflate(bad).length < 1e6);
    } catch (e) {
      assert.match(String(e), /data|undefined/);
    }
  }
});

test('the film is what was packed', () => {
  assert.equal(film.head.name, 'The bay');
  assert.equal(film.ticks.length, 50);
  assert.deepEqual([...film.ticks.slice(0, 3)], [0, 20, 40]);
  assert.equal(film.ticks.at(-1), film.head.length);
  assert.equal(film.movers.length, 4);
  assert.equal(film.beams.length, 3);
  assert.deepEqual(film.solids, [{ shape: 'disc', points: [[6, 4]], radius: 0.3 }, { shape: 'wall', points: [[-1.5, 2], [3.25, 2.001]] }]);
  // Relations of the sample: the belief is 1 cm off, a mover at half the way and 3.5 m south.
  for (let k = 0; k < 50; k++) {
    near(film.belief[0][k], film.tracks[0].x[k] + 0.01, 0.0011);
    near(film.movers[0][k], film.tracks[0].x[k] / 2, 0.0011);
    near(film.movers[1][k], -3.5);
    near(film.tracks[1].heading[k], k * 0.7 - 10, 0.0006);
    assert.equal(film.tracks[0].x[k], film.tracks[2].x[k]);
  }
});

test('at a frame everything is where the frame says', () => {
  for (const k of [0, 1, 25, 49]) {
    const m = momentAt(film, film.ticks[k]);
    m.models.forEach((b, who) => {
      near(b.x, film.tracks[who].x[k]);
      near(b.y, film.tracks[who].y[k]);
      near(b.gap, film.tracks[who].gap[k]);
    });
    assert.deepEqual(m.ranges, film.beams.map((b) => b[k]));
  }
});

test('between two frames things glide, the short way round', () => {
  const { x, heading } = film.tracks[0];
  const m = momentAt(film, 505); // frames 25 and 26, a quarter of the way
  near(m.models[0].x, x[25] + (x[26] - x[25]) / 4);
  near(m.models[0].heading, heading[25] + (heading[26] - heading[25]) / 4);
  near(turn(3, -3), 2 * Math.PI - 6);
  near(turn(-3, 3), 6 - 2 * Math.PI);
  near(turn(0.2, 0.1), -0.1);
});

test('what was carried does not glide', () => {
  const { x } = film.tracks[0];
  near(momentAt(film, 49).models[0].x, x[2]); // the robot is carried at tick 50
  near(momentAt(film, 50).models[0].x, x[2]);
  near(momentAt(film, 51).models[0].x, x[3]);
  near(momentAt(film, 51).movers[0][0], film.movers[0][2] + (film.movers[0][3] - film.movers[0][2]) * 11 / 20);
});

test('goal and solids are where they were put', () => {
  assert.deepEqual(momentAt(film, 70).goal, [11, 4]);
  assert.deepEqual(momentAt(film, 70.5).goal, [10, 1]);
  assert.equal(momentAt(film, 30).moved.size, 0);
  assert.deepEqual([...momentAt(film, 31).moved], [[0, [7, 4]]]);
});

test('modes, and why', () => {
  assert.deepEqual([0, 40.9, 41, 60, 90, 1e9].map((t) => spanAt(film, 0, t)?.mode), [0, 0, 1, 1, 2, 2]);
  assert.deepEqual([41, 59, 60].map((t) => momentAt(film, t).models[0].side), [1, 1, -1]);
  assert.deepEqual(whyAt(film, 0, 0), { since: 0, text: 'This is where the logic starts.' });
  assert.deepEqual(whyAt(film, 0, 41), { since: 41, text: 'Something stood 0.29 m away.' });
  assert.equal(whyAt(film, 0, 75).since, 41, 'another side of the wall is no other mode');
  assert.equal(whyAt(film, 0, 90).text, 'The goal was 0.10 m away.');
});

test('where the film does not say why, nothing is made up', () => {
  const poor = { ...film, whys: [[film.whys[0][0]], [], []] };
  assert.deepEqual(whyAt(poor, 0, 95), { since: 90, text: '' });
});

test('captions: what was said last, for a while; partings first', () => {
  assert.equal(captionAt(film, 43, 100), null);
  assert.equal(captionAt(film, 44, 100)?.kind, 'parting');
  assert.equal(captionAt(film, 60, 10), null);
  assert.equal(captionAt(film, 95, 10)?.kind, 'end');
});

test('the ended stand', () => {
  const { models } = film.head;
  assert.deepEqual(momentAt(film, film.head.length).models.map((b) => b.ended), [true, true, true]);
  assert.deepEqual(momentAt(film, models[2].end).models.map((b) => b.ended), [false, false, true]);
});

test('the last place that holds', () => {
  for (let n = 0; n < 20; n++) for (let k = -1; k < n; k++) assert.equal(lastIndex(n, (i) => i <= k), k);
});
