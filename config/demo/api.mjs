// What the people and the logger of the INVENTED demo plant share: the daemon's public API, and when a load whose
// plan was changed is out. Needs node 18 or newer.

export class Refused extends Error {
  constructor(status, body) {
    super(`${status} ${body?.title ?? ''}: ${body?.detail ?? 'no detail'}`);
    this.status = status;
  }
}

export function client(base) {
  return async (method, path, body) => {
    const answer = await fetch(base + path, {
      method,
      headers: body ? { 'content-type': 'application/json' } : {},
      body: body ? JSON.stringify(body) : undefined,
      signal: AbortSignal.timeout(10000),
    });
    const text = await answer.text();
    let document = null;
    try {
      document = JSON.parse(text);
    } catch {
      document = { detail: text.slice(0, 200) };
    }
    if (!answer.ok) throw new Refused(answer.status, document);
    return document;
  };
}

export const keyOf = (load) => `${load.furnace}/${load.name}/${Date.parse(load.started_at)}`;

// Every load the daemon has, {id, state} by furnace, number and start.
export async function knownLoads(api) {
  const known = new Map();
  for (const state of ['open', 'ended']) {
    let cursor = '';
    do {
      const page = await api('GET', `/api/v1/loads?state=${state}&limit=100${cursor}`);
      for (const load of page.loads) known.set(keyOf(load), { id: load.id, state });
      cursor = page.next_cursor ? `&cursor=${encodeURIComponent(page.next_cursor)}` : '';
    } while (cursor);
  }
  return known;
}

const planMinutes = (plan) => plan.segments.reduce((sum, segment) => sum + segment.duration_min, 0);

// Milliseconds: the end of the load's last adopted plan, or `ended_at` of the schedule where none was adopted.
export function endOf(definition, ended_at) {
  const plan = definition.plans?.at(-1);
  return plan ? Date.parse(plan.from) + Math.round(planMinutes(plan) * 60000) : Date.parse(ended_at);
}

export function options(words, wanted, optional = []) {
  const told = [...wanted.map((name) => `--${name} …`), ...optional.map((name) => `[--${name} …]`)].join(' ');
  const chosen = {};
  for (let i = 0; i < words.length; i += 2) {
    const name = words[i].replace(/^--/, '');
    if (![...wanted, ...optional].includes(name) || words[i + 1] === undefined) {
      throw new Error(`I do not know "${words[i]}" here. Use ${told}.`);
    }
    chosen[name] = words[i + 1];
  }
  for (const name of wanted) if (!chosen[name]) throw new Error(`--${name} is missing. Use ${told}.`);
  return chosen;
}

// Aborted by SIGINT or SIGTERM.
export function stopSignal() {
  const stop = new AbortController();
  for (const signal of ['SIGINT', 'SIGTERM']) process.on(signal, () => stop.abort());
  return stop.signal;
}
