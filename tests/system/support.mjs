// What the system tests share: a real daemon in a folder of its own on a free loopback port, small HTTP helpers,
// and a count of checks. A test file names the binary by its first argument or HEARTHFRONT_BIN. Every wait has a
// limit; a failed check keeps its folder and says where. Data comes from the invented demo plant.

import { spawn, spawnSync } from 'node:child_process';
import { existsSync, mkdtempSync, openSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { createServer } from 'node:net';
import { tmpdir } from 'node:os';
import { dirname, join, resolve } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import { fileURLToPath } from 'node:url';
import { furnaceLog } from '../../config/demo/furnace_logs.mjs';
import { pathOf, schedule } from '../../config/demo/generate.mjs';

export { sleep };
export const SOURCE = resolve(dirname(fileURLToPath(import.meta.url)), '../..');
// Those with one chamber; loads of the others move.
export const FURNACES = ['pit-2', 'batch-4', 'batch-5'];
export const MOVING = ['twin-6', 'line-7'];
export const PLANT = join(SOURCE, 'config/demo/plant.toml');
export const STEELS = join(SOURCE, 'config/steels.toml');
export const MINUTE_MS = 60000;
export const iso = (ms) => new Date(ms).toISOString().replace('.000Z', 'Z');

export function binary() {
  const path = resolve(process.argv[2] ?? process.env.HEARTHFRONT_BIN ?? join(SOURCE, 'build/hearthfront'));
  if (existsSync(path)) return path;
  console.error(`No binary at ${path}: build first, or name it as the first argument or in HEARTHFRONT_BIN.`);
  process.exit(2);
}

// --- Checks and their count.
let passed = 0;
let failed = 0;
const folders = [];
const running = new Set();

export async function check(name, body) {
  try {
    await body();
    passed++;
    console.log(`ok   ${name}`);
  } catch (error) {
    failed++;
    console.log(`FAIL ${name}\n     ${String(error.stack ?? error).split('\n').slice(0, 6).join('\n     ')}`);
  }
}

export function expect(condition, message) {
  if (!condition) throw new Error(message);
}

export function finish() {
  for (const daemon of running) daemon.kill('SIGKILL');
  for (const folder of folders) {
    if (failed === 0) rmSync(folder, { recursive: true, force: true });
    else console.log(`Left for a look: ${folder}`);
  }
  console.log(`${passed} passed, ${failed} failed`);
  process.exit(failed === 0 && passed > 0 ? 0 : 1);
}
for (const signal of ['SIGINT', 'SIGTERM']) {
  process.on(signal, () => {
    failed++;
    finish();
  });
}

export function temporaryFolder() {
  const folder = mkdtempSync(join(tmpdir(), 'hearthfront-test-'));
  folders.push(folder);
  return folder;
}

export async function waitFor(what, limit_ms, probe) {
  const end = Date.now() + limit_ms;
  let last = null;
  while (Date.now() < end) {
    try {
      const value = await probe();
      if (value) return value;
    } catch (error) {
      last = error;
    }
    await sleep(50);
  }
  throw new Error(`waited ${limit_ms / 1000} s in vain for ${what}${last ? ` (${last.message})` : ''}`);
}

export function freePort() {
  return new Promise((give, refuse) => {
    const server = createServer();
    server.on('error', refuse);
    server.listen(0, '127.0.0.1', () => {
      const { port } = server.address();
      server.close(() => give(port));
    });
  });
}

// A seeded source of numbers, so that a failing run can be had again: SEED in the environment.
export function seededRandom() {
  const seed = Number(process.env.SEED ?? (Date.now() ^ (process.pid << 8)) >>> 0);
  console.log(`seed ${seed} (again with SEED=${seed})`);
  let state = seed >>> 0;
  return () => {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
    return state / 4294967296;
  };
}

// --- The daemon.
export class Daemon {
  constructor(folder, port, settings = '') {
    this.folder = folder;
    this.port = port;
    this.url = `http://127.0.0.1:${port}`;
    this.settings = join(folder, 'hearthfront.toml');
    this.database = join(folder, 'hearthfront.db');
    const text = `[listen]\naddress = "127.0.0.1"\nport = ${port}\n[files]\ndatabase = "${this.database}"\n` +
      `plant = "${PLANT}"\nsteels = "${STEELS}"\n${settings}`;
    writeFileSync(this.settings, text);
  }

  static async fresh(settings = '') {
    const daemon = new Daemon(temporaryFolder(), await freePort(), settings);
    await daemon.start();
    return daemon;
  }

  async start(program = binary()) {
    const log = openSync(join(this.folder, 'daemon.log'), 'a');
    this.process = spawn(program, ['serve', '--settings', this.settings], { stdio: ['ignore', log, log] });
    running.add(this.process);
    this.ended = new Promise((tell) => this.process.once('exit', (code, signal) => tell({ code, signal })));
    let over = false;
    this.ended.then(() => {
      over = true;
      running.delete(this.process);
    });
    await waitFor('the daemon to be ready', 20000, async () => {
      if (over) throw new Error(`it ended: ${readFileSync(join(this.folder, 'daemon.log'), 'utf8').slice(-600)}`);
      return (await fetch(`${this.url}/readyz`, { signal: AbortSignal.timeout(2000) })).ok;
    });
  }

  async kill9() {
    this.process.kill('SIGKILL');
    await this.ended;
  }

  async stop() {
    this.process.kill('SIGTERM');
    return Promise.race([this.ended, sleep(15000).then(() => ({ code: null, signal: 'still running after 15 s' }))]);
  }

  // {status, type, text, json}: never throws for a status.
  async request(method, path, body, type = 'application/json') {
    const answer = await fetch(this.url + path, {
      method,
      headers: body === undefined ? {} : { 'content-type': type },
      body: body === undefined || typeof body === 'string' || body instanceof Uint8Array ? body : JSON.stringify(body),
      signal: AbortSignal.timeout(20000),
    });
    const text = await answer.text();
    let json = null;
    try {
      json = JSON.parse(text);
    } catch {
      // Not JSON: `text` has it.
    }
    return { status: answer.status, type: answer.headers.get('content-type') ?? '', text, json };
  }

  async must(method, path, body, type) {
    const answer = await this.request(method, path, body, type);
    expect(answer.status >= 200 && answer.status < 300, `${method} ${path}: ${answer.status} ${answer.text.slice(0, 400)}`);
    return answer.json;
  }

  sendLog(furnace, text) {
    return this.must('POST', `/api/v1/furnaces/${furnace}/log?mapping=logger`, text, 'text/csv');
  }

  sql(query) {
    const answer = spawnSync('sqlite3', ['-readonly', '-separator', '|', this.database, query], {
      encoding: 'utf8',
      maxBuffer: 1 << 28,
    });
    expect(answer.status === 0, `sqlite3: ${answer.stderr || answer.error}`);
    return answer.stdout.trimEnd();
  }
}

// --- Invented logs and loads, as of `start_ms`.
const HEADER_LINES = { 'pit-2': 1, 'batch-4': 2, 'batch-5': 1, 'twin-6': 1, 'line-7': 1 };

export function demoDay(start_ms, hours, furnaces = FURNACES) {
  const loads = schedule(start_ms, hours)
    .filter((entry) => furnaces.includes(entry.body.furnace))
    .map((entry) => ({ ...entry, path: pathOf(entry, start_ms) }));
  const logs = {};
  for (const furnace of furnaces) {
    const lines = furnaceLog(furnace, loads, start_ms, hours, 2606).trimEnd().split('\n');
    const header = lines.splice(0, HEADER_LINES[furnace]).join('\n') + '\n';
    logs[furnace] = { header, rows: lines, text: header + lines.join('\n') + '\n' };
  }
  return { loads, logs };
}

export function replay(folder, entry, log_text, more = []) {
  const load = join(folder, `${entry.body.furnace}-${entry.body.name}.json`);
  const log = join(folder, `${entry.body.furnace}.csv`);
  writeFileSync(load, JSON.stringify({ ...entry.body, ended_at: entry.ended_at, path: entry.path }));
  writeFileSync(log, log_text);
  const words = ['replay', '--plant', PLANT, '--steels', STEELS, '--load', load, '--log', log, '--mapping', 'logger', '--json', ...more];
  const answer = spawnSync(binary(), words, { encoding: 'utf8', maxBuffer: 1 << 26, timeout: 60000 });
  expect(answer.status === 0, `replay ended with ${answer.status}: ${answer.stderr}`);
  return answer.stdout;
}
