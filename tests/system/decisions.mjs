// What people decide about readings and loads, on the real daemon: choosing between two values, marking a burn-off,
// correcting a load; each changes the result at once, as a replay with the same decision would have it, and each is
// in the audit trail with its person.
import { Daemon, MINUTE_MS, binary, check, demoDay, expect, finish, replay, temporaryFolder, waitFor } from './support.mjs';

binary();
const start_ms = Math.floor(Date.now() / MINUTE_MS) * MINUTE_MS - 21 * 60 * MINUTE_MS;
const { loads, logs } = demoDay(start_ms, 20, ['batch-5']);
const entry = loads[0];
const folder = temporaryFolder();
const clean = replay(folder, entry, logs['batch-5'].text).trimEnd();

const daemon = await Daemon.fresh();
const { id } = await daemon.must('POST', '/api/v1/loads', entry.body);
await daemon.must('POST', `/api/v1/loads/${id}/end`, { person: 'Test', ended_at: entry.ended_at });
await daemon.sendLog('batch-5', logs['batch-5'].text);
const result = async () => (await daemon.request('GET', `/api/v1/loads/${id}/result`)).text.trimEnd();
const becomes = (what, want) => waitFor(what, 20000, async () => (await result()) === want);
const conflicts = '/api/v1/furnaces/batch-5/channels/carbon_potential/conflicts';
const columns = logs['batch-5'].header.trim().split(',');
const carbonAt = columns.indexOf('carbon_wt_pct');
const middle = logs['batch-5'].rows.slice(Math.floor(entry.start_min) + 120, Math.floor(entry.start_min) + 140);

await check('the log alone gives the result of replay', () => becomes('the clean result', clean));

await check('two values for one time: neither counts, until a person chooses', async () => {
  const readings = middle.map((row) => ({ furnace: 'batch-5', channel: 'carbon_potential', time: row.split(',')[0], value: 0.2 }));
  const taken = await daemon.must('POST', '/api/v1/readings', { readings });
  expect(taken.conflict === 20, JSON.stringify(taken));
  const without = logs['batch-5'].rows.map((row) => {
    const cells = row.split(',');
    if (middle.includes(row)) cells[carbonAt] = '';
    return cells.join(',');
  });
  await becomes('the result without them', replay(folder, entry, logs['batch-5'].header + without.join('\n') + '\n').trimEnd());
  const open = await daemon.must('GET', conflicts);
  expect(open.undecided === 20 && open.conflicts.every((each) => each.values.length === 2), JSON.stringify(open).slice(0, 200));
  const choices = open.conflicts.map((each) => ({ at: each.at, value: Math.max(...each.values) }));
  const after = await daemon.must('POST', conflicts, { person: 'Supervisor', choices });
  expect(after.undecided === 0 && after.conflicts[0].chosen.person === 'Supervisor', JSON.stringify(after).slice(0, 200));
  await becomes('the clean result again', clean);
  // Wrongly chosen: the other value counts as if it had been logged.
  await daemon.must('POST', conflicts, { person: 'Supervisor', choices: choices.map((each) => ({ ...each, value: 0.2 })) });
  const low = logs['batch-5'].rows.map((row) => {
    const cells = row.split(',');
    if (middle.includes(row)) cells[carbonAt] = '0.2';
    return cells.join(',');
  });
  await becomes('the result with the low values', replay(folder, entry, logs['batch-5'].header + low.join('\n') + '\n').trimEnd());
});

await check('a marked stretch is masked, as a load file with the same mark; withdrawn it counts again', async () => {
  const [from, to] = [middle[0].split(',')[0], middle.at(-1).split(',')[0]];
  const mark = await daemon.must('POST', '/api/v1/furnaces/batch-5/masks',
    { person: 'Night shift', channel: 'carbon_potential', from, to, reason: 'calibration' });
  const marked = { ...entry, body: { ...entry.body, masks: [{ furnace: 'batch-5', channel: 'carbon_potential', from, to, reason: 'calibration' }] } };
  const want = replay(folder, marked, logs['batch-5'].text).trimEnd();
  expect(JSON.parse(want).gaps.some((gap) => gap.basis === 'masked'), 'no masked stretch in the result');
  await becomes('the masked result', want);
  await daemon.must('POST', `/api/v1/furnaces/batch-5/masks/${mark.id}/withdraw`, { person: 'Supervisor' });
  await daemon.must('POST', conflicts, { person: 'Supervisor', choices: (await daemon.must('GET', conflicts)).conflicts
    .map((each) => ({ at: each.at, value: Math.max(...each.values) })) });
  await becomes('the clean result once more', clean);
});

await check('a wrong steel corrected afterwards: a new result beside the old one, both kept, the reason with it', async () => {
  const load = await daemon.must('GET', `/api/v1/loads/${id}`);
  const definition = structuredClone(load.definition);
  definition.items[0].steel = '18CrNiMo7-6';
  delete definition.items[0].core_carbon_wt_pct;
  const corrected = { person: 'Supervisor', reason: 'Certificate read wrongly', expected_revision: load.revision, load: definition };
  await daemon.must('PUT', `/api/v1/loads/${id}`, corrected);
  const stale = await daemon.request('PUT', `/api/v1/loads/${id}`, corrected);
  expect(stale.status === 409 && /someone changed it/.test(stale.json.detail), stale.text);
  const body = structuredClone(entry.body);
  body.items[0].steel = '18CrNiMo7-6';
  await becomes('the corrected result', replay(folder, { ...entry, body }, logs['batch-5'].text).trimEnd());
  const { revisions } = await daemon.must('GET', `/api/v1/loads/${id}/revisions`);
  expect(revisions[0].reason === 'Certificate read wrongly' && revisions[0].changes.some((each) => each.field === 'items[0].steel.name'),
    JSON.stringify(revisions[0]));
  expect(Number(daemon.sql(`select count(*) from result where load = ${id}`)) >= 2, 'the old result is gone');
  expect(daemon.sql("select count(*) from audit where person = 'Supervisor'") !== '0', 'no audit');
});

await check('an earlier load reworked begins with its final profile', async () => {
  const earlier = JSON.parse(await result());
  const name = earlier.items[0].name;
  const body = structuredClone(entry.body);
  body.items = [{ ...body.items[0], rework_of: { load: id, item: name } }];
  // Cold and just put in: nothing has happened to it yet.
  body.started_at = new Date(Date.now() - MINUTE_MS).toISOString();
  body.items[0].steel = '18CrNiMo7-6';

  const again = await daemon.must('POST', '/api/v1/loads', { ...body, name: 'rework' });
  expect(again.definition.items[0].initial_profile.load === id, 'no profile');
  const snapshot = await daemon.must('GET', `/api/v1/loads/${again.id}/snapshot`);
  expect(Math.abs(snapshot.items[0].total_depth_mm - earlier.items[0].total_depth_mm) < 0.05,
    `${snapshot.items[0].total_depth_mm} mm against ${earlier.items[0].total_depth_mm} mm`);
  const none = await daemon.request('POST', '/api/v1/loads', { ...body, name: 'x', items: [{ ...body.items[0], rework_of: { load: 999, item: name } }] });
  expect(none.status === 422 && none.json.field === 'items[0].rework_of.load', none.text);
});

await check('a cancelled load leaves the floor and has no result; a corrected one is shown as corrected', async () => {
  const { loads: [open] } = await daemon.must('GET', '/api/v1/loads?state=open');
  const onFloor = async () => (await daemon.must('GET', '/api/v1/floor')).furnaces.some((f) => f.loads.some((l) => l.id === open.id));
  await waitFor('it on the floor', 10000, onFloor);
  await daemon.must('POST', `/api/v1/loads/${open.id}/cancel`, { person: 'Supervisor', reason: 'entered by mistake' });
  await waitFor('it to leave the floor', 10000, async () => !(await onFloor()));
  const answer = await daemon.request('GET', `/api/v1/loads/${open.id}/result`);
  expect(answer.status === 409 && answer.json.type.includes('load-cancelled'), answer.text);
  expect((await daemon.must('GET', `/api/v1/loads/${open.id}/snapshot`)).load.state === 'cancelled', 'not shown as cancelled');

  const load = await daemon.must('GET', `/api/v1/loads/${id}`);
  await daemon.must('GET', `/api/v1/loads/${id}/snapshot`);
  const corrected = { person: 'Supervisor', reason: 'Misread', expected_revision: load.revision, load: { ...load.definition, name: 'As on the card' } };
  await daemon.must('PUT', `/api/v1/loads/${id}`, corrected);
  const shown = await daemon.must('GET', `/api/v1/loads/${id}/snapshot`);
  expect(shown.load.name === 'As on the card', shown.load.name);
});

await daemon.stop();
finish();
