// Inflate: unpacks deflated data (RFC 1951), so that a film opens in every browser,
// at once, and in tests without one.

/** Extra bits and bases of lengths (symbols 257…285) and distances (RFC 1951, 3.2.5). */
const LENGTHS = table([0, 0, 0, 0, 0, 0, 0, 0, 1, 1, 1, 1, 2, 2, 2, 2, 3, 3, 3, 3, 4, 4, 4, 4, 5, 5, 5, 5], 3);
const DISTANCES = table([0, 0, 0, 0, 1, 1, 2, 2, 3, 3, 4, 4, 5, 5, 6, 6, 7, 7, 8, 8, 9, 9, 10, 10, 11, 11, 12, 12, 13, 13], 1);
/** The order in which code lengths of code lengths come. */
const ORDER = [16, 17, 18, 0, 8, 7, 9, 6, 10, 5, 11, 4, 12, 3, 13, 2, 14, 1, 15];

/**
 * @param {number[]} extra
 * @param {number} first
 */
function table(extra, first) {
  let base = first;
  return extra.map((bits) => {
    const entry = { bits, base };
    base += 1 << bits;
    return entry;
  });
}

/**
 * @param {Uint8Array} data
 * @returns {Uint8Array}
 */
export function inflate(data) {
  let at = 0;
  let held = 0;
  let have = 0;
  let out = new Uint8Array(Math.max(1024, data.length * 4));
  let size = 0;

  /** @param {number} n */
  const take = (n) => {
    while (have < n) {
      if (at >= data.length) throw new Error('the data ends too early');
      held |= data[at++] << have;
      have += 8;
    }
    const value = held & ((1 << n) - 1);
    held >>>= n;
    have -= n;
    return value;
  };
  /** @param {number} n */
  const room = (n) => {
    if (size + n <= out.length) return;
    const more = new Uint8Array(Math.max(out.length * 2, size + n));
    more.set(out);
    out = more;
  };
  /** @param {Code} code */
  const symbol = (code) => {
    // Canonical codes, a bit at a time: of each length the codes are consecutive.
    let value = 0;
    let first = 0;
    let index = 0;
    for (let length = 1; length <= 15; length++) {
      value |= take(1);
      const count = code.counts[length];
      if (value - count < first) return code.symbols[index + (value - first)];
      index += count;
      first = (first + count) << 1;
      value <<= 1;
    }
    throw new Error('the data has a code that is none');
  };

  for (let last = 0; !last; ) {
    last = take(1);
    const kind = take(2);
    if (kind === 0) {
      held = have = 0;
      const length = data[at] | (data[at + 1] << 8);
      if ((length ^ (data[at + 2] | (data[at + 3] << 8))) !== 0xffff || at + 4 + length > data.length) {
        throw new Error('the data is damaged');
      }
      room(length);
      out.set(data.subarray(at + 4, at + 4 + length), size);
      size += length;
      at += 4 + length;
      continue;
    }
    if (kind === 3) throw new Error('the data is damaged');
    const [literals, distances] = kind === 1 ? fixedCodes() : dynamicCodes(take, symbol);
    for (;;) {
      const s = symbol(literals);
      if (s === 256) break;
      if (s < 256) {
        room(1);
        out[size++] = s;
        continue;
      }
      const length = s === 285 ? 258 : LENGTHS[s - 257].base + take(LENGTHS[s - 257].bits);
      const d = DISTANCES[symbol(distances)];
      const from = size - (d.base + take(d.bits));
      if (from < 0) throw new Error('the data is damaged');
      room(length);
      for (let i = 0; i < length; i++) out[size + i] = out[from + i]; // they may overlap
      size += length;
    }
  }
  return out.subarray(0, size);
}

/** @typedef {{counts: Uint16Array, symbols: Uint16Array}} Code */

/**
 * A code from the lengths of its codes: how many there are of each length, and the
 * symbols in the order of their codes.
 * @param {number[]} lengths
 * @returns {Code}
 */
function codeOf(lengths) {
  const counts = new Uint16Array(16);
  for (const l of lengths) counts[l]++;
  counts[0] = 0;
  const next = new Uint16Array(16);
  for (let l = 1; l < 15; l++) next[l + 1] = next[l] + counts[l];
  const symbols = new Uint16Array(lengths.length);
  lengths.forEach((l, s) => {
    if (l) symbols[next[l]++] = s;
  });
  return { counts, symbols };
}

/** @returns {[Code, Code]} */
function fixedCodes() {
  const lengths = Array.from({ length: 288 }, (_, s) => (s < 144 ? 8 : s < 256 ? 9 : s < 280 ? 7 : 8));
  return [codeOf(lengths), codeOf(Array(30).fill(5))];
}

/**
 * @param {(bits: number) => number} take
 * @param {(code: Code) => number} symbol
 * @returns {[Code, Code]}
 */
function dynamicCodes(take, symbol) {
  const literals = take(5) + 257;
  const distances = take(5) + 1;
  const count = take(4) + 4;
  const lengths = Array(19).fill(0);
  for (let i = 0; i < count; i++) lengths[ORDER[i]] = take(3);
  const code = codeOf(lengths);
  /** @type {number[]} */
  const all = [];
  while (all.length < literals + distances) {
    const s = symbol(code);
    if (s < 16) all.push(s);
    else if (s === 16) repeat(all, all[all.length - 1] ?? 0, 3 + take(2));
    else repeat(all, 0, s === 17 ? 3 + take(3) : 11 + take(7));
  }
  return [codeOf(all.slice(0, literals)), codeOf(all.slice(literals))];
}

/**
 * @param {number[]} list
 * @param {number} value
 * @param {number} times
 */
function repeat(list, value, times) {
  while (times-- > 0) list.push(value);
}
