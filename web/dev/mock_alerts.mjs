// DEVELOPMENT ONLY: invented alerts, their events, deliveries and targets, held in memory.
const minute = 60_000;
const rank = { urgent: 0, warning: 1, note: 2 };
let alerts = null, sequence = 0;
const stamp = (ms) => `${new Date(ms).toISOString().slice(0, 19)}Z`;
const targets = [
  { name: 'shift-phone', kind: 'webhook', where: 'alerts.shop.example/hook', routes: 'urgent at once, warnings after 5 min', waiting: 0, stuck: 0, error: null },
  { name: 'supervisor', kind: 'mail', where: 'mail.shop.example', routes: 'urgent after 15 min without an acknowledgement', waiting: 1, stuck: 2, error: 'mail.shop.example does not accept the connection. Check its name and port in the settings.' },
];

function begin(nowMs, furnaces, loads) {
  const make = (id, kind, severity, furnace, load, agoMin, sentence, advice, more = {}) => ({ id, kind, severity, state: 'active', furnace, furnace_name: furnaces.find((each) => each.id === furnace)?.name ?? null, load, load_name: loads.find((each) => each.id === load)?.definition.name ?? null, item: null,
    sentence, advice, since: stamp(nowMs - agoMin * minute), raised_at: stamp(nowMs - agoMin * minute), last_seen: stamp(nowMs - minute), cleared_at: null, times: 1, acknowledged: null, shelved: null, escalated: false, delivery: { waiting: 0, delivered: 1, stuck: 0 },
    events: [{ at: stamp(nowMs - agoMin * minute), person: null, what: 'raised', text: sentence }],
    deliveries: [{ target: 'shift-phone', event: 'raised', state: 'delivered', attempts: 1, next_try: null, delivered_at: stamp(nowMs - (agoMin - 1) * minute), error: null, key: `${id}-raised-shift-phone` }], ...more });
  return [
    make(1, 'projected miss', 'urgent', 'batch-3', 6, 42, 'A: case depth 0.89 mm at the end, window 0.90 to 1.20 mm; chance of all windows 6 %.', 'Try holding longer or a higher carbon potential on the load’s page.', { item: 'A', escalated: true, delivery: { waiting: 0, delivered: 1, stuck: 1 } }),
    make(2, 'input held', 'warning', 'batch-1', 2, 9, 'The last carbon potential is 9 min old and carried on.', 'Check the probe and its plug within 6 min; after that the recipe’s value stands in.', { times: 3 }),
    make(3, 'segment ends', 'note', 'twin-6', 8, 3, 'Segment heat ends in 5 min.', null),
    make(4, 'projected miss', 'urgent', 'pit-1', 4, 65, 'A: case depth 1.28 mm at the end, window 0.90 to 1.20 mm; chance of all windows under 1 %.', 'The case is deeper than the window already: end the cycle and tell the supervisor.', { acknowledged: { person: 'Night shift', at: stamp(nowMs - 50 * minute) } }),
    make(5, 'disk', 'warning', null, null, 300, 'Only 912 MB are free on the disk of the database.', 'Make room: move old copies of the database elsewhere.', { shelved: { person: 'Supervisor', reason: 'new disk comes on Thursday', until: stamp(nowMs + 600 * minute) } }),
    make(6, 'channel silent', 'warning', 'ring-1', null, 12, 'Channel co: no reading for 12 min.', 'Check the analyser and its line.', { delivery: { waiting: 1, delivered: 0, stuck: 0 } }),
    make(7, 'channel stuck', 'note', 'pit-2', null, 900, 'Channel dew_point: the same value for 40 min.', null, { state: 'past', cleared_at: stamp(nowMs - 600 * minute), times: 4, acknowledged: { person: 'Morning shift', at: stamp(nowMs - 880 * minute) } }),
  ].map((each) => (each.id === 1 ? { ...each, deliveries: [...each.deliveries, { target: 'supervisor', event: 'escalated', state: 'stuck', attempts: 9, next_try: null, delivered_at: null, error: targets[1].error, key: '1-escalated-supervisor' }], events: [...each.events, { at: stamp(nowMs - 27 * minute), person: null, what: 'escalated', text: 'Nobody acknowledged within 15 min.' }] } : each));
}
const bare = ({ events, deliveries, ...alert }) => alert;
const summary = ({ id, kind, severity, sentence, advice, since, acknowledged, shelved }) => ({ id, kind, severity, sentence, advice, since, acknowledged: acknowledged !== null, shelved: shelved !== null });
const order = (a, b) => Number(a.shelved !== null) - Number(b.shelved !== null) || Number(a.acknowledged !== null) - Number(b.acknowledged !== null) || rank[a.severity] - rank[b.severity];

export class MockAlerts {
  constructor(nowMs, furnaces, loads) { alerts = begin(nowMs, furnaces, loads); }
  get sequence() { return sequence; }
  active(test = () => true) { return alerts.filter((each) => each.state === 'active' && test(each)).sort(order); }
  ofLoad(id) { return this.active((each) => each.load === id).map(summary); }
  ofFurnace(id) { return this.active((each) => each.furnace === id && each.load === null).map(summary); }
  floor() {
    const active = this.active(), open = active.filter((each) => !each.acknowledged && !each.shelved);
    const worst = [...active].sort((a, b) => rank[a.severity] - rank[b.severity])[0];
    return { active: active.length, unacknowledged: open.length, worst: worst?.severity ?? null, newest_id: alerts.at(-1)?.id ?? null, plant: this.active((each) => each.furnace === null).map(summary) };
  }
  // Answers what belongs here and says so with true. POST /dev/alert makes a new one.
  async answer({ path, url, request, response, send, problem, bodyOf, nowMs, loads }) {
    const done = (body, status = 200) => { send(response, status, body); return true; };
    const post = request.method === 'POST';
    if (path === '/api/v1/alerts') {
      const want = url.searchParams, state = want.get('state') ?? 'active';
      const found = alerts.filter((each) => (state === 'all' || each.state === state) && (!want.get('furnace') || each.furnace === want.get('furnace')) && (!want.get('load') || each.load === Number(want.get('load'))));
      return done({ alerts: (state === 'active' ? found.sort(order) : found.sort((a, b) => b.id - a.id)).map(bare), next_cursor: null });
    }
    if (path === '/api/v1/targets') return done({ targets: targets.map(({ error, ...each }) => ({ ...each, last_delivered_at: each.name === 'shift-phone' ? stamp(nowMs() - 12 * minute) : null, last_error: error })) });
    const target = /^\/api\/v1\/targets\/([^/]+)\/(test|retry)$/.exec(path), found = target && targets.find((each) => each.name === target[1]);
    if (found && target[2] === 'test') return done({ delivered: found.error === null, error: found.error });
    if (found) { const retried = found.stuck; found.waiting += retried; found.stuck = 0; return done({ retried }); }
    const [, id, what] = /^\/api\/v1\/alerts\/(\d+)(?:\/(\w+))?$/.exec(path) ?? [];
    if (!id) return false;
    const alert = alerts.find((each) => each.id === Number(id));
    if (!alert) { problem(response, 404, 'Unknown alert', 'There is no alert with this number.'); return true; }
    if (!post) return done(alert);
    const body = await bodyOf(request), at = stamp(nowMs()), person = String(body.person ?? '').trim();
    if (!person) { problem(response, 422, 'Name missing', 'The name of the person is empty.', 'person'); return true; }
    const tell = (happened, text) => alert.events.push({ at, person, what: happened, text });
    if (what === 'acknowledge') { alert.acknowledged = { person, at }; tell('acknowledged', body.note ?? ''); }
    if (what === 'shelve') { alert.shelved = { person, reason: body.reason, until: body.until }; tell('shelved', body.reason); }
    if (what === 'unshelve') { alert.shelved = null; tell('back from the shelf', ''); }
    if (what === 'notes') tell('note', body.text);
    ++sequence;
    return done(alert);
  }
  raise(nowMs) {
    const id = alerts.length + 1, model = alerts[0];
    alerts.push({ ...model, id, severity: 'urgent', kind: 'soot', since: stamp(nowMs), raised_at: stamp(nowMs), sentence: 'The gas is rich enough to deposit soot.', advice: 'Lower the carbon potential to 1.15 % C within 10 min.', acknowledged: null, shelved: null, escalated: false, times: 1, events: [{ at: stamp(nowMs), person: null, what: 'raised', text: '' }], deliveries: [] });
    ++sequence;
    return id;
  }
}
