// Logger files of one furnace: guess, preview, named mappings, upload. Only an upload stores readings.
import type { CsvMapping, Guess, Preview, StoredMapping, Uploaded } from './contract_csv.ts';
import { inPath, value, withQuery } from './http.ts';

export type * from './contract_csv.ts';

const at = (furnace: string): string => `/furnaces/${inPath(furnace)}`;
const patienceMs = 60_000;  // a year of minutes takes its time

export const guessMapping = (furnace: string, file: Blob) =>
  value<Guess>(`${at(furnace)}/log/guess`, { method: 'POST', raw: file, timeoutMs: patienceMs });
// One line with the mapping, then the file's bytes untouched.
export const previewMapping = (furnace: string, mapping: CsvMapping, file: Blob) =>
  value<Preview>(`${at(furnace)}/log/preview`, { method: 'POST', raw: new Blob([JSON.stringify(mapping), '\n', file]), timeoutMs: patienceMs });
export const getMappings = async (furnace: string): Promise<StoredMapping[]> =>
  (await value<{ mappings: StoredMapping[] }>(`${at(furnace)}/mappings`)).mappings;
export const putMapping = (furnace: string, name: string, person: string, mapping: CsvMapping, expected_version: number) =>
  value<StoredMapping>(`${at(furnace)}/mappings/${inPath(name)}`, { method: 'PUT', body: { person, mapping, expected_version } });
export const uploadLog = (furnace: string, name: string, file: Blob) =>
  value<Uploaded>(withQuery(`${at(furnace)}/log`, { mapping: name }), { method: 'POST', raw: file, timeoutMs: patienceMs });
