// Loads that move, on the real daemon: a two-chamber furnace with overlapping loads that are moved over the API, a
// pusher line with thirty trays moved by its push counter, restarts in between. Each ended load's result is that of
// `hearthfront replay` on the same log and path, byte for byte (invariant 2).
import { writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { Daemon, MINUTE_MS, MOVING, binary, check, demoDay, expect, finish, iso, replay, seededRandom, temporaryFolder, waitFor } from './support.mjs';
import { PLACES } from '../../config/demo/line.mjs';

binary();
const random = seededRandom();
const HOURS = 11;
const start_ms = Math.floor(Date.now() / MINUTE_MS) * MINUTE_MS - (HOURS + 1) * 60 * MINUTE_MS;
const { loads, logs } = demoDay(start_ms, HOURS, MOVING);
const twins = loads.filter((entry) => entry.body.furnace === 'twin-6');
const trays = loads.filter((entry) => entry.body.furnace === 'line-7');
const folder = temporaryFolder();

const wanted = new Map();
await check(`replay runs ${twins.length} loads of two chambers and ${trays.length} trays`, () => {
  for (const entry of loads) {
    const text = replay(folder, entry, logs[entry.body.furnace].text).trimEnd();
    const result = JSON.parse(text);
    // The log begins some seconds after the first load.
    expect(result.inputs.temperature.planned_s < 60, `${entry.body.name}: a chamber said nothing: ${JSON.stringify(result.inputs)}`);
    expect(result.items[0].case_depth_mm > 0.5, `${entry.body.name}: ${result.items[0].case_depth_mm} mm`);
    wanted.set(entry.body.name, text);
  }
});

async function sameAsReplay(daemon, entries, ids) {
  for (const entry of entries) {
    let got = '';
    await waitFor(`the final result of ${entry.body.name}`, 30000, async () => {
      got = (await daemon.request('GET', `/api/v1/loads/${ids.get(entry.body.name)}/result`)).text.trimEnd();
      return got === wanted.get(entry.body.name);
    }).catch(() => {});
    const want = wanted.get(entry.body.name);
    let at = 0;
    while (at < got.length && got[at] === want[at]) at++;
    expect(got === want, `${entry.body.name} differs: ${got.slice(Math.max(0, at - 80), at + 80)} | ${want.slice(Math.max(0, at - 80), at + 80)}`);
  }
}

await check('two loads at once in a two-chamber furnace, moved by hand while the log comes in', async () => {
  const daemon = await Daemon.fresh();
  const { header, rows } = logs['twin-6'];
  const steps = twins.flatMap((entry) => [
    { minute: entry.start_min, act: async () => ids.set(entry.body.name, (await daemon.must('POST', '/api/v1/loads', entry.body)).id) },
    ...entry.moves.map((move) => ({ minute: entry.start_min + move.after_min, act: () =>
      daemon.must('POST', `/api/v1/loads/${ids.get(entry.body.name)}/move`, { person: 'Test', at: move.at, chamber: move.chamber }) })),
    { minute: entry.end_min, act: () => daemon.must('POST', `/api/v1/loads/${ids.get(entry.body.name)}/end`, { person: 'Test', ended_at: entry.ended_at }) },
  ]).sort((a, b) => a.minute - b.minute);
  const ids = new Map();
  let together = 0;
  for (let i = 0; i <= rows.length; i += 20) {
    while (steps.length && (steps[0].minute <= i || i + 20 > rows.length)) await steps.shift().act();
    if (i < rows.length) await daemon.sendLog('twin-6', header + rows.slice(i, i + 20).join('\n') + '\n');
    const open = (await daemon.must('GET', '/api/v1/loads?state=open&furnace=twin-6')).loads;
    together = Math.max(together, open.length);
    expect(new Set(open.map((load) => load.chamber)).size === open.length, 'two loads in one chamber');
    if (random() < 0.1) {
      await daemon.kill9();
      await daemon.start();
    }
  }
  expect(together === 2, `at most ${together} loads were in at once`);
  await sameAsReplay(daemon, twins, ids);
  expect((await daemon.stop()).code === 0, 'stop');
});

await check(`a line of ${PLACES} trays follows its push counter, through a SIGKILL and a late part of the log`, async () => {
  const daemon = await Daemon.fresh();
  const { header, rows } = logs['line-7'];
  // Between two pushes, so that the counter misses nothing: a push that is told late cannot be put in order any more.
  const counter = (row) => row.split(',').at(-1);
  let cut = Math.floor(rows.length * 0.6);
  while (counter(rows[cut]) === counter(rows[cut - 1])) cut++;
  const late = rows.splice(cut + 1, 15);
  const ids = new Map();
  const waiting = [...trays];
  const logStart_ms = Date.parse(rows[0].split(',')[0]);
  const enter = async (until_ms) => {
    while (waiting.length && Date.parse(waiting[0].body.started_at) <= until_ms) {
      const entry = waiting[0];
      // The engine follows the push in a moment; until then the first zone is full.
      await waitFor(`room for ${entry.body.name}`, 20000, async () => {
        const answer = await daemon.request('POST', '/api/v1/loads', entry.body);
        expect(answer.status === 201 || answer.status === 409, answer.text);
        if (answer.status === 201) ids.set(entry.body.name, answer.json.id);
        return answer.status === 201;
      });
      waiting.shift();
    }
  };
  let most = 0;
  for (let i = 0; i < rows.length; i += 60) {
    await daemon.sendLog('line-7', header + rows.slice(i, i + 60).join('\n') + '\n');
    await enter(Math.min(Date.parse(rows[Math.min(i + 59, rows.length - 1)].split(',')[0]), start_ms + HOURS * 60 * MINUTE_MS));
    const floor = await daemon.must('GET', '/api/v1/floor');
    const line = floor.furnaces.find((furnace) => furnace.id === 'line-7');
    most = Math.max(most, line.loads.length);
    if (i === 600) {
      await daemon.kill9();
      await daemon.start();
    }
  }
  expect(logStart_ms < start_ms, 'the line ran before');
  expect(most >= PLACES - 4, `at most ${most} trays were on the line at once`);
  await daemon.sendLog('line-7', header + late.join('\n') + '\n');
  await waitFor('every tray to leave', 60000, async () => {
    const open = new Set((await daemon.must('GET', '/api/v1/loads?state=open&limit=200')).loads.map((load) => load.name));
    return trays.every((entry) => !open.has(entry.body.name));
  });
  await sameAsReplay(daemon, trays, ids);
  const one = (await daemon.must('GET', `/api/v1/loads/${ids.get(trays.at(-1).body.name)}`)).definition;
  expect(one.path.length === 5 && one.ended_at === trays.at(-1).ended_at, JSON.stringify(one.path));
  const pushes = daemon.sql('select count(*), count(distinct at_us) from push').split('|');
  expect(pushes[0] === pushes[1] && Number(pushes[0]) >= trays.length, `pushes: ${pushes}`);
  expect((await daemon.stop()).code === 0, 'stop');
});

await check('quenched from another furnace: reheated there by way of the floor, as replay has it from both logs', async () => {
  const daemon = await Daemon.fresh();
  const pit = demoDay(start_ms, HOURS, ['pit-2']);
  const entry = twins[0];
  // Out of the two-chamber furnace after its boost, an hour on the floor, then into the pit furnace beside its log.
  const out_ms = start_ms + 200 * MINUTE_MS, in_ms = start_ms + 260 * MINUTE_MS, end_ms = start_ms + 330 * MINUTE_MS;
  const { id } = await daemon.must('POST', '/api/v1/loads', entry.body);
  await daemon.sendLog('twin-6', logs['twin-6'].text);
  await daemon.must('POST', `/api/v1/loads/${id}/move`, { person: 'Test', outside: true, at: iso(out_ms) });
  await daemon.must('POST', `/api/v1/loads/${id}/move`, { person: 'Test', furnace: 'pit-2', at: iso(in_ms) });
  await daemon.sendLog('pit-2', pit.logs['pit-2'].text);
  await daemon.must('POST', `/api/v1/loads/${id}/end`, { person: 'Test', ended_at: iso(end_ms) });
  const path = [{ from: entry.body.started_at, furnace: 'twin-6', chamber: 'heating' }, { from: iso(out_ms), outside: true },
    { from: iso(in_ms), furnace: 'pit-2', chamber: 'main' }];
  const other = join(folder, 'pit-2.csv');
  writeFileSync(other, pit.logs['pit-2'].text);
  const want = replay(folder, { ...entry, path, ended_at: iso(end_ms) }, logs['twin-6'].text, ['--log', `pit-2=${other}`]).trimEnd();
  wanted.set(entry.body.name, want);
  await sameAsReplay(daemon, [entry], new Map([[entry.body.name, id]]));
  expect(JSON.parse(want).inputs.carbon_potential.channels.includes('probe_emf'), 'the pit furnace was not heard');
  expect((await daemon.stop()).code === 0, 'stop');
});

await check('a chamber that is taken is refused with the name of the load that is in it; a move back in time too', async () => {
  const daemon = await Daemon.fresh();
  const now = Math.floor(Date.now() / 1000) * 1000;
  const body = { ...twins[0].body, started_at: iso(now - 100 * MINUTE_MS) };
  const first = await daemon.must('POST', '/api/v1/loads', body);
  const second = await daemon.request('POST', '/api/v1/loads', { ...body, name: 'another', started_at: iso(now - 50 * MINUTE_MS) });
  expect(second.status === 409 && second.json.detail.includes(`Load ${body.name} `), second.text);
  const back = await daemon.request('POST', `/api/v1/loads/${first.id}/move`, { person: 'Test', chamber: 'second', at: iso(now - 120 * MINUTE_MS) });
  expect(back.status === 422 && back.json.field === 'at', back.text);
  await daemon.must('POST', `/api/v1/loads/${first.id}/move`, { person: 'Test', chamber: 'second', at: iso(now - 50 * MINUTE_MS) });
  await daemon.must('POST', '/api/v1/loads', { ...body, name: 'another', started_at: iso(now - 50 * MINUTE_MS) });
  // To another furnace for reheating, by way of the floor.
  await daemon.must('POST', `/api/v1/loads/${first.id}/move`, { person: 'Test', outside: true, at: iso(now - 30 * MINUTE_MS) });
  const reheated = await daemon.must('POST', `/api/v1/loads/${first.id}/move`, { person: 'Test', furnace: 'pit-2', at: iso(now - 10 * MINUTE_MS) });
  expect(reheated.definition.path.length === 4 && reheated.furnace === 'pit-2', JSON.stringify(reheated.definition.path));
  expect((await daemon.stop()).code === 0, 'stop');
});

finish();
