// Hostile requests against the real daemon, one after another: framing, heads, targets, hosts, methods, bodies. Each
// probe is refused with its own status and the end of the connection, or has no effect; each names its source: a CVE of
// the HTTP library, or the section of the standard that says what a server does. Afterwards nothing is in the database.
import { Daemon, binary, check, expect, finish, sleep } from './support.mjs';
import { HOST, Raw, alive, answerOf, answersIn, get, post, refusalOf } from './hostile_support.mjs';

binary();
const daemon = await Daemon.fresh();
const { port } = daemon;
const PRACTICE = 'common practice, no source';
const READING = '{"readings":[{"furnace":"pit-2","channel":"temperature","time":"2026-03-02T06:05:00Z","value":900}]}';
const HIDDEN = get('/api/v1/status');
const readings = (head, body = '') => `POST /api/v1/readings HTTP/1.1\r\n${HOST}${head}\r\n${body}`;

// Sends the bytes; exactly one answer of that status must come, a problem document, and then the end.
async function refused(status, bytes) {
  const answers = await refusalOf(port, bytes);
  expect(answers.length === 1, `${answers.length} answers: ${answers.map((a) => a.status)}`);
  const [answer] = answers;
  expect(answer.status === status, `status ${answer.status}, expected ${status}: ${answer.body}`);
  expect(answer.headers.connection === 'close', 'the answer must say that the connection ends');
  expect(JSON.parse(answer.body).status === status, answer.body);
  return answer;
}

const hex = (text) => Buffer.from(text.replace(/ /g, ''), 'hex');
// The text with one byte of any kind in the place of its "~".
const withByte = (text, code) => {
  const bytes = Buffer.from(text);
  bytes[bytes.indexOf('~')] = code;
  return bytes;
};
const inHeader = (code) => withByte(get('/healthz', 'X-A: a~b\r\n'), code);
const inTarget = (code) => withByte(get('/a~b'), code);

for (const [name, source, status, bytes] of [
  // --- Where does the body end? What two readers could answer in two ways is refused.
  ['a chunked body', 'CVE-2025-46728; RFC 9112 6.1, RFC 9110 15.5.12', 411, readings('Transfer-Encoding: chunked\r\n', `${READING.length.toString(16)}\r\n${READING}\r\n0\r\n\r\n`)],
  ['a chunk size of 16 hex digits', 'CVE-2025-53629', 411, readings('Transfer-Encoding: chunked\r\n', 'ffffffffffffffff\r\nx')],
  ['Transfer-Encoding beside Content-Length', 'RFC 9112 6.1, 11.2', 411, readings(`Transfer-Encoding: chunked\r\nContent-Length: 4\r\n`, `0\r\n\r\n${HIDDEN}`)],
  ['Content-Length before Transfer-Encoding', 'RFC 9112 6.1, 11.2', 411, readings(`Content-Length: 4\r\nTransfer-Encoding: chunked\r\n`, `0\r\n\r\n${HIDDEN}`)],
  ['an encoding that only looks like chunked', 'RFC 9112 6.1', 411, readings('Transfer-Encoding: xchunked\r\n', HIDDEN)],
  ['"identity" as Transfer-Encoding', 'RFC 9112 7', 411, readings('Transfer-Encoding: identity\r\nContent-Length: 0\r\n')],
  ['a name hidden by a tab: "Transfer-Encoding\\t:"', 'RFC 9112 5.1', 400, readings('Transfer-Encoding\t: chunked\r\nContent-Length: 5\r\n', `0\r\n\r\n${HIDDEN}`)],
  ['a chunked GET', 'CVE-2026-34441; RFC 9112 6.1', 411, get('/healthz', 'Transfer-Encoding: chunked\r\n') + `0\r\n\r\n${HIDDEN}`],
  ['a GET with a body that is a request', 'CVE-2026-34441; RFC 9110 9.3.1', 400, get('/healthz', `Content-Length: ${HIDDEN.length}\r\n`) + HIDDEN],
  ['a HEAD with a body that is a request', 'RFC 9110 9.3.2', 400, `HEAD /healthz HTTP/1.1\r\n${HOST}Content-Length: ${HIDDEN.length}\r\n\r\n${HIDDEN}`],
  ['two different Content-Lengths', 'RFC 9112 6.3', 400, readings('Content-Length: 0\r\nContent-Length: 5\r\n', 'GET /')],
  ['the same Content-Length twice', 'RFC 9110 8.6 allows it', 400, readings('Content-Length: 2\r\nContent-Length: 2\r\n', '{}')],
  ['a list as Content-Length', 'RFC 9112 6.3', 400, readings('Content-Length: 2, 2\r\n', '{}')],
  ...['abc', '-1', '+2', '0x2', '2 2', '2.0', '2e0', '', '\u0662'].map((length) =>
    [`Content-Length: "${length}"`, 'RFC 9110 8.6', 400, Buffer.from(readings(`Content-Length: ${length}\r\n`, '{}'))]),
  ['Content-Length of 2^64 + 2', 'RFC 9110 8.6: no integer overflow', 413, readings('Content-Length: 18446744073709551618\r\n', '{}')],
  ['Content-Length of 30 digits', 'RFC 9110 8.6: no integer overflow', 413, readings(`Content-Length: ${'9'.repeat(30)}\r\n`, '{}')],
  ['a body announced as 50 MB, none of it sent', 'RFC 9110 15.5.14', 413, readings('Content-Length: 52428800\r\n')],
  ['a body for an address that is not there', 'RFC 9110 15.5.14', 413, `POST /none HTTP/1.1\r\n${HOST}Content-Length: 52428800\r\n\r\n`],
  ...['gzip', 'deflate', 'br', 'zstd', 'gzip, gzip', 'identity, gzip'].map((coding) =>
    [`Content-Encoding: ${coding}`, 'CVE-2026-22776, CVE-2026-28435; RFC 9110 15.5.16', 415, readings(`Content-Encoding: ${coding}\r\nContent-Length: 4\r\n`, '\x1f\x8b\x08\0')]),

  // --- Heads.
  ['50 000 headers', 'CVE-2025-52887; RFC 6585 5', 431, `GET /healthz HTTP/1.1\r\n${HOST}${Array.from({ length: 50000 }, (_, i) => `X-${i}: 1\r\n`).join('')}\r\n`],
  ['101 headers that fit into the bytes', 'CVE-2025-52887; RFC 6585 5', 431, get('/healthz', 'X: 1\r\n'.repeat(100))],
  ['one header of 4 MB', 'CVE-2025-53628; RFC 6585 5', 431, get('/healthz', `X: ${'a'.repeat(4 << 20)}\r\n`)],
  ['one header name of 4 MB', 'CVE-2025-53628; RFC 6585 5', 431, get('/healthz', 'a'.repeat(4 << 20))],
  ['an address of 4 MB', 'CVE-2025-53628; RFC 9110 15.5.15', 414, get(`/${'a'.repeat(4 << 20)}`)],
  ['a method of 4 MB', 'CVE-2025-53628; RFC 9112 3', 414, `${'A'.repeat(4 << 20)} / HTTP/1.1\r\n${HOST}\r\n`],
  ['lines that end with LF alone', 'RFC 9112 2.2 allows to refuse', 400, `GET /healthz HTTP/1.1\n${HOST.replace('\r', '')}\n`],
  ['one header that ends with LF alone', 'RFC 9112 2.2', 400, get('/healthz', 'X-A: b\nContent-Length: 3\r\n')],
  ['CR without LF', 'RFC 9112 2.2', 400, get('/healthz', 'X-A: b\rContent-Length: 3\r\n')],
  ['a folded header', 'RFC 9112 5.2', 400, get('/healthz', 'X-A: b\r\n\tc\r\n')],
  ['a folded first header', 'RFC 9112 2.2', 400, `GET /healthz HTTP/1.1\r\n ${HOST}\r\n`],
  ['a blank before the colon', 'RFC 9112 5.1', 400, get('/healthz', 'X-A : b\r\n')],
  ['a header without name', 'RFC 9110 5.1', 400, get('/healthz', ': b\r\n')],
  ['a header without colon', 'RFC 9112 5', 400, get('/healthz', 'X-A\r\n')],
  ['a header value that is no UTF-8', PRACTICE, 400, inHeader(0xff)],
  ...[0, 1, 8, 0x0b, 0x1b, 0x7f].map((code) => [`byte ${code} in a header`, 'RFC 9110 5.5', 400, inHeader(code)]),
  ...[0, 1, 9, 0x0b, 0x1b, 0x7f, 0x80, 0xff].map((code) => [`byte ${code} in the address`, 'RFC 9112 3.2', 400, inTarget(code)]),

  // --- Request lines and other protocols on this port.
  ['HTTP/0.9', 'RFC 9112 2.3, 3', 400, 'GET /\r\n\r\n'],
  ['HTTP/1.2', 'RFC 9112 2.3', 400, `GET / HTTP/1.2\r\n${HOST}\r\n`],
  ['"http/1.1"', 'RFC 9112 2.3', 400, `GET / http/1.1\r\n${HOST}\r\n`],
  ['two blanks in the request line', 'RFC 9112 3', 400, `GET  / HTTP/1.1\r\n${HOST}\r\n`],
  ['a blank in the address', 'RFC 9112 3.2', 400, `GET /a b HTTP/1.1\r\n${HOST}\r\n`],
  ['the preface of HTTP/2', 'RFC 9113 3.4', 400, 'PRI * HTTP/2.0\r\n\r\nSM\r\n\r\n'],
  ['a TLS ClientHello', 'RFC 8446 5.1, 4.1.2', 400, hex('16 03 01 00 31 01 00 00 2d 03 03' + '5a'.repeat(32) + '00 00 02 13 01 01 00 00 02 00 00')],
  ['a method that is no word', 'RFC 9110 5.6.2, 9.1', 400, `G(T /healthz HTTP/1.1\r\n${HOST}\r\n`],
  ['an asterisk as address', 'RFC 9112 3.2.4', 400, `OPTIONS * HTTP/1.1\r\n${HOST}\r\n`],
  ['CONNECT to somewhere', 'RFC 9110 9.3.6', 400, `CONNECT 127.0.0.1:22 HTTP/1.1\r\n${HOST}\r\n`],
  ['https as address', 'RFC 9112 3.2.2', 400, `GET https://127.0.0.1/ HTTP/1.1\r\n${HOST}\r\n`],
  ['no Host', 'RFC 9112 3.2', 400, 'GET /healthz HTTP/1.1\r\n\r\n'],
  ['no Host beside an absolute address', 'RFC 9112 3.2', 400, 'GET http://127.0.0.1/healthz HTTP/1.1\r\n\r\n'],
  ['two Hosts', 'RFC 9112 3.2', 400, get('/healthz', HOST)],

  // --- A name that is not ours: rebinding. Our own names are in the checks below.
  ...['evil.example', 'localhost.evil.example', '127.0.0.1.evil.example', 'localhost@evil.example', 'evil.example:80', '0.0.0.0', '[::1', 'a b', ''].map((host) =>
    [`Host: ${host}`, 'RFC 9110 7.4, 17.1; RFC 9110 15.5.20', 421, `GET /api/v1/loads HTTP/1.1\r\nHost: ${host}\r\n\r\n`]),
  ['an absolute address of another name', 'RFC 9112 3.2.2', 421, `GET http://evil.example/healthz HTTP/1.1\r\n${HOST}\r\n`],
  ['an absolute address with a user', 'RFC 9110 4.2.4', 421, `GET http://127.0.0.1@evil.example/ HTTP/1.1\r\n${HOST}\r\n`],
]) {
  await check(`${name} -> ${status} (${source})`, () => refused(status, bytes));
}

// --- Answers that leave the connection open.
for (const [name, source, status, bytes] of [
  ...['/../etc/passwd', '/a/../b', '/./a', '/%2e%2e/etc/passwd', '/.%2E/x', '/a%2fb', '/a%5cb', '/%00', '/index.html%00.js', '/%', '/%zz',
    '/%u002e', '/%c0%ae%c0%ae/', '/%c0%af', '/%e0%80%af', '/%ff', '/%ed%a0%80', '/%0d%0aSet-Cookie:a=b', '/a%7f', '/a\\b', '/a#b', '/?a=%0d%0a',
    '/?a=1&a=2', '/?%00=1'].map((target) => [`GET ${target}`, 'RFC 3986 2.1, 6.2.2.3; RFC 3629 3, 10', 400, get(target)]),
  ['a doubly encoded ../ is a name like any other', 'RFC 3986 2.4', 404, get('/%252e%252e/etc/passwd')],
  ['an address of 8 000 slashes', PRACTICE, 404, get('/'.repeat(8000))],
  ['an unknown method', 'RFC 9110 15.5.6', 405, `BREW /healthz HTTP/1.1\r\n${HOST}\r\n`],
  ['a method in lower case', 'RFC 9110 9.1', 405, `get /healthz HTTP/1.1\r\n${HOST}\r\n`],
  ['TRACE, which would send back what it got', 'RFC 9110 9.3.8', 405, `TRACE /healthz HTTP/1.1\r\n${HOST}X-Secret: 1\r\n\r\n`],
  ['a method of 4 000 letters', 'RFC 9110 9.1', 405, `${'A'.repeat(4000)} /healthz HTTP/1.1\r\n${HOST}\r\n`],
  ['200 000 nested arrays', 'RFC 8259 9', 422, post('/api/v1/readings', '['.repeat(200000) + ']'.repeat(200000))],
  ['200 000 arrays that are never closed', 'RFC 8259 9', 422, post('/api/v1/readings', '['.repeat(200000))],
  ['200 000 nested objects', 'RFC 8259 9', 422, post('/api/v1/readings', '{"a":'.repeat(200000))],
  ['a member twice', 'RFC 8259 4', 422, post('/api/v1/readings', '{"readings":[],"readings":[]}')],
  ['1e999', 'RFC 8259 6', 400, post('/api/v1/readings', READING.replace('900', '1e999'))],
  ['a byte that is no UTF-8', 'RFC 8259 8.1', 400, withByte(post('/api/v1/readings', READING.replace('pit', '~it')), 0xff)],
  ['a form', 'RFC 9110 8.3', 400, post('/api/v1/readings', 'readings=1&furnace=pit-2', 'Content-Type: application/x-www-form-urlencoded\r\n')],
  ['a multipart form with a part header of 500 kB', 'CVE-2026-29076; RFC 7578', 400,
    post('/api/v1/readings', `--x\r\nContent-Disposition: form-data; filename*=UTF-8''${'%41'.repeat(170000)}\r\n\r\n1\r\n--x--\r\n`, 'Content-Type: multipart/form-data; boundary=x\r\n')],
]) {
  await check(`${name} -> ${status} (${source})`, async () => {
    const answer = await answerOf(port, bytes);
    expect(answer.status === status, `status ${answer.status}: ${answer.body.slice(0, 300)}`);
    expect(!('set-cookie' in answer.headers) && !answer.body.includes('X-Secret'), 'the answer holds what the client put in');
    expect(JSON.parse(answer.body).title.length > 5 && answer.body.length < 20000, answer.body.slice(0, 300));
  });
}

await check('three requests sent at once have three answers in order (RFC 9112 9.3.2)', async () => {
  const raw = new Raw(port).send(get('/api/v1/status') + post('/api/v1/readings', '{}') + get('/healthz', 'Connection: close\r\n'));
  const answers = await raw.answers();
  expect(answers.map((answer) => answer.status).join() === '200,422,200' && answers[2].body === 'alive\n', raw.text());
  expect(raw.ended, 'asked to close, it must');
});
await check('a request cut into single bytes is answered like a whole one (RFC 9112 2.2)', async () => {
  const raw = new Raw(port);
  raw.socket.setNoDelay(true);
  await raw.connected;
  for (const byte of get('/healthz')) {
    raw.send(byte);
    await sleep(1);
  }
  expect((await raw.answers(1))[0]?.status === 200, raw.text());
  raw.destroy();
});
await check('after a request refused for its body nothing that follows is read as a request (RFC 9112 11.2)', async () => {
  const answers = await refusalOf(port, readings('Content-Length: 52428800\r\n') + HIDDEN.repeat(200));
  expect(answers.length === 1 && answers[0].status === 413, answers.map((answer) => answer.status).join());
});
await check('600 overlapping ranges cost one plain answer (RFC 9110 14.2, 17.15)', async () => {
  const whole = await answerOf(port, get('/api/v1/openapi.yaml'));
  const raw = new Raw(port).send(get('/api/v1/openapi.yaml', `Range: bytes=0-${',0-'.repeat(599)}\r\n`) + get('/healthz', 'Connection: close\r\n'));
  const answers = await raw.answers();
  expect(answers.length === 2 && answers[0].status === 200 && answers[0].body === whole.body, raw.text().slice(0, 300));
  expect(raw.bytes_in < whole.body.length + 4096, `${raw.bytes_in} bytes`);
});
await check('a line end encoded in a header stays encoded, and no answer carries a header of the client (CVE-2023-26130, CVE-2026-45372)', async () => {
  for (const name of ['If-None-Match', 'Accept-Encoding', 'Origin', 'X-Request-Id', 'Cookie', 'Range']) {
    const answer = await answerOf(port, get('/api/v1/floor', `${name}: a%0d%0aSet-Cookie: b=c%0d%0a\r\n`));
    expect(answer.status === 200 && !answer.lines.some((line) => /b=c|%0d/i.test(line)), `${name}: ${answer.lines.join('|')}`);
  }
});
await check('what a client says about its own address changes nothing (library: REMOTE_ADDR; RFC 7239 8.1)', async () => {
  const claims = 'REMOTE_ADDR: 10.9.9.9\r\nX-Forwarded-For: 10.9.9.9\r\nForwarded: for=10.9.9.9\r\nX-Forwarded-Host: evil.example\r\nX-HTTP-Method-Override: DELETE\r\n';
  const answer = await answerOf(port, get('/api/v1/status', claims));
  expect(answer.status === 200 && !/10\.9\.9\.9|evil/.test(JSON.stringify(answer)), JSON.stringify(answer));
  expect((await answerOf(port, get('/api/v1/loads', claims.replace('X-F', 'Host: evil.example\r\nX-F')))).status === 400, 'a second Host');
});
await check('our own names are taken, also in absolute form (RFC 9112 3.2.2)', async () => {
  for (const host of ['localhost', `127.0.0.1:${port}`, '[::1]:80', 'LOCALHOST.']) {
    expect((await answerOf(port, `GET /healthz HTTP/1.1\r\nHost: ${host}\r\n\r\n`)).status === 200, host);
  }
  expect((await answerOf(port, `GET HTTP://localhost/healthz HTTP/1.1\r\n${HOST}\r\n`)).status === 200, 'absolute form');
  expect((await answerOf(port, 'GET /healthz HTTP/1.0\r\n\r\n')).status === 200, 'HTTP/1.0 has no Host');
});
await check('a page of another site can change nothing (RFC 6454 7; Fetch Metadata Request Headers, W3C)', async () => {
  for (const sign of ['Origin: http://evil.example', 'Origin: null', `Origin: http://127.0.0.1:${port + 1}`, 'Sec-Fetch-Site: cross-site', 'Sec-Fetch-Site: same-site']) {
    for (const target of ['/api/v1/readings', '/api/v1/loads', '/api/v1/loads/1/notes', '/api/v1/loads/1/end', '/api/v1/furnaces/pit-2/log', '/none']) {
      await refused(403, post(target, READING, `${sign}\r\nContent-Type: text/plain\r\n`));
    }
  }
  const home = await answerOf(port, `POST /api/v1/readings HTTP/1.1\r\nHost: localhost:${port}\r\nOrigin: http://localhost:${port}\r\nSec-Fetch-Site: same-origin\r\nContent-Length: 2\r\n\r\n{}`);
  expect(home.status === 422, `from a page of our own: ${home.status}`);
});
await check('no answer lets a page of another site read it (Fetch Standard, CORS protocol)', async () => {
  const asked = 'Origin: http://evil.example\r\nAccess-Control-Request-Method: POST\r\n';
  for (const bytes of [get('/api/v1/floor', asked), `OPTIONS /api/v1/readings HTTP/1.1\r\n${HOST}${asked}\r\n`]) {
    const answer = await answerOf(port, bytes);
    expect(!answer.lines.some((line) => /^access-control/i.test(line)), answer.lines.join('|'));
  }
});
await check('every answer, refusals too, tells the browser not to guess its type and not to be framed (WHATWG Fetch, CSP level 3)', async () => {
  for (const bytes of [get('/'), get('/healthz'), get('/none'), get('/%'), 'x\r\n\r\n']) {
    const { headers } = await answerOf(port, bytes);
    expect(headers['x-content-type-options'] === 'nosniff' && headers['content-security-policy'].includes("frame-ancestors 'none'"), JSON.stringify(headers));
  }
});
await check('an answer of 200 to HEAD has no body that a next answer could be hidden in (RFC 9110 9.3.2)', async () => {
  const raw = new Raw(port).send(`HEAD /api/v1/openapi.yaml HTTP/1.1\r\n${HOST}Connection: close\r\n\r\n`);
  await raw.over;
  const { answers, rest } = answersIn(raw.all(), true);
  expect(answers.length === 1 && rest.length === 0 && Number(answers[0].headers['content-length']) > 10000, raw.text().slice(0, 300));
});

// --- After all that.
await check('nothing of all that is in the database, and the daemon is well', async () => {
  await alive(port);
  expect(daemon.sql('SELECT count(*) FROM reading') === '0' && daemon.sql('SELECT count(*) FROM load') === '0', 'rows');
  const log = (await import('node:fs')).readFileSync(`${daemon.folder}/daemon.log`, 'utf8');
  expect(!/failed|error/i.test(log), log.slice(-600));
  expect((await daemon.stop()).code === 0, 'ends with code 0');
});

finish();
