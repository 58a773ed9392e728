// Invariant 2, state is a pure function of the accepted readings: the same logs given live in small batches, in
// random order, twice, as JSON, as one file, and with SIGKILL in mid-load end in the same result document, byte
// for byte, as `hearthfront replay` makes from the files.
import { writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { Daemon, FURNACES, MINUTE_MS, binary, check, demoDay, expect, finish, seededRandom, sleep, replay, temporaryFolder,
  waitFor } from './support.mjs';

binary();
const random = seededRandom();
const HOURS = 10;
const start_ms = Math.floor(Date.now() / MINUTE_MS) * MINUTE_MS - (HOURS + 1) * 60 * MINUTE_MS;
const { loads, logs } = demoDay(start_ms, HOURS);
const folder = temporaryFolder();

// What everything is held against. The loads: probe emf, °F with a gap, load thermocouple with three parts.
const wanted = new Map();
await check(`replay computes ${loads.length} loads of three furnaces, twice the same`, () => {
  expect(new Set(loads.map((entry) => entry.body.furnace)).size === FURNACES.length, 'a furnace without load');
  for (const entry of loads) {
    const text = replay(folder, entry, logs[entry.body.furnace].text);
    expect(text === replay(folder, entry, logs[entry.body.furnace].text), `${entry.body.name} differs from itself`);
    const result = JSON.parse(text);
    expect(result.final === true && result.items.every((item) => item.case_depth_mm > 0.2), text.slice(0, 300));
    wanted.set(entry.body.name, text.trimEnd());
  }
});

function firstDifference(one, two) {
  let i = 0;
  while (i < one.length && one[i] === two[i]) i++;
  return `at byte ${i}: ...${one.slice(Math.max(0, i - 60), i + 60)}... against ...${two.slice(Math.max(0, i - 60), i + 60)}...`;
}

const chunks = (list, size) => Array.from({ length: Math.ceil(list.length / size) }, (_, i) => list.slice(i * size, (i + 1) * size));

function shuffled(list) {
  const mixed = [...list];
  for (let i = mixed.length - 1; i > 0; i--) {
    const j = Math.floor(random() * (i + 1));
    [mixed[i], mixed[j]] = [mixed[j], mixed[i]];
  }
  return mixed;
}

// All furnaces' rows in pieces of `size`, as a list of [furnace, csv text] in the order of time.
function pieces(size, order = (rows) => rows) {
  const lists = FURNACES.map((furnace) => chunks(order(logs[furnace].rows), size).map((rows) => [furnace, logs[furnace].header + rows.join('\n') + '\n']));
  const mixed = [];
  for (let i = 0; lists.some((list) => i < list.length); i++) for (const list of lists) if (list[i]) mixed.push(list[i]);
  return mixed;
}

// Loads go in when the readings have reached `begin` of their way and out after the last one.
async function beginLoads(daemon, which = loads) {
  const ids = new Map();
  for (const entry of which) ids.set(entry.body.name, (await daemon.must('POST', '/api/v1/loads', entry.body)).id);
  return ids;
}

const endLoad = (daemon, ids, entry) =>
  daemon.must('POST', `/api/v1/loads/${ids.get(entry.body.name)}/end`, { person: 'Early shift', ended_at: entry.ended_at });

async function compare(daemon, ids) {
  for (const entry of loads) {
    const path = `/api/v1/loads/${ids.get(entry.body.name)}/result`;
    let got = '';
    await waitFor(`the final result of load ${entry.body.name}`, 20000, async () => {
      got = (await daemon.request('GET', path)).text.trimEnd();
      return got === wanted.get(entry.body.name);
    }).catch(() => {});
    writeFileSync(join(folder, `${entry.body.name}-wanted.json`), wanted.get(entry.body.name));
    writeFileSync(join(folder, `${entry.body.name}-got.json`), got);
    expect(got === wanted.get(entry.body.name), `load ${entry.body.name} ${firstDifference(got, wanted.get(entry.body.name))}`);
  }
}

async function variant(name, feed) {
  await check(name, async () => {
    const daemon = await Daemon.fresh();
    const ids = await feed(daemon);
    await compare(daemon, ids);
    const end = await daemon.stop();
    expect(end.code === 0, `stop: ${JSON.stringify(end)}`);
  });
}

// One after the other in a furnace, as the chamber allows: the next load goes in when the one before is out.
async function inOrderOfTime(daemon, list, at) {
  const ids = new Map();
  const steps = loads.flatMap((entry) => [{ minute: entry.start_min, entry, begin: true }, { minute: entry.end_min, entry, begin: false }])
    .sort((a, b) => a.minute - b.minute || Number(a.begin) - Number(b.begin));
  for (let i = 0; i <= list.length; i++) {
    const reached = i < list.length ? (i / list.length) * HOURS * 60 : Infinity;
    while (steps.length && steps[0].minute <= reached) {
      const { entry, begin } = steps.shift();
      if (begin) ids.set(entry.body.name, (await daemon.must('POST', '/api/v1/loads', entry.body)).id);
      else await endLoad(daemon, ids, entry);
    }
    if (i < list.length) {
      await daemon.sendLog(...list[i]);
      await at?.(i);
    }
  }
  return ids;
}

await variant('live, row by row in batches of 5, loads begun and ended on the way', (daemon) => inOrderOfTime(daemon, pieces(5)));

await variant('in one file each, before the loads are known', async (daemon) => {
  for (const furnace of FURNACES) await daemon.sendLog(furnace, logs[furnace].text);
  return inOrderOfTime(daemon, []);
});

await variant('in random order, the loads known from the start', async (daemon) => {
  const first = loads.filter((entry, i) => loads.findIndex((one) => one.body.furnace === entry.body.furnace) === i);
  const ids = await beginLoads(daemon, first);
  const list = shuffled(pieces(11, shuffled));
  for (const piece of list.slice(0, Math.floor(list.length / 2))) await daemon.sendLog(...piece);
  for (const entry of first) await endLoad(daemon, ids, entry);
  const rest = loads.filter((entry) => !first.includes(entry));
  for (const [name, id] of await beginLoads(daemon, rest)) ids.set(name, id);
  for (const entry of rest) await endLoad(daemon, ids, entry);
  // The other half is late: it comes for loads that are out already.
  for (const piece of list.slice(Math.floor(list.length / 2))) await daemon.sendLog(...piece);
  return ids;
});

await variant('every batch twice, the second time by another way (the whole file)', async (daemon) => {
  const ids = await inOrderOfTime(daemon, pieces(60));
  for (const furnace of FURNACES) {
    const report = await daemon.sendLog(furnace, logs[furnace].text);
    expect(report.stored === 0 && report.conflict === 0 && report.duplicate > 0, JSON.stringify(report).slice(0, 200));
  }
  return ids;
});

await variant('as JSON readings in the channels\' own units', async (daemon) => {
  const columns = { 'pit-2': ['probe_emf', 'co', 'temperature'], 'batch-4': ['temperature', 'carbon_potential'],
    'batch-5': ['temperature', 'load_temperature', 'carbon_potential'] };
  for (const furnace of FURNACES) {
    const readings = logs[furnace].rows.flatMap((row) => {
      const cells = furnace === 'batch-4' ? row.replaceAll(',', '.').split(';') : row.split(',');
      const time = furnace === 'batch-4'
        ? cells[0].replace(/^(\d+)\.(\d+)\.(\d+) (.*)$/, '$3-$2-$1T$4+01:00')
        : cells[0];
      return columns[furnace].map((channel, i) => ({ furnace, channel, time, value: cells[i + 1] }))
        .filter((reading) => reading.value !== '')
        .map((reading) => ({ ...reading, value: Number(reading.value) }));
    });
    for (const part of chunks(readings, 1000)) await daemon.must('POST', '/api/v1/readings', { readings: part });
  }
  return inOrderOfTime(daemon, []);
});

await variant('killed (SIGKILL) five times in mid-load and started again', async (daemon) => {
  const list = pieces(10);
  const kills = new Set(Array.from({ length: 5 }, (_, i) => Math.floor(list.length * (0.1 + 0.17 * i + 0.05 * random()))));
  return inOrderOfTime(daemon, list, async (i) => {
    if (!kills.has(i)) return;
    await sleep(random() * 100);
    await daemon.kill9();
    await daemon.start();
    await daemon.sendLog(...list[i]); // a sender does not know whether its last batch got through
  });
});

finish();
