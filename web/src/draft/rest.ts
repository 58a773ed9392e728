// A rest of the recipe that somebody is trying. Its minutes count from a moment, so they shrink as the plant's clock
// runs, exactly as the present plan's do. Pure.
import type { RestSegment } from '../contract_outlook.ts';

// A draft keeps, beside each segment, which one of the plan it came from, counted from the last (0), which stays the
// last however much time passes: so the two can be compared after earlier ones have passed or been left out.
export interface DraftRest { atMs: number; segments: (RestSegment & { from: number })[] }

export const draftOf = (rest: readonly RestSegment[], atMs: number): DraftRest =>
  ({ atMs, segments: rest.map((each, i) => ({ ...each, from: rest.length - 1 - i })) });

export const plannedFor = (rest: readonly RestSegment[], from: number): RestSegment | undefined => rest[rest.length - 1 - from];

// The draft as it is at a later moment: what has passed is taken off the front. The last segment stays, at nothing left.
export function movedTo(draft: DraftRest, atMs: number): DraftRest {
  let passed = (atMs - draft.atMs) / 60_000;
  if (!(passed > 0)) return draft;
  const segments = [...draft.segments];
  while (segments.length > 1 && segments[0]!.duration_min <= passed) passed -= segments.shift()!.duration_min;
  const first = segments[0];
  if (first) segments[0] = { ...first, duration_min: Math.max(0, first.duration_min - passed), ...(first.ramp_min === undefined ? {} : { ramp_min: Math.max(0, first.ramp_min - passed) }) };
  return { atMs, segments };
}

export const totalMinutes = (segments: readonly RestSegment[]): number => segments.reduce((sum, each) => sum + each.duration_min, 0);

// As the contract takes it: nothing shorter than half a minute, no ramp longer than its segment. A segment without time
// is left out, unless it is the only one.
const shortestMin = 0.5;
export function bodyOf(draft: DraftRest): RestSegment[] {
  const plain = draft.segments.map(({ from: _, ...each }) => {
    const duration_min = Number(each.duration_min.toFixed(2));
    return { ...each, duration_min, ...(each.ramp_min === undefined ? {} : { ramp_min: Math.min(each.ramp_min, duration_min) }) };
  });
  const lasting = plain.filter((each) => each.duration_min >= shortestMin);
  return lasting.length > 0 ? lasting : plain.slice(-1).map((each) => ({ ...each, duration_min: shortestMin }));
}

export const complete = (draft: DraftRest): boolean => draft.segments.length > 0
  && draft.segments.every((each) => [each.duration_min, each.temperature_degc, each.carbon_potential_wt_pct].every((value) => Number.isFinite(value)));
