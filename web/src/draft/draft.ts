// What a person has entered for a load. A number is null while its field is empty and NaN while the field
// holds something that is no number. build.ts makes the contract's documents of it, take.ts reads them back.
import type { CopiedFrom, Criterion, LoadDefinition, Section, Stay, Until } from '../contract.ts';

export type Shape = Section['shape'];
export type Entered = number | null;
export interface DraftSegment {
  key: number;
  name: string;
  duration_min: Entered;
  temperature_degc: Entered;
  carbon_potential_wt_pct: Entered;
  ramp_min: Entered;
  tolerance_min: Entered;
  until: Until['kind'] | '';   // '' is by time alone
  untilItem: string;
  untilValue: Entered;         // mm, % C or K as the kind says
  longest_min: Entered;
}
export interface OwnSteel { name: string; composition_wt_pct: Record<string, Entered> }
export interface DraftItem {
  key: number;
  name: string;
  part: string;
  quantity: Entered;
  steel: string;
  ownSteel: OwnSteel | null;   // a heat's own analysis instead of a steel of the library
  shape: Shape;
  size: Record<'thickness_mm' | 'diameter_mm' | 'bore_diameter_mm' | 'wall_mm', Entered>;
  low_mm: Entered;
  high_mm: Entered;
  kind: Criterion['kind'];
  limit: Entered;
  martensite_pct: Entered;
  surface_low: Entered;
  surface_high: Entered;
  core_carbon_wt_pct: Entered;
  lag_min: Entered;
  grinding_stock_mm: Entered;
  rework: { load: number; item: string } | null;
  initialProfile: unknown;     // the daemon's copy for `rework`, kept through a correction
  library: CopiedFrom | null;
}
export interface DraftQuench { temperature_degc: Entered; temper_degc: Entered; temper_h: Entered }
export interface Draft {
  name: string;
  furnace: string;
  chamber: string;
  person: string;
  startedAt: string | null;    // as the time field holds it; null is now
  recipeName: string;
  recipeLibrary: CopiedFrom | null;
  segments: DraftSegment[];
  items: DraftItem[];
  film_min: Entered;
  quench: DraftQuench;
  again: string | null;        // number of the load that recipe and items were taken over from
  path: Stay[] | null;         // of a load that is corrected; its first stay follows furnace, chamber and start
  kept: Partial<LoadDefinition>;  // what the form does not show and must not lose
}

let keys = Date.now();  // rows that come back after a reload keep keys of their own
export const newKey = (): number => ++keys;
const letters = 'ABCDEFGHIJKLMNOPQRSTUVWXYZ';

export const newSegment = (name = ''): DraftSegment => ({
  key: newKey(), name, duration_min: null, temperature_degc: null, carbon_potential_wt_pct: null,
  ramp_min: null, tolerance_min: null, until: '', untilItem: 'A', untilValue: null, longest_min: null,
});
export const newItem = (place: number): DraftItem => ({
  key: newKey(), name: letters[place] ?? String(place + 1), part: '', quantity: 1, steel: '', ownSteel: null, shape: 'plate',
  size: { thickness_mm: null, diameter_mm: null, bore_diameter_mm: null, wall_mm: null },
  low_mm: null, high_mm: null, kind: 'hardness_hv', limit: 550, martensite_pct: 95, surface_low: null, surface_high: null,
  core_carbon_wt_pct: null, lag_min: null, grinding_stock_mm: null, rework: null, initialProfile: undefined, library: null,
});
export const newDraft = (furnace: string, person: string): Draft => ({
  name: '', furnace, chamber: '', person, startedAt: null, recipeName: '', recipeLibrary: null,
  segments: [newSegment('boost'), newSegment('diffuse')], items: [newItem(0)],
  film_min: null, quench: { temperature_degc: null, temper_degc: null, temper_h: null }, again: null, path: null, kept: {},
});

export const sizesOf: Record<Shape, (keyof DraftItem['size'])[]> = {
  plate: ['thickness_mm'], cylinder: ['diameter_mm'], sphere: ['diameter_mm'], bore: ['bore_diameter_mm', 'wall_mm'],
};
export const usualLimit: Record<Criterion['kind'], number> = { hardness_hv: 550, hardness_hrc: 50, carbon: 0.35 };
export const usualQuenchDegc = 60;
export const usualToleranceMin = 10;
export const elements = ['C', 'Mn', 'Cr', 'Ni', 'Mo', 'Si'] as const;

// Whether anything that matters has been entered: decides if the long form is opened at once.
export const isBlank = (draft: Draft): boolean =>
  draft.segments.every((each) => each.duration_min === null && each.temperature_degc === null) && draft.items.every((each) => each.part === '' && each.low_mm === null);
