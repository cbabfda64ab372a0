// Sessions: asking the server for a new session, and what it says when it cannot
// give one.

/**
 * @typedef {{line?: number, column?: number, path?: string, text: string}} Fault
 */

/**
 * What to open: a shipped scenario by its key, the text of a file, or the data
 * of a link; at a tick, standing or playing.
 * @typedef {{shipped?: string, scenario?: string, link?: string, tick?: number, playing?: boolean}} Wanted
 */

/**
 * @param {Wanted} wanted
 * @returns {Promise<{session: string, url: string} | {faults: Fault[]}>}
 */
export async function open(wanted) {
  let answer;
  try {
    answer = await fetch('/api/sessions', {
      method: 'POST',
      headers: { 'Content-Type': 'application/json' },
      body: JSON.stringify(wanted),
    });
  } catch {
    return { faults: [{ text: 'The server could not be reached. Is it still running?' }] };
  }
  const body = await answer.json().catch(() => null);
  if (answer.ok && body?.url) return { session: String(body.session), url: String(body.url) };
  if (Array.isArray(body?.problems) && body.problems.length > 0) return { faults: body.problems };
  return { faults: [{ text: refusal(answer.status, body) }] };
}

/**
 * @param {number} status
 * @param {any} body
 */
function refusal(status, body) {
  const said = body?.error?.text ?? body?.text ?? body?.error;
  if (typeof said === 'string' && said) return said;
  if (status === 413) return 'The file is larger than this server accepts.';
  if (status === 429 || status === 503) return 'The server has as many sessions as it takes. Try again in a little while.';
  return `The server answered with status ${status}.`;
}
