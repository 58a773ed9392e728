// Choosing between conflicting values, before it is saved. Pure.
import type { Choice, Conflict } from '../contract_plant.ts';

export type Picks = Record<string, Choice['value']>;  // by time; null is "none of them"

export const picksAll = (conflicts: readonly Conflict[], which: 'lower' | 'higher'): Picks =>
  Object.fromEntries(conflicts.filter((each) => each.values.length > 0).map((each) => [each.at, which === 'lower' ? Math.min(...each.values) : Math.max(...each.values)]));

// What is picked and differs from what was chosen already.
export const unsaved = (conflicts: readonly Conflict[], picks: Picks): Choice[] =>
  conflicts.flatMap((each) => {
    const pick = picks[each.at];
    return pick === undefined || (each.chosen && each.chosen.value === pick) ? [] : [{ at: each.at, value: pick }];
  });
