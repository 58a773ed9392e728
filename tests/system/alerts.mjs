// Alerts from outside: a furnace that falls silent raises "no reading"; a kill -9 changes neither its number nor
// its age; people acknowledge, shelve and note; what does not fit gets problem details; the stream says when
// something changed.
import { Daemon, MINUTE_MS, binary, check, demoDay, expect, finish, waitFor } from './support.mjs';

binary();
const FURNACE = 'pit-2';
const AGE_MIN = 20; // silent for so long when the daemon first sees it
const SHOWN_MIN = 120;
const now_ms = Math.floor(Date.now() / 1000) * 1000;
const start_ms = now_ms - (SHOWN_MIN + AGE_MIN) * MINUTE_MS;
const { loads, logs } = demoDay(start_ms, 10, [FURNACE]);
const entry = loads.find((one) => one.start_min < SHOWN_MIN && one.end_min > SHOWN_MIN + AGE_MIN);
expect(entry, 'the demo day has no load at that time');
const daemon = await Daemon.fresh('[alerts]\nleast_free_mb = 1.0\n');

// Names of events of the stream, as they come.
const heard = [];
const closing = new AbortController();
fetch(`${daemon.url}/api/v1/events`, { signal: closing.signal }).then(async (answer) => {
  for await (const part of answer.body) heard.push(Buffer.from(part).toString());
}).catch(() => {});
const heardAlerts = () => (heard.join('').match(/event: alerts/g) ?? []).length;

const active = async (more = '') => (await daemon.must('GET', `/api/v1/alerts?state=active${more}`)).alerts;
const silence = () => waitFor('"no reading"', 20000, async () => (await active()).find((one) => one.kind === 'no reading'));
const problem = async (path, body, status, type) => {
  const answer = await daemon.request('POST', path, body);
  expect(answer.status === status, `${path} ${JSON.stringify(body)}: ${answer.status} ${answer.text}`);
  expect(answer.type.startsWith('application/problem+json'), answer.type);
  expect(answer.json.type === `/problems/${type}`, `${answer.json.type}, expected ${type}`);
  return answer.json;
};
let first;

await check('a silent furnace raises "no reading", since its last reading', async () => {
  const log = logs[FURNACE];
  await daemon.sendLog(FURNACE, log.header + log.rows.slice(0, SHOWN_MIN).join('\n') + '\n');
  await daemon.must('POST', '/api/v1/loads', entry.body);
  first = await silence();
  expect(first.furnace === FURNACE && first.load === null && first.severity === 'urgent', JSON.stringify(first));
  expect(first.state === 'active' && first.times === 1 && first.acknowledged === null, JSON.stringify(first));
  const age_min = (now_ms - Date.parse(first.since)) / MINUTE_MS;
  expect(age_min > AGE_MIN - 1 && age_min < AGE_MIN + 2, `since ${first.since}`);
  const one = await daemon.must('GET', `/api/v1/alerts/${first.id}`);
  expect(one.events.length === 1 && one.events[0].what === 'raised' && one.events[0].person === null, JSON.stringify(one.events));
  expect(Array.isArray(one.deliveries), 'no list of deliveries');
  await waitFor('the stream to say so', 5000, () => heardAlerts() > 0);
});

await check('it stands on the floor at its furnace and on the page of the load', async () => {
  const floor = await daemon.must('GET', '/api/v1/floor');
  const furnace = floor.furnaces.find((one) => one.id === FURNACE);
  expect(furnace.alerts.some((one) => one.id === first.id && one.acknowledged === false), JSON.stringify(furnace.alerts));
  expect(floor.alerts.worst === 'urgent' && floor.alerts.active >= 1, JSON.stringify(floor.alerts));
  const load = furnace.loads[0];
  expect(Array.isArray(load.alerts), 'the load has no list');
  const snapshot = await daemon.must('GET', `/api/v1/loads/${load.id}/snapshot`);
  expect(snapshot.alerts.some((one) => one.id === first.id), JSON.stringify(snapshot.alerts));
});

await check('after kill -9 it has the same number and age, and is not raised again', async () => {
  await daemon.kill9();
  await daemon.start();
  const again = await silence();
  expect(again.id === first.id && again.since === first.since && again.raised_at === first.raised_at, JSON.stringify(again));
  const one = await daemon.must('GET', `/api/v1/alerts/${first.id}`);
  expect(one.events.filter((event) => event.what === 'raised').length === 1, JSON.stringify(one.events));
});

await check('acknowledged by one person, the next one hears by whom', async () => {
  const path = `/api/v1/alerts/${first.id}/acknowledge`;
  const [a, b] = await Promise.all(['Night shift', 'Supervisor'].map((person) => daemon.request('POST', path, { person })));
  expect([a.status, b.status].sort().join() === '200,409', `${a.status} ${b.status}`);
  const winner = a.status === 200 ? a : b;
  const loser = a.status === 200 ? b : a;
  expect(loser.json.type === '/problems/alert-acknowledged' && loser.json.detail.includes(winner.json.acknowledged.person), loser.text);
  const stored = daemon.sql(`SELECT count(*) FROM audit WHERE subject = 'alert ${first.id}'`);
  expect(stored === '1', `audit rows ${stored}`);
});

await check('shelved until a time and taken back; notes are kept', async () => {
  const until = new Date(Date.now() + 3600e3).toISOString();
  const shelved = await daemon.must('POST', `/api/v1/alerts/${first.id}/shelve`, { person: 'Supervisor', reason: 'logger at the maker', until });
  expect(shelved.shelved.reason === 'logger at the maker', JSON.stringify(shelved.shelved));
  const floor = await daemon.must('GET', '/api/v1/floor');
  expect(floor.furnaces.find((one) => one.id === FURNACE).alerts.some((one) => one.shelved), 'not shelved on the floor');
  const back = await daemon.must('POST', `/api/v1/alerts/${first.id}/unshelve`, { person: 'Supervisor' });
  expect(back.shelved === null, JSON.stringify(back.shelved));
  await problem(`/api/v1/alerts/${first.id}/unshelve`, { person: 'Supervisor' }, 409, 'alert-not-shelved');
  const noted = await daemon.must('POST', `/api/v1/alerts/${first.id}/notes`, { person: 'Night shift', text: 'Cable was out.' });
  const whats = noted.events.map((event) => event.what).join();
  expect(whats === 'raised,acknowledged,shelved,back from the shelf,note', whats);
});

await check('what does not fit is a problem that names the member', async () => {
  const base = `/api/v1/alerts/${first.id}`;
  await problem('/api/v1/alerts/999/acknowledge', { person: 'A' }, 404, 'unknown-alert');
  await problem('/api/v1/alerts/x/notes', { person: 'A', text: 'b' }, 404, 'unknown-alert');
  await problem(`${base}/acknowledge`, '{', 400, 'broken-json');
  for (const [path, body, field] of [
    [`${base}/acknowledge`, {}, 'person'],
    [`${base}/acknowledge`, { person: 'A', more: 1 }, 'more'],
    [`${base}/shelve`, { person: 'A', reason: 'r' }, 'until'],
    [`${base}/shelve`, { person: 'A', reason: 'r', until: '2020-01-01T00:00:00Z' }, 'until'],
    [`${base}/shelve`, { person: 'A', reason: 'r', until: '2099-01-01T00:00:00Z' }, 'until'],
    [`${base}/notes`, { person: 'A', text: '' }, 'text'],
  ]) {
    const answer = await problem(path, body, 422, 'invalid-request');
    expect(answer.field === field, `${JSON.stringify(body)}: ${answer.field}`);
  }
  for (const query of ['state=open', 'load=x', 'limit=0', 'cursor=-1']) {
    const answer = await daemon.request('GET', `/api/v1/alerts?${query}`);
    expect(answer.status === 422, `${query}: ${answer.status}`);
  }
});

await check('when the load ends the alert is past, and takes only a note', async () => {
  const [load] = (await daemon.must('GET', '/api/v1/loads?state=open')).loads;
  await daemon.must('POST', `/api/v1/loads/${load.id}/end`, { person: 'Night shift' });
  const past = await waitFor('the alert to be past', 20000, async () => {
    const one = await daemon.must('GET', `/api/v1/alerts/${first.id}`);
    return one.state === 'past' && one;
  });
  expect(past.cleared_at !== null && past.events.at(-1).what === 'cleared', JSON.stringify(past));
  expect((await active()).every((one) => one.id !== first.id), 'still active');
  const list = await daemon.must('GET', `/api/v1/alerts?state=past&furnace=${FURNACE}`);
  expect(list.alerts.some((one) => one.id === first.id), JSON.stringify(list));
  await problem(`/api/v1/alerts/${first.id}/acknowledge`, { person: 'A' }, 409, 'alert-past');
  await daemon.must('POST', `/api/v1/alerts/${first.id}/notes`, { person: 'A', text: 'Later.' });
});

closing.abort();
const end = await daemon.stop();
await check('the daemon stops cleanly', () => expect(end.code === 0, JSON.stringify(end)));
finish();
