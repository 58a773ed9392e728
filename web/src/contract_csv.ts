// Logger files: how one is read (the mapping), what reading it would give (the preview), what an upload gave.
export interface MappedColumn { column: string; channel: string; unit: string | null; factor: number | null }
export interface CsvMapping {
  name?: string;
  encoding: string;
  separator: string;
  decimal: string;
  thousands: string | null;
  comment: string | null;
  header_lines: number;
  units_line: boolean;
  time_column: string;
  date_column: string | null;
  time_format: string;
  time_zone: string | null;
  utc_offset_min: number | null;
  no_value: string[] | null;
  columns: MappedColumn[];
}

export type CellState = 'value' | 'empty' | 'no value' | 'refused';
export interface PreviewValue { channel: string; state: CellState; value: number | null; reason: string | null }
export interface PreviewRow { line: number; cells: string[]; time: string | null; local: string | null; reason: string | null; values: PreviewValue[] }
export interface PreviewColumn { column: string; use: 'time' | 'date' | 'channel' | 'unused'; channel: string | null; unit_in_file: string | null; unit: string | null }
export interface PreviewTotals {
  rows: number;
  readings: number;
  refused: number;
  no_value: number;
  repeated_headers: number;
  refused_by_reason: Record<string, number>;
  no_value_by_text: Record<string, number>;
  first: string | null;
  last: string | null;
  interval_s: number | null;
}
export interface PreviewChannel { channel: string; unit: string; readings: number; refused: number; no_value: number; lowest: number | null; highest: number | null }
export interface LineProblem { line: number; reason: string }
export interface Preview {
  fits: boolean;
  problem: { line: number | null; text: string } | null;
  encoding: string;
  raw_lines: { line: number; text: string }[];
  header: string[];
  units: string[];
  columns: PreviewColumn[];
  rows: PreviewRow[];
  totals: PreviewTotals;
  channels: PreviewChannel[];
  problems: LineProblem[];
  warnings: { kind: string; text: string }[];
}

export interface Unsure { field: string; text: string }
export interface Guess { mapping: CsvMapping; unsure: Unsure[]; preview: Preview }
export interface StoredMapping {
  name: string;
  source: 'library' | 'plant file';
  replaces_plant_file?: boolean;
  version: number | null;
  at: string | null;
  person: string | null;
  mapping: CsvMapping;
  fault: string | null;
}
export interface Uploaded { stored: number; duplicate?: number; conflict?: number; refused: number; no_value?: number; problems: LineProblem[] }
