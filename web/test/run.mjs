// Bundles every test/*.test.ts for the running Node and hands the results to its own test runner.
import { spawnSync } from 'node:child_process';
import { readdirSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { build } from 'esbuild';

const here = dirname(fileURLToPath(import.meta.url));
const out = join(here, '../.esbuild');
const names = readdirSync(here).filter((name) => name.endsWith('.test.ts'));
await build({ entryPoints: names.map((name) => join(here, name)), outdir: out, outExtension: { '.js': '.mjs' }, bundle: true, platform: 'node', format: 'esm', target: 'node18', logLevel: 'warning' });
const ran = spawnSync(process.execPath, ['--test', ...names.map((name) => join(out, name.replace(/\.ts$/, '.mjs')))], { stdio: 'inherit' });
process.exit(ran.status ?? 1);
