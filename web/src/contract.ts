// What the daemon says and takes: one type per document of /api/v1, field for field, units in the names.
// Nothing is converted here; units.ts does that at the last moment before a figure is shown.
import type { AlertSummary, FloorAlerts } from './contract_alerts.ts';
import type { AdoptedPlan, Band3, FloorOutlook, HistoryOutlook, Outlook, RestSegment } from './contract_outlook.ts';

export type Basis = 'measured' | 'held' | 'planned' | 'masked';
export type LoadState = 'open' | 'ended' | 'cancelled';
export type Condition = 'no load' | 'no data yet' | 'live' | 'stale' | 'ended';
export type Outcome = 'reached' | 'reached with note' | 'outside range' | 'failed';
export type Window2 = [number, number];

export interface InputTemperature { value_degc: number | null; basis: Basis; age_s: number | null }
export interface CarbonSource { source: string; channels: string[]; value_wt_pct: number | null; basis: Basis; leads: boolean }
export interface InputCarbon {
  value_wt_pct: number | null;
  basis: Basis;
  age_s: number | null;
  source?: string;
  sources?: CarbonSource[];
  disagreement_wt_pct?: number | null;
  disagree?: boolean;
}
export interface Inputs { temperature: InputTemperature; carbon_potential: InputCarbon }

export interface SegmentNow {
  index: number;
  name: string;
  elapsed_min: number;
  minutes_left: number;
  overdue: boolean;
  started_at?: string;
  by?: 'readings' | 'recipe time' | 'model';
  doubt?: string | null;
  long_by_min?: number;
}

export interface Profile { depth_mm: number[]; carbon_wt_pct: number[] }

export interface FloorItem {
  name: string;
  part: string;
  steel: string;
  shape: string;
  criterion: { text: string };
  case_depth_mm: number | null;
  case_depth_window_mm: Window2;
  surface_carbon_wt_pct: number | null;
  surface_carbon_window_wt_pct: Window2 | null;
  finished_case_depth_mm?: number | null;
  grinding_stock_mm?: number;
  case_depth_band_mm?: Band3 | null;  // now, finished part
  outlook?: FloorOutlook | null;
  strip: Profile | null;  // null beyond the first four loads of a furnace
}

export interface Position { place: number; places: number }  // a tray's place on a line

export interface FloorLoad {
  id: number;
  name: string;
  chamber: string;
  person: string;
  started_at: string;
  condition: Condition;
  message: string | null;
  inputs: Inputs;
  segment: SegmentNow | null;
  minutes_left: number | null;
  item_count: number;
  item: FloorItem | null;
  position?: Position | null;
  data_age_s?: number | null;
  alerts?: AlertSummary[];
}

export interface FloorFurnace {
  id: string;
  name: string;
  process: string;
  condition: Condition;
  data_time: string | null;
  data_age_s: number | null;
  chambers?: Chamber[];
  line?: boolean;         // chambers are the zones of a pusher line, in order
  loads: FloorLoad[];     // worst first
  alerts?: AlertSummary[];  // of the furnace, of no load
}
export interface Chamber { id: string; name: string; places?: number }

export interface Floor {
  sequence: number;
  now: string;
  plant: string;
  demo: boolean;
  clock_speed: number;
  band: string;
  furnaces: FloorFurnace[];
  alerts?: FloorAlerts;
}

export type Until =
  | { kind: 'case_depth'; item: string; depth_mm: number }
  | { kind: 'surface_carbon'; item: string; wt_pct: number }
  | { kind: 'part_temperature'; within_k: number };

export interface RecipeSegment {
  name: string;
  duration_min: number;
  temperature_degc: number;
  carbon_potential_wt_pct: number;
  ramp_min?: number;
  tolerance_min?: number;
  until?: Until | null;
  longest_min?: number;
}
export interface CopiedFrom { key: string; version: number }
export interface Recipe { name: string; segments: RecipeSegment[]; library?: CopiedFrom | null }
export interface Quench { temperature_degc?: number; tempering?: { temperature_degc: number; hours: number } | null }
export type Stay =
  | { from: string; furnace: string; chamber: string; outside?: undefined }
  | { from: string; outside: true };

export type Section =
  | { shape: 'plate'; thickness_mm: number }
  | { shape: 'cylinder'; diameter_mm: number }
  | { shape: 'sphere'; diameter_mm: number }
  | { shape: 'bore'; bore_diameter_mm: number; wall_mm: number };

export type Criterion =
  | { kind: 'hardness_hv'; limit_hv: number; martensite_pct: number }
  | { kind: 'hardness_hrc'; limit_hrc: number; martensite_pct: number }
  | { kind: 'carbon'; limit_wt_pct: number };

export interface Composition { [element: string]: number }

export interface ItemDefinition {
  name: string;
  part?: string;
  quantity?: number;
  steel: string | { name: string; composition_wt_pct: Composition };
  core_carbon_wt_pct?: number;
  section: Section;
  criterion?: Criterion;
  case_depth_window_mm: Window2;
  surface_carbon_window_wt_pct?: Window2 | null;
  lag_min?: number;
  grinding_stock_mm?: number;
  library?: CopiedFrom | null;
  rework_of?: { load: number; item: string } | null;
  initial_profile?: unknown;  // the server's copy of the earlier load's last profile
}

export interface LoadDefinition {
  name: string;
  furnace: string;
  chamber?: string;
  person: string;
  started_at: string;
  charge_temperature_degc?: number;
  lattice_s?: number;
  path?: Stay[];
  film_min?: number;
  quench?: Quench | null;
  masks?: unknown[];
  recipe: Recipe;
  items: ItemDefinition[];
}
export type LoadBody = Omit<LoadDefinition, 'name' | 'person' | 'started_at' | 'path'>;

export interface Item {
  name: string;
  part: string;
  quantity: number;
  steel: string;
  shape: string;
  criterion: { text: string; carbon_limit_wt_pct: number | null; kind?: Criterion['kind']; limit_hv?: number; limit_hrc?: number };
  case_depth_mm: number | null;
  case_depth_window_mm: Window2;
  finished_case_depth_mm?: number | null;
  grinding_stock_mm?: number;
  hardness?: Hardness | null;
  surface_carbon_wt_pct: number | null;
  surface_carbon_window_wt_pct: Window2 | null;
  case_depth_band_mm?: Band3 | null;        // now, finished part
  surface_carbon_band_wt_pct?: Band3 | null;
  total_depth_mm: number | null;
  turnover_depth_mm: number | null;
  depth_at_0p35_mm?: number | null;
  depth_at_0p40_mm?: number | null;
  carbon_uptake_g_m2: number | null;
  balance_residual_relative: number | null;
  part_temperature_degc: number | null;
  outcome: Outcome;
  profile: Profile;
}

export interface ComparedValue { quantity: string; unit: string; values: { source: string; value: number | null; used: boolean }[] }
export interface Hardness {
  surface_hv: number | null;
  surface_hrc: number | null;
  surface_retained_austenite_pct: number | null;
  depth_mm: number[];
  hv: number[];
  retained_austenite_pct: number[];
  as: string;
  sources?: ComparedValue[];
}

export interface ModelNote { kind: string; item: string | null; from: string; to: string; text: string }
export interface Gap { input: string; basis: Basis; from: string; to: string }
export interface ShiftNote { at: string; person: string; text: string }

export interface SnapshotLoad {
  id: number;
  name: string;
  furnace: string;
  furnace_name: string;
  chamber: string;
  person: string;
  started_at: string;
  ended_at: string | null;
  state: LoadState;
  recipe: Recipe;
  revision: number;
  path?: PathStay[];
}
export interface PathStay { from: string; to: string | null; furnace?: string; furnace_name?: string; chamber?: string; chamber_name?: string; outside?: boolean }
export interface Place { furnace: string; furnace_name: string; chamber: string; chamber_name: string; since: string; position: Position | null }

export interface Change { field: string; before: string | null; after: string | null }
export interface Revision { revision: number; at: string; person: string; what: string; reason: string | null; changes: Change[] }

export interface Snapshot {
  load: SnapshotLoad;
  sequence: number;
  now: string;
  data_time: string | null;
  data_age_s: number | null;
  state_time: string | null;
  condition: Condition;
  message: string | null;
  band: string;
  place?: Place | null;   // null outside any furnace
  inputs: Inputs;
  segment: SegmentNow | null;
  minutes_left: number | null;
  items: Item[];
  controlling_item: string | null;
  notes: ModelNote[];
  gaps: Gap[];
  shift_notes: ShiftNote[];
  outlook?: Outlook | null;
  outlook_missing?: string | null;  // why there is none
  rest?: RestSegment[] | null;      // the plan from now on; the first is what is left of the present segment
  plans?: AdoptedPlan[];            // oldest first; the last one's segments are those valid now
  alerts?: AlertSummary[];
}

export interface HistoryItem {
  name: string;
  case_depth_mm: (number | null)[];
  surface_carbon_wt_pct: (number | null)[];
  part_temperature_degc: (number | null)[];
  case_depth_low_mm?: (number | null)[];
  case_depth_high_mm?: (number | null)[];
}
export interface History {
  time_s: number[];
  temperature_degc: (number | null)[];
  temperature_basis: Basis[];
  carbon_potential_wt_pct: (number | null)[];
  carbon_potential_basis: Basis[];
  items: HistoryItem[];
  outlook?: HistoryOutlook | null;
}

export interface Steel { id: string; standard: string; composition_wt_pct: Composition }

export interface LoadRow {
  id: number;
  name: string;
  furnace: string;
  chamber: string;
  person: string;
  started_at: string;
  ended_at: string | null;
  state: LoadState;
}

export interface Problem { type?: string; title?: string; status: number; detail?: string; field?: string }
