// What the tests with hostile input share: raw connections that say what no well-behaved client would, answers cut
// apart strictly, and the daemon's memory and processor time as the kernel counts them. Loopback only; every wait has
// a limit.
import { readFileSync, writeFileSync } from 'node:fs';
import { connect } from 'node:net';
import { Worker } from 'node:worker_threads';
import { expect, sleep } from './support.mjs';

export const MB = 1 << 20;
export const HOST = 'Host: 127.0.0.1\r\n';
export const get = (target, more = '') => `GET ${target} HTTP/1.1\r\n${HOST}${more}\r\n`;
export const post = (target, body, more = '') =>
  `POST ${target} HTTP/1.1\r\n${HOST}Content-Length: ${Buffer.byteLength(body)}\r\n${more}\r\n${body}`;

// The whole answers at the front of `bytes`, and what is left. Bodies are as long as Content-Length says, none after
// 100, 204, 304 and HEAD.
export function answersIn(bytes, head_only = false) {
  const answers = [];
  let at = 0;
  while (true) {
    const end = bytes.indexOf('\r\n\r\n', at, 'latin1');
    if (end < 0) break;
    const [first, ...lines] = bytes.toString('latin1', at, end).split('\r\n');
    const status = Number(/^HTTP\/1\.1 (\d{3}) ?/.exec(first)?.[1] ?? NaN);
    const headers = Object.fromEntries(lines.map((line) => [line.slice(0, line.indexOf(':')).toLowerCase(), line.slice(line.indexOf(':') + 1).trim()]));
    const bodiless = head_only || status === 100 || status === 204 || status === 304;
    const length = bodiless ? 0 : Number(headers['content-length'] ?? 0);
    if (bytes.length < end + 4 + length) break;
    answers.push({ status, headers, lines, body: bytes.toString('utf8', end + 4, end + 4 + length) });
    at = end + 4 + length;
  }
  return { answers, rest: bytes.subarray(at) };
}

// A connection. `reads: false` never takes a byte off the socket, so that the daemon's window closes.
export class Raw {
  constructor(port, { reads = true, half_open = true, from = undefined } = {}) {
    this.chunks = [];
    this.bytes_in = 0;
    this.ended = false; // the daemon said it is through, or the connection broke
    this.error = null;
    this.began = performance.now();
    this.socket = connect({ port, host: '127.0.0.1', localAddress: from, allowHalfOpen: half_open });
    this.over = new Promise((tell) => {
      const end = () => {
        if (!this.ended) this.ended_at = performance.now();
        this.ended = true;
        tell();
      };
      this.socket.on('end', end);
      this.socket.on('close', end);
    });
    this.connected = new Promise((tell) => this.socket.once('connect', () => tell(true)).once('error', () => tell(false)));
    this.socket.on('error', (error) => (this.error = error.code));
    if (reads) {
      this.socket.on('data', (data) => {
        this.first_at ??= performance.now();
        this.bytes_in += data.length;
        this.chunks.push(data);
      });
    } else {
      this.socket.pause();
    }
  }

  send(bytes) {
    if (!this.socket.destroyed && this.socket.writable) this.socket.write(bytes);
    return this;
  }

  // Sends `total` bytes made of `chunk`, no faster than the daemon takes them, until it takes no more for three seconds.
  async pour(chunk, total) {
    let sent = 0;
    while (sent < total && !this.ended && this.socket.writable) {
      const more = this.socket.write(chunk);
      sent += chunk.length;
      if (more) continue;
      const drained = new Promise((tell) => this.socket.once('drain', tell));
      if ((await Promise.race([drained, this.over, sleep(3000).then(() => 'stuck')])) === 'stuck') break;
    }
    return sent;
  }

  all() {
    this.chunks = [Buffer.concat(this.chunks)];
    return this.chunks[0];
  }

  text() {
    return this.all().toString('latin1');
  }

  // Waits for `count` whole answers, or the end of the connection, `limit_ms` at most.
  async answers(count = Infinity, limit_ms = 8000, head_only = false) {
    const end = performance.now() + limit_ms;
    while (!this.ended && performance.now() < end) {
      if (count !== Infinity && answersIn(this.all(), head_only).answers.length >= count) break;
      await Promise.race([this.over, sleep(5)]);
    }
    return answersIn(this.all(), head_only).answers;
  }

  destroy() {
    this.socket.destroy();
  }
}

// Sends, and returns all answers up to the daemon's end of the connection; without such an end within `limit_ms` the
// exchange fails, since neither an answer nor an end is what a probe may ever get.
export async function refusalOf(port, bytes, limit_ms = 8000) {
  const raw = new Raw(port);
  raw.send(bytes);
  const answers = await raw.answers(Infinity, limit_ms);
  const { ended } = raw;
  raw.destroy();
  expect(ended, `the connection stayed open; so far: ${JSON.stringify(raw.text().slice(0, 300))}`);
  return answers;
}

export async function answerOf(port, bytes, limit_ms = 8000) {
  const raw = new Raw(port);
  raw.send(bytes);
  const [answer] = await raw.answers(1, limit_ms, bytes.startsWith?.('HEAD'));
  raw.destroy();
  expect(answer, `no answer within ${limit_ms} ms (${raw.error ?? 'open'})`);
  return answer;
}

export async function alive(port) {
  const began = performance.now();
  const answer = await answerOf(port, get('/healthz', 'Connection: close\r\n'));
  expect(answer.status === 200 && answer.body === 'alive\n', JSON.stringify(answer));
  return performance.now() - began;
}

// Asks for /healthz on new connections again and again until `over` resolves; the sorted times in ms. From a thread of
// its own, so that the attackers' work here does not count.
const prober = `
const { connect } = require('node:net');
const { parentPort, workerData } = require('node:worker_threads');
const times_ms = [];
let on = true;
parentPort.once('message', () => (on = false));
const ask = () => new Promise((give, refuse) => {
  const began = performance.now();
  let text = '';
  const socket = connect(workerData, '127.0.0.1');
  socket.on('data', (data) => (text += data));
  socket.on('error', refuse);
  socket.on('close', () => (text.endsWith('alive\\n') ? give(performance.now() - began) : refuse(new Error('/healthz: ' + text))));
  socket.setTimeout(10000, () => socket.destroy(new Error('no answer from /healthz in 10 s')));
  socket.end('GET /healthz HTTP/1.1\\r\\nHost: localhost\\r\\nConnection: close\\r\\n\\r\\n');
});
(async () => {
  while (on) {
    times_ms.push(await ask());
    await new Promise((go) => setTimeout(go, 20));
  }
  parentPort.postMessage(times_ms);
})();`;
export async function healthWhile(port, over) {
  const worker = new Worker(prober, { eval: true, workerData: port });
  const times = new Promise((give, refuse) => worker.once('message', give).once('error', refuse));
  times.catch(() => {});
  await over.finally(() => worker.postMessage('enough'));
  return (await times).sort((a, b) => a - b);
}
export const summary = (times_ms) =>
  `${times_ms.length} asked, median ${times_ms[times_ms.length >> 1].toFixed(1)} ms, worst ${times_ms.at(-1).toFixed(0)} ms`;

// --- What the kernel says about the daemon.
const field_mb = (pid, name) => Number(new RegExp(`${name}:\\s+(\\d+) kB`).exec(readFileSync(`/proc/${pid}/status`, 'utf8'))[1]) / 1024;

// A sanitized build keeps freed memory to itself, so that figures of memory say nothing there.
export const sanitized = (daemon) => /lib(asan|tsan)|hwasan/.test(readFileSync(`/proc/${daemon.process.pid}/maps`, 'utf8'));

// Resident memory of the daemon in MB around `body`: before, peak (VmHWM, reset first: proc(5), clear_refs 5), after.
export async function memoryOf(daemon, body) {
  const { pid } = daemon.process;
  writeFileSync(`/proc/${pid}/clear_refs`, '5');
  const before = field_mb(pid, 'VmRSS');
  await body();
  const figures = { before, peak: field_mb(pid, 'VmHWM'), after: field_mb(pid, 'VmRSS') };
  console.log(`     resident before ${before.toFixed(1)} MB, peak +${(figures.peak - before).toFixed(1)}, after +${(figures.after - before).toFixed(1)}`);
  return figures;
}

export async function memoryBounded(daemon, bound_mb, body) {
  const { before, peak } = await memoryOf(daemon, body);
  expect(sanitized(daemon) || peak - before <= bound_mb, `grew by ${(peak - before).toFixed(1)} MB, bound ${bound_mb} MB`);
}

// Processor time used so far in s: utime and stime of proc(5), /proc/pid/stat, 100 ticks a second on Linux.
export function processorSeconds(daemon) {
  const words = readFileSync(`/proc/${daemon.process.pid}/stat`, 'utf8').split(') ')[1].split(' ');
  return (Number(words[11]) + Number(words[12])) / 100;
}

// Bytes in MB that the kernel holds for the daemon's connections, both ways, cut ones included (proc(5), /proc/net/tcp):
// what slow readers cost beside the process itself.
export function heldByKernel_mb(port) {
  const local = `:${port.toString(16).toUpperCase().padStart(4, '0')}`;
  let bytes = 0;
  for (const line of readFileSync('/proc/net/tcp', 'utf8').split('\n').slice(1)) {
    const words = line.trim().split(/\s+/);
    if (!words[1]?.endsWith(local) || words[3] === '0A') continue; // 0A: listening
    bytes += words[4].split(':').reduce((sum, queue) => sum + parseInt(queue, 16), 0);
  }
  return bytes / MB;
}
