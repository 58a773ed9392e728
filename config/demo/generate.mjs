#!/usr/bin/env node
// Writes the logs of the INVENTED demo plant: one CSV file for each furnace of plant.toml, the load bodies moved
// to the same days, and the schedule that play.mjs follows. The files in loads/ are one day's work; the day
// repeats with new load numbers. Same seed and start: same bytes. Needs node 18 or newer, nothing else.
//
//   node generate.mjs --out FOLDER [--start 2026-03-02T00:00:00Z] [--hours 48] [--seed 2606]
//
// Told on purpose: batch-4 loses 25 minutes each day from 06:10, and pit-2 delivers the rows of 10:30 to 10:50
// late, after that of 10:58 (day times count from the start).

import { mkdirSync, readFileSync, readdirSync, writeFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { probeEmf_mV } from './gas.mjs';
import { LINE, lineEntries, lineLog, linePath } from './line.mjs';
import { randomSource, simulateFurnace } from './simulate.mjs';

const here = dirname(fileURLToPath(import.meta.url));
const FIRST_DAY_MS = Date.parse('2026-03-02T00:00:00Z'); // the day the files in loads/ are written for
const DAY_MIN = 1440;

export const iso = (ms) => new Date(ms).toISOString().replace('.000Z', 'Z');

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

const decimalComma = (value, digits) => value.toFixed(digits).replace('.', ',');
const two = (number) => String(number).padStart(2, '0');

// One logger each: header lines and how a sample becomes a row.
const LOGGERS = {
  'pit-2': {
    second: 0,
    header: ['time,emf_mV,CO_pct,temp_C'],
    simulation: { load_lag_min: 18, load_mass_ratio: 0.28 },
    row(time_ms, sample, random) {
      const emf = probeEmf_mV(sample.carbon_potential_wt_pct, sample.co_fraction, sample.temperature_degc);
      const shown = emf + 0.5 * random.normal();
      const co = (100 * sample.co_fraction).toFixed(2);
      return `${iso(time_ms)},${shown.toFixed(1)},${co},${sample.temperature_degc.toFixed(1)}`;
    },
  },
  'batch-4': {
    second: 12,
    header: ['Invented demo logger; decimal comma; local time is UTC plus one hour', 'Local time;Furnace F;Carbon;Door'],
    simulation: { load_lag_min: 15, load_mass_ratio: 0.22 },
    row(time_ms, sample) {
      const local = new Date(time_ms + 3600000);
      const day = `${two(local.getUTCDate())}.${two(local.getUTCMonth() + 1)}.${local.getUTCFullYear()}`;
      const clock = `${two(local.getUTCHours())}:${two(local.getUTCMinutes())}:${two(local.getUTCSeconds())}`;
      const fahrenheit = sample.temperature_degc * 1.8 + 32;
      return `${day} ${clock};${decimalComma(fahrenheit, 1)};${decimalComma(sample.carbon_potential_wt_pct, 3)};0`;
    },
  },
  'batch-5': {
    second: 31,
    header: ['time,control_C,load_C,carbon_wt_pct,fan_rpm'],
    simulation: { load_lag_min: 21, load_mass_ratio: 0.3 },
    row(time_ms, sample) {
      // The load thermocouple is unplugged between loads: an empty cell, not a zero.
      const inLoad = sample.load_temperature_degc === null ? '' : sample.load_temperature_degc.toFixed(1);
      const carbon = sample.carbon_potential_wt_pct.toFixed(3);
      return `${iso(time_ms)},${sample.temperature_degc.toFixed(1)},${inLoad},${carbon},1450`;
    },
  },
  'twin-6': {
    second: 44,
    header: ['time;heat C;heat CP;second C;second CP'],
    chambers: {
      heating: { load_lag_min: 17, load_mass_ratio: 0.26 },
      second: { load_lag_min: 17, load_mass_ratio: 0.2, arrives_degc: 900, gas_kept: 0.9 },
    },
    row(time_ms, heating, second) {
      const cells = [heating, second].flatMap((s) => [s.temperature_degc.toFixed(1), s.carbon_potential_wt_pct.toFixed(3)]);
      return [iso(time_ms), ...cells].join(';');
    },
  },
};

// The stretches of loads that one chamber sees, with the segments run there.
function chamberStays(entries, chamber) {
  const stays = [];
  for (const entry of entries) {
    const cuts = [{ after_min: 0, chamber: entry.body.chamber }, ...entry.moves, { after_min: Infinity }];
    let at_min = 0;
    const segments = entry.body.recipe.segments.map((segment) => {
      const begin_min = at_min;
      at_min += segment.duration_min;
      return { ...segment, begin_min };
    });
    for (let i = 0; i + 1 < cuts.length; i++) {
      if (cuts[i].chamber !== chamber) continue;
      const here = segments.filter((s) => s.begin_min >= cuts[i].after_min && s.begin_min < cuts[i + 1].after_min);
      stays.push({
        start_min: entry.start_min + cuts[i].after_min,
        end_min: Math.min(entry.end_min, entry.start_min + cuts[i + 1].after_min),
        segments: here,
      });
    }
  }
  return stays;
}

function twoChamberLog(logger, entries, start_ms, hours, seed) {
  const each = Object.entries(logger.chambers).map(([chamber, simulation], i) =>
    simulateFurnace({ ...simulation, loads: chamberStays(entries, chamber), minutes: hours * 60, seed: seed + 17 * i }));
  const lines = [...logger.header];
  for (let minute = 0; minute < hours * 60; minute++) {
    const samples = each.map((simulation) => simulation.next().value);
    lines.push(logger.row(start_ms + minute * 60000 + logger.second * 1000, ...samples));
  }
  return lines.join('\n') + '\n';
}

export const FURNACES = [...Object.keys(LOGGERS), LINE];

export const GAP = { furnace: 'batch-4', from_min: 370, to_min: 395 };
export const LATE = { furnace: 'pit-2', from_min: 630, to_min: 651, delivered_min: 658 };

// The text of one furnace's log.
export function furnaceLog(id, entries, start_ms, hours, seed) {
  if (id === LINE) return lineLog(start_ms, hours, seed);
  const logger = LOGGERS[id];
  const order = Object.keys(LOGGERS).indexOf(id);
  const random = randomSource(seed + 7919 * (order + 1));
  const loads = entries
    .filter((entry) => entry.body.furnace === id)
    .map((entry) => ({ ...entry, segments: entry.body.recipe.segments }));
  if (logger.chambers) return twoChamberLog(logger, entries.filter((e) => e.body.furnace === id), start_ms, hours, seed + order);
  const lines = [...logger.header];
  const held = [];
  const samples = simulateFurnace({ ...logger.simulation, loads, minutes: hours * 60, seed: seed + order });
  for (const sample of samples) {
    const row = logger.row(start_ms + sample.minute * 60000 + logger.second * 1000, sample, random);
    const minute = sample.minute % DAY_MIN;
    if (id === GAP.furnace && minute >= GAP.from_min && minute < GAP.to_min) continue;
    if (id === LATE.furnace && minute >= LATE.from_min && minute < LATE.to_min) {
      held.push(row);
      continue;
    }
    lines.push(row);
    if (id === LATE.furnace && minute === LATE.delivered_min) lines.push(...held.splice(0));
  }
  lines.push(...held);
  return lines.join('\n') + '\n';
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
