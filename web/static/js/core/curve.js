// Curve: a number over time as points of pixels. Where many values fall into one
// column of pixels, its first, least, largest and last are kept, which draws the
// same picture as all of them would.

/**
 * @param {number} first number of the first value
 * @param {number} last one beyond the last
 * @param {(i: number) => number} tick of a value, ascending
 * @param {(i: number) => number} value
 * @param {number} from tick at the left edge
 * @param {number} scale pixels a tick
 * @returns {[number, number][]} pixel and value
 */
export function thinned(first, last, tick, value, from, scale) {
  /** @type {[number, number][]} */
  const out = [];
  if (last - first < 2 * Math.abs(tick(Math.max(last - 1, first)) - tick(first)) * scale || last - first < 64) {
    for (let i = first; i < last; i++) out.push([(tick(i) - from) * scale, value(i)]);
    return out;
  }
  let column = NaN;
  let [x, low, high, end, n] = [0, 0, 0, 0, 0];
  const close = () => {
    if (n > 2) out.push([x, low], [x, high]);
    if (n > 1) out.push([x, end]);
  };
  for (let i = first; i < last; i++) {
    const at = (tick(i) - from) * scale;
    const v = value(i);
    if (Math.floor(at) === column) {
      low = Math.min(low, v);
      high = Math.max(high, v);
      end = v;
      n++;
      x = at;
      continue;
    }
    close();
    column = Math.floor(at);
    [low, high, end, n, x] = [v, v, v, 1, at];
    out.push([at, v]);
  }
  close();
  return out;
}
