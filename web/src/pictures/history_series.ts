// The history document prepared for drawing: stretches of guessed input and the recipe as steps. Pure.
import type { Basis, History, Recipe, RecipeSegment } from '../contract.ts';
import type { AdoptedPlan, RestSegment } from '../contract_outlook.ts';

export interface Stretch { from_s: number; to_s: number; basis: Exclude<Basis, 'measured'> }

// Stretches without measurement. A point's basis speaks for the time up to the next point.
export function stretchesOf(time_s: readonly number[], basis: readonly Basis[]): Stretch[] {
  const stretches: Stretch[] = [];
  for (let i = 0; i < time_s.length; ++i) {
    const kind = basis[i];
    if (kind === undefined || kind === 'measured') continue;
    const to_s = time_s[i + 1] ?? time_s[i]!;
    const last = stretches[stretches.length - 1];
    if (last && last.basis === kind && last.to_s === time_s[i]) last.to_s = to_s;
    else stretches.push({ from_s: time_s[i]!, to_s, basis: kind });
  }
  return stretches;
}

export interface RecipeStep { from_s: number; to_s: number; ramp_s: number; name: string; temperature_degc: number; carbon_potential_wt_pct: number }
export function recipeSteps(recipe: Recipe, startedS: number): RecipeStep[] {
  let at = startedS;
  return recipe.segments.map((segment) => {
    const from_s = at;
    at += segment.duration_min * 60;
    return { from_s, to_s: at, ramp_s: Math.min(segment.ramp_min ?? 0, segment.duration_min) * 60, name: segment.name, temperature_degc: segment.temperature_degc, carbon_potential_wt_pct: segment.carbon_potential_wt_pct };
  });
}

const clippedTo = (steps: RecipeStep[], untilS: number): RecipeStep[] =>
  steps.filter((step) => step.from_s < untilS).map((step) => (step.to_s > untilS ? { ...step, to_s: untilS } : step));
const stepsFrom = (segments: readonly RecipeSegment[], startedS: number) => recipeSteps({ name: '', segments: [...segments] }, startedS);

// What was asked and what is: the recipe until the first changed plan, each plan until the next, and from now on what
// the daemon takes to be left.
export function plannedSteps(recipe: Recipe, startedS: number, plans: readonly AdoptedPlan[], rest: readonly RestSegment[] | null, nowS: number | null): RecipeStep[] {
  let steps = recipeSteps(recipe, startedS);
  for (const plan of plans) {
    const at = Date.parse(plan.at) / 1000;
    steps = [...clippedTo(steps, at), ...stepsFrom(plan.segments, at)];
  }
  return rest && nowS !== null ? [...clippedTo(steps, nowS), ...stepsFrom(rest, nowS)] : steps;
}
// The segments that `segment.index` counts in.
export const validRecipe = (recipe: Recipe, plans: readonly AdoptedPlan[] | undefined): Recipe => {
  const last = plans?.[plans.length - 1];
  return last ? { name: `${recipe.name}, changed`, segments: last.segments } : recipe;
};

// Depth over time with its band, then the outlook to the end: one list of times for both, in millimetres as hardened.
export interface DepthCourse { time_s: number[]; depth: (number | null)[]; ahead: (number | null)[]; low: (number | null)[]; high: (number | null)[]; aheadFrom: number }
export function depthCourse(history: History, name: string, stockMm: number): DepthCourse {
  const item = history.items.find((each) => each.name === name);
  const ahead = history.outlook?.items.find((each) => each.name === name);
  const past = history.time_s, none = past.map(() => null);
  const lastS = past[past.length - 1] ?? -Infinity;
  const kept = (history.outlook?.time_s ?? []).flatMap((time, i) => (ahead && time > lastS ? [{ time, i }] : []));
  const withStock = (list: (number | null)[] | undefined): (number | null)[] => (list && list.length === past.length ? list.map((mm) => (mm === null ? null : mm + stockMm)) : none);
  const later = (list: number[]) => kept.map(({ i }) => list[i]! + stockMm);
  return {
    time_s: [...past, ...kept.map(({ time }) => time)], aheadFrom: past.length,
    depth: [...item?.case_depth_mm ?? none, ...kept.map(() => null)],
    ahead: [...none, ...(ahead ? later(ahead.case_depth_median_mm) : [])],
    low: [...withStock(item?.case_depth_low_mm), ...(ahead ? later(ahead.case_depth_low_mm) : [])],
    high: [...withStock(item?.case_depth_high_mm), ...(ahead ? later(ahead.case_depth_high_mm) : [])],
  };
}

// Ends of a scale that hold all values, with a margin; null values are passed over.
export function extent(values: readonly (number | null | undefined)[], least: number): [number, number] {
  let low = Infinity, high = -Infinity;
  for (const value of values) {
    if (value === null || value === undefined || !Number.isFinite(value)) continue;
    low = Math.min(low, value);
    high = Math.max(high, value);
  }
  if (low > high) return [0, least];
  const margin = Math.max((high - low) * 0.08, (least - (high - low)) / 2);
  return [low - margin, high + margin];
}

// A scale around the recipe's own values: the heat-up from cold is cut off so that an offset from the
// recipe can be seen. What runs above the recipe is always kept in view.
export function nearRecipe(measured: readonly (number | null)[], steps: readonly { value: number }[], below: number): [number, number] {
  const asked = steps.map((step) => step.value);
  if (asked.length === 0) return extent(measured, below);
  const low = Math.min(...asked) - below;
  const high = extent([...measured, ...asked], 0)[1];
  return [low, Math.max(high, Math.max(...asked) + below * 0.2)];
}
