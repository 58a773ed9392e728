// From the contract's documents to what the form shows: an earlier load again, a load to be corrected, parts
// and recipes of the library.
import type { ItemDefinition, LoadBody, LoadDefinition, Quench, RecipeSegment, Steel } from '../contract.ts';
import type { LibraryEntry, PartBody, RecipeBody } from '../contract_plant.ts';
import { localInput } from '../words.ts';
import { type Draft, type DraftItem, type DraftQuench, type DraftSegment, type OwnSteel, newItem, newSegment } from './draft.ts';

export function segmentFrom(segment: RecipeSegment): DraftSegment {
  const { until } = segment;
  return {
    ...newSegment(segment.name), duration_min: segment.duration_min, temperature_degc: segment.temperature_degc, carbon_potential_wt_pct: segment.carbon_potential_wt_pct,
    ramp_min: segment.ramp_min ?? null, tolerance_min: segment.tolerance_min ?? null, longest_min: segment.longest_min ?? null,
    until: until?.kind ?? '', untilItem: until && until.kind !== 'part_temperature' ? until.item : 'A',
    untilValue: !until ? null : until.kind === 'case_depth' ? until.depth_mm : until.kind === 'surface_carbon' ? until.wt_pct : until.within_k,
  };
}

export const quenchFrom = (quench: Quench | null | undefined): DraftQuench => ({
  temperature_degc: quench?.temperature_degc ?? null, temper_degc: quench?.tempering?.temperature_degc ?? null, temper_h: quench?.tempering?.hours ?? null,
});

function partFrom(part: Omit<PartBody, 'part'>, place: number): DraftItem {
  const fresh = newItem(place);
  const { shape, ...size } = part.section;
  const { criterion, steel } = part;
  return {
    ...fresh, steel: typeof steel === 'string' ? steel : '', ownSteel: typeof steel === 'string' ? null : { name: steel.name, composition_wt_pct: { ...steel.composition_wt_pct } },
    shape, size: { ...fresh.size, ...size }, low_mm: part.case_depth_window_mm[0], high_mm: part.case_depth_window_mm[1],
    kind: criterion?.kind ?? fresh.kind,
    limit: !criterion ? fresh.limit : criterion.kind === 'carbon' ? criterion.limit_wt_pct : criterion.kind === 'hardness_hv' ? criterion.limit_hv : criterion.limit_hrc,
    martensite_pct: criterion && criterion.kind !== 'carbon' ? criterion.martensite_pct : fresh.martensite_pct,
    surface_low: part.surface_carbon_window_wt_pct?.[0] ?? null, surface_high: part.surface_carbon_window_wt_pct?.[1] ?? null,
    core_carbon_wt_pct: part.core_carbon_wt_pct ?? null, lag_min: part.lag_min ?? null, grinding_stock_mm: part.grinding_stock_mm ?? null,
  };
}

function itemFrom(item: ItemDefinition, place: number): DraftItem {
  return { ...partFrom(item, place), name: item.name, part: item.part ?? '', quantity: item.quantity ?? 1, library: item.library ?? null };
}

// An earlier load's recipe and items; load number, person and time are asked anew, and the parts are new
// ones: what a reworked item brought along is not taken over.
export function sameAs(earlier: LoadBody, name: string, draft: Draft): Draft {
  return {
    ...draft, chamber: earlier.chamber ?? draft.chamber, recipeName: earlier.recipe.name, recipeLibrary: earlier.recipe.library ?? null,
    segments: earlier.recipe.segments.map(segmentFrom), items: earlier.items.map(itemFrom),
    film_min: earlier.film_min ?? null, quench: quenchFrom(earlier.quench), again: name, path: null,
    kept: { charge_temperature_degc: earlier.charge_temperature_degc, lattice_s: earlier.lattice_s },
  };
}

// A load as it stands, to be put right. Nothing of its definition is dropped.
export function correctionOf(load: LoadDefinition): Draft {
  const { name, furnace, chamber, person, started_at, recipe, items, film_min, quench, path, ...kept } = load;
  const first = path?.[0];
  const begun = first && !first.outside ? first : { furnace, chamber: chamber ?? '' };
  return {
    name, furnace: begun.furnace, chamber: begun.chamber, person, startedAt: localInput(Date.parse(started_at)),
    recipeName: recipe.name, recipeLibrary: recipe.library ?? null, segments: recipe.segments.map(segmentFrom),
    items: items.map((item, i) => ({ ...itemFrom(item, i), rework: item.rework_of ?? null, initialProfile: item.initial_profile })),
    film_min: film_min ?? null, quench: quenchFrom(quench), again: null, path: path ?? null, kept,
  };
}

export const withRecipe = (entry: LibraryEntry<RecipeBody>, draft: Draft): Draft => ({
  ...draft, recipeName: entry.name, recipeLibrary: { key: entry.key, version: entry.version }, segments: entry.body.segments.map(segmentFrom),
  quench: entry.body.quench ? quenchFrom(entry.body.quench) : draft.quench,
});
// Name and quantity stay: they belong to the load, not to the part.
export const withPart = (entry: LibraryEntry<PartBody>, item: DraftItem): DraftItem => ({
  ...partFrom(entry.body, 0), key: item.key, name: item.name, quantity: item.quantity, rework: item.rework, initialProfile: item.initialProfile,
  part: entry.body.part, library: { key: entry.key, version: entry.version },
});
export const partDraft = (body: PartBody): DraftItem => ({ ...partFrom(body, 0), part: body.part });

// A stored load spells its steels out. Where that is a steel of the library, unchanged, the library's own name
// is chosen again, so that the form reads as it was first filled in.
export function withLibrarySteel(item: DraftItem, steels: readonly Steel[]): DraftItem {
  const same = (own: OwnSteel, steel: Steel): boolean =>
    own.name === steel.id && Object.entries(steel.composition_wt_pct).every(([element, share]) => Math.abs((own.composition_wt_pct[element] ?? 0) - share) < 1e-9);
  const found = item.ownSteel && steels.find((steel) => same(item.ownSteel!, steel));
  return found ? { ...item, steel: found.id, ownSteel: null } : item;
}
export const withLibrarySteels = (draft: Draft, steels: readonly Steel[]): Draft => ({ ...draft, items: draft.items.map((item) => withLibrarySteel(item, steels)) });
