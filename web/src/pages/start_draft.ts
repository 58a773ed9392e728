// What a person has entered for a new load, and its way to the contract's load document and back. Pure.
// A number is null while its field is empty and NaN while the field holds something that is no number.
import type { Criterion, ItemDefinition, LoadDefinition, Section, Steel } from '../contract.ts';

export type Shape = Section['shape'];
export interface DraftSegment { key: number; name: string; duration_min: number | null; temperature_degc: number | null; carbon_potential_wt_pct: number | null }
export interface DraftItem {
  key: number;
  name: string;
  part: string;
  quantity: number | null;
  steel: string;
  ownSteel: Exclude<ItemDefinition['steel'], string> | null;  // a heat's own analysis, taken over from an earlier load
  shape: Shape;
  size: Record<'thickness_mm' | 'diameter_mm' | 'bore_diameter_mm' | 'wall_mm', number | null>;
  low_mm: number | null;
  high_mm: number | null;
  kind: Criterion['kind'];
  limit: number | null;
  martensite_pct: number | null;
  surface_low: number | null;
  surface_high: number | null;
  core_carbon_wt_pct: number | null;
  lag_min: number | null;
}
export interface Draft {
  name: string;
  furnace: string;
  chamber: string;
  person: string;
  startedAt: string | null;  // as the time field holds it; null is now
  recipeName: string;
  segments: DraftSegment[];
  items: DraftItem[];
  kept: Pick<LoadDefinition, 'charge_temperature_degc' | 'lattice_s'>;
}

let keys = 0;
const letters = 'ABCDEFGHIJKLMNOPQRSTUVWXYZ';

export const newSegment = (name = ''): DraftSegment => ({ key: ++keys, name, duration_min: null, temperature_degc: null, carbon_potential_wt_pct: null });
export const newItem = (place: number): DraftItem => ({
  key: ++keys, name: letters[place] ?? String(place + 1), part: '', quantity: 1, steel: '', ownSteel: null, shape: 'plate',
  size: { thickness_mm: null, diameter_mm: null, bore_diameter_mm: null, wall_mm: null },
  low_mm: null, high_mm: null, kind: 'hardness_hv', limit: 550, martensite_pct: 95, surface_low: null, surface_high: null, core_carbon_wt_pct: null, lag_min: null,
});
export const newDraft = (furnace: string, person: string): Draft => ({
  name: '', furnace, chamber: '', person, startedAt: null, recipeName: '', segments: [newSegment('boost'), newSegment('diffuse')], items: [newItem(0)], kept: {},
});

export const sizesOf: Record<Shape, (keyof DraftItem['size'])[]> = {
  plate: ['thickness_mm'], cylinder: ['diameter_mm'], sphere: ['diameter_mm'], bore: ['bore_diameter_mm', 'wall_mm'],
};
export const usualLimit: Record<Criterion['kind'], number> = { hardness_hv: 550, hardness_hrc: 50, carbon: 0.35 };

export interface Said { field: string; detail: string }
export type Built = { definition: LoadDefinition } | { said: Said };

// Only what the daemon could not even be asked is refused here; every rule of the trade is the daemon's.
export function definitionOf(draft: Draft, startedUtc: string | null): Built {
  if (startedUtc === null) return { said: { field: 'started_at', detail: 'The start time is not complete. Enter day and time, or press "now".' } };
  let said: Said | null = null;
  const need = (value: number | null, field: string, what: string): number => {
    if (value === null) said ??= { field, detail: `${what} is empty. Enter a number.` };
    else if (Number.isNaN(value)) said ??= { field, detail: `${what} is not a number. Enter digits, with one comma or point.` };
    return value ?? 0;
  };
  const may = (value: number | null, field: string, what: string): number | undefined => (value === null ? undefined : need(value, field, what));
  const segments = draft.segments.map((segment, i) => ({
    name: segment.name.trim(),
    duration_min: need(segment.duration_min, `recipe.segments[${i}].duration_min`, `The time of segment ${i + 1}`),
    temperature_degc: need(segment.temperature_degc, `recipe.segments[${i}].temperature_degc`, `The temperature of segment ${i + 1}`),
    carbon_potential_wt_pct: need(segment.carbon_potential_wt_pct, `recipe.segments[${i}].carbon_potential_wt_pct`, `The carbon potential of segment ${i + 1}`),
  }));
  const items = draft.items.map((item, i): ItemDefinition => {
    const at = `items[${i}]`, of = `of item ${i + 1}`;
    const size = Object.fromEntries(sizesOf[item.shape].map((name) => [name, need(item.size[name], `${at}.section.${name}`, `The ${name.replace('_mm', '').replace('_', ' ')} ${of}`)]));
    const limit = need(item.limit, `${at}.criterion`, `The limit ${of}`);
    const criterion: Criterion = item.kind === 'carbon' ? { kind: 'carbon', limit_wt_pct: limit }
      : { kind: item.kind, [item.kind === 'hardness_hv' ? 'limit_hv' : 'limit_hrc']: limit, martensite_pct: need(item.martensite_pct, `${at}.criterion`, `The martensite share ${of}`) } as Criterion;
    const window = `${at}.case_depth_window_mm`, surface = `${at}.surface_carbon_window_wt_pct`;
    const core = may(item.core_carbon_wt_pct, `${at}.core_carbon_wt_pct`, `The core carbon ${of}`);
    const lag = may(item.lag_min, `${at}.lag_min`, `The lag ${of}`);
    const asked = item.surface_low !== null || item.surface_high !== null;
    return {
      name: item.name.trim(), ...(item.part.trim() ? { part: item.part.trim() } : {}), quantity: need(item.quantity, `${at}.quantity`, `The quantity ${of}`),
      steel: item.ownSteel ?? item.steel, section: { shape: item.shape, ...size } as Section, criterion,
      case_depth_window_mm: [need(item.low_mm, window, `The lower end of the case-depth window ${of}`), need(item.high_mm, window, `The upper end of the case-depth window ${of}`)],
      ...(asked ? { surface_carbon_window_wt_pct: [need(item.surface_low, surface, `The lower end of the surface-carbon window ${of}`), need(item.surface_high, surface, `The upper end of the surface-carbon window ${of}`)] as [number, number] } : {}),
      ...(core === undefined ? {} : { core_carbon_wt_pct: core }), ...(lag === undefined ? {} : { lag_min: lag }),
    };
  });
  if (said) return { said };
  return { definition: {
    name: draft.name.trim(), furnace: draft.furnace, ...(draft.chamber ? { chamber: draft.chamber } : {}), person: draft.person.trim(), started_at: startedUtc,
    ...draft.kept, recipe: { name: draft.recipeName.trim() || draft.segments.map((segment) => segment.name.trim()).join(', '), segments }, items,
  } };
}

// An earlier load's recipe and items; load number, person and time are asked anew.
export function sameAs(earlier: LoadDefinition, draft: Draft): Draft {
  return {
    ...draft, chamber: earlier.chamber ?? draft.chamber, recipeName: earlier.recipe.name,
    segments: earlier.recipe.segments.map((segment) => ({ ...newSegment(), ...segment })),
    items: earlier.items.map((item, i) => itemFrom(item, i)),
    kept: { charge_temperature_degc: earlier.charge_temperature_degc, lattice_s: earlier.lattice_s },
  };
}

// A stored load spells its steels out. Where that is a steel of the library, unchanged, the library's own name
// is chosen again, so that the form reads as it was first filled in.
export function withLibrarySteels(draft: Draft, steels: readonly Steel[]): Draft {
  const same = (own: NonNullable<DraftItem['ownSteel']>, steel: Steel): boolean =>
    own.name === steel.id && Object.entries(steel.composition_wt_pct).every(([element, share]) => Math.abs((own.composition_wt_pct[element] ?? 0) - share) < 1e-9);
  return { ...draft, items: draft.items.map((item) => {
    const found = item.ownSteel && steels.find((steel) => same(item.ownSteel!, steel));
    return found ? { ...item, steel: found.id, ownSteel: null } : item;
  }) };
}

function itemFrom(item: ItemDefinition, place: number): DraftItem {
  const fresh = newItem(place);
  const { shape, ...size } = item.section;
  const criterion = item.criterion;
  return {
    ...fresh, name: item.name, part: item.part ?? '', quantity: item.quantity ?? 1,
    steel: typeof item.steel === 'string' ? item.steel : '', ownSteel: typeof item.steel === 'string' ? null : item.steel,
    shape, size: { ...fresh.size, ...size }, low_mm: item.case_depth_window_mm[0], high_mm: item.case_depth_window_mm[1],
    kind: criterion?.kind ?? fresh.kind,
    limit: !criterion ? fresh.limit : criterion.kind === 'carbon' ? criterion.limit_wt_pct : criterion.kind === 'hardness_hv' ? criterion.limit_hv : criterion.limit_hrc,
    martensite_pct: criterion && criterion.kind !== 'carbon' ? criterion.martensite_pct : fresh.martensite_pct,
    surface_low: item.surface_carbon_window_wt_pct?.[0] ?? null, surface_high: item.surface_carbon_window_wt_pct?.[1] ?? null,
    core_carbon_wt_pct: item.core_carbon_wt_pct ?? null, lag_min: item.lag_min ?? null,
  };
}

// A problem's sentence for a person: without the path in front, which the form shows by its place.
export function plainDetail(detail: string, field: string | undefined): string {
  const bare = field && detail.startsWith(`${field}: `) ? detail.slice(field.length + 2) : detail;
  return bare.charAt(0).toUpperCase() + bare.slice(1);
}

// "item 2", "segment 1" or nothing: which of several the path means.
export function whichOf(path: string): string {
  const found = /^(items|recipe\.segments)\[(\d+)\]/.exec(path);
  return found ? `${found[1] === 'items' ? 'item' : 'segment'} ${Number(found[2]) + 1}` : '';
}

// The field on the form that a problem's `field` belongs to: itself or its nearest ancestor that is shown.
export function placeOf(field: string | undefined, shown: readonly string[]): string | null {
  let best: string | null = null;
  for (const path of shown) {
    const fits = field === path || field?.startsWith(`${path}.`) || field?.startsWith(`${path}[`);
    if (fits && path.length > (best?.length ?? -1)) best = path;
  }
  return best;
}
