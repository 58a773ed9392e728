// Runs outlook.mjs against the invented plant that the dashboard is developed with (web/dev): its furnaces are in every
// trouble at once, and what is adopted or acknowledged there changes nothing for the other browser tests.
import { spawn, spawnSync } from 'node:child_process';
import { dirname, join } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import { fileURLToPath } from 'node:url';
import { freePort } from '../system/support.mjs';

const here = dirname(fileURLToPath(import.meta.url));
const port = await freePort();
const plant = spawn(process.execPath, [join(here, '../../web/dev/mock_server.mjs'), '--port', String(port)], { stdio: 'ignore' });
const url = `http://127.0.0.1:${port}`;
for (let i = 0; i < 100; i++) {
  if (await fetch(`${url}/healthz`).then(() => true, () => false)) break;
  await sleep(100);
}
const { status } = spawnSync(process.execPath, [join(here, 'outlook.mjs')], { stdio: 'inherit', env: { ...process.env, HEARTHFRONT_URL: url } });
plant.kill();
process.exit(status ?? 1);
