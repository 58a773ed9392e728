// What alerts are sent to in the system tests: an HTTP receiver that verifies signatures, a real SMTP server (Debian's
// aiosmtpd) and a real broker (mosquitto) behind a proxy that can keep back what it answers. Each can be away.

import { spawn, spawnSync } from 'node:child_process';
import { createHmac, timingSafeEqual } from 'node:crypto';
import { chmodSync, writeFileSync } from 'node:fs';
import { createServer } from 'node:http';
import { connect, createServer as createSocketServer } from 'node:net';
import { join } from 'node:path';
import { createInterface } from 'node:readline';
import { SOURCE, expect, freePort, sleep, waitFor } from './support.mjs';

const children = new Set();
process.on('exit', () => {
  for (const child of children) child.kill('SIGKILL');
});

function run(program, words, options = {}) {
  const child = spawn(program, words, { stdio: ['pipe', 'pipe', 'inherit'], ...options });
  children.add(child);
  child.on('error', (error) => console.log(`${program} did not start: ${error.message}`));
  child.on('exit', () => children.delete(child));
  return child;
}

// An authority of its own and a certificate for 127.0.0.1.
export function certificates(folder) {
  const openssl = (...words) => {
    const answer = spawnSync('openssl', words, { cwd: folder, encoding: 'utf8' });
    expect(answer.status === 0, `openssl ${words[0]}: ${answer.stderr}`);
  };
  writeFileSync(join(folder, 'names.txt'), 'subjectAltName=IP:127.0.0.1\n');
  openssl('req', '-x509', '-newkey', 'ec', '-pkeyopt', 'ec_paramgen_curve:prime256v1', '-nodes', '-keyout', 'ca.key', '-out', 'ca.pem', '-days', '2', '-subj', '/CN=Test authority');
  openssl('req', '-newkey', 'ec', '-pkeyopt', 'ec_paramgen_curve:prime256v1', '-nodes', '-keyout', 'server.key', '-out', 'server.csr', '-subj', '/CN=127.0.0.1');
  openssl('x509', '-req', '-in', 'server.csr', '-CA', 'ca.pem', '-CAkey', 'ca.key', '-CAcreateserial', '-days', '2', '-extfile', 'names.txt', '-out', 'server.pem');
  chmodSync(join(folder, 'server.key'), 0o644); // the broker may run as another user
}

export class HookReceiver {
  constructor(secret) {
    this.secret = secret;
    this.got = [];
    this.answer = { status: 204, after_ms: 0 };
  }

  async start(port) {
    this.port = port;
    this.server = createServer((request, response) => {
      const parts = [];
      request.on('data', (part) => parts.push(part));
      request.on('end', () => {
        const body = Buffer.concat(parts).toString();
        const { headers } = request;
        const expected = `sha256=${createHmac('sha256', this.secret).update(`${headers['x-hearthfront-timestamp']}.${body}`).digest('hex')}`;
        const given = headers['x-hearthfront-signature'] ?? '';
        const signed = given.length === expected.length && timingSafeEqual(Buffer.from(given), Buffer.from(expected));
        const { status, after_ms } = this.answer;
        this.got.push({ key: headers['idempotency-key'], attempt: Number(headers['x-hearthfront-attempt'] ?? 1), signed, body: JSON.parse(body), status, raw: body, headers });
        setTimeout(() => response.writeHead(status).end(), after_ms);
      });
    });
    await new Promise((done, refuse) => this.server.once('error', refuse).listen(port, '127.0.0.1', done));
  }

  async stop() {
    this.server.closeAllConnections();
    await new Promise((done) => this.server.close(done));
  }
}

export class MailReceiver {
  constructor(folder) {
    this.folder = folder;
    this.got = [];
    this.mode('ok');
  }

  mode(word) {
    writeFileSync(join(this.folder, 'mail.mode'), word);
  }

  async start(port) {
    this.port = port;
    const file = (name) => join(this.folder, name);
    this.child = run('/usr/bin/python3', ['-W', 'ignore', join(SOURCE, 'tests/system/mail_receiver.py'), String(port), file('server.pem'), file('server.key'), file('mail.mode')]);
    let ready = false;
    createInterface({ input: this.child.stdout }).on('line', (line) => {
      const told = JSON.parse(line);
      if (told.ready) ready = true;
      else this.got.push(readMail(told));
    });
    await waitFor('the mail server', 60000, () => ready);
  }

  async stop() {
    const ended = new Promise((done) => this.child.once('exit', done));
    this.child.kill('SIGKILL');
    await ended;
  }
}

// The headers, unfolded, and the decoded subject and body (RFC 5322, 2047, 2045).
export function readMail(told) {
  const [head, ...rest] = told.text.split('\r\n\r\n');
  const headers = {};
  for (const line of head.replace(/\r\n[ \t]/g, ' ').split('\r\n')) {
    const colon = line.indexOf(': ');
    headers[line.slice(0, colon).toLowerCase()] = line.slice(colon + 2);
  }
  const words = (text) => text.replace(/\?=\s+=\?/g, '?==?').replace(/=\?UTF-8\?B\?(.*?)\?=/g, (_, part) => Buffer.from(part, 'base64').toString('latin1'));
  const bytes = rest.join('\r\n\r\n').replace(/=\r\n/g, '').replace(/=([0-9A-F]{2})/g, (_, hex) => String.fromCharCode(parseInt(hex, 16)));
  const utf8 = (text) => Buffer.from(text, 'latin1').toString('utf8');
  return { ...told, headers, subject: utf8(words(headers.subject)), body: utf8(bytes).replace(/\r\n/g, '\n') };
}

// The broker, and a proxy before it that the daemon talks to.
export class Broker {
  constructor(folder) {
    this.folder = folder;
    this.got = [];
    this.delay_ms = 0;
    this.sockets = new Set();
  }

  async start() {
    this.inner = await freePort();
    const file = (name) => join(this.folder, name);
    writeFileSync(file('broker.users'), '');
    for (const [user, password] of [['furnaces', 'a password for the broker'], ['reader', 'reads']]) {
      const answer = spawnSync('mosquitto_passwd', ['-b', file('broker.users'), user, password], { encoding: 'utf8' });
      expect(answer.status === 0, `mosquitto_passwd: ${answer.stderr || answer.error}`);
    }
    this.allow(true);
    writeFileSync(file('broker.conf'), `listener ${this.inner} 127.0.0.1\nallow_anonymous false\npassword_file ${file('broker.users')}\n` +
      `acl_file ${file('broker.acl')}\ncafile ${file('ca.pem')}\ncertfile ${file('server.pem')}\nkeyfile ${file('server.key')}\npersistence false\nlog_type error\n` +
      (process.getuid() === 0 ? 'user root\n' : ''));
    this.child = run('mosquitto', ['-c', file('broker.conf')], { env: { ...process.env, PATH: `${process.env.PATH}:/usr/sbin` } });
    await waitFor('the broker', 60000, () => this.reads());
    this.reader = run('mosquitto_sub', ['-h', '127.0.0.1', '-p', String(this.inner), '--cafile', file('ca.pem'), '-u', 'reader', '-P', 'reads', '-q', '1', '-t', 'shop/#']);
    let heard = false;
    createInterface({ input: this.reader.stdout }).on('line', (line) => {
      if (line === 'hello') heard = true;
      else this.got.push(JSON.parse(line));
    });
    await waitFor('the subscriber', 60000, async () => {
      spawnSync('mosquitto_pub', ['-h', '127.0.0.1', '-p', String(this.inner), '--cafile', file('ca.pem'), '-u', 'reader', '-P', 'reads', '-t', 'shop/hello', '-m', 'hello']);
      await sleep(50);
      return heard;
    });
  }

  reads() {
    return new Promise((give) => connect(this.inner, '127.0.0.1', function () {
      this.destroy();
      give(true);
    }).on('error', () => give(false)));
  }

  // Whether the daemon may publish; the broker reads its list again.
  allow(yes) {
    writeFileSync(join(this.folder, 'broker.acl'), `user reader\ntopic readwrite shop/#\n${yes ? 'user furnaces\ntopic write shop/alerts\n' : ''}`);
    this.child?.kill('SIGHUP');
  }

  // The proxy; what the broker says goes through `delay_ms` later.
  async open(port) {
    this.port = port;
    this.proxy = createSocketServer((client) => {
      const broker = connect(this.inner, '127.0.0.1');
      this.sockets.add(client).add(broker);
      client.pipe(broker);
      broker.on('data', (part) => {
        setTimeout(() => client.write(part), this.delay_ms);
      });
      for (const each of [client, broker]) {
        each.on('error', () => {});
        each.on('close', () => {
          client.destroy();
          broker.destroy();
        });
      }
    });
    await new Promise((done, refuse) => this.proxy.once('error', refuse).listen(port, '127.0.0.1', done));
  }

  async close() {
    for (const socket of this.sockets) socket.destroy();
    this.sockets.clear();
    await new Promise((done) => this.proxy.close(done));
  }

  stop() {
    this.reader.kill('SIGKILL');
    this.child.kill('SIGKILL');
  }
}
