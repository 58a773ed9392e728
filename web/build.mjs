// Bundles src/ into dist/: index.html, one script and one style sheet with the hash of their content in
// the name (so the daemon may let browsers keep them for ever), and the icon. Needs no network.
// A failed build leaves dist/ as it was and exits with 1.
import { createHash } from 'node:crypto';
import { mkdirSync, readFileSync, readdirSync, rmSync, writeFileSync } from 'node:fs';
import { basename, dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { gzipSync } from 'node:zlib';
import { build } from 'esbuild';

const here = dirname(fileURLToPath(import.meta.url));
const dist = join(here, 'dist');
const limitBytes = 120_000;  // script and style over the wire (design section 11)

const result = await build({
  absWorkingDir: here,
  entryPoints: [{ in: 'src/main.tsx', out: 'hearthfront' }],
  outdir: dist,
  entryNames: '[name]-[hash]',
  bundle: true,
  minify: true,
  format: 'esm',
  target: ['es2021'],
  jsx: 'automatic',
  jsxImportSource: 'preact',
  legalComments: 'none',
  write: false,
}).catch(() => process.exit(1));

const icon = readFileSync(join(here, 'src/icon.svg'));
const iconName = `icon-${createHash('sha256').update(icon).digest('hex').slice(0, 8).toUpperCase()}.svg`;
const script = result.outputFiles.find((file) => file.path.endsWith('.js'));
const style = result.outputFiles.find((file) => file.path.endsWith('.css'));

mkdirSync(dist, { recursive: true });
for (const old of readdirSync(dist)) rmSync(join(dist, old), { recursive: true });
let total = 0;
for (const file of [script, style]) {
  writeFileSync(file.path, file.contents);
  const packed = gzipSync(file.contents, { level: 9 }).length;
  total += packed;
  console.log(`${basename(file.path)}  ${file.contents.length} bytes, ${packed} gzip`);
}
writeFileSync(join(dist, iconName), icon);
writeFileSync(join(dist, 'index.html'), readFileSync(join(here, 'src/index.html'), 'utf8')
  .replace('{{icon}}', iconName)
  .replace('{{style}}', basename(style.path))
  .replace('{{script}}', basename(script.path)));
console.log(`script and style together ${total} bytes gzip (limit ${limitBytes})`);
if (total > limitBytes) process.exit(1);
