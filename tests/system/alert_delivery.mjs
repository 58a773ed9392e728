// Alerts reach a webhook, a mailbox and a broker (all real servers) at least once, whatever the receivers do: away,
// slow, refusing, and the daemon killed between a receiver's taking a message and the daemon's hearing of it. Every
// repeat has the key of the first. Messages are put into the outbox while the daemon is stopped, beside an alert
// that is past, so that no rule touches it. Limits of time: common practice, no source.
import { execFile as execFileCall, spawnSync } from 'node:child_process';
import { readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { promisify } from 'node:util';
import { Daemon, MINUTE_MS, SOURCE, binary, check, expect, finish, freePort, iso, sleep, temporaryFolder, waitFor } from './support.mjs';
import { Broker, HookReceiver, MailReceiver, certificates } from './receivers_support.mjs';

binary();
const execFile = promisify(execFileCall);
const SECRETS = { hook: 'the key of the test hook', mail: 'a password for mail', broker: 'a password for the broker' };
const NAMES = ['hook', 'mail', 'broker'];
const folder = temporaryFolder();
certificates(folder);
for (const [name, text] of Object.entries(SECRETS)) writeFileSync(join(folder, `${name}.secret`), `${text}\n`, { mode: 0o600 });

const hook = new HookReceiver(SECRETS.hook);
const mail = new MailReceiver(folder);
const broker = new Broker(folder);
const ports = { hook: await freePort(), mail: await freePort(), broker: await freePort() };
await hook.start(ports.hook);
await mail.start(ports.mail);
await broker.start();
await broker.open(ports.broker);

const ca = `ca_file = "${join(folder, 'ca.pem')}"`;
// They hear of silent furnaces only: what the rules say of this machine's disk, or of stuck targets, is not asked here.
const daemon = await Daemon.fresh(`
[[target]]
name = "hook"
kind = "webhook"
url = "http://127.0.0.1:${ports.hook}/alerts?token=hidden-token"
secret_file = "${join(folder, 'hook.secret')}"
timeout_s = 6
kinds = ["no reading"]
[[target]]
name = "mail"
kind = "mail"
server = "127.0.0.1"
port = ${ports.mail}
${ca}
user = "furnaces"
password_file = "${join(folder, 'mail.secret')}"
from = "furnaces@shop.example"
to = ["shift@shop.example", "lead@shop.example"]
timeout_s = 6
kinds = ["no reading"]
[[target]]
name = "broker"
kind = "mqtt"
host = "127.0.0.1"
port = ${ports.broker}
topic = "shop/alerts"
tls = true
${ca}
user = "furnaces"
password_file = "${join(folder, 'broker.secret')}"
timeout_s = 6
kinds = ["no reading"]
[[target]]
name = "no-key"
kind = "webhook"
url = "http://127.0.0.1:${ports.hook}/alerts"
secret_file = "${join(folder, 'missing.secret')}"
kinds = ["disk"]
`);

function put(id, event, names) {
  const now_us = Date.now() * 1000;
  const rows = names.map((name) => {
    const key = `alert-${id}-${event}-${now_us}-${name}`;
    const payload = { event, key, plant: 'Test', at: new Date().toISOString(), alert: { id, kind: 'no reading', severity: 'urgent', state: 'active',
      furnace: 'pit-2', furnace_name: 'Härteofen 2', load: 12, load_name: '2291', item: null, sentence: 'Nothing was read for 12 min at 930 °C.',
      advice: "Look at the logger's cable.", since: '2026-03-02T06:00:00Z' } };
    return `(${id}, ${now_us}, '${name}', '${event}', '${key}', '${JSON.stringify(payload).replaceAll("'", "''")}', 'waiting', 0, ${now_us}, NULL, '')`;
  });
  const sql = (event === 'raised' ? `INSERT INTO alert VALUES(${id}, 'k${id}', 'no reading', 'urgent', 'pit-2', 0, '', 's', '', 'cleared', ${now_us}, ${now_us}, ${now_us}, ${now_us}, ${now_us}, 1, ${now_us}, 0, ${now_us}, NULL, '', NULL, '', '');` : '') +
    `INSERT INTO outbox(alert, created_us, target, event, key, payload_json, state, attempts, next_try_us, delivered_us, last_error) VALUES ${rows.join(', ')};`;
  const answer = spawnSync('sqlite3', [daemon.database, sql], { encoding: 'utf8' });
  expect(answer.status === 0, `sqlite3: ${answer.stderr}`);
}
// An alert with a message to each target; the daemon is stopped for it and started again.
async function raise(names = NAMES, events = ['raised']) {
  await daemon.stop();
  const id = Number(daemon.sql('SELECT coalesce(max(id), 0) + 1 FROM alert'));
  for (const event of events) put(id, event, names);
  await daemon.start();
  return id;
}
// Not by spawnSync: the receivers live in this process.
const rows = async (id) => JSON.parse((await execFile('sqlite3', ['-readonly', '-json', daemon.database,
  `SELECT target, state, attempts, last_error AS error FROM outbox WHERE alert = ${id} ORDER BY id`])).stdout);
const row = async (id, name) => (await rows(id)).find((each) => each.target === name);
const all = async (id, state) => (await rows(id)).every((each) => each.state === state);
const idOf = { hook: (got) => got.body.alert?.id, mail: (got) => Number(/^<alert-(\d+)-/.exec(got.headers['message-id'])?.[1]), broker: (got) => got.alert?.id };
const receivers = { hook, mail, broker };
const got = (name, id) => receivers[name].got.filter((each) => idOf[name](each) === id);
const keyOf = { hook: (each) => each.key, mail: (each) => each.headers['message-id'], broker: (each) => each.key };
const retry = async (name) => (await daemon.must('POST', `/api/v1/targets/${name}/retry`, { person: 'Test' })).retried;
const target = async (name) => (await daemon.must('GET', '/api/v1/targets')).targets.find((each) => each.name === name);

await check('an alert reaches all three, and each has what it needs to trust and understand it', async () => {
  const id = await raise(NAMES, ['raised', 'cleared']);
  await waitFor('six deliveries', 30000, async () => (await all(id, 'delivered')) && got('broker', id).length === 2 && got('mail', id).length === 2);
  const [first, second] = got('hook', id);
  expect(first.signed && second.signed, 'signature');
  expect(first.body.event === 'raised' && second.body.event === 'cleared', 'order at the hook');
  expect(first.key === first.body.key && first.attempt === 1 && first.key !== second.key, JSON.stringify(first));
  const [raised, cleared] = got('mail', id);
  expect(raised.tls && raised.user === 'furnaces', 'mail without TLS or sign-in');
  expect(raised.to.join() === 'shift@shop.example,lead@shop.example' && raised.from === 'furnaces@shop.example', JSON.stringify(raised.to));
  expect(raised.subject === 'Urgent: Härteofen 2, load 2291: Nothing was read for 12 min at 930 °C.', raised.subject);
  expect(raised.body.includes("What to do: Look at the logger's cable.\n") && raised.body.includes('no safety function'), raised.body);
  expect(cleared.subject.startsWith('Over: ') && cleared.headers['in-reply-to'] === raised.headers['message-id'], JSON.stringify(cleared.headers));
  const published = got('broker', id);
  expect(published[0].event === 'raised' && published[0].attempt === 1 && published[1].event === 'cleared', JSON.stringify(published[0]));
});

await check('the lines of the README verify a message, and nothing else', () => {
  const readme = readFileSync(join(SOURCE, 'README.md'), 'utf8');
  const marked = readme.slice(readme.indexOf('<!-- verified by tests/system/alert_delivery.mjs -->'));
  const code = /\n\n((?: {6}.*\n)+)/.exec(marked)[1].replace(/^ {6}/gm, '');
  const { raw, headers } = hook.got[0];
  const names = { 'X-Hearthfront-Timestamp': headers['x-hearthfront-timestamp'], 'X-Hearthfront-Signature': headers['x-hearthfront-signature'] };
  const script = `${code}
import json, sys
raw, headers, key = json.load(sys.stdin)
body = raw.encode()
old = dict(headers, **{"X-Hearthfront-Timestamp": "1700000000"})
print(is_ours(key.encode(), headers, body), is_ours(b"another key", headers, body), is_ours(key.encode(), headers, body + b" "), is_ours(key.encode(), old, body))`;
  const answer = spawnSync('python3', ['-c', script], { input: JSON.stringify([raw, names, SECRETS.hook]), encoding: 'utf8' });
  expect(answer.stdout.trim() === 'True False False False', answer.stdout + answer.stderr);
});

await check('a test message is sent at once, and kept in the audit trail', async () => {
  for (const name of NAMES) {
    const answer = await daemon.must('POST', `/api/v1/targets/${name}/test`, { person: 'Ada' });
    expect(answer.delivered === true && answer.error === null, `${name}: ${JSON.stringify(answer)}`);
  }
  await waitFor('the test messages', 5000, () => receivers.mail.got.some((each) => each.subject.startsWith('Test: ') && each.body.includes('Ada')) &&
    hook.got.some((each) => each.signed && each.body.event === 'test') && broker.got.some((each) => each.event === 'test'));
  expect(daemon.sql("SELECT count(*) FROM audit WHERE action = 'test target' AND person = 'Ada'") === '3', 'audit');
  expect((await daemon.request('POST', '/api/v1/targets/nobody/test', { person: 'Ada' })).status === 404, 'unknown target');
  expect((await daemon.request('POST', '/api/v1/targets/hook/test', {})).status === 422, 'no person');
  const missing = await daemon.must('POST', '/api/v1/targets/no-key/test', { person: 'Ada' });
  expect(!missing.delivered && missing.error.includes('missing.secret cannot be read'), JSON.stringify(missing));
});

await check('where alerts are sent is told without secrets', async () => {
  const { targets } = await daemon.must('GET', '/api/v1/targets');
  expect(targets.map((each) => each.name).join() === 'hook,mail,broker,no-key', JSON.stringify(targets));
  expect(targets[0].where === `127.0.0.1:${ports.hook}/alerts`, targets[0].where);
  expect(targets[0].last_delivered_at !== null && targets[0].last_error === null, JSON.stringify(targets[0]));
  expect(targets[3].last_error.includes('missing.secret cannot be read'), JSON.stringify(targets[3]));
});

await check('receivers that are away get it when they come back', async () => {
  await hook.stop();
  await mail.stop();
  await broker.close();
  const id = await raise();
  await waitFor('a failed try of each', 30000, async () => (await rows(id)).every((each) => each.state === 'waiting' && each.attempts === 1 && each.error !== ''));
  for (const each of await rows(id)) expect(/refused|connect|connection/i.test(each.error), each.error);
  for (const name of NAMES) {
    const answer = await daemon.must('POST', `/api/v1/targets/${name}/test`, { person: 'Ada' });
    expect(!answer.delivered && answer.error.length > 10, JSON.stringify(answer));
  }
  expect((await target('mail')).waiting === 1 && (await target('mail')).last_error !== null, 'GET /targets');
  await hook.start(ports.hook);
  await mail.start(ports.mail);
  await broker.open(ports.broker);
  await waitFor('the second try, 10 to 12.5 s later', 25000, async () => (await all(id, 'delivered')) && got('broker', id).length === 1);
  expect(got('hook', id)[0].attempt === 2 && got('broker', id)[0].attempt === 2, 'which try it is');
});

await check('a refusal is stuck at once, and goes out when a person has it tried again', async () => {
  hook.answer = { status: 403, after_ms: 0 };
  mail.mode('refuse');
  broker.allow(false);
  const id = await raise();
  await waitFor('three stuck ones', 30000, () => all(id, 'stuck'));
  expect((await row(id, 'hook')).error.includes('answered 403'), (await row(id, 'hook')).error);
  expect((await row(id, 'mail')).error.includes('550 5.1.1 no such mailbox'), (await row(id, 'mail')).error);
  expect(/not authorized/i.test((await row(id, 'broker')).error), (await row(id, 'broker')).error);
  expect(got('broker', id).length === 0 && got('mail', id).length === 0, 'refused, but there');
  expect((await target('broker')).stuck === 1, 'stuck in GET /targets');
  hook.answer = { status: 204, after_ms: 0 };
  mail.mode('ok');
  broker.allow(true);
  for (const name of NAMES) expect((await retry(name)) === 1, name);
  await waitFor('their delivery', 30000, async () => (await all(id, 'delivered')) && got('broker', id).length === 1 && got('mail', id).length === 1);
  expect(daemon.sql("SELECT count(*) FROM audit WHERE action = 'retry target'") === '3', 'audit');
});

await check('an address that is refused keeps the mail from nobody else', async () => {
  mail.mode('partial');
  const id = await raise(['mail']);
  await waitFor('its delivery', 30000, () => all(id, 'delivered'));
  expect(got('mail', id)[0].to.join() === 'shift@shop.example', JSON.stringify(got('mail', id)[0].to));
  expect((await target('mail')).last_error.includes('not for every address: 550'), JSON.stringify(await target('mail')));
  mail.mode('later');
  const next = await raise(['mail']);
  await waitFor('a failed try', 30000, async () => (await row(next, 'mail')).error !== '');
  expect((await row(next, 'mail')).state === 'waiting' && (await row(next, 'mail')).error.includes('451 4.3.0'), JSON.stringify((await row(next, 'mail'))));
  mail.mode('ok');
});

await check('a certificate of another authority is not trusted', async () => {
  const other = join(folder, 'other');
  spawnSync('mkdir', [other]);
  certificates(other);
  const own = readFileSync(join(folder, 'ca.pem'));
  writeFileSync(join(folder, 'ca.pem'), readFileSync(join(other, 'ca.pem')));
  for (const name of ['mail', 'broker']) {
    const answer = await daemon.must('POST', `/api/v1/targets/${name}/test`, { person: 'Ada' });
    expect(!answer.delivered, `${name} took a certificate of another authority`);
  }
  writeFileSync(join(folder, 'ca.pem'), own);
  for (const name of ['mail', 'broker']) {
    const answer = await daemon.must('POST', `/api/v1/targets/${name}/test`, { person: 'Ada' });
    expect(answer.delivered, `${name}: ${answer.error}`);
  }
});

await check('a slow receiver delays nobody else and is asked again', async () => {
  hook.answer = { status: 204, after_ms: 15000 };
  const before = Date.now();
  const id = await raise();
  await waitFor('the other two', 30000, async () => (await row(id, 'mail')).state === 'delivered' && (await row(id, 'broker')).state === 'delivered');
  const others_ms = Date.now() - before;
  await waitFor('the failed try', 30000, async () => (await row(id, 'hook')).error !== '');
  expect(others_ms < 6000, `${others_ms} ms, the time-out of the hook is 6 s`);
  hook.answer = { status: 204, after_ms: 0 };
  await waitFor('the second try', 25000, () => all(id, 'delivered'));
  const tries = got('hook', id);
  expect(tries.length === 2 && tries[0].key === tries[1].key && tries[1].attempt === 2 && tries[1].signed, JSON.stringify(tries));
});

await check('killed between their taking it and our hearing of it: everybody gets it again, with the same key', async () => {
  hook.answer = { status: 204, after_ms: 5500 };
  mail.mode('slow');
  broker.delay_ms = 700;
  const id = await raise();
  await waitFor('all three to have it', 30000, () => NAMES.every((name) => got(name, id).length === 1));
  await daemon.kill9();
  expect(await all(id, 'waiting'), `killed too late: ${JSON.stringify(await rows(id))}`);
  hook.answer = { status: 204, after_ms: 0 };
  mail.mode('ok');
  broker.delay_ms = 0;
  await daemon.start();
  await waitFor('the second delivery', 20000, async () => (await all(id, 'delivered')) && NAMES.every((name) => got(name, id).length === 2));
  for (const name of NAMES) {
    const [first, second] = got(name, id);
    expect(keyOf[name](first) === keyOf[name](second), `${name}: another key`);
  }
  expect(got('hook', id)[1].attempt === 2 && got('broker', id)[1].attempt === 2, 'the repeat does not say so');
});

await check('it stops within 2 s while every receiver hangs', async () => {
  hook.answer = { status: 204, after_ms: 20000 };
  mail.mode('slow');
  broker.delay_ms = 20000;
  const id = await raise();
  await waitFor('a try of each', 30000, async () => (await rows(id)).every((each) => each.attempts === 1));
  await sleep(300);
  const before = Date.now();
  const ended = await daemon.stop();
  const took_ms = Date.now() - before;
  expect(ended.code === 0 && took_ms < 2000, `${JSON.stringify(ended)} after ${took_ms} ms`);
  console.log(`     stopped after ${took_ms} ms`);
  hook.answer = { status: 204, after_ms: 0 };
  mail.mode('ok');
  broker.delay_ms = 0;
  await daemon.start();
  await waitFor('delivery after the start', 20000, () => all(id, 'delivered'));
});

await check('no secret is in the log, the database or an answer', async () => {
  const answers = (await daemon.request('GET', '/api/v1/targets')).text + (await daemon.request('GET', '/metrics')).text;
  const told = readFileSync(join(daemon.folder, 'daemon.log'), 'utf8') + daemon.sql('.dump') + answers;
  for (const secret of [...Object.values(SECRETS), 'hidden-token']) expect(!told.includes(secret), `found: ${secret}`);
  expect(told.includes('answered 403'), 'the log was not read');
});

await check('a furnace that falls silent is told at once, passed on when nobody acknowledges, and told as over', async () => {
  const now = iso(Date.now());
  const target = (name, more) => `[[target]]\nname = "${name}"\nkind = "webhook"\nurl = "http://127.0.0.1:${ports.hook}/"\nsecret_file = "${join(folder, 'hook.secret')}"\n${more}`;
  const fast = await Daemon.fresh(`[clock]\nspeed = 60.0\nanchor_real = "${now}"\nanchor_data = "${now}"\n` +
    target('at-once', 'least_severity = "urgent"\nfurnaces = ["pit-2"]\n') + target('lead', 'kinds = ["no reading"]\nafter_unacknowledged_min = 5\n') +
    target('others', 'furnaces = ["batch-4"]\n') + target('patient', 'kinds = ["no reading"]\nafter_unacknowledged_min = 600\n'));
  const heard = (name, event) => hook.got.filter((each) => each.key.endsWith(`-${name}`) && each.body.event === event);
  const body = { ...JSON.parse(readFileSync(join(SOURCE, 'config/demo/example/load.json'), 'utf8')), started_at: iso(Date.now() - 30 * MINUTE_MS) };
  delete body.ended_at;
  await fast.must('POST', '/api/v1/loads', body);
  await waitFor('"raised"', 30000, () => heard('at-once', 'raised').length === 1);
  const { alert } = heard('at-once', 'raised')[0].body;
  expect(alert.kind === 'no reading' && alert.furnace === 'pit-2' && alert.severity === 'urgent' && alert.sentence.length > 10, JSON.stringify(alert));
  await waitFor('"escalated", 5 s later', 30000, () => heard('lead', 'escalated').length === 1);
  expect(heard('lead', 'raised').length === 0, 'told before its turn');
  const readings = ['temperature', 'probe_emf'].map((channel) => ({ furnace: 'pit-2', channel, value: channel === 'temperature' ? 925 : 1150 }));
  const sending = setInterval(async () => {
    const time = (await fast.must('GET', '/api/v1/status')).now;
    await fast.must('POST', '/api/v1/readings', { readings: readings.map((each) => ({ ...each, time })) });
  }, 400);
  try {
    await waitFor('"cleared"', 30000, () => heard('at-once', 'cleared').length === 1 && heard('lead', 'cleared').length === 1);
  } finally {
    clearInterval(sending);
  }
  const one = await fast.must('GET', `/api/v1/alerts/${alert.id}`);
  expect(one.deliveries.length === 4 && one.deliveries.every((each) => each.state === 'delivered'), JSON.stringify(one.deliveries));
  expect(hook.got.every((each) => !/-(others|patient)$/.test(each.key)), 'somebody was told who did not want it');
  await fast.stop();
});

await daemon.stop();
broker.stop();
await mail.stop();
await hook.stop();
finish();
