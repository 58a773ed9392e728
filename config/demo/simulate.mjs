// An invented furnace, minute by minute: a heater with a PI controller, the load as one lagging mass, a gas that
// follows its set point slowly, thermocouples and probes with noise. Enough to look like a log, no more: the
// figures are plausible, not measured. Deterministic from its seed; no clock, no files.
//
// A heater may fail: troubles [{from_min, to_min, holds_degc}] name the minutes of each day in which the furnace
// cannot hold more than that.

// Small counter-based generator (Weyl sequence through a 32-bit mixer): the same numbers on every machine.
export function randomSource(seed) {
  let state = seed >>> 0;
  const uniform = () => {
    state = (state + 0x9e3779b9) >>> 0;
    let word = state;
    word = Math.imul(word ^ (word >>> 16), 0x85ebca6b);
    word = Math.imul(word ^ (word >>> 13), 0xc2b2ae35);
    return ((word ^ (word >>> 16)) >>> 0) / 4294967296;
  };
  // The sum of twelve uniforms has variance 1: near enough to normal for noise, and without Math.log.
  const normal = () => {
    let sum = -6;
    for (let i = 0; i < 12; i++) sum += uniform();
    return sum;
  };
  return { uniform, normal };
}

const STEP_MIN = 1 / 6;
const IDLE = { temperature_degc: 870, carbon_potential_wt_pct: 0.35 }; // empty, hot, lean gas

const DAY_MIN = 1440;
const SINKS_K_PER_MIN = 0.6; // with part of the heater out; without any it would be 3

// Set points at `minute` for loads [{start_min, end_min, segments, plans}], in order of time. `plans`, where a load
// has some: [{at_min, from_min, segments}], oldest first; its segments count from at_min, and the controller runs
// them from from_min on.
function setPoint(loads, minute) {
  const load = loads.find((one) => minute >= one.start_min && minute < one.end_min);
  if (!load) return { load: null, ...IDLE };
  const plan = load.plans?.findLast((one) => minute >= one.from_min);
  const segments = plan?.segments ?? load.segments;
  let left = minute - (plan?.at_min ?? load.start_min);
  for (const segment of segments) {
    if (left < segment.duration_min) return { load, ...segment };
    left -= segment.duration_min;
  }
  return { load, ...segments.at(-1) };
}

// Yields one sample a minute: {minute, temperature_degc, load_temperature_degc | null,
// carbon_potential_wt_pct, co_fraction}, as the instruments show them (noise included).
// `arrives_degc`: how hot a load comes in; `gas_kept`: what of the gas is left after the door was open.
// `loads` is looked at minute by minute: what is added between two samples counts from then on.
export function* simulateFurnace({
  loads, minutes, seed, load_lag_min, load_mass_ratio, arrives_degc = 20, gas_kept = 0.45, troubles = [],
}) {
  const random = randomSource(seed);
  let furnace = IDLE.temperature_degc;
  let part = 20;
  let carbon = IDLE.carbon_potential_wt_pct;
  let co = 0.2;
  let integral = 0.37; // heater share that holds the idle temperature
  let wave = random.uniform() * 2 * Math.PI;
  let gasWave = random.uniform() * 2 * Math.PI;
  let current = null;
  let ceiling = Infinity; // what the heater can hold

  for (let minute = 0; minute < minutes; minute++) {
    const trouble = troubles.find((one) => minute % DAY_MIN >= one.from_min && minute % DAY_MIN < one.to_min);
    for (let step = 0; step < 6; step++) {
      const wanted = setPoint(loads, minute + step * STEP_MIN);
      if (wanted.load !== current) {
        if (wanted.load) {
          part = arrives_degc; // a load goes in ...
          carbon *= gas_kept; // ... and air comes in with it
          co *= 0.8;
        }
        current = wanted.load;
      }
      if (!trouble) ceiling = Infinity;
      else if (ceiling === Infinity) ceiling = Math.max(furnace, trouble.holds_degc);
      else ceiling = Math.max(ceiling - SINKS_K_PER_MIN * STEP_MIN, trouble.holds_degc);
      const error = Math.min(wanted.temperature_degc, ceiling) - furnace;
      const heat = Math.min(1, Math.max(0, integral + 0.06 * error));
      if (Math.abs(error) < 30) integral = Math.min(0.8, Math.max(0.1, integral + 0.0025 * error * STEP_MIN));
      const toLoad = current ? (load_mass_ratio / load_lag_min) * (furnace - part) : 0;
      furnace += STEP_MIN * (9 * heat - 0.0037 * (furnace - 20) - toLoad);
      if (current) part += (STEP_MIN * (furnace - part)) / load_lag_min;
      // Enriching is quick, thinning out the furnace volume is slow.
      const lag = wanted.carbon_potential_wt_pct > carbon ? 8 : 17;
      carbon += (STEP_MIN * (wanted.carbon_potential_wt_pct - carbon)) / lag;
      co += (STEP_MIN * (0.2 - co)) / 12;
      wave += STEP_MIN * (2 * Math.PI) / 11 * (1 + 0.5 * random.normal());
      gasWave += STEP_MIN * (2 * Math.PI) / 7 * (1 + 0.5 * random.normal());
    }
    yield {
      minute,
      // The controller hunts: slow waves beside the white noise of thermocouple and probe.
      temperature_degc: furnace + 1.3 * Math.sin(wave) + 0.35 * random.normal(),
      load_temperature_degc: current ? part + 0.4 * random.normal() : null,
      carbon_potential_wt_pct: Math.max(0.05, carbon + 0.012 * Math.sin(gasWave) + 0.004 * random.normal()),
      co_fraction: co + 0.0012 * Math.sin(0.37 * gasWave) + 0.0004 * random.normal(),
    };
  }
}

// One zone of a continuous line: constant set points, the controller's waves, noise. The same form of samples.
export function* simulateZone({ temperature_degc, carbon_potential_wt_pct, minutes, seed }) {
  const random = randomSource(seed);
  let wave = random.uniform() * 2 * Math.PI;
  for (let minute = 0; minute < minutes; minute++) {
    wave += ((2 * Math.PI) / 13) * (1 + 0.4 * random.normal());
    yield {
      minute,
      temperature_degc: temperature_degc + 1.2 * Math.sin(wave) + 0.4 * random.normal(),
      carbon_potential_wt_pct: carbon_potential_wt_pct + 0.01 * Math.sin(0.6 * wave) + 0.004 * random.normal(),
    };
  }
}
