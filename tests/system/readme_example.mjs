// The README's worked example: runs its command as printed there and compares the table below it; and the JSON
// form of the same run has every member that the README's result table names.
import { spawnSync } from 'node:child_process';
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { SOURCE, binary, check, expect, finish } from './support.mjs';

const BIN = binary();
const readme = readFileSync(join(SOURCE, 'README.md'), 'utf8');

// Indented blocks after the marker: the command, then what it prints.
const after = readme.slice(readme.indexOf('<!-- worked example'));
const blocks = [...after.matchAll(/(?:^ {4}.*\n|^\n(?= {4}))+/gm)].map((m) => m[0].replace(/^ {4}/gm, '').replace(/^\n+/, '').trimEnd());

function run(command) {
  const words = command.replace(/\\\n/g, ' ').trim().split(/\s+/);
  const ran = spawnSync(BIN, words.slice(1), { cwd: SOURCE, encoding: 'utf8', timeout: 30000 });
  expect(ran.status === 0, `exit ${ran.status}: ${ran.stderr}`);
  return ran.stdout;
}

await check('the worked example prints what the README shows', () => {
  expect(blocks[0].startsWith('build/server/hearthfront replay'), `first block is ${blocks[0]}`);
  const printed = run(blocks[0]).trimEnd().split('\n').map((line) => line.trimEnd()).join('\n');
  expect(printed === blocks[1].split('\n').map((line) => line.trimEnd()).join('\n'), `printed:\n${printed}\nREADME:\n${blocks[1]}`);
});

await check('the result document has the members the README names', () => {
  const result = JSON.parse(run(`${blocks[0]} --json`));
  for (const member of ['model_version', 'data_time', 'final', 'band', 'inputs', 'gaps', 'notes', 'items'])
    expect(member in result, `no ${member}`);
  for (const member of ['case_depth_mm', 'surface_carbon_wt_pct', 'total_depth_mm', 'depth_at_0p35_mm', 'depth_at_0p40_mm',
    'turnover_depth_mm', 'carbon_uptake_g_m2', 'balance_residual_relative', 'profile'])
    expect(member in result.items[0], `no items[].${member}`);
  expect(result.band === '5 to 95 %', result.band);
  const band = result.items[0].case_depth_band_mm;
  expect(band.low < band.median && band.median < band.high, JSON.stringify(band));
  expect(Math.abs(result.items[0].balance_residual_relative) < 1e-12, 'carbon is not conserved');
});

await check('the load document is the body the API takes', () => {
  const load = JSON.parse(readFileSync(join(SOURCE, 'config/demo/example/load.json'), 'utf8'));
  for (const member of Object.keys(load)) expect(readme.includes(`\`${member}\``) || readme.includes(`\`${member}[]\``), `README does not name ${member}`);
});

finish();
