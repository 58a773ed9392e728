// DEVELOPMENT ONLY: serves dist/ as it was just built and passes /api on to a running daemon, so that the
// dashboard can be worked on without building the daemon anew. Loopback only.
//   node dev/front.mjs [--port 8091] [--daemon http://127.0.0.1:8473]
import { createReadStream, existsSync } from 'node:fs';
import { createServer, request as ask } from 'node:http';
import { dirname, extname, join, normalize } from 'node:path';
import { fileURLToPath } from 'node:url';

const argument = (name, otherwise) => { const i = process.argv.indexOf(`--${name}`); return i > 0 ? process.argv[i + 1] : otherwise; };
const port = Number(argument('port', 8091)), daemon = argument('daemon', 'http://127.0.0.1:8473');
const dist = join(dirname(fileURLToPath(import.meta.url)), '../dist');
const types = { '.html': 'text/html; charset=utf-8', '.js': 'text/javascript', '.css': 'text/css', '.svg': 'image/svg+xml' };
const policy = "default-src 'self'; style-src 'self'; frame-ancestors 'none'; base-uri 'none'";

createServer((request, response) => {
  const path = new URL(request.url, 'http://localhost').pathname;
  if (path.startsWith('/api/')) {
    const passed = ask(new URL(request.url, daemon), { method: request.method, headers: { ...request.headers, host: new URL(daemon).host, origin: daemon } }, (answer) => {
      response.writeHead(answer.statusCode ?? 502, answer.headers);
      answer.pipe(response);
    });
    passed.on('error', () => response.destroy());
    response.on('close', () => passed.destroy());
    request.pipe(passed);
    return;
  }
  const place = normalize(join(dist, path === '/' ? '/index.html' : path));
  if (!place.startsWith(dist) || !existsSync(place)) { response.writeHead(404).end(); return; }
  response.writeHead(200, { 'content-type': types[extname(place)] ?? 'application/octet-stream', 'content-security-policy': policy });
  createReadStream(place).pipe(response);
}).listen(port, '127.0.0.1', () => console.log(`dist at http://127.0.0.1:${port}/ with the figures of ${daemon}`));
