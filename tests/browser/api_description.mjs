// Real answers of a real daemon against the schemas of server/api/openapi.yaml (JSON Schema 2020-12 by ajv), and
// the document itself as the daemon serves it.
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import Ajv from 'ajv/dist/2020.js';
import { parse } from 'yaml';
import { Daemon, MINUTE_MS, SOURCE, check, expect, finish, iso } from '../system/support.mjs';

const text = readFileSync(join(SOURCE, 'server/api/openapi.yaml'), 'utf8');
const description = parse(text);
const ajv = new Ajv({ strict: false, validateFormats: false, allErrors: true });
ajv.addSchema({ $id: 'api', components: description.components });

// References in the document start at its root; in ajv they start at the schema called api.
const rooted = (node) => Array.isArray(node) ? node.map(rooted)
  : node && typeof node === 'object'
    ? Object.fromEntries(Object.entries(node).map(([k, v]) => [k, k === '$ref' ? v.replace(/^#/, 'api#') : rooted(v)]))
    : node;

function answerSchema(path, method, status) {
  const operation = description.paths[path][method];
  let answer = operation.responses[status] ?? operation.responses.default;
  if (answer.$ref) answer = description.components.responses[answer.$ref.split('/').pop()];
  return Object.values(answer.content ?? {})[0]?.schema;
}

const checked = new Set();
async function call(daemon, path, method, url, options = {}) {
  const response = await fetch(daemon.url + url, { method: method.toUpperCase(), ...options, signal: AbortSignal.timeout(10000) });
  const body = await response.text();
  const type = response.headers.get('content-type') ?? '';
  if (type.includes('json')) {
    const validate = ajv.compile(rooted(answerSchema(path, method, String(response.status))));
    expect(validate(JSON.parse(body)), `${method} ${url} -> ${response.status}: ${ajv.errorsText(validate.errors)}\n${body.slice(0, 400)}`);
  }
  checked.add(`${method} ${path}`);
  return { status: response.status, body: type.includes('json') ? JSON.parse(body) : body, headers: response.headers };
}
const json = (value) => ({ headers: { 'content-type': 'application/json' }, body: JSON.stringify(value) });

// A target whose key file is missing: everything about it can be asked, nothing is sent anywhere.
const daemon = await Daemon.fresh('[[target]]\nname = "hook"\nkind = "webhook"\nurl = "http://127.0.0.1:9/"\nsecret_file = "none"\n');
const start_ms = Date.now() - 90 * MINUTE_MS;
const body = { ...JSON.parse(readFileSync(join(SOURCE, 'config/demo/example/load.json'), 'utf8')), started_at: iso(start_ms) };
delete body.ended_at;
let id = 0;

await check('readings and logs', async () => {
  const readings = [];
  for (let m = 0; m < 80; m++) {
    const time = iso(start_ms + m * MINUTE_MS);
    readings.push({ furnace: 'pit-2', channel: 'temperature', time, value: 925 }, { furnace: 'pit-2', channel: 'probe_emf', time, value: 1150 });
  }
  readings.push({ furnace: 'pit-2', channel: 'no-such', time: iso(start_ms), value: 1 });
  const taken = await call(daemon, '/api/v1/readings', 'post', '/api/v1/readings', json({ readings }));
  expect(taken.status === 200 && taken.body.stored === 160 && taken.body.refused === 1, JSON.stringify(taken.body).slice(0, 200));
  const log = `time,emf_mV,CO_pct,temp_C\n${iso(start_ms + 85 * MINUTE_MS)},1150,20.0,925\nnonsense,1,2,3\n`;
  const sent = await call(daemon, '/api/v1/furnaces/{furnace}/log', 'post', '/api/v1/furnaces/pit-2/log?mapping=logger',
    { headers: { 'content-type': 'text/csv' }, body: log });
  expect(sent.status === 200 && sent.body.stored === 3 && sent.body.problems.length > 0, JSON.stringify(sent.body));
});

await check('how logger files are read', async () => {
  const octets = (...parts) => ({ headers: { 'content-type': 'application/octet-stream' }, body: parts.join('') });
  const file = `Date;Time;Furnace °F;CO %;EMF V\n` + Array.from({ length: 20 }, (_, m) => {
    const [date, clock] = iso(start_ms + (60 + m) * MINUTE_MS).slice(0, 19).split('T');
    return `${date};${clock};1706,5;20,1;${m === 7 ? '---' : '1,105'}\n`;
  }).join('');
  const base = '/api/v1/furnaces/{furnace}', url = '/api/v1/furnaces/pit-2';
  const guess = await call(daemon, `${base}/log/guess`, 'post', `${url}/log/guess`, octets(file));
  expect(guess.status === 200 && guess.body.preview.fits, JSON.stringify(guess.body).slice(0, 400));
  expect(guess.body.preview.totals.readings === 59 && guess.body.preview.totals.no_value === 1, JSON.stringify(guess.body.preview.totals));
  const preview = await call(daemon, `${base}/log/preview`, 'post', `${url}/log/preview`, octets(JSON.stringify(guess.body.mapping), '\n', file));
  expect(JSON.stringify(preview.body) === JSON.stringify(guess.body.preview), 'guess and preview differ');
  const unfit = await call(daemon, `${base}/log/preview`, 'post', `${url}/log/preview?mapping=logger`, octets(file));
  expect(unfit.status === 200 && !unfit.body.fits && unfit.body.problem.line === 1, JSON.stringify(unfit.body.problem));
  const save = { person: 'Test', mapping: guess.body.mapping, expected_version: 0 };
  const saved = await call(daemon, `${base}/mappings/{mapping}`, 'put', `${url}/mappings/invented`, json(save));
  expect(saved.status === 200 && saved.body.version === 1, JSON.stringify(saved.body));
  const again = await call(daemon, `${base}/mappings/{mapping}`, 'put', `${url}/mappings/invented`, json(save));
  expect(again.status === 409, JSON.stringify(again.body));
  const list = await call(daemon, `${base}/mappings`, 'get', `${url}/mappings`);
  expect(list.body.mappings.map((m) => `${m.name} ${m.source}`).join() === 'invented library,logger plant file', JSON.stringify(list.body).slice(0, 300));
});

await check('a load from its start to its end', async () => {
  const made = await call(daemon, '/api/v1/loads', 'post', '/api/v1/loads', json(body));
  expect(made.status === 201, JSON.stringify(made.body));
  id = made.body.id;
  for (const view of ['snapshot', 'result', 'history']) {
    const seen = await call(daemon, `/api/v1/loads/{load}/${view}`, 'get', `/api/v1/loads/${id}/${view}`);
    expect(seen.status === 200, `${view}: ${seen.status}`);
  }
  const note = await call(daemon, '/api/v1/loads/{load}/notes', 'post', `/api/v1/loads/${id}/notes`, json({ person: 'Test', text: 'Invented.' }));
  expect(note.status === 201, JSON.stringify(note.body));
  await call(daemon, '/api/v1/floor', 'get', '/api/v1/floor');
  const ended = await call(daemon, '/api/v1/loads/{load}/end', 'post', `/api/v1/loads/${id}/end`, json({ person: 'Test' }));
  expect(ended.status === 200 && ended.body.state === 'ended', JSON.stringify(ended.body));
  for (const view of ['snapshot', 'result', 'history'])
    await call(daemon, `/api/v1/loads/{load}/${view}`, 'get', `/api/v1/loads/${id}/${view}`);
  await call(daemon, '/api/v1/loads/{load}', 'get', `/api/v1/loads/${id}`);
  const list = await call(daemon, '/api/v1/loads', 'get', '/api/v1/loads?state=ended&limit=1');
  expect(list.body.loads.length === 1, 'one ended load');
});

const get = (path, url) => call(daemon, path, 'get', url);
const post = (path, url, value) => call(daemon, path, 'post', url, json(value));
const put = (path, url, value) => call(daemon, path, 'put', url, json(value));

await check('correcting, moving and cancelling a load', async () => {
  const twin = { ...body, name: 'twin', furnace: 'twin-6', chamber: 'heating' };
  const made = await post('/api/v1/loads', '/api/v1/loads', twin);
  const moving = made.body.id;
  const moved = await post('/api/v1/loads/{load}/move', `/api/v1/loads/${moving}/move`,
    { person: 'Test', chamber: 'second', at: iso(start_ms + 40 * MINUTE_MS) });
  expect(moved.status === 200 && moved.body.definition.path.length === 2, JSON.stringify(moved.body).slice(0, 300));
  const definition = { ...moved.body.definition, name: 'twin corrected' };
  const wanted = { person: 'Test', reason: 'Wrong number', expected_revision: 2, load: definition };
  expect((await put('/api/v1/loads/{load}', `/api/v1/loads/${moving}`, wanted)).body.name === 'twin corrected', 'corrected');
  expect((await put('/api/v1/loads/{load}', `/api/v1/loads/${moving}`, wanted)).status === 409, 'a second time it is stale');
  const steps = (await get('/api/v1/loads/{load}/revisions', `/api/v1/loads/${moving}/revisions`)).body.revisions;
  expect(steps[0].reason === 'Wrong number' && steps[0].changes[0].field === 'name', JSON.stringify(steps[0]));
  await get('/api/v1/loads/{load}/snapshot', `/api/v1/loads/${moving}/snapshot`);
  const gone = await post('/api/v1/loads/{load}/cancel', `/api/v1/loads/${moving}/cancel`, { person: 'Test', reason: 'Never went in' });
  expect(gone.body.state === 'cancelled', JSON.stringify(gone.body).slice(0, 200));
  const recent = await get('/api/v1/furnaces/{furnace}/recent', '/api/v1/furnaces/pit-2/recent');
  expect(recent.body.loads.length === 1, 'one to start again');
});

await check('a line that is pushed', async () => {
  const tray = { ...body, name: 'T1', furnace: 'line-7', chamber: 'heat' };
  expect((await post('/api/v1/loads', '/api/v1/loads', tray)).status === 201, 'tray in');
  const pushed = await post('/api/v1/furnaces/{furnace}/push', '/api/v1/furnaces/line-7/push', { person: 'Test' });
  expect(pushed.status === 200 && pushed.body.moved.length === 0, JSON.stringify(pushed.body));
  expect((await post('/api/v1/furnaces/{furnace}/push', '/api/v1/furnaces/pit-2/push', { person: 'Test' })).status === 422, 'no line');
  await get('/api/v1/floor', '/api/v1/floor');
});

await check('conflicts, marks, refusals', async () => {
  const path = '/api/v1/furnaces/{furnace}/channels/{channel}/conflicts', url = '/api/v1/furnaces/pit-2/channels/temperature/conflicts';
  const at = iso(start_ms + 10 * MINUTE_MS);
  await post('/api/v1/readings', '/api/v1/readings', { readings: [{ furnace: 'pit-2', channel: 'temperature', time: at, value: 900 }] });
  const open = await get(path, url);
  expect(open.body.undecided === 1 && open.body.conflicts[0].values.length === 2, JSON.stringify(open.body));
  const done = await post(path, url, { person: 'Test', choices: [{ at, value: 925 }] });
  expect(done.body.undecided === 0, JSON.stringify(done.body));
  expect((await post(path, url, { person: 'Test', choices: [{ at, value: 1 }] })).status === 409, 'not there');
  const mark = await post('/api/v1/furnaces/{furnace}/masks', '/api/v1/furnaces/pit-2/masks',
    { person: 'Test', channel: 'probe_emf', from: at, to: iso(start_ms + 14 * MINUTE_MS), reason: 'burn-off' });
  expect(mark.status === 201, JSON.stringify(mark.body));
  await get('/api/v1/furnaces/{furnace}/masks', '/api/v1/furnaces/pit-2/masks');
  const withdrawn = await post('/api/v1/furnaces/{furnace}/masks/{mask}/withdraw', `/api/v1/furnaces/pit-2/masks/${mark.body.id}/withdraw`, { person: 'Test' });
  expect(withdrawn.body.withdrawn === true, JSON.stringify(withdrawn.body));
  const refused = await get('/api/v1/furnaces/{furnace}/refused', '/api/v1/furnaces/pit-2/refused');
  expect(refused.body.refused.length > 0, 'some');
});

await check('the library', async () => {
  const { name, quantity, ...part } = body.items[0];
  const first = await put('/api/v1/library/{kind}/{key}', '/api/v1/library/parts/pinion', { person: 'Test', name: 'Pinion', expected_version: 0, body: part });
  expect(first.status === 201, JSON.stringify(first.body));
  const { segments } = body.recipe;
  expect((await put('/api/v1/library/{kind}/{key}', '/api/v1/library/recipes/one', { person: 'Test', name: 'One', expected_version: 0, body: { segments } })).status === 201, 'recipe');
  expect((await put('/api/v1/library/{kind}/{key}', '/api/v1/library/parts/pinion', { person: 'Test', name: 'Pinion', expected_version: 0, body: part })).status === 409, 'stale');
  expect((await get('/api/v1/library/{kind}', '/api/v1/library/parts')).body.entries.length === 1, 'listed');
  expect((await get('/api/v1/library/{kind}/{key}', '/api/v1/library/parts/pinion')).body.versions.length === 1, 'versions');
});

await check('the definition that comes back starts the same load again', async () => {
  const again = { ...(await (await fetch(`${daemon.url}/api/v1/loads/${id}`)).json()).definition };
  const validate = ajv.compile(rooted(description.components.schemas.LoadBody));
  expect(validate(again), ajv.errorsText(validate.errors));
});

// Until `ask` gives something; the daemon's own threads are at work meanwhile.
async function soon(what, ask) {
  for (let i = 0; i < 100; i++) {
    const found = await ask();
    if (found) return found;
    await new Promise((done) => setTimeout(done, 100));
  }
  throw new Error(`${what} did not come in 10 s`);
}

await check('outlook, trial, proposal and plan of a load whose furnace has fallen silent', async () => {
  const begin = Date.now() - 80 * MINUTE_MS;
  const readings = [];
  for (let m = 0; m < 50; m++)
    readings.push({ furnace: 'batch-5', channel: 'temperature', time: iso(begin + m * MINUTE_MS), value: 925 }, { furnace: 'batch-5', channel: 'carbon_potential', time: iso(begin + m * MINUTE_MS), value: 1.05 });
  const taken = await call(daemon, '/api/v1/readings', 'post', '/api/v1/readings', json({ readings }));
  expect(taken.body.stored === 100, JSON.stringify(taken.body).slice(0, 300));
  const created = await post('/api/v1/loads', '/api/v1/loads', { ...body, furnace: 'batch-5', name: 'silent', started_at: iso(begin) });
  expect(created.status === 201, JSON.stringify(created.body));
  const load = created.body.id;
  const at = (tail) => [`/api/v1/loads/{load}${tail}`, `/api/v1/loads/${load}${tail}`];
  const snapshot = await soon('an outlook', async () => {
    const { body: seen } = await get(...at('/snapshot'));
    return seen.outlook && seen.band === '5 to 95 %' ? seen : null;
  });
  await get(...at('/history'));
  await get(...at('/result'));
  const trial = await post(...at('/trial'), { segments: snapshot.rest });
  expect(trial.status === 200 && Math.abs(trial.body.minutes_more) < 2, JSON.stringify(trial.body).slice(0, 300));
  const proposal = await post(...at('/proposal'), { asked_chance: 0.5 });
  expect(proposal.status === 200 && proposal.body.sentence.length > 20, JSON.stringify(proposal.body).slice(0, 300));
  const plan = { person: 'Test', reason: 'the described plan', expected_revision: proposal.body.revision, segments: proposal.body.segments };
  const adopted = await post(...at('/plan'), plan);
  expect(adopted.status === 200 && adopted.body.definition.plans.length === 1, JSON.stringify(adopted.body).slice(0, 300));
  expect((await post(...at('/plan'), plan)).status === 409, 'a plan for an earlier revision was adopted');
  await soon('the plan', async () => (await get(...at('/snapshot'))).body.plans.length === 1);
});

await check('alerts and what people say to them', async () => {
  const alert = await soon('an alert', async () => (await get('/api/v1/alerts', '/api/v1/alerts?state=active')).body.alerts.find((each) => each.kind === 'no reading'));
  const at = (tail) => [`/api/v1/alerts/{alert}${tail}`, `/api/v1/alerts/${alert.id}${tail}`];
  expect((await get(...at(''))).body.events.length > 0, 'no event');
  expect((await post(...at('/notes'), { person: 'Test', text: 'asked the electrician' })).status === 200, 'note');
  expect((await post(...at('/acknowledge'), { person: 'Test' })).body.acknowledged.person === 'Test', 'acknowledged');
  const shelved = await post(...at('/shelve'), { person: 'Test', reason: 'the logger is being mended', until: iso(Date.now() + 30 * MINUTE_MS) });
  expect(shelved.body.shelved.reason === 'the logger is being mended', JSON.stringify(shelved.body));
  expect((await post(...at('/unshelve'), { person: 'Test' })).body.shelved === null, 'unshelved');
});

await check('where alerts are sent', async () => {
  expect((await get('/api/v1/targets', '/api/v1/targets')).body.targets.length === 1, 'one target');
  const test = await post('/api/v1/targets/{target}/test', '/api/v1/targets/hook/test', { person: 'Test' });
  expect(test.status === 200 && test.body.delivered === false, JSON.stringify(test.body));
  const retry = await post('/api/v1/targets/{target}/retry', '/api/v1/targets/hook/retry', { person: 'Test' });
  expect(retry.status === 200, JSON.stringify(retry.body));
});

await check('plant and service documents', async () => {
  await call(daemon, '/api/v1/furnaces', 'get', '/api/v1/furnaces');
  await call(daemon, '/api/v1/furnaces/{furnace}', 'get', '/api/v1/furnaces/pit-2');
  await call(daemon, '/api/v1/furnaces/{furnace}/readings', 'get', '/api/v1/furnaces/pit-2/readings?channel=temperature');
  await call(daemon, '/api/v1/steels', 'get', '/api/v1/steels');
  await call(daemon, '/api/v1/status', 'get', '/api/v1/status');
  for (const path of ['/healthz', '/readyz', '/metrics']) expect((await call(daemon, path, 'get', path)).status === 200, path);
  const served = await call(daemon, '/api/v1/openapi.yaml', 'get', '/api/v1/openapi.yaml');
  expect(served.body === text, 'the daemon serves another description');
});

await check('problems are problem documents', async () => {
  const cases = [
    ['/api/v1/loads/{load}', 'get', '/api/v1/loads/999', {}, 404],
    ['/api/v1/loads', 'post', '/api/v1/loads', json({}), 422],
    ['/api/v1/readings', 'post', '/api/v1/readings', { headers: { 'content-type': 'application/json' }, body: '{' }, 400],
    ['/api/v1/furnaces/{furnace}', 'get', '/api/v1/furnaces/nowhere', {}, 404],
  ];
  for (const [path, method, url, options, status] of cases) {
    const answer = await call(daemon, path, method, url, options);
    expect(answer.status === status, `${url}: ${answer.status}`);
    expect(answer.headers.get('content-type').startsWith('application/problem+json'), `${url}: ${answer.headers.get('content-type')}`);
  }
});

await check('the event stream greets with the floor', async () => {
  const response = await fetch(`${daemon.url}/api/v1/events`, { signal: AbortSignal.timeout(10000) });
  const reader = response.body.getReader();
  let seen = '';
  while (!seen.includes('\n\n')) seen += new TextDecoder().decode((await reader.read()).value);
  await reader.cancel();
  expect(seen.includes('event: floor'), seen.slice(0, 200));
  const validate = ajv.compile(rooted(description.components.schemas.Floor));
  expect(validate(JSON.parse(/^data: (.*)$/m.exec(seen)[1])), ajv.errorsText(validate.errors));
  checked.add('get /api/v1/events');
});

await check('every operation of the description was called', () => {
  for (const [path, operations] of Object.entries(description.paths))
    for (const method of Object.keys(operations)) expect(checked.has(`${method} ${path}`), `${method} ${path} was not called`);
});

await daemon.stop();
finish();
