// A made-up plant for working on the dashboard without the daemon. EVERY figure here is invented: depths
// follow a square root of time and profiles a half bell, nothing is solved. Never a source of numbers.
const minute = 60_000;

export const steels = [
  { id: '20MnCr5', standard: 'EN 10084 / ISO 683-3', composition_wt_pct: { C: 0.20, Mn: 1.25, Cr: 1.15, Ni: 0, Mo: 0, Si: 0.25 }, alloy_factor_k: 1.02, diffusivity_factor: 1 },
  { id: '18CrNiMo7-6', standard: 'EN 10084 / ISO 683-3', composition_wt_pct: { C: 0.18, Mn: 0.7, Cr: 1.65, Ni: 1.55, Mo: 0.3, Si: 0.25 }, alloy_factor_k: 1.03, diffusivity_factor: 1 },
  { id: '16MnCr5', standard: 'EN 10084 / ISO 683-3', composition_wt_pct: { C: 0.16, Mn: 1.15, Cr: 0.95, Ni: 0, Mo: 0, Si: 0.25 }, alloy_factor_k: 1.01, diffusivity_factor: 1 },
];

export const furnaces = [
  { id: 'pit-1', name: 'Pit 1', chambers: [{ id: 'main', name: 'Main' }] },
  { id: 'pit-2', name: 'Pit 2', chambers: [{ id: 'main', name: 'Main' }] },
  { id: 'batch-1', name: 'Batch 1', chambers: [{ id: 'main', name: 'Main' }] },
  { id: 'batch-2', name: 'Batch 2', chambers: [{ id: 'main', name: 'Main' }] },
  { id: 'twin-6', name: 'Twin 6', chambers: [{ id: 'heating', name: 'Heating chamber', places: 1 }, { id: 'second', name: 'Second chamber', places: 1 }] },
  { id: 'line-3', name: 'Line 3', line: true, chambers: [{ id: 'heat', name: 'Heat', places: 6 }, { id: 'boost', name: 'Boost', places: 13 }, { id: 'diffuse', name: 'Diffuse', places: 8 }, { id: 'equalize', name: 'Equalize', places: 3 }] },
  { id: 'batch-3', name: 'Batch 3', chambers: [{ id: 'main', name: 'Main' }] },
  { id: 'ring-1', name: 'Ring 1', chambers: [{ id: 'main', name: 'Main' }] },
  { id: 'ring-2', name: 'Ring 2', chambers: [{ id: 'main', name: 'Main' }] },
].map((furnace) => ({ process: 'gas carburizing', line: false, lag_min: 20, csv_mappings: ['logger'], open_loads: [], ...furnace, chambers: furnace.chambers.map((each) => ({ places: 1, ...each })) }));
export const furnaceOf = (id) => furnaces.find((each) => each.id === id);
export const chamberOf = (furnace, id) => furnaceOf(furnace)?.chambers.find((each) => each.id === id);

const recipe = (boost, diffuse) => ({ name: `boost ${boost} diffuse ${diffuse}`, segments: [
  { name: 'heat', duration_min: 45, temperature_degc: 930, carbon_potential_wt_pct: 0.4 },
  { name: 'boost', duration_min: boost, temperature_degc: 930, carbon_potential_wt_pct: 1.1 },
  { name: 'diffuse', duration_min: diffuse, temperature_degc: 930, carbon_potential_wt_pct: 0.8 },
  { name: 'equalize', duration_min: 30, temperature_degc: 850, carbon_potential_wt_pct: 0.75 },
] });
const grounded = { name: 'case to depth', segments: [
  { name: 'heat', duration_min: 45, temperature_degc: 930, carbon_potential_wt_pct: 0.4, tolerance_min: 10 },
  { name: 'boost', duration_min: 140, temperature_degc: 930, carbon_potential_wt_pct: 1.1, tolerance_min: 10, ramp_min: 15, until: { kind: 'case_depth', item: 'A', depth_mm: 0.85 }, longest_min: 300 },
  { name: 'diffuse', duration_min: 60, temperature_degc: 930, carbon_potential_wt_pct: 0.8, tolerance_min: 10, until: { kind: 'surface_carbon', item: 'A', wt_pct: 0.78 }, longest_min: 150 },
  { name: 'equalize', duration_min: 30, temperature_degc: 850, carbon_potential_wt_pct: 0.75, tolerance_min: 10, ramp_min: 25 },
] };
const lineRecipe = { name: 'line, 14 min pace', segments: [
  { name: 'heat', duration_min: 84, temperature_degc: 920, carbon_potential_wt_pct: 0.4 }, { name: 'boost', duration_min: 182, temperature_degc: 925, carbon_potential_wt_pct: 1.05 },
  { name: 'diffuse', duration_min: 112, temperature_degc: 910, carbon_potential_wt_pct: 0.8 }, { name: 'equalize', duration_min: 42, temperature_degc: 850, carbon_potential_wt_pct: 0.75 }] };
const item = (name, part, steel, window, thickness, quantity = 36) => ({ name, part, quantity, steel,
  section: { shape: 'plate', thickness_mm: thickness }, criterion: { kind: 'hardness_hv', limit_hv: 550, martensite_pct: 95 },
  case_depth_window_mm: window, surface_carbon_window_wt_pct: [0.7, 0.85] });

// `trouble` is what the mock pretends about the load's readings.
export function openingLoads(nowMs) {
  const load = (id, furnace, name, minutesAgo, plan, items, trouble, chamber = 'main') => ({ id, trouble, ended_at: null, revision: 1, notes: [], definition: {
    name, furnace, chamber, film_min: 0, quench: { temperature_degc: 60, tempering: { temperature_degc: 180, hours: 2 } }, person: 'Morning shift', started_at: new Date(nowMs - minutesAgo * minute).toISOString().slice(0, 19) + 'Z', recipe: plan, items } });
  const tray = (place) => load(100 + place, 'line-3', String(4200 + 31 - place), 14 * place, lineRecipe, [item('A', place % 3 ? 'layshaft gear' : 'idler gear', '16MnCr5', [0.6, 0.85], 16, 60)],
    { 9: 'held', 17: 'disagree', 24: 'stale' }[place] ?? 'none', place <= 6 ? 'heat' : place <= 19 ? 'boost' : place <= 27 ? 'diffuse' : 'equalize');
  const line = Array.from({ length: 30 }, (_, i) => i + 1).filter((place) => ![4, 13, 28].includes(place)).map((place) => ({ ...tray(place), place }));
  return [...line,
    load(7, 'twin-6', '2297', 205, grounded, [{ ...item('A', 'sun gear', '18CrNiMo7-6', [0.8, 1.05], 22), grinding_stock_mm: 0.15 }], 'doubt', 'second'),
    load(8, 'twin-6', '2298', 62, recipe(180, 60), [item('A', 'planet gear', '20MnCr5', [0.9, 1.2], 30)], 'none', 'heating'),
    load(1, 'pit-2', '2291', 190, recipe(240, 90), [item('A', 'ring gear', '18CrNiMo7-6', [0.95, 1.25], 24)], 'stale'),
    load(2, 'batch-1', '2293', 118, recipe(150, 60), [item('A', 'pinion shaft', '20MnCr5', [0.6, 0.8], 20), item('B', 'thrust washer', '16MnCr5', [0.4, 0.6], 3, 400), item('C', 'coupling pin', '20MnCr5', [0.7, 0.9], 12, 80)], 'held'),
    load(3, 'batch-2', '2294', 70, recipe(200, 80), [item('A', 'cam disc', '16MnCr5', [0.7, 0.9], 16)], 'planned'),
    load(4, 'pit-1', '2290', 455, recipe(240, 90), [item('A', 'planet gear', '20MnCr5', [0.9, 1.2], 30)], 'overdue'),
    load(5, 'ring-1', '2295', 4, recipe(120, 45), [item('A', 'small bevel gear', '20MnCr5', [0.5, 0.7], 14)], 'no data yet'),
    load(6, 'batch-3', '2296', 150, recipe(240, 90), [item('A', 'planet gear', '20MnCr5', [0.9, 1.2], 30)], 'miss'),
  ];
}

export function segmentAt(load, nowMs) {
  const elapsed = (nowMs - Date.parse(load.definition.started_at)) / minute;
  const segments = load.definition.recipe.segments;
  let begun = 0;
  for (let index = 0; index < segments.length; ++index) {
    const { name, duration_min: duration } = segments[index];
    const last = index === segments.length - 1;
    if (elapsed < begun + duration || last) {
      return { index, name, elapsed_min: elapsed - begun, minutes_left: begun + duration - elapsed, overdue: last && elapsed > begun + duration, started_at: new Date(nowMs - (elapsed - begun) * minute).toISOString().slice(0, 19) + 'Z',
        by: load.trouble === 'none' || load.trouble === 'miss' ? 'readings' : segments[index].until ? 'model' : 'recipe time', long_by_min: Math.max(0, elapsed - begun - duration - 10),
        doubt: load.trouble === 'doubt' ? 'Unsure where the recipe is: the readings fit the end of boost and the start of diffuse alike. Recipe time decides.' : null };
    }
    begun += duration;
  }
  return null;
}
export const plannedMinutes = (load) => load.definition.recipe.segments.reduce((sum, each) => sum + each.duration_min, 0);

function depthAt(item, elapsedMin) {
  const hot = Math.max(0, elapsedMin - 30);
  return hot === 0 ? null : 0.062 * Math.sqrt(hot) * (item.steel === '16MnCr5' ? 0.93 : 1);
}
const surfaceAt = (elapsedMin) => 0.2 + 0.85 * (1 - Math.exp(-Math.max(0, elapsedMin - 20) / 60)) - Math.max(0, elapsedMin - 300) * 0.0015;
const turnoverAt = (elapsedMin) => (elapsedMin > 290 ? 0.02 * Math.sqrt(elapsedMin - 290) + 0.03 : null);

function profileOf(item, elapsedMin, points) {
  const end = item.section.thickness_mm ? item.section.thickness_mm / 2 : 8;
  const depth = depthAt(item, elapsedMin) ?? 0.02, surface = surfaceAt(elapsedMin), core = 0.2;
  const width = depth / Math.sqrt(-Math.log(0.17 / Math.max(0.2, surface - core)));
  const depth_mm = [], carbon_wt_pct = [];
  for (let i = 0; i < points; ++i) {
    const x = Math.min(end, 8) * (i / (points - 1)) ** 2;
    depth_mm.push(Number(x.toFixed(5)));
    carbon_wt_pct.push(Number((core + (surface - core) * Math.exp(-((x / width) ** 2))).toFixed(4)));
  }
  return { depth_mm, carbon_wt_pct };
}

// A made-up fall from the surface to the core; carries no physics.
function hardnessOf(item, elapsedMin) {
  const { depth_mm, carbon_wt_pct } = profileOf(item, elapsedMin, 60);
  const austenite = carbon_wt_pct.map((c) => Number((4 + 34 * Math.max(0, c - 0.45) ** 1.4).toFixed(2)));
  const hv = carbon_wt_pct.map((c, i) => Number((300 + 620 * (1 - Math.exp(-2.4 * (c - 0.15))) - 4.5 * Math.max(0, austenite[i] - 8)).toFixed(1)));
  return { surface_hv: hv[0], surface_hrc: 60.4, surface_retained_austenite_pct: austenite[0], depth_mm, hv, retained_austenite_pct: austenite, as: 'after quench to 60 degC and tempering 180 degC, 2 h; 95 % martensite',
    sources: [{ quantity: 'Ms at the surface', unit: 'degC', values: [{ source: 'Invented A', value: 152, used: true }, { source: 'Invented B', value: 171, used: false }] },
      { quantity: 'retained austenite at the surface', unit: '%', values: [{ source: 'Invented A', value: 22, used: true }, { source: 'Invented C', value: 27, used: false }] }] };
}

export function itemsAt(load, nowMs, points = 160) {
  const elapsed = (nowMs - Date.parse(load.definition.started_at)) / minute;
  return load.definition.items.map((each) => ({ name: each.name, part: each.part, quantity: each.quantity, steel: each.steel.name ?? each.steel, shape: each.section.shape,
    criterion: { ...each.criterion, carbon_limit_wt_pct: 0.37, text: each.criterion?.kind === 'carbon' ? `${each.criterion.limit_wt_pct} % C` : '550 HV at 95 % martensite' },
    case_depth_mm: depthAt(each, elapsed), case_depth_window_mm: each.case_depth_window_mm, surface_carbon_wt_pct: surfaceAt(elapsed),
    surface_carbon_window_wt_pct: each.surface_carbon_window_wt_pct ?? null, total_depth_mm: (depthAt(each, elapsed) ?? 0) * 1.7, turnover_depth_mm: turnoverAt(elapsed),
    depth_at_0p35_mm: null, depth_at_0p40_mm: null, carbon_uptake_g_m2: 3 * Math.sqrt(Math.max(0, elapsed)), balance_residual_relative: 3e-15,
    finished_case_depth_mm: depthAt(each, elapsed) === null ? null : Math.max(0, depthAt(each, elapsed) - (each.grinding_stock_mm ?? 0)), grinding_stock_mm: each.grinding_stock_mm ?? 0, hardness: hardnessOf(each, elapsed),
    part_temperature_degc: 930 - 910 * Math.exp(-elapsed / 20), outcome: load.trouble === 'planned' ? 'reached with note' : 'reached', profile: profileOf(each, elapsed, points) }));
}

export function inputsAt(load, nowMs) {
  const wobble = Math.sin(nowMs / 41_000) * 1.5;
  const guess = { stale: ['planned', 'planned'], held: ['measured', 'held'], planned: ['planned', 'held'], 'no data yet': ['planned', 'planned'], masked: ['measured', 'masked'] }[load.trouble] ?? ['measured', 'measured'];
  const age = { stale: 1500, held: 540, planned: 1300, 'no data yet': null }[load.trouble];
  return { temperature: { value_degc: 928.6 + wobble, basis: guess[0], age_s: guess[0] === 'measured' ? 20 : age ?? null },
    carbon_potential: { value_wt_pct: 1.08 + wobble / 150, basis: guess[1], age_s: guess[1] === 'measured' ? 20 : age ?? null, source: 'probe emf',
      sources: [{ source: 'probe emf', channels: ['probe_emf', 'temperature'], value_wt_pct: 1.08, basis: guess[1], leads: true }, { source: 'CO2', channels: ['co2', 'co'], value_wt_pct: load.trouble === 'disagree' || load.trouble === 'doubt' ? 0.93 : 1.06, basis: 'measured', leads: false }, { source: 'dew point', channels: ['dew_point'], value_wt_pct: null, basis: 'planned', leads: false }],
      disagreement_wt_pct: load.trouble === 'disagree' || load.trouble === 'doubt' ? 0.15 : 0.02, disagree: load.trouble === 'disagree' || load.trouble === 'doubt' } };
}
export const messageOf = (load) => ({ stale: 'Logger silent for 25 min: recipe values stand in.', held: 'Probe silent for 9 min: values held.', planned: 'Thermocouple channel silent for 22 min: recipe temperature assumed.' }[load.trouble] ?? null);
export const conditionOf = (load) => (load.ended_at ? 'ended' : ['stale', 'no data yet'].includes(load.trouble) ? load.trouble : 'live');
