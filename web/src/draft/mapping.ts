// Changing how a logger file is read: which column feeds what, time formats and zones as choices. Pure.
import type { CsvMapping, MappedColumn } from '../contract_csv.ts';

export type Use = 'unused' | 'time' | 'date' | { channel: string };

export function useOf(mapping: CsvMapping, column: string): Use {
  if (column === mapping.time_column) return 'time';
  if (column === mapping.date_column) return 'date';
  const fed = mapping.columns.find((each) => each.column === column);
  return fed ? { channel: fed.channel } : 'unused';
}

// One column has one use, and a channel is fed by one column.
export function withUse(mapping: CsvMapping, column: string, use: Use): CsvMapping {
  const before = mapping.columns.find((each) => each.column === column);
  const bare = {
    ...mapping,
    time_column: mapping.time_column === column ? '' : mapping.time_column,
    date_column: mapping.date_column === column ? null : mapping.date_column,
    columns: mapping.columns.filter((each) => each.column !== column),
  };
  if (use === 'unused') return bare;
  if (use === 'time') return { ...bare, time_column: column };
  if (use === 'date') return { ...bare, date_column: column };
  return { ...bare, columns: [...bare.columns.filter((each) => each.channel !== use.channel), { unit: null, factor: null, ...before, column, channel: use.channel }] };
}
export const withColumn = (mapping: CsvMapping, column: string, part: Partial<MappedColumn>): CsvMapping =>
  ({ ...mapping, columns: mapping.columns.map((each) => (each.column === column ? { ...each, ...part } : each)) });

export interface Choice { value: string; text: string }
export const separators: Choice[] = [
  { value: ',', text: 'comma ,' }, { value: ';', text: 'semicolon ;' }, { value: '\t', text: 'tab' }, { value: '|', text: 'bar |' }, { value: 'spaces', text: 'blanks, one or more' }, { value: 'wide_spaces', text: 'blanks, two or more' },
];
export const decimals: Choice[] = [{ value: '.', text: 'point  928.4' }, { value: ',', text: 'comma  928,4' }];
export const groupings: Choice[] = [{ value: '', text: 'none' }, { value: '.', text: 'point' }, { value: ',', text: 'comma' }, { value: ' ', text: 'blank' }, { value: "'", text: 'apostrophe' }];
export const encodings: Choice[] = ['auto', 'utf-8', 'utf-16', 'utf-16-le', 'utf-16-be', 'windows-1252', 'iso-8859-1'].map((value) => ({ value, text: value === 'auto' ? 'find out' : value }));
export const timeFormats: Choice[] = [
  { value: 'iso', text: '2026-12-31T14:05:00 (ISO)' }, { value: '%d.%m.%Y %H:%M:%S', text: '31.12.2026 14:05:00' }, { value: '%d.%m.%Y %H:%M', text: '31.12.2026 14:05' }, { value: '%d.%m.%y %H:%M:%S', text: '31.12.26 14:05:00' },
  { value: '%d/%m/%Y %H:%M:%S', text: '31/12/2026 14:05:00, day first' }, { value: '%m/%d/%Y %H:%M:%S', text: '12/31/2026 14:05:00, month first' }, { value: '%m/%d/%Y %I:%M:%S %p', text: '12/31/2026 02:05:00 PM' },
  { value: 'epoch_s', text: 'seconds since 1970' }, { value: 'epoch_ms', text: 'milliseconds since 1970' }, { value: 'serial_day', text: 'spreadsheet day number' },
];
export const units: Choice[] = [
  { value: '', text: 'the channel’s own' }, { value: 'from header', text: 'as the header says' }, { value: 'degC', text: '°C' }, { value: 'degF', text: '°F' }, { value: 'K', text: 'K' }, { value: 'mV', text: 'mV' }, { value: 'V', text: 'V' }, { value: 'uV', text: 'µV' },
  { value: 'wt_pct', text: '% C' }, { value: 'vol_pct', text: '% by volume' }, { value: 'ppm', text: 'ppm by volume' },
];
// A value that is not among the choices stays choosable as it is.
export const withValue = (choices: readonly Choice[], value: string): Choice[] =>
  (choices.some((each) => each.value === value) ? [...choices] : [...choices, { value, text: value }]);

// "" is UTC, "offset" a fixed one; anything else is a zone's name.
export const zoneOf = (mapping: CsvMapping): string => (mapping.utc_offset_min !== null ? 'offset' : mapping.time_zone ?? '');
export const withZone = (mapping: CsvMapping, zone: string): CsvMapping => ({
  ...mapping, time_zone: zone === '' || zone === 'offset' ? null : zone, utc_offset_min: zone === 'offset' ? mapping.utc_offset_min ?? 0 : null,
});

// Words for "no value" as one line of text; empty means the usual ones.
export const noValueText = (mapping: CsvMapping): string => (mapping.no_value ?? []).join(' ; ');
export const noValueFrom = (text: string): string[] | null => {
  const words = text.split(';').map((word) => word.trim()).filter(Boolean);
  return words.length > 0 ? words : null;
};
export const sameMapping = (a: CsvMapping, b: CsvMapping): boolean => JSON.stringify(ordered(a)) === JSON.stringify(ordered(b));
const ordered = ({ name: _, ...mapping }: CsvMapping): unknown => Object.entries(mapping).sort(([a], [b]) => (a < b ? -1 : 1));
