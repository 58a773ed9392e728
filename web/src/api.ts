// Floor, loads and steels: one function per endpoint. Each rejects with ApiProblem (http.ts).
import type {
  Floor, History, LoadDefinition, LoadRow, Revision, Snapshot, SnapshotLoad, Steel,
} from './contract.ts';
import { ask, value, withQuery } from './http.ts';

export type * from './contract.ts';
export { ApiProblem, sentenceOf } from './http.ts';

export const getFloor = (timeoutMs?: number) => value<Floor>('/floor', { timeoutMs });
export const getSnapshot = (id: number, etag: string | null) => ask<Snapshot>(`/loads/${id}/snapshot`, { etag });
export const getHistory = (id: number) => value<History>(`/loads/${id}/history`);

export const getSteels = async (): Promise<Steel[]> => (await value<{ steels: Steel[] }>('/steels')).steels;

export interface LoadsPage { loads: LoadRow[]; next_cursor: string | number | null }
export function getLoads(query: { furnace?: string; state?: string; cursor?: string | number; limit?: number } = {}): Promise<LoadsPage> {
  return value<LoadsPage>(withQuery('/loads', query));
}

// A load with the definition it now has.
export interface LoadRecord extends SnapshotLoad { definition: LoadDefinition }
export const getLoad = (id: number) => value<LoadRecord>(`/loads/${id}`);

export async function startLoad(definition: LoadDefinition): Promise<SnapshotLoad> {
  const got = await value<SnapshotLoad & { load?: SnapshotLoad }>('/loads', { method: 'POST', body: definition });
  return got.load ?? got;
}
export const addNote = (id: number, person: string, text: string) =>
  value<unknown>(`/loads/${id}/notes`, { method: 'POST', body: { person, text } });
export const endLoad = (id: number, person: string, ended_at?: string) =>
  value<unknown>(`/loads/${id}/end`, { method: 'POST', body: ended_at ? { person, ended_at } : { person } });
export const correctLoad = (id: number, how: { person: string; reason: string; expected_revision: number; load: LoadDefinition }) =>
  value<LoadRecord>(`/loads/${id}`, { method: 'PUT', body: how });
export type MoveTo = { furnace?: string; chamber: string } | { outside: true };
export const moveLoad = (id: number, person: string, to: MoveTo, at?: string) =>
  value<unknown>(`/loads/${id}/move`, { method: 'POST', body: { person, ...(at ? { at } : {}), ...to } });
export const cancelLoad = (id: number, person: string, reason: string) =>
  value<unknown>(`/loads/${id}/cancel`, { method: 'POST', body: { person, reason } });
export const getRevisions = async (id: number): Promise<Revision[]> =>
  (await value<{ revisions: Revision[] }>(`/loads/${id}/revisions`)).revisions;
