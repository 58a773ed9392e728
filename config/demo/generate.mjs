#!/usr/bin/env node
// Writes the logs of the INVENTED demo plant: one CSV file for each furnace of plant.toml, the load bodies moved
// to the same days, and the schedule that play.mjs follows. The files in loads/ are one day's work; the day
// repeats with new load numbers. Same seed and start: same bytes. Needs node 18 or newer, nothing else.
//
//   node generate.mjs --out FOLDER [--start 2026-03-02T00:00:00Z] [--hours 48] [--seed 2606]
//
// What goes wrong on purpose is told in furnace_logs.mjs.

import { mkdirSync, readFileSync, readdirSync, writeFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { FURNACES, furnaceLog, iso } from './furnace_logs.mjs';
import { LINE, lineEntries, linePath } from './line.mjs';

const here = dirname(fileURLToPath(import.meta.url));
const FIRST_DAY_MS = Date.parse('2026-03-02T00:00:00Z'); // the day the files in loads/ are written for
const DAY_MIN = 1440;

export const loadMinutes = (load) => load.recipe.segments.reduce((sum, part) => sum + part.duration_min, 0);

// The day's loads, in order of time.
export function readLoads() {
  return readdirSync(join(here, 'loads'))
    .filter((name) => name.endsWith('.json'))
    .map((name) => JSON.parse(readFileSync(join(here, 'loads', name), 'utf8')))
    .sort((a, b) => Date.parse(a.started_at) - Date.parse(b.started_at) || a.name.localeCompare(b.name));
}

// The stays of a load as its file tells them: where it began and where it moved.
export function pathOf(entry, start_ms) {
  if (entry.body.furnace === LINE) return linePath(entry, start_ms);
  const begin = { from: entry.body.started_at, furnace: entry.body.furnace, chamber: entry.body.chamber ?? 'main' };
  return [begin, ...entry.moves.map((move) => ({ from: move.at, furnace: entry.body.furnace, chamber: move.chamber }))];
}

// Every load that ends within `hours`, moved to `start_ms`, with a number of its own.
export function schedule(start_ms, hours) {
  const day = readLoads();
  const entries = [];
  for (let index = 0; index * 24 < hours; index++) {
    for (const load of day) {
      const begin_min = index * DAY_MIN + (Date.parse(load.started_at) - FIRST_DAY_MS) / 60000;
      const end_min = begin_min + loadMinutes(load);
      if (end_min > hours * 60) continue;
      const { moves = [], ...rest } = load;
      const body = { ...rest, name: String(Number(load.name) + index * day.length) };
      body.started_at = iso(start_ms + begin_min * 60000);
      entries.push({
        body,
        start_min: begin_min,
        end_min,
        ended_at: iso(start_ms + end_min * 60000),
        moves: moves.map((move) => ({
          at: iso(start_ms + (begin_min + move.after_min) * 60000),
          after_min: move.after_min,
          chamber: move.chamber,
        })),
      });
    }
  }
  return [...entries, ...lineEntries(start_ms, hours)];
}

function options(words) {
  const chosen = { start: '2026-03-02T00:00:00Z', hours: '48', seed: '2606' };
  for (let i = 0; i < words.length; i += 2) {
    const name = words[i].replace(/^--/, '');
    if (!['out', 'start', 'hours', 'seed'].includes(name) || words[i + 1] === undefined) {
      throw new Error(`I do not know "${words[i]}" here. Use --out FOLDER --start TIME --hours N --seed N.`);
    }
    chosen[name] = words[i + 1];
  }
  const start_ms = Date.parse(chosen.start);
  const [hours, seed] = [Number(chosen.hours), Number(chosen.seed)];
  if (!chosen.out) throw new Error('Say where the files go: --out FOLDER.');
  if (!Number.isFinite(start_ms)) throw new Error(`--start "${chosen.start}" is no time such as 2026-03-02T00:00:00Z.`);
  if (!(Number.isInteger(hours) && hours >= 1 && hours <= 2000)) throw new Error('--hours must be 1 to 2000.');
  if (!Number.isInteger(seed)) throw new Error('--seed must be a whole number.');
  return { out: chosen.out, start_ms, hours, seed };
}

function main() {
  const { out, start_ms, hours, seed } = options(process.argv.slice(2));
  mkdirSync(join(out, 'loads'), { recursive: true });
  const entries = schedule(start_ms, hours);
  for (const id of FURNACES) {
    writeFileSync(join(out, `${id}.csv`), furnaceLog(id, entries, start_ms, hours, seed));
  }
  for (const entry of entries) {
    const { body, ended_at } = entry;
    const file = join(out, 'loads', `${body.furnace}-${body.name}.json`);
    writeFileSync(file, JSON.stringify({ ...body, ended_at, path: pathOf(entry, start_ms) }, null, 2) + '\n');
  }
  const plan = {
    note: 'Invented demo plant.',
    start: iso(start_ms),
    end: iso(start_ms + hours * 3600000),
    seed,
    loads: entries.map(({ body, ended_at, moves = [], pushed = false }) => ({ body, ended_at, moves, pushed })),
  };
  writeFileSync(join(out, 'schedule.json'), JSON.stringify(plan, null, 1) + '\n');
  console.log(`Wrote ${hours} h of invented logs for ${FURNACES.length} furnaces and ` +
    `${entries.length} loads to ${out}.`);
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  try {
    main();
  } catch (error) {
    console.error(`generate: ${error.message}`);
    process.exit(2);
  }
}
