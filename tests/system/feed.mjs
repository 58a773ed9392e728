// `hearthfront feed` against a daemon made for this test, which can be slow, busy, away or odd: rows go out in the
// order of the file when the daemon's clock reaches them, each once, none lost, and a signal ends it in a second.
import { spawn } from 'node:child_process';
import { appendFileSync, writeFileSync } from 'node:fs';
import { createServer } from 'node:http';
import { join } from 'node:path';
import { PLANT, STEELS, binary, check, expect, finish, freePort, iso, sleep, temporaryFolder, waitFor } from './support.mjs';

const BIN = binary();
const HEADER = 'time,emf_mV,CO_pct,temp_C';
const start_ms = Date.parse('2026-03-02T06:00:00Z');
const row = (minute) => `${iso(start_ms + minute * 60000)},${(1100 + minute / 10).toFixed(1)},20.0,930.0`;
const rows = (from, to) => Array.from({ length: to - from }, (_, i) => row(from + i));

// Answers as the contract says; `mood` decides what goes wrong.
class PretendDaemon {
  constructor(clock_ms, speed) {
    Object.assign(this, { clock_ms, speed, begun: Date.now(), mood: () => null, got: [], posts: 0, largest: 0 });
  }
  now() {
    return this.clock_ms + (Date.now() - this.begun) * this.speed;
  }
  async listen(port) {
    this.port = port ?? (await freePort());
    this.server = createServer((request, response) => {
      let body = '';
      request.on('data', (data) => (body += data));
      request.on('end', () => this.answer(request, body, response));
    });
    await new Promise((done) => this.server.listen(this.port, '127.0.0.1', done));
  }
  answer(request, body, response) {
    const send = (status, document, headers = {}) => {
      response.writeHead(status, { 'content-type': 'application/json', ...headers });
      response.end(JSON.stringify(document));
    };
    if (request.url === '/api/v1/status') return send(200, { now: iso(Math.floor(this.now())), clock_speed: this.speed });
    this.posts++;
    const mood = this.mood(body);
    if (mood === 'hang') return undefined;
    if (mood) return send(mood.status, mood.document ?? { title: 'Not now', detail: 'Told to a test.' }, mood.headers);
    const lines = body.trimEnd().split('\n');
    this.header = lines.shift();
    this.url = request.url;
    this.largest = Math.max(this.largest, lines.length);
    this.got.push(...lines.map((text) => ({ text, at: this.now() })));
    const bad = lines.map((text, i) => ({ line: i + 2, reason: 'bad number: x' })).filter((_, i) => lines[i].includes(',x,'));
    return send(200, { rows: lines.length, stored: 3 * lines.length, duplicate: 0, conflict: 0, refused: bad.length, problems: bad });
  }
  close() {
    this.server.closeAllConnections?.();
    return new Promise((done) => this.server.close(done));
  }
}

function startFeed(daemon, file, words = []) {
  const folder = temporaryFolder();
  const settings = join(folder, 'hearthfront.toml');
  writeFileSync(settings, `[listen]\nport = ${daemon.port}\n[files]\nplant = "${PLANT}"\nsteels = "${STEELS}"\n`);
  const feed = spawn(BIN, ['feed', '--settings', settings, '--furnace', 'pit-2', '--mapping', 'logger', '--file', file, ...words]);
  feed.out = '';
  feed.stdout.on('data', (data) => (feed.out += data));
  feed.stderr.on('data', (data) => (feed.out += data));
  feed.over = new Promise((tell) => feed.once('close', (code) => tell(code)));
  return feed;
}

const within = (promise, limit_ms, what) =>
  Promise.race([promise, sleep(limit_ms).then(() => Promise.reject(new Error(`${what}: not within ${limit_ms} ms`)))]);

function logFile(list) {
  const file = join(temporaryFolder(), 'log.csv');
  writeFileSync(file, [HEADER, ...list].join('\n') + '\n');
  return file;
}

async function scene(name, { at_min = 0, speed = 1 }, body) {
  await check(name, async () => {
    const daemon = new PretendDaemon(start_ms + at_min * 60000, speed);
    await daemon.listen();
    try {
      await body(daemon);
    } finally {
      await daemon.close();
    }
  });
}

await scene('--at-once sends all rows in batches, header with each, and ends with code 0', {}, async (daemon) => {
  const list = rows(0, 2500);
  const feed = startFeed(daemon, logFile(list), ['--at-once']);
  expect((await within(feed.over, 10000, 'end')) === 0, feed.out);
  expect(daemon.got.map((one) => one.text).join() === list.join(), `got ${daemon.got.length} rows`);
  expect(daemon.header === HEADER && daemon.url === '/api/v1/furnaces/pit-2/log?mapping=logger&part=true', `${daemon.header} ${daemon.url}`);
  expect(daemon.posts < 10 && daemon.largest <= 1000, `${daemon.posts} posts, the largest of ${daemon.largest} rows`);
  expect(feed.out.includes('2500 rows') && feed.out.includes('7500 readings stored'), feed.out);
});

await scene('past rows go at once, the others when the clock of the daemon is there', { at_min: 100, speed: 600 }, async (daemon) => {
  const feed = startFeed(daemon, logFile(rows(0, 130))); // 30 minutes ahead: 3 s of waiting
  expect((await within(feed.over, 12000, 'end')) === 0, feed.out);
  expect(daemon.got.length === 130, `${daemon.got.length} rows`);
  for (const { text, at } of daemon.got) {
    const time = Date.parse(text.slice(0, 20));
    expect(at >= time - 1000, `${text} came ${(time - at) / 1000} s early`);
    if (time > start_ms + 101 * 60000) expect(at - time < 10 * 60000, `${text} came ${(at - time) / 60000} min late`);
  }
});

await scene('rows that a logger delivers late keep their place in the file', { at_min: 500 }, async (daemon) => {
  const list = [...rows(0, 30), ...rows(50, 60), ...rows(30, 50), ...rows(60, 70)];
  const feed = startFeed(daemon, logFile(list));
  expect((await within(feed.over, 8000, 'end')) === 0, feed.out);
  expect(daemon.got.map((one) => one.text).join() === list.join(), 'another order');
});

await scene('a busy daemon (503) is waited for; no row is lost or sent twice', { at_min: 9000 }, async (daemon) => {
  let refusals = 4;
  daemon.mood = () => (refusals-- > 0 ? { status: 503, headers: { 'retry-after': '0' } } : null);
  const list = rows(0, 1500);
  const feed = startFeed(daemon, logFile(list));
  expect((await within(feed.over, 15000, 'end')) === 0, feed.out);
  expect(daemon.got.map((one) => one.text).join() === list.join(), `${daemon.got.length} rows`);
  expect(feed.out.includes('does not take readings now') && feed.out.includes('answers again'), feed.out);
});

await check('a daemon that is away at first, and goes away in between, gets every row', async () => {
  const port = await freePort();
  const list = rows(0, 2200);
  const feed = startFeed({ port }, logFile(list));
  await sleep(600);
  const first = new PretendDaemon(start_ms + 9000 * 60000, 1);
  first.mood = () => (first.posts > 1 ? 'hang' : null);
  await first.listen(port);
  await waitFor('the first batch', 8000, () => first.posts > 1);
  await first.close();
  const second = new PretendDaemon(start_ms + 9000 * 60000, 1);
  await second.listen(port);
  expect((await within(feed.over, 15000, 'end')) === 0, feed.out);
  expect([...first.got, ...second.got].map((one) => one.text).join() === list.join(), `${first.got.length} + ${second.got.length}`);
  await second.close();
});

await scene('a body that is too large for the daemon (413) is halved until it fits', { at_min: 9000 }, async (daemon) => {
  daemon.mood = (body) => (body.length > 9000 ? { status: 413 } : null);
  const list = rows(0, 1200);
  const feed = startFeed(daemon, logFile(list));
  expect((await within(feed.over, 10000, 'end')) === 0, feed.out);
  expect(daemon.got.map((one) => one.text).join() === list.join(), `${daemon.got.length} rows`);
});

await scene('a refusal for good ends it with code 1 and the daemon\'s own words', { at_min: 9000 }, async (daemon) => {
  daemon.mood = () => ({ status: 404, document: { title: 'The furnace is not there', detail: 'Ask GET /api/v1/furnaces.' } });
  const feed = startFeed(daemon, logFile(rows(0, 10)));
  expect((await within(feed.over, 5000, 'end')) === 1, feed.out);
  expect(feed.out.includes('The furnace is not there') && feed.out.includes('line 2'), feed.out);
});

await scene('bad rows are told with their line in the file and do not stop the rest', { at_min: 9000 }, async (daemon) => {
  const list = rows(0, 1100);
  list[1050] = `${iso(start_ms + 1050 * 60000)},x,20.0,930.0`;
  const feed = startFeed(daemon, logFile(list));
  expect((await within(feed.over, 8000, 'end')) === 0, feed.out);
  expect(daemon.got.length === 1100 && feed.out.includes('line 1052: bad number'), feed.out);
});

await scene('--follow waits for more, takes whole lines only, and sees a file begun anew', { at_min: 9000 }, async (daemon) => {
  const file = logFile(rows(0, 5));
  const feed = startFeed(daemon, file, ['--follow']);
  await waitFor('the first rows', 5000, () => daemon.got.length === 5);
  appendFileSync(file, row(5) + '\n' + row(6).slice(0, 12));
  await waitFor('the next row', 5000, () => daemon.got.length === 6);
  await sleep(700);
  expect(daemon.got.length === 6, 'half a line was sent');
  appendFileSync(file, row(6).slice(12) + '\n');
  await waitFor('the rest of the line', 5000, () => daemon.got.length === 7);
  expect(daemon.got[6].text === row(6), daemon.got[6].text);
  writeFileSync(file, HEADER + '\n' + row(7) + '\n');
  await waitFor('the row of the new file', 5000, () => daemon.got.at(-1).text === row(7));
  feed.kill('SIGTERM');
  expect((await within(feed.over, 1000, 'end after SIGTERM')) === 0, feed.out);
});

for (const signal of ['SIGINT', 'SIGTERM']) {
  await scene(`${signal} ends it within a second, even in a request that hangs`, { at_min: 9000 }, async (daemon) => {
    daemon.mood = () => 'hang';
    const feed = startFeed(daemon, logFile(rows(0, 10)));
    await waitFor('the request', 5000, () => daemon.posts === 1);
    feed.kill(signal);
    expect((await within(feed.over, 1000, 'end')) === 0, feed.out);
    expect(feed.out.includes('Stopped.'), feed.out);
  });
}

await scene('SIGTERM ends it while it waits for the clock', { at_min: -60 }, async (daemon) => {
  const feed = startFeed(daemon, logFile(rows(0, 10)));
  await sleep(500);
  expect(daemon.posts === 0, 'a row went out before its time');
  feed.kill('SIGTERM');
  expect((await within(feed.over, 1000, 'end')) === 0, feed.out);
});

for (const [name, make, code, word] of [
  ['a file that is not there', () => '/nowhere/log.csv', 2, '/nowhere/log.csv'],
  ['a folder', () => temporaryFolder(), 2, 'directory'],
  ['a log of another furnace', () => {
    const file = join(temporaryFolder(), 'other.csv');
    writeFileSync(file, 'a;b;c\n1;2;3\n');
    return file;
  }, 1, 'no column'],
  ['bytes without line ends', () => {
    const file = join(temporaryFolder(), 'bytes.csv');
    writeFileSync(file, Buffer.alloc(200000, 0x41));
    return file;
  }, 1, 'does not end'],
]) {
  await scene(`${name} is told and ends it with code ${code}`, {}, async (daemon) => {
    const feed = startFeed(daemon, make(), ['--at-once']);
    expect((await within(feed.over, 5000, 'end')) === code, `code, and: ${feed.out}`);
    expect(feed.out.includes(word), feed.out);
    expect(daemon.got.length === 0, 'something was sent');
  });
}

await scene('CRLF line ends and a last line without any are read', { at_min: 9000 }, async (daemon) => {
  const file = join(temporaryFolder(), 'crlf.csv');
  writeFileSync(file, [HEADER, ...rows(0, 4)].join('\r\n'));
  const feed = startFeed(daemon, file);
  expect((await within(feed.over, 5000, 'end')) === 0, feed.out);
  expect(daemon.got.map((one) => one.text).join() === rows(0, 4).join(), JSON.stringify(daemon.got));
});

finish();
