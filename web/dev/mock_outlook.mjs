// DEVELOPMENT ONLY: an invented outlook for the invented plant: end depths follow a square root of "equivalent
// minutes", chances a bell. Nothing is solved and no figure here means anything.
import { itemsAt, plannedMinutes, segmentAt } from './mock_plant.mjs';

const minute = 60_000;
const bell = (z) => 1 / (1 + Math.exp(-1.702 * z));  // near enough to a normal distribution for a made-up one
const chanceOf = (median, sd, [low, high]) => { const below = bell((low - median) / sd), above = bell((median - high) / sd); return { below, above, inside: Math.max(0, 1 - below - above) }; };
const band = (median, sd) => ({ low: Number(Math.max(0, median - 1.645 * sd).toFixed(4)), median: Number(median.toFixed(4)), high: Number((median + 1.645 * sd).toFixed(4)) });

// How the made-up loads run beside their recipe. `deep` of the end depth against the middle of the window.
const bias = { none: -0.02, stale: -0.08, held: -0.09, planned: 0.03, overdue: 0.24, doubt: 0, disagree: -0.05, miss: -0.15 };
const scatter = { none: 0.035, stale: 0.09, held: 0.05, planned: 0.1, doubt: 0.09, overdue: 0.03, miss: 0.03 };
const biasOf = (load) => bias[load.trouble] ?? 0;
export const missingOf = (load) => (load.trouble === 'no data yet' ? 'No reading of this load has come yet: there is nothing to project from. Check the logger and its line.' : null);

export function segmentsNow(load) { return load.plans?.length ? load.plans.at(-1).segments : load.definition.recipe.segments; }

// What is left of the plan at a moment.
export function restAt(load, nowMs) {
  const plan = load.plans?.at(-1);
  let elapsed = (nowMs - Date.parse(plan ? plan.at : load.definition.started_at)) / minute;
  const rest = [];
  for (const each of segmentsNow(load)) {
    const left = Math.min(each.duration_min, each.duration_min - elapsed);
    elapsed = Math.max(0, elapsed - each.duration_min);
    if (left > 0) rest.push({ name: each.name, duration_min: Number(left.toFixed(2)), temperature_degc: each.temperature_degc, carbon_potential_wt_pct: each.carbon_potential_wt_pct, ramp_min: 0 });
  }
  return rest;
}
const total = (rest) => rest.reduce((sum, each) => sum + each.duration_min, 0);
const worth = (rest) => rest.reduce((sum, each) => sum + each.duration_min * (0.55 + 0.45 * each.carbon_potential_wt_pct) * Math.exp((each.temperature_degc - 930) / 110), 0);

// The outlook of a load whose rest is `rest`, against the rest of its plan.
export function outlookOf(load, nowMs, rest, offered = true) {
  if (missingOf(load)) return null;
  const planned = worth(load.base ??= restAt({ ...load, plans: [] }, Date.parse(load.definition.started_at)));
  const gone = planned - worth(restAt({ ...load, plans: [] }, nowMs));
  const share = Math.sqrt(Math.max(0.02, (gone + worth(rest)) / planned));
  const last = rest.at(-1)?.carbon_potential_wt_pct ?? 0.75;
  const sd = (scatter[load.trouble] ?? 0.035) * (0.35 + 0.65 * Math.min(1, total(rest) / 200));
  const items = load.definition.items.map((each, i) => {
    const [low, high] = each.case_depth_window_mm, middle = (low + high) / 2;
    const median = (middle + biasOf(load) * (1 + 0.5 * i) * middle) * share;
    const depth = chanceOf(median, sd, [low, high]), lab = chanceOf(median, Math.hypot(sd, 0.03), [low, high]);
    const carbon = 0.64 + 0.16 * last / 0.75 - 0.02 * i, window = each.surface_carbon_window_wt_pct;
    const surface = window ? chanceOf(carbon, 0.022, window) : null;
    const standing = depth.inside >= 0.8 ? 'inside' : depth.below >= 0.5 ? 'shallow' : depth.above >= 0.5 ? 'deep' : 'undecided';
    const named = ({ below, inside, above }) => ({ shallow: below, inside, deep: above });
    return { name: each.name, standing, case_depth_mm: band(median, sd), surface_carbon_wt_pct: band(carbon, 0.022), chance: named(depth), lab_chance: named(lab), surface_chance: surface, joint_chance: depth.inside * (surface?.inside ?? 1) };
  });
  const joint = Math.min(...items.map((each) => each.joint_chance)) * (items.length > 1 ? 0.96 : 1);
  const left = total(rest) || plannedMinutes(load) - (nowMs - Date.parse(load.definition.started_at)) / minute;
  const worst = items.reduce((a, b) => (b.joint_chance < a.joint_chance ? b : a));
  const best = worst.chance.shallow > worst.chance.deep ? left + 60 * (1 - joint) : Math.max(0, left - 50 * (1 - joint));
  const stamp = (ms) => `${new Date(ms).toISOString().slice(0, 19)}Z`;
  return { at: stamp(nowMs), ends_at: stamp(nowMs + left * minute), minutes_left: left, joint_chance: joint, offered_joint_chance: offered ? 0.88 : null,
    best: { at: stamp(nowMs + best * minute), minutes_from_now: best, joint_chance: Math.min(0.985, joint + 0.3 * (1 - joint)) }, controlling_item: worst.name,
    offset: load.trouble === 'miss' ? { temperature_k: -12, carbon_potential_wt_pct: -0.03 } : { temperature_k: 0.2, carbon_potential_wt_pct: 0.001 }, items };
}

export const presentOf = (load, nowMs) => outlookOf(load, nowMs, restAt(load, nowMs));
const percent = (chance) => (chance > 0.99 ? 'over 99 %' : chance < 0.01 ? 'under 1 %' : `${Math.round(chance * 100)} %`);
const later = (minutes) => (Math.abs(minutes) < 0.5 ? 'Ends at the same time' : `Ends ${Math.abs(Math.round(minutes))} min ${minutes > 0 ? 'later' : 'sooner'}`);

export function trial(load, nowMs, segments) {
  const present = presentOf(load, nowMs), outlook = outlookOf(load, nowMs, segments), minutes_more = total(segments) - present.minutes_left;
  return { at: present.at, outlook, present, minutes_more, sentence: `${later(minutes_more)}; chance ${percent(present.joint_chance)} -> ${percent(outlook.joint_chance)}.` };
}

// Makes one segment longer or shorter until the chance is there. Deep cases are not saved by holding.
export function proposal(load, nowMs, asked) {
  const rest = restAt(load, nowMs), present = presentOf(load, nowMs), base = { present, revision: load.revision, asked_chance: asked };
  const at = Math.max(0, rest.findLastIndex((each) => each.name === 'diffuse' || each.name === 'boost'));
  for (let more = -Math.floor((rest[at]?.duration_min ?? 0) / 5) * 5; more <= 240 && rest.length > 0; more += 5) {
    const segments = rest.map((each, i) => (i === at ? { ...each, duration_min: each.duration_min + more } : each)).filter((each) => each.duration_min > 0);
    const outlook = outlookOf(load, nowMs, segments);
    if (outlook.joint_chance < asked) continue;
    const { name, carbon_potential_wt_pct: carbon } = rest[at], said = `${name}: ${Math.abs(more)} min ${more < 0 ? 'shorter' : 'longer'}`;
    return { ...base, found: true, reason: null, segments, outlook, minutes_more: more, confirmed: { members: 1031, joint_chance: outlook.joint_chance - 0.006 },
      sentence: `Hold ${name} ${Math.abs(more)} min ${more < 0 ? 'less' : 'longer'} at ${carbon.toFixed(2)} % C: chance ${percent(present.joint_chance)} -> ${percent(outlook.joint_chance)}, ends ${Math.abs(more)} min ${more < 0 ? 'sooner' : 'later'}.`, changes: [said] };
  }
  return { ...base, found: false, reason: present.items.some((each) => each.standing === 'deep') ? 'The case is deeper than the window already, and depth cannot go back. End the load and tell the supervisor.' : 'The band is wider than the window: no plan narrows it. Bring the readings back first.', segments: null, outlook: null, minutes_more: null, confirmed: null, sentence: 'No plan reaches it.', changes: [] };
}

// Members of the documents that the outlook adds.
export const nowBand = (load, nowMs, item) => (missingOf(load) || item.case_depth_mm === null ? null : band(item.finished_case_depth_mm ?? item.case_depth_mm, (scatter[load.trouble] ?? 0.035) * 0.6));
export function floorItem(load, nowMs, item) {
  const ahead = presentOf(load, nowMs), mine = ahead?.items.find((each) => each.name === item.name);
  return { ...item, case_depth_band_mm: nowBand(load, nowMs, item), outlook: mine ? { standing: mine.standing, case_depth_mm: mine.case_depth_mm, joint_chance: mine.joint_chance, ends_at: ahead.ends_at } : null };
}
export function snapshotMembers(load, nowMs, open) {
  const missing = missingOf(load);
  return { band: missing ? 'band not computed' : '5 to 95 %', outlook: open ? presentOf(load, nowMs) : null, outlook_missing: open ? missing : 'The load has ended.', rest: open && !missing ? restAt(load, nowMs) : null, plans: load.plans ?? [] };
}
export function historyOutlook(load, nowMs) {
  if (missingOf(load) || load.ended_at) return null;
  const ahead = presentOf(load, nowMs), steps = 24, span = Math.max(1, ahead.minutes_left);
  const time_s = Array.from({ length: steps + 1 }, (_, i) => (nowMs + span * minute * i / steps) / 1000);
  return { time_s, items: itemsAt(load, nowMs, 4).map((item) => {
    const end = ahead.items.find((each) => each.name === item.name).case_depth_mm, now = nowBand(load, nowMs, item) ?? { low: 0, median: 0, high: 0 };
    const course = (of) => time_s.map((_, i) => now[of] + (end[of] - now[of]) * Math.sqrt(i / steps));
    return { name: item.name, case_depth_low_mm: course('low'), case_depth_median_mm: course('median'), case_depth_high_mm: course('high') };
  }) };
}
export const segmentOf = (load, nowMs) => {
  const plan = load.plans?.at(-1);
  return segmentAt(plan ? { ...load, definition: { ...load.definition, started_at: plan.at, recipe: { segments: plan.segments } } } : load, nowMs);
};
