// The pusher line of the INVENTED demo plant: one tray at each push, a load of its own on every tray, a log with a
// push counter. The line has always run: its log and its trays begin before those of the other furnaces.
import { randomSource, simulateZone } from './simulate.mjs';

export const LINE = 'line-7';
export const PUSH_MIN = 20;
// As in plant.toml: tray positions and set points of each zone, in order.
export const ZONES = [
  { id: 'heat', places: 4, temperature_degc: 900, carbon_potential_wt_pct: 0.5 },
  { id: 'boost-1', places: 10, temperature_degc: 930, carbon_potential_wt_pct: 1.05 },
  { id: 'boost-2', places: 8, temperature_degc: 930, carbon_potential_wt_pct: 1.05 },
  { id: 'diffuse', places: 5, temperature_degc: 920, carbon_potential_wt_pct: 0.8 },
  { id: 'equalize', places: 3, temperature_degc: 850, carbon_potential_wt_pct: 0.75 },
];
export const PLACES = ZONES.reduce((sum, zone) => sum + zone.places, 0);
export const THROUGH_MIN = PLACES * PUSH_MIN;

const iso = (ms) => new Date(ms).toISOString().replace('.000Z', 'Z');

// What every tray carries; parts and recipe are invented.
const body = (name, started_ms) => ({
  name,
  furnace: LINE,
  person: 'Line shift',
  started_at: iso(started_ms),
  charge_temperature_degc: 20,
  quench: { temperature_degc: 60, tempering: { temperature_degc: 180, hours: 2 } },
  recipe: {
    name: 'invented: line, case 0.9 mm',
    segments: ZONES.map((zone) => ({
      name: zone.id,
      duration_min: zone.places * PUSH_MIN,
      temperature_degc: zone.temperature_degc,
      carbon_potential_wt_pct: zone.carbon_potential_wt_pct,
    })),
  },
  items: [
    {
      name: 'A',
      part: 'axle pinion',
      quantity: 48,
      steel: '20MnCr5',
      section: { shape: 'cylinder', diameter_mm: 32 },
      criterion: { kind: 'hardness_hv', limit_hv: 550, martensite_pct: 95 },
      case_depth_window_mm: [0.75, 1.1],
      surface_carbon_window_wt_pct: [0.65, 0.9],
      grinding_stock_mm: 0.1,
      lag_min: 25,
    },
  ],
});

// A tray for each push from a full line before `start_ms` on, as long as it is through within `hours`.
export function lineEntries(start_ms, hours) {
  const entries = [];
  for (let push = -PLACES; (push + PLACES) * PUSH_MIN < hours * 60; push++) {
    const start_min = push * PUSH_MIN;
    const end_min = start_min + THROUGH_MIN;
    entries.push({
      body: body(`T${String(push + PLACES + 1).padStart(3, '0')}`, start_ms + start_min * 60000),
      start_min,
      end_min,
      ended_at: iso(start_ms + end_min * 60000),
      pushed: true,
    });
  }
  return entries;
}

// The path of one tray, as the pushes take it: for replay.
export function linePath(entry, start_ms) {
  let at_min = entry.start_min;
  return ZONES.map((zone) => {
    const step = { from: iso(start_ms + at_min * 60000), furnace: LINE, chamber: zone.id };
    at_min += zone.places * PUSH_MIN;
    return step;
  });
}

export function lineLog(start_ms, hours, seed) {
  const before_min = THROUGH_MIN + 10;
  const minutes = before_min + hours * 60;
  const zones = ZONES.map((zone, i) => simulateZone({ ...zone, minutes, seed: seed + 31 * (i + 1) }));
  const random = randomSource(seed);
  const header = ['time', ...ZONES.flatMap((zone) => [`${zone.id} C`, `${zone.id} CP`]), 'pushes'];
  const lines = [header.join(',')];
  for (let minute = -before_min; minute < minutes - before_min; minute++) {
    const cells = zones.flatMap((zone) => {
      const sample = zone.next().value;
      return [sample.temperature_degc.toFixed(1), sample.carbon_potential_wt_pct.toFixed(3)];
    });
    const second = Math.floor(random.uniform() * 3);
    // The contact closes at the push itself; the counter is read each minute.
    const pushes = Math.floor((minute + THROUGH_MIN + 2 * PUSH_MIN) / PUSH_MIN);
    const pushNow = (minute + THROUGH_MIN) % PUSH_MIN === 0;
    const time = iso(start_ms + minute * 60000 + (pushNow ? 0 : second * 1000));
    lines.push([time, ...cells, pushes].join(','));
  }
  return lines.join('\n') + '\n';
}
