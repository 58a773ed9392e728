// The plant as the daemon tells it: furnaces with their channels, marked stretches, conflicting and refused
// readings, and the library of parts and recipes. Field for field as in /api/v1.
import type {
  Chamber, Composition, CopiedFrom, Criterion, LoadBody, Quench, RecipeSegment, Recipe, Section, Window2,
} from './contract.ts';

export type HealthState = 'good' | 'silent' | 'gap' | 'stuck' | 'noisy' | 'jumping' | 'drifting' | 'masked';
export interface Health { state: HealthState; sentence: string; since: string | null }

export interface Channel {
  name: string;
  role: string;
  unit: string;
  chamber?: string;
  low?: number;
  high?: number;
  expected_interval_s?: number;
  typical_interval_s?: number | null;
  health?: Health;
  undecided?: number;
  last: { at?: string; time?: string; value: number } | null;
  stored: number;
  conflicts: number;
  refused: Record<string, number>;
}

export interface Furnace {
  id: string;
  name: string;
  process: string;
  chambers: Chamber[];
  line?: boolean;
  lag_min: number;
  csv_mappings?: string[];
  channels: Channel[];
  open_loads: number[];
}

export interface Conflict { at: string; values: number[]; chosen: { value: number | null; person: string; at: string } | null }
export interface Conflicts { conflicts: Conflict[]; undecided: number }
export interface Choice { at: string; value: number | null }  // null: none of them

export type MaskReason = 'burn-off' | 'air purge' | 'calibration' | 'other';
export interface Mask {
  id: number;
  channel: string;
  from: string;
  to: string;
  reason: MaskReason;
  person: string;
  at: string;
  withdrawn: unknown;  // null or false while it holds
  found_by: string;
}
export interface RefusedReading { received_at: string; channel: string | null; time_text: string; value_text: string; reason: string }

export interface Pushed { at: string; moved: { id: number; name: string; from: number | string | null; to: number | string | null }[] }

export interface RecentLoad {
  id: number;
  name: string;
  started_at: string;
  recipe: string | Recipe;
  items: { part: string; quantity: number; steel: string }[];
  body: LoadBody;
}

export type LibraryKind = 'parts' | 'recipes';
export interface PartBody {
  part: string;
  steel: string | { name: string; composition_wt_pct: Composition };
  core_carbon_wt_pct?: number;
  section: Section;
  criterion?: Criterion;
  case_depth_window_mm: Window2;
  surface_carbon_window_wt_pct?: Window2 | null;
  grinding_stock_mm?: number;
  lag_min?: number;
}
export interface RecipeBody { segments: RecipeSegment[]; quench?: Quench | null }
export interface LibraryEntry<Body> extends CopiedFrom { name: string; at: string; person: string; body: Body }
export interface LibraryVersion<Body> { version: number; at: string; person: string; name: string; body: Body; retired?: boolean }
export interface LibraryRecord<Body> extends CopiedFrom { name: string; body: Body; retired: boolean; versions: LibraryVersion<Body>[] }
