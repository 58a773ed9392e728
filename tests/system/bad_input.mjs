// Bad input gives a clear error and nothing is lost: each kind of wrong reading, body, log file and load is refused
// with its own reason (RFC 9457 problem document, or one result for each item), is counted, and the readings that
// were there before are there afterwards, untouched. The daemon keeps serving throughout.
import { Daemon, binary, check, expect, finish, iso } from './support.mjs';

binary();
const daemon = await Daemon.fresh();
const now_ms = Math.floor(Date.now() / 1000) * 1000;
const time = (minutes_ago) => iso(now_ms - minutes_ago * 60000);
const good = Array.from({ length: 50 }, (_, i) => ({ furnace: 'pit-2', channel: 'temperature', time: time(100 - i), value: 900 + i / 10 }));

const storedRows = () => daemon.sql(`SELECT furnace, name, time_us, value FROM reading JOIN channel ON channel.id = reading.channel ` +
  `WHERE furnace = 'pit-2' AND name = 'temperature' ORDER BY time_us, value`);

await daemon.must('POST', '/api/v1/readings', { readings: good });
const before = storedRows();

// A problem document with all its members; returns it.
function problemOf(answer, status, type) {
  expect(answer.status === status, `status ${answer.status}, expected ${status}: ${answer.text.slice(0, 300)}`);
  expect(answer.type.startsWith('application/problem+json'), `content type ${answer.type}`);
  const { json } = answer;
  expect(json?.status === status && /^\/problems\/[a-z0-9-]+$/.test(json.type), `document ${answer.text.slice(0, 300)}`);
  expect(json.title?.length > 5 && json.detail?.length > 15, `title and detail must speak: ${answer.text.slice(0, 300)}`);
  if (type) expect(type.test(json.type), `type ${json.type}, expected ${type}`);
  return json;
}

// --- Bodies that are no list of readings.
const seen = new Set();
for (const [name, body, status, type] of [
  ['broken JSON', '{"readings":[{"furnace":', 400, /json$/],
  ['NaN as a value', '{"readings":[{"furnace":"pit-2","channel":"temperature","time":"2026-03-02T06:05:00Z","value":NaN}]}', 400, /json$/],
  ['Infinity as a value', '{"readings":[{"furnace":"pit-2","channel":"temperature","time":"2026-03-02T06:05:00Z","value":-Infinity}]}', 400, /json$/],
  ['a number beyond 64-bit floating point', '{"readings":[{"furnace":"pit-2","channel":"temperature","time":"2026-03-02T06:05:00Z","value":1e999}]}', 400, /json$/],
  ['an empty body', '', 400, /json$/],
  ['a body of bytes that are no UTF-8', new Uint8Array([0x7b, 0x22, 0xff, 0xfe, 0x22, 0x3a, 0x31, 0x7d]), 400, /json$/],
  ['an array instead of an object', '[]', 422, /readings$/],
  ['no "readings"', '{}', 422, /readings$/],
  ['"readings" that is text', '{"readings":"none"}', 422, /readings$/],
  ['nesting without end', '{"readings":' + '['.repeat(50000) + ']'.repeat(50000) + '}', 422, /readings$/],
  ['more than 10 000 readings', JSON.stringify({ readings: Array(10001).fill(good[0]) }), 413, /too-many-readings$/],
]) {
  await check(`readings: ${name} -> ${status}`, async () => {
    seen.add(problemOf(await daemon.request('POST', '/api/v1/readings', body), status, type).type);
  });
}
await check('readings: broken JSON, a wrong shape and too many are three problem types', () => expect(seen.size === 3, [...seen].join(' ')));

// --- Single readings: the good neighbour is stored, the bad one has its reason.
let neighbour = 0;
const at = () => iso(now_ms - 86400000 - 1000 * neighbour);
const itemReasons = new Set();
for (const [name, bad, reason] of [
  ['text for a number', { value: '930' }, 'wrong type'],
  ['null for a number', { value: null }, 'wrong type'],
  ['a number for a time', { time: 1772431500 }, 'wrong type'],
  ['an unknown furnace', { furnace: 'pit-9' }, 'unknown furnace'],
  ['an unknown channel', { channel: 'temprature' }, 'unknown channel'],
  ['a time in the future', { time: iso(now_ms + 3600000) }, 'future time'],
  ['a time long past', { time: '1999-12-31T23:00:00Z' }, 'ancient time'],
  ['a day that no calendar has', { time: '2026-02-30T06:00:00Z' }, 'bad time'],
  ['a time without zone', { time: '2026-03-02T06:00:00' }, 'bad time'],
  ['an impossible temperature', { value: 4000 }, 'out of range'],
  ['a temperature below the coldest', { value: -300 }, 'out of range'],
  ['a misspelt member', { valu: 1 }, 'unknown member'],
  ['a missing member', { channel: undefined }, 'missing member'],
]) {
  await check(`reading: ${name} -> refused: ${reason}`, async () => {
    neighbour++;
    const fine = { furnace: 'batch-5', channel: 'temperature', time: at(), value: 901 };
    const wrong = { furnace: 'pit-2', channel: 'temperature', time: time(20), value: 920, ...bad };
    const answer = await daemon.must('POST', '/api/v1/readings', { readings: [wrong, fine] });
    expect(answer.stored === 1 && answer.refused === 1 && answer.results[1] === 'stored', JSON.stringify(answer));
    expect(answer.results[0].refused === reason, `reason "${answer.results[0].refused}"`);
    expect(answer.results[0].detail?.length > 10, 'no detail for people');
    itemReasons.add(answer.results[0].refused);
  });
}
await check('each kind of bad reading has its own reason', () => expect(itemReasons.size === 9, [...itemReasons].join(', ')));

await check('refused readings are stored with their reason and counted for the furnace', async () => {
  expect(Number(daemon.sql('SELECT count(*) FROM refused_reading')) >= 13, 'refused_reading');
  const furnace = await daemon.must('GET', '/api/v1/furnaces/pit-2');
  const refused = furnace.channels.find((channel) => channel.name === 'temperature').refused;
  expect(refused['future time'] === 1 && refused['out of range'] === 2, JSON.stringify(refused));
});

await check('two values for one time: both are kept, the second is called a conflict', async () => {
  const one = { furnace: 'batch-4', channel: 'carbon_potential', time: time(30), value: 0.8 };
  await daemon.must('POST', '/api/v1/readings', { readings: [one] });
  const answer = await daemon.must('POST', '/api/v1/readings', { readings: [{ ...one, value: 0.9 }, one] });
  expect(answer.conflict === 1 && answer.duplicate === 1 && answer.stored === 0, JSON.stringify(answer));
  expect(answer.results[0] === 'conflict', JSON.stringify(answer.results));
  const furnace = await daemon.must('GET', '/api/v1/furnaces/batch-4');
  expect(furnace.channels.find((channel) => channel.name === 'carbon_potential').conflicts >= 1, 'not counted');
});

// --- Whole requests.
await check('a body of 50 MB -> 413, and the daemon is well', async () => {
  let answer = null;
  try {
    answer = await daemon.request('POST', '/api/v1/readings', new Uint8Array(50 << 20).fill(0x20));
  } catch (error) {
    // The daemon may answer and close before all is sent; the sender then sees a broken pipe instead.
    expect(error instanceof TypeError, error.message);
  }
  if (answer) problemOf(answer, 413, /body-too-large$/);
  expect((await daemon.request('GET', '/healthz')).status === 200, 'not alive');
});
await check('a body announced as 50 MB is refused with 413 before it is sent', async () => {
  const { connect } = await import('node:net');
  const text = await new Promise((give, refuse) => {
    const socket = connect(daemon.port, '127.0.0.1', () => socket.write(
      'POST /api/v1/readings HTTP/1.1\r\nHost: 127.0.0.1\r\nContent-Type: application/json\r\nContent-Length: 52428800\r\n\r\n'));
    let got = '';
    socket.setTimeout(5000, () => socket.destroy(new Error('no answer in 5 s')));
    socket.on('data', (data) => {
      got += data;
      if (got.includes('body-too-large')) socket.end(), give(got);
    });
    socket.on('end', () => give(got));
    socket.on('error', refuse);
  });
  expect(text.startsWith('HTTP/1.1 413') && text.includes('/problems/body-too-large'), text.slice(0, 200));
});
await check('an address that is not there -> 404', async () => problemOf(await daemon.request('GET', '/api/v1/nothing'), 404));
await check('a method that the address does not have -> 405', async () => problemOf(await daemon.request('DELETE', '/api/v1/loads'), 405));

// --- Log files.
const HEADER = 'time,emf_mV,CO_pct,temp_C\n';
for (const [name, furnace, mapping, body, status] of [
  ['an unknown furnace', 'pit-9', 'logger', HEADER, 404],
  ['an unknown mapping', 'pit-2', 'other', HEADER, 422],
  ['a column that is missing', 'pit-2', 'logger', 'time,emf,CO_pct,temp_C\n' + time(5) + ',1,2,3\n', 422],
  ['an empty file', 'pit-2', 'logger', '', 422],
  ['the wrong separator', 'pit-2', 'logger', 'time;emf_mV;CO_pct;temp_C\n', 422],
  ['UTF-16', 'pit-2', 'logger', new Uint8Array([0xff, 0xfe, 0x74, 0, 0x69, 0]), 422],
]) {
  await check(`log: ${name} -> ${status}`, async () => {
    problemOf(await daemon.request('POST', `/api/v1/furnaces/${furnace}/log?mapping=${mapping}`, body, 'text/csv'), status);
  });
}
await check('log: bad rows are named by line, good rows of the same file are stored', async () => {
  const body = HEADER + `${time(9)},1139.8,20.1,930.2\nyesterday,1139.8,20.1,930.2\n${time(8)},"1139.8,20.1,930.2\n` +
    `${time(7)},9.5.1,20.1,930.1\n${time(6)},1140.0,20.1,inf\n${time(5)},9999,20.1,930.3\n`;
  const report = await daemon.must('POST', '/api/v1/furnaces/pit-2/log?mapping=logger', body, 'text/csv');
  const lines = new Set(report.problems.map((problem) => problem.line));
  expect([3, 4, 5, 6, 7].every((line) => lines.has(line)) && !lines.has(2), JSON.stringify(report));
  expect(report.problems.every((problem) => problem.reason.length > 8), 'a reason for each');
  expect(report.stored === 3 + 2 + 2 + 2, `stored ${report.stored}`);
});

// --- Loads.
const item = { name: 'A', part: 'test pin', quantity: 1, steel: '20MnCr5', section: { shape: 'plate', thickness_mm: 20 },
  criterion: { kind: 'hardness_hv', limit_hv: 550, martensite_pct: 95 }, case_depth_window_mm: [0.9, 1.2] };
const segment = { name: 'boost', duration_min: 240, temperature_degc: 930, carbon_potential_wt_pct: 1.1 };
const load = { name: '9001', furnace: 'pit-2', person: 'Early shift', started_at: time(60),
  recipe: { name: 'invented', segments: [segment] }, items: [item] };
const withItem = (change) => ({ ...load, items: [{ ...item, ...change }] });
const withSegment = (change) => ({ ...load, recipe: { name: 'invented', segments: [{ ...segment, ...change }] } });

for (const [name, body, field, type] of [
  ['a steel that the library does not have', withItem({ steel: '20MnCr6' }), 'items[0].steel', /unknown-steel$/],
  ['a composition without carbon', withItem({ steel: { name: 'x', composition_wt_pct: { Mn: 1 } } }), 'items[0].steel'],
  ['a composition that is no case-hardening steel', withItem({ steel: { name: 'x', composition_wt_pct: { C: 0.2, Cr: 18 } } }), 'items[0].steel'],
  ['a window upside down', withItem({ case_depth_window_mm: [1.2, 0.9] }), 'items[0].case_depth_window_mm'],
  ['a window of text', withItem({ case_depth_window_mm: ['a', 'b'] }), 'items[0].case_depth_window_mm'],
  ['a case deeper than the part', withItem({ section: { shape: 'plate', thickness_mm: 2 } }), 'items[0].case_depth_window_mm'],
  ['an unknown shape', withItem({ section: { shape: 'cube', edge_mm: 3 } }), 'items[0].section'],
  ['a section without its size', withItem({ section: { shape: 'cylinder' } }), 'items[0].section'],
  ['a negative thickness', withItem({ section: { shape: 'plate', thickness_mm: -20 } }), 'items[0].section'],
  ['a criterion that the core meets already', withItem({ criterion: { kind: 'carbon', limit_wt_pct: 0.15 } }), 'items[0].criterion'],
  ['a quantity of half a part', withItem({ quantity: 0.5 }), 'items[0].quantity'],
  ['a member that a load does not have', withItem({ thicknes: 3 }), 'items[0]'],
  ['no items', { ...load, items: [] }, 'items'],
  ['two items of one name', { ...load, items: [item, item] }, 'items[1].name'],
  ['no recipe', { ...load, recipe: undefined }, 'recipe'],
  ['a recipe without segments', { ...load, recipe: { name: 'invented', segments: [] } }, 'recipe'],
  ['a segment of no length', withSegment({ duration_min: 0 }), 'recipe.segments[0].duration_min'],
  ['a segment hotter than any furnace', withSegment({ temperature_degc: 1706 }), 'recipe.segments[0].temperature_degc'],
  ['a recipe too cold to carburize', withSegment({ temperature_degc: 600 }), 'recipe'],
  ['a carbon potential of 11 %', withSegment({ carbon_potential_wt_pct: 11 }), 'recipe.segments[0].carbon_potential_wt_pct'],
  ['a furnace that the plant does not have', { ...load, furnace: 'pit-9' }, 'furnace', /unknown-furnace$/],
  ['a chamber that the furnace does not have', { ...load, chamber: 'left' }, 'chamber'],
  ['nobody who starts it', { ...load, person: '' }, 'person'],
  ['no load number', { ...load, name: undefined }, 'name'],
  ['a start that is no time', { ...load, started_at: 'now' }, 'started_at'],
  ['a start in the future', { ...load, started_at: iso(now_ms + 7200000) }, 'started_at'],
]) {
  await check(`load: ${name} -> 422 at ${field}`, async () => {
    const problem = problemOf(await daemon.request('POST', '/api/v1/loads', body), 422, type);
    expect(problem.field?.startsWith(field), `field ${problem.field}`);
  });
}
await check('load: broken JSON -> 400', async () => problemOf(await daemon.request('POST', '/api/v1/loads', '{"name":'), 400, /json$/));

await check('two loads in one chamber -> 409, and the second names the first', async () => {
  const first = await daemon.must('POST', '/api/v1/loads', load);
  const problem = problemOf(await daemon.request('POST', '/api/v1/loads', { ...load, name: '9002', started_at: time(30) }), 409);
  expect(problem.detail.includes('9001'), problem.detail);
  const open = await daemon.must('GET', '/api/v1/loads?state=open');
  expect(open.loads.length === 1 && open.loads[0].id === first.id, JSON.stringify(open).slice(0, 300));
  const early = { person: 'Early shift', ended_at: time(90) };
  problemOf(await daemon.request('POST', `/api/v1/loads/${first.id}/end`, early), 422);
  problemOf(await daemon.request('POST', `/api/v1/loads/${first.id}/end`, { ended_at: time(1) }), 422);
  problemOf(await daemon.request('POST', `/api/v1/loads/${first.id}/notes`, { person: 'Early shift' }), 422);
  problemOf(await daemon.request('GET', '/api/v1/loads/77777'), 404);
  await daemon.must('POST', `/api/v1/loads/${first.id}/end`, { person: 'Early shift' });
  problemOf(await daemon.request('POST', `/api/v1/loads/${first.id}/end`, { person: 'Early shift' }), 409);
});

// --- After all that.
await check('the readings that were there before are there, and none was changed', () => {
  const after = new Set(storedRows().split('\n'));
  const lost = before.split('\n').filter((row) => !after.has(row));
  expect(before.split('\n').length === good.length && lost.length === 0, `${lost.length} lost`);
});
await check('the daemon stops by itself with code 0, its database intact', async () => {
  const end = await daemon.stop();
  expect(end.code === 0, JSON.stringify(end));
  expect(daemon.sql('PRAGMA integrity_check') === 'ok', 'integrity');
});

finish();
