// The loggers of the INVENTED demo plant: how each furnace's file looks, and the text of its log from the loads that
// were in it. Same loads, seed and start: same bytes. No files, no clock.
import { probeEmf_mV } from './gas.mjs';
import { LINE, lineLog } from './line.mjs';
import { randomSource, simulateFurnace } from './simulate.mjs';

const DAY_MIN = 1440;
export const iso = (ms) => new Date(ms).toISOString().replace('.000Z', 'Z');

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

// What is told on purpose, in minutes of each day from the start. Batch 4 loses rows; those of Pit 2 come late; and
// the heater of Batch 5 fails, so that the load that is in then would end too shallow.
export const GAP = { furnace: 'batch-4', from_min: 370, to_min: 395 };
export const LATE = { furnace: 'pit-2', from_min: 630, to_min: 651, delivered_min: 658 };
export const COLD = { furnace: 'batch-5', from_min: 180, to_min: 625, holds_degc: 895 };

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

// One chamber's log row by row, {minute, row}. `loads` as simulateFurnace takes them.
export function* furnaceRows(id, loads, start_ms, minutes, seed) {
  const logger = LOGGERS[id];
  const order = Object.keys(LOGGERS).indexOf(id);
  const random = randomSource(seed + 7919 * (order + 1));
  const troubles = id === COLD.furnace ? [COLD] : [];
  for (const sample of simulateFurnace({ ...logger.simulation, loads, troubles, minutes, seed: seed + order })) {
    yield { minute: sample.minute, row: logger.row(rowTime(id, start_ms, sample.minute), sample, random) };
  }
}

export const headerOf = (id) => LOGGERS[id].header;
export const rowTime = (id, start_ms, minute) => start_ms + minute * 60000 + LOGGERS[id].second * 1000;

// The text of one furnace's log.
export function furnaceLog(id, entries, start_ms, hours, seed) {
  if (id === LINE) return lineLog(start_ms, hours, seed);
  const own = entries.filter((entry) => entry.body.furnace === id);
  if (LOGGERS[id].chambers) {
    const order = Object.keys(LOGGERS).indexOf(id);
    return twoChamberLog(LOGGERS[id], own, start_ms, hours, seed + order);
  }
  const loads = own.map((entry) => ({ ...entry, segments: entry.body.recipe.segments }));
  const lines = [...headerOf(id)];
  const held = [];
  for (const { minute: since, row } of furnaceRows(id, loads, start_ms, hours * 60, seed)) {
    const minute = since % DAY_MIN;
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
