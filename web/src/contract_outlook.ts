// The outlook of a load, trials, proposals and adopted plans, field for field as in /api/v1. Documents of an
// older daemon lack all of it: what is missing counts as null.

export interface Band3 { low: number; median: number; high: number }  // 5, 50 and 95 % of the ensemble
export type Standing = 'inside' | 'shallow' | 'deep' | 'undecided';
export interface DepthChance { shallow: number; inside: number; deep: number }  // 0 to 1
export interface SurfaceChance { below: number; inside: number; above: number }

export interface OutlookItem {
  name: string;
  standing: Standing;
  case_depth_mm: Band3;          // finished part, at the end of the plan
  surface_carbon_wt_pct: Band3;
  chance: DepthChance;           // true depth
  lab_chance: DepthChance;       // as a lab would measure it
  surface_chance: SurfaceChance | null;  // null: no window
  joint_chance: number;
}
export interface Outlook {
  at: string;                    // the state it starts from
  ends_at: string;
  minutes_left: number;          // negative: past the end
  joint_chance: number;
  offered_joint_chance: number | null;  // what the recipe offered at the start
  best: { at: string; minutes_from_now: number; joint_chance: number } | null;
  controlling_item: string;
  offset: { temperature_k: number; carbon_potential_wt_pct: number } | null;  // beside set point, carried on and fading
  items: OutlookItem[];
}
export interface FloorOutlook { standing: Standing; case_depth_mm: Band3; joint_chance: number; ends_at: string }

export interface RestSegment { name: string; duration_min: number; temperature_degc: number; carbon_potential_wt_pct: number; ramp_min?: number }
export interface AdoptedPlan { at: string; person: string; reason: string; segments: RestSegment[] }

export interface HistoryOutlook {
  time_s: number[];
  items: { name: string; case_depth_low_mm: number[]; case_depth_median_mm: number[]; case_depth_high_mm: number[] }[];
}

export interface Trial { at: string; outlook: Outlook; present: Outlook; minutes_more: number; sentence: string }
export interface Proposal {
  found: boolean;
  reason: string | null;
  segments: RestSegment[] | null;
  outlook: Outlook | null;
  present: Outlook;
  minutes_more: number | null;
  confirmed: { members: number; joint_chance: number } | null;
  sentence: string;
  changes: string[];
  revision: number;
  asked_chance: number;
}
