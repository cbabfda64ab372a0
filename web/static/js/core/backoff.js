// Backoff: how long to wait before the next try at a lost connection.

const FIRST = 0.5;
const LONGEST = 15;

/**
 * Seconds before try number attempt (from 0): half a second, doubling up to a
 * quarter of a minute, each shortened by up to a quarter by chance, so that many
 * pages do not come back to a restarted server in the same instant.
 * @param {number} attempt
 * @param {number} chance in [0, 1)
 */
export function wait(attempt, chance) {
  return Math.min(FIRST * 2 ** Math.min(attempt, 10), LONGEST) * (1 - chance / 4);
}
