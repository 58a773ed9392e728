// Hostile readers of the event stream, a second daemon on the same port, few file descriptors, and the end of the daemon
// while all of that goes on. Bounds are common practice, no source, unless a check names one.
import { spawn } from 'node:child_process';
import { readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { Daemon, PLANT, binary, check, expect, finish, freePort, iso, sleep, temporaryFolder, waitFor } from './support.mjs';
import {
  HOST, MB, Raw, alive, answerOf, get, healthWhile, memoryBounded, processorSeconds, sanitized, summary,
} from './hostile_support.mjs';

binary();
const MAX_STREAMS = 80;
// An invented plant of 40 furnaces: each round of the engine then tells every stream some 60 kB.
const FURNACES = Array.from({ length: 40 }, (_, i) => `pit-${i + 1}`);
const daemon = new Daemon(temporaryFolder(), await freePort(), `[http]\nmax_streams = ${MAX_STREAMS}\n`);
const plant = join(daemon.folder, 'plant.toml');
writeFileSync(plant, '[plant]\nname = "Invented plant"\ndemo = true\n' + FURNACES.map((id) =>
  `[[furnace]]\nid = "${id}"\nname = "${id}"\nprocess = "gas carburizing"\nco_fraction = 0.2\nh2_fraction = 0.4\n` +
  '[[furnace.channel]]\nname = "temperature"\nrole = "temperature"\nunit = "degC"\nlow = 0\nhigh = 1100\n').join(''));
writeFileSync(daemon.settings, readFileSync(daemon.settings, 'utf8').replace(PLANT, plant));
await daemon.start();
const { port } = daemon;
const slowdown = sanitized(daemon) ? 10 : 1;
const STREAM = get('/api/v1/events');
const level = async (name) => Number(new RegExp(`^hearthfront_http_${name} (\\d+)`, 'm').exec((await daemon.request('GET', '/metrics')).text)?.[1] ?? NaN);
const streams = (count, options) => Array.from({ length: count }, () => new Raw(port, options).send(STREAM));
const close = (clients) => clients.forEach((client) => client.destroy());
const streamsBecome = (count, limit_ms = 8000) => waitFor(`${count} streams`, limit_ms * Math.min(slowdown, 4), async () => (await level('open_streams')) === count);

// Open loads, so that each round of the engine has something to tell.
const item = { name: 'A', part: 'test pin', quantity: 1, steel: '20MnCr5', section: { shape: 'plate', thickness_mm: 20 },
  criterion: { kind: 'hardness_hv', limit_hv: 550, martensite_pct: 95 }, case_depth_window_mm: [0.9, 1.2] };
const now_ms = Math.floor(Date.now() / 1000) * 1000;
for (const furnace of FURNACES) {
  await daemon.must('POST', '/api/v1/loads', { name: '9001', furnace, person: 'Early shift', started_at: iso(now_ms - 600000),
    recipe: { name: 'invented', segments: [{ name: 'boost', duration_min: 240, temperature_degc: 930, carbon_potential_wt_pct: 1.1 }] }, items: [item] });
}
let sent = 0;
const tellSomething = () => daemon.must('POST', '/api/v1/readings', {
  readings: FURNACES.map((furnace) => ({ furnace, channel: 'temperature', time: iso(now_ms - 590000 + 100 * sent++), value: 930 })) });

await check(`above ${MAX_STREAMS} streams: 503 with Retry-After, and asking at intervals goes on (RFC 9110 15.6.4, 10.2.3)`, async () => {
  const kept = streams(MAX_STREAMS);
  await streamsBecome(MAX_STREAMS);
  const answer = await answerOf(port, STREAM);
  expect(answer.status === 503 && Number(answer.headers['retry-after']) > 0, JSON.stringify(answer));
  expect((await answerOf(port, get('/api/v1/floor'))).status === 200, 'the floor is not served');
  close(kept);
  await streamsBecome(0);
});

await check('a reader that ends its side is let go at once (RFC 9112 9.6)', async () => {
  const [reader] = streams(1);
  await streamsBecome(1);
  reader.socket.end();
  await streamsBecome(0, 3000);
  await reader.over;
  reader.destroy();
});

// The daemon's own threads (alerts, delivery) touch memory for the first time meanwhile: up to 9.5 MB were seen. What is
// poured is 20 MB, so that a daemon which kept it would be found out.
await check('what a reader sends after its request is neither read nor answered, and is not kept (+14 MB at most)', () =>
  memoryBounded(daemon, 14, async () => {
    const [reader] = streams(1);
    await streamsBecome(1);
    const took = await reader.pour(Buffer.from(get('/api/v1/status').repeat(800)), 20 * MB);
    expect(took < 20 * MB, 'all of it was taken');
    expect(!/HTTP\/1\.1/.test(reader.text().slice(12)), 'a second answer in the stream');
    const before = processorSeconds(daemon);
    await sleep(1000);
    const share = processorSeconds(daemon) - before;
    expect(share < 0.05 * slowdown, `${(share * 100).toFixed(0)} % of a core`);
    reader.destroy();
    await streamsBecome(0);
  }));

await check('40 readers that never read are dropped by the bound of their queue (256 KiB each); a good reader misses nothing; memory +30 MB at most', () =>
  memoryBounded(daemon, 30, async () => {
    const dropped_before = await level('dropped_streams_total');
    const dead = streams(40, { reads: false });
    const [good] = streams(1);
    await streamsBecome(41);
    const began = performance.now();
    const times_ms = await healthWhile(port, (async () => {
      for (let dropped = 0; dropped < 40 && performance.now() < began + 20000 * Math.min(slowdown, 4); await sleep(100)) {
        await tellSomething();
        dropped = (await level('dropped_streams_total')) - dropped_before;
      }
    })());
    const took_s = (performance.now() - began) / 1000;
    const dropped = (await level('dropped_streams_total')) - dropped_before;
    const ids = [...good.text().matchAll(/^id: (\d+)\nevent: floor$/gm)].map((match) => Number(match[1]));
    console.log(`     ${dropped} dropped after ${took_s.toFixed(1)} s and ${(good.bytes_in / MB).toFixed(1)} MB of events; /healthz meanwhile: ${summary(times_ms)}`);
    const orderly = ids.every((id, i) => i === 0 || id >= ids[i - 1]);
    const alive_still = !good.ended;
    close([...dead, good]);
    expect(dropped === 40, `${dropped} of 40 were dropped`);
    expect(alive_still && orderly && good.bytes_in > 256 * 1024 && ids.length >= 4, `the good reader: ${ids.length} events, ${alive_still ? 'open' : 'cut'}`);
    await streamsBecome(0);
  }));

await check('streams that come and go quickly leave no place taken', async () => {
  for (let round = 0; round < 10; round++) {
    const some = streams(60);
    await sleep(round * 3);
    for (const reader of some) reader.socket.resetAndDestroy();
  }
  await streamsBecome(0);
  await alive(port);
});

await check('a second daemon on the same port is refused by name, and the first keeps every connection (no SO_REUSEPORT)', async () => {
  const second = new Daemon(temporaryFolder(), port);
  const process = spawn(binary(), ['serve', '--settings', second.settings], { stdio: ['ignore', 'pipe', 'pipe'] });
  let said = '';
  for (const pipe of [process.stdout, process.stderr]) pipe.on('data', (data) => (said += data));
  const code = await Promise.race([new Promise((tell) => process.once('exit', tell)), sleep(10000).then(() => 'still running')]);
  process.kill('SIGKILL');
  expect(typeof code === 'number' && code !== 0 && said.includes(`port ${port}`) && said.includes('Another program uses this port'), `${code}: ${said}`);
  for (let i = 0; i < 20; i++) await alive(port);
});

await check('SIGTERM under attack: ends with code 0 within 5 s, all streams and connections closed, the database intact', async () => {
  const readers = [...streams(40), ...streams(20, { reads: false })];
  await streamsBecome(60);
  const slow = Array.from({ length: 64 }, (_, i) => new Raw(port).send(i % 2 ? 'GET /heal' : `POST /api/v1/readings HTTP/1.1\r\n${HOST}Content-Length: 1000\r\n\r\n{`));
  const idle = Array.from({ length: 40 }, () => new Raw(port).send(get('/healthz')));
  const greedy = Array.from({ length: 8 }, () => new Raw(port, { reads: false }).send(get('/api/v1/openapi.yaml').repeat(300)));
  await Promise.all(idle.map((client) => client.answers(1)));
  let over = false;
  const flood = Promise.all(Array.from({ length: 8 }, async () => {
    while (!over) {
      const client = new Raw(port).send(get('/api/v1/floor', 'Connection: close\r\n'));
      await Promise.race([client.over, sleep(2000)]);
      client.destroy();
    }
  }));
  await sleep(300);
  const began = performance.now();
  const end = await daemon.stop();
  const took_ms = performance.now() - began;
  over = true;
  await flood;
  await sleep(100);
  const open = [...readers.slice(0, 40), ...slow, ...idle].filter((client) => !client.ended);
  console.log(`     ended after ${took_ms.toFixed(0)} ms`);
  close([...readers, ...slow, ...idle, ...greedy]);
  expect(end.code === 0 && took_ms < 5000 * slowdown, `${JSON.stringify(end)} after ${took_ms.toFixed(0)} ms`);
  expect(open.length === 0, `${open.length} connections still open`);
  expect(daemon.sql('PRAGMA integrity_check') === 'ok', 'integrity');
  const log = readFileSync(join(daemon.folder, 'daemon.log'), 'utf8');
  expect(!/failed|error/i.test(log), log.slice(-600));
});

await check('with few file descriptors a flood waits, readings are stored all the same, and the daemon recovers (EMFILE of accept(2))', async () => {
  const folder = temporaryFolder();
  const small = new Daemon(folder, port);
  const program = join(folder, 'few-descriptors');
  writeFileSync(program, `#!/bin/sh\nulimit -n 128\nexec '${binary()}' "$@"\n`, { mode: 0o755 });
  await small.start(program);
  const keep = new Raw(port).send(get('/healthz'));
  await keep.answers(1);
  const flood = Array.from({ length: 300 }, () => new Raw(port).send(get('/healthz')));
  await sleep(1000);
  const before = processorSeconds(small);
  keep.send(`POST /api/v1/readings HTTP/1.1\r\n${HOST}Content-Length: 104\r\n\r\n` +
    JSON.stringify({ readings: [{ furnace: 'pit-2', channel: 'temperature', time: iso(now_ms - 60000), value: 930 }] }).padEnd(104));
  const stored = (await keep.answers(2))[1];
  await sleep(1000);
  const share = processorSeconds(small) - before;
  close(flood);
  expect(stored?.status === 200 && JSON.parse(stored.body).stored === 1, JSON.stringify(stored ?? keep.error));
  expect(share < 0.3 * slowdown, `${(share * 100).toFixed(0)} % of a core while it waits`);
  await waitFor('new connections', 8000, () => alive(port));
  keep.destroy();
  expect((await small.stop()).code === 0, 'ends with code 0');
  expect(small.sql('SELECT count(*) FROM reading') === '1', 'the reading');
});

finish();
