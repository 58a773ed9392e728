// Requests to /api/v1, one function per endpoint. Each rejects with ApiProblem: either the daemon's own
// problem document, or (status 0) the plain fact that no answer came, so that callers need one catch only.
import type {
  Floor, Furnace, History, LoadDefinition, LoadRow, Problem, Snapshot, SnapshotLoad, Steel,
} from './contract.ts';

export type * from './contract.ts';

const base = '/api/v1';

export class ApiProblem extends Error {
  readonly problem: Problem;
  constructor(problem: Problem) {
    super(problem.detail ?? problem.title ?? `The daemon answered with status ${problem.status}.`);
    this.problem = problem;
  }
  get answered(): boolean { return this.problem.status !== 0; }
}

interface Ask { method?: string; body?: unknown; etag?: string | null; timeoutMs?: number }
interface Answer<T> { value: T | null; etag: string | null; notModified: boolean }

async function ask<T>(path: string, { method = 'GET', body, etag, timeoutMs = 8000 }: Ask = {}): Promise<Answer<T>> {
  const giveUp = new AbortController();
  const timer = setTimeout(() => giveUp.abort(), timeoutMs);
  try {
    const headers: Record<string, string> = { accept: 'application/json' };
    if (body !== undefined) headers['content-type'] = 'application/json';
    if (etag) headers['if-none-match'] = etag;
    const answer = await fetch(base + path, {
      method, headers, signal: giveUp.signal, cache: 'no-store',
      body: body === undefined ? undefined : JSON.stringify(body),
    });
    if (answer.status === 304) return { value: null, etag: etag ?? null, notModified: true };
    if (!answer.ok) throw new ApiProblem(await problemOf(answer));
    return { value: await answer.json() as T, etag: answer.headers.get('etag'), notModified: false };
  } catch (error) {
    if (error instanceof ApiProblem) throw error;
    throw new ApiProblem({ status: 0, title: 'No answer', detail: 'hearthfront does not answer. What you entered is still here: try again when it is back.' });
  } finally {
    clearTimeout(timer);
  }
}

async function problemOf(answer: Response): Promise<Problem> {
  try {
    const said = await answer.json() as Problem;
    return { ...said, status: answer.status };
  } catch {
    return { status: answer.status, title: answer.statusText || `Status ${answer.status}` };
  }
}

async function value<T>(path: string, how: Ask = {}): Promise<T> {
  const { value: got } = await ask<T>(path, how);
  return got as T;
}

export const getFloor = (timeoutMs?: number) => value<Floor>('/floor', { timeoutMs });
export const getSnapshot = (id: number, etag: string | null) => ask<Snapshot>(`/loads/${id}/snapshot`, { etag });
export const getHistory = (id: number) => value<History>(`/loads/${id}/history`);

// The two lists may come bare or under their own name.
export async function getFurnaces(): Promise<Furnace[]> {
  const got = await value<Furnace[] | { furnaces: Furnace[] }>('/furnaces');
  return Array.isArray(got) ? got : got.furnaces;
}
export const getSteels = async (): Promise<Steel[]> => (await value<{ steels: Steel[] }>('/steels')).steels;

export interface LoadsPage { loads: LoadRow[]; next_cursor: string | number | null }
export function getLoads(query: { furnace?: string; state?: string; cursor?: string | number; limit?: number } = {}): Promise<LoadsPage> {
  const words = new URLSearchParams();
  for (const [name, given] of Object.entries(query)) if (given !== undefined) words.set(name, String(given));
  const tail = words.toString();
  return value<LoadsPage>(`/loads${tail ? `?${tail}` : ''}`);
}

// A load with the definition it was started from.
export async function getDefinition(id: number): Promise<LoadDefinition> {
  const got = await value<LoadDefinition & { definition?: LoadDefinition }>(`/loads/${id}`);
  return got.definition ?? got;
}

export async function startLoad(definition: LoadDefinition): Promise<SnapshotLoad> {
  const got = await value<SnapshotLoad & { load?: SnapshotLoad }>('/loads', { method: 'POST', body: definition });
  return got.load ?? got;
}
export const addNote = (id: number, person: string, text: string) =>
  value<unknown>(`/loads/${id}/notes`, { method: 'POST', body: { person, text } });
export const endLoad = (id: number, person: string, ended_at?: string) =>
  value<unknown>(`/loads/${id}/end`, { method: 'POST', body: ended_at ? { person, ended_at } : { person } });
