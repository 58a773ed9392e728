// From what was entered to the contract's documents. Only what the daemon could not even be asked is refused
// here; every rule of the trade is the daemon's.
import type { Criterion, ItemDefinition, LoadDefinition, Quench, RecipeSegment, Section, Stay, Until } from '../contract.ts';
import type { PartBody, RecipeBody } from '../contract_plant.ts';
import { type Draft, type DraftItem, type DraftQuench, type DraftSegment, type Entered, sizesOf, usualQuenchDegc } from './draft.ts';

export interface Said { field: string; detail: string }
export type Built<T, Name extends string> = { [key in Name]: T } | { said: Said };

// Reads numbers and remembers the first that cannot be sent.
class Numbers {
  said: Said | null = null;
  need(value: Entered, field: string, what: string): number {
    if (value === null) this.said ??= { field, detail: `${what} is empty. Enter a number.` };
    else if (Number.isNaN(value)) this.said ??= { field, detail: `${what} is not a number. Enter digits, with one comma or point.` };
    return value ?? 0;
  }
  may<Name extends string>(name: Name, value: Entered, field: string, what: string): { [key in Name]?: number } {
    return value === null ? {} : { [name]: this.need(value, field, what) } as { [key in Name]: number };
  }
}

const bare = (name: string): string => name.replace(/_(mm|wt_pct|min)$/, '').replaceAll('_', ' ');

function untilOf(segment: DraftSegment, at: string, of: string, numbers: Numbers): Until | null {
  if (segment.until === '') return null;
  const value = numbers.need(segment.untilValue, `${at}.until`, `What ends ${of}`);
  if (segment.until === 'part_temperature') return { kind: 'part_temperature', within_k: value };
  const item = segment.untilItem.trim() || 'A';
  return segment.until === 'case_depth' ? { kind: 'case_depth', item, depth_mm: value } : { kind: 'surface_carbon', item, wt_pct: value };
}

function segmentsOf(segments: readonly DraftSegment[], at: string, numbers: Numbers): RecipeSegment[] {
  return segments.map((segment, i) => {
    const here = `${at}.segments[${i}]`, of = `segment ${i + 1}`;
    const until = untilOf(segment, here, of, numbers);
    return {
      name: segment.name.trim(),
      duration_min: numbers.need(segment.duration_min, `${here}.duration_min`, `The time of ${of}`),
      temperature_degc: numbers.need(segment.temperature_degc, `${here}.temperature_degc`, `The temperature of ${of}`),
      carbon_potential_wt_pct: numbers.need(segment.carbon_potential_wt_pct, `${here}.carbon_potential_wt_pct`, `The carbon potential of ${of}`),
      ...numbers.may('ramp_min', segment.ramp_min, `${here}.ramp_min`, `The ramp of ${of}`),
      ...numbers.may('tolerance_min', segment.tolerance_min, `${here}.tolerance_min`, `The tolerance of ${of}`),
      ...(until ? { until, ...numbers.may('longest_min', segment.longest_min, `${here}.longest_min`, `The longest time of ${of}`) } : {}),
    };
  });
}

function quenchOf(quench: DraftQuench, at: string, numbers: Numbers): { quench?: Quench } {
  const tempers = quench.temper_degc !== null || quench.temper_h !== null;
  if (quench.temperature_degc === null && !tempers) return {};
  return { quench: {
    temperature_degc: numbers.need(quench.temperature_degc ?? usualQuenchDegc, `${at}.temperature_degc`, 'The quench temperature'),
    tempering: tempers ? {
      temperature_degc: numbers.need(quench.temper_degc, `${at}.tempering.temperature_degc`, 'The tempering temperature'),
      hours: numbers.need(quench.temper_h, `${at}.tempering.hours`, 'The tempering time'),
    } : null,
  } };
}

function steelOf(item: DraftItem, at: string, of: string, numbers: Numbers): ItemDefinition['steel'] {
  if (!item.ownSteel) return item.steel;
  const shares = Object.entries(item.ownSteel.composition_wt_pct).filter(([element, share]) => share !== null || element === 'C');
  return { name: item.ownSteel.name.trim(), composition_wt_pct: Object.fromEntries(shares.map(([element, share]) => [element, numbers.need(share, `${at}.steel.composition_wt_pct.${element}`, `${element} of the steel ${of}`)])) };
}

// What a part is wherever it is loaded: the library's body and the larger share of an item.
function partOf(item: DraftItem, at: string, of: string, numbers: Numbers): Omit<PartBody, 'part'> {
  const size = Object.fromEntries(sizesOf[item.shape].map((name) => [name, numbers.need(item.size[name], `${at}.section.${name}`, `The ${bare(name)} ${of}`)]));
  const limit = numbers.need(item.limit, `${at}.criterion`, `The limit ${of}`);
  const criterion: Criterion = item.kind === 'carbon' ? { kind: 'carbon', limit_wt_pct: limit }
    : { kind: item.kind, [item.kind === 'hardness_hv' ? 'limit_hv' : 'limit_hrc']: limit, martensite_pct: numbers.need(item.martensite_pct, `${at}.criterion`, `The martensite share ${of}`) } as Criterion;
  const window = `${at}.case_depth_window_mm`, surface = `${at}.surface_carbon_window_wt_pct`;
  const asked = item.surface_low !== null || item.surface_high !== null;
  return {
    steel: steelOf(item, at, of, numbers), section: { shape: item.shape, ...size } as Section, criterion,
    case_depth_window_mm: [numbers.need(item.low_mm, window, `The lower end of the case-depth window ${of}`), numbers.need(item.high_mm, window, `The upper end of the case-depth window ${of}`)],
    ...(asked ? { surface_carbon_window_wt_pct: [numbers.need(item.surface_low, surface, `The lower end of the surface-carbon window ${of}`), numbers.need(item.surface_high, surface, `The upper end of the surface-carbon window ${of}`)] as [number, number] } : {}),
    ...numbers.may('core_carbon_wt_pct', item.core_carbon_wt_pct, `${at}.core_carbon_wt_pct`, `The core carbon ${of}`),
    ...numbers.may('lag_min', item.lag_min, `${at}.lag_min`, `The lag ${of}`),
    ...numbers.may('grinding_stock_mm', item.grinding_stock_mm, `${at}.grinding_stock_mm`, `The grinding stock ${of}`),
  };
}

function itemOf(item: DraftItem, i: number, numbers: Numbers): ItemDefinition {
  const at = `items[${i}]`, of = `of item ${i + 1}`;
  return {
    name: item.name.trim(), ...(item.part.trim() ? { part: item.part.trim() } : {}),
    quantity: numbers.need(item.quantity, `${at}.quantity`, `The quantity ${of}`),
    ...partOf(item, at, of, numbers),
    ...(item.library ? { library: item.library } : {}),
    ...(item.rework ? { rework_of: item.rework } : {}),
    ...(item.rework && item.initialProfile !== undefined && item.initialProfile !== null ? { initial_profile: item.initialProfile } : {}),
  };
}

// The first stay is where and when the load was started.
function pathOf(draft: Draft, startedUtc: string): { path?: Stay[] } {
  if (!draft.path) return {};
  const [first, ...later] = draft.path;
  if (!first) return {};
  const begun: Stay = first.outside ? { ...first, from: startedUtc } : { from: startedUtc, furnace: draft.furnace, chamber: draft.chamber || first.chamber };
  return { path: [begun, ...later] };
}

export function definitionOf(draft: Draft, startedUtc: string | null): Built<LoadDefinition, 'definition'> {
  if (startedUtc === null) return { said: { field: 'started_at', detail: 'The start time is not complete. Enter day and time, or press "now".' } };
  const numbers = new Numbers();
  const segments = segmentsOf(draft.segments, 'recipe', numbers);
  const quench = quenchOf(draft.quench, 'quench', numbers);
  const film = numbers.may('film_min', draft.film_min, 'film_min', 'The film');
  const items = draft.items.map((item, i) => itemOf(item, i, numbers));
  if (numbers.said) return { said: numbers.said };
  const name = draft.recipeName.trim() || draft.segments.map((segment) => segment.name.trim()).join(', ');
  return { definition: {
    name: draft.name.trim(), furnace: draft.furnace, ...(draft.chamber ? { chamber: draft.chamber } : {}), person: draft.person.trim(), started_at: startedUtc,
    ...draft.kept, ...pathOf(draft, startedUtc), ...film, ...quench,
    recipe: { name, segments, ...(draft.recipeLibrary ? { library: draft.recipeLibrary } : {}) }, items,
  } };
}

export function partBodyOf(item: DraftItem): Built<PartBody, 'body'> {
  const numbers = new Numbers();
  const body = { part: item.part.trim(), ...partOf(item, 'body', 'of the part', numbers) };
  return numbers.said ? { said: numbers.said } : { body };
}

export function recipeBodyOf(segments: readonly DraftSegment[], quench: DraftQuench): Built<RecipeBody, 'body'> {
  const numbers = new Numbers();
  const body = { segments: segmentsOf(segments, 'body', numbers), ...quenchOf(quench, 'body.quench', numbers) };
  return numbers.said ? { said: numbers.said } : { body };
}
