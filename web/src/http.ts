// One request to /api/v1. Rejects with ApiProblem: either the daemon's own problem document, or (status 0) the
// plain fact that no answer came, so that callers need one catch only.
import type { Problem } from './contract.ts';

const base = '/api/v1';

export class ApiProblem extends Error {
  readonly problem: Problem;
  constructor(problem: Problem) {
    super(problem.detail ?? problem.title ?? `The daemon answered with status ${problem.status}.`);
    this.problem = problem;
  }
  get answered(): boolean { return this.problem.status !== 0; }
  get conflict(): boolean { return this.problem.status === 409; }  // somebody was faster
}

interface Ask { method?: string; body?: unknown; raw?: Blob; etag?: string | null; timeoutMs?: number }
export interface Answer<T> { value: T | null; etag: string | null; notModified: boolean }

export async function ask<T>(path: string, { method = 'GET', body, raw, etag, timeoutMs = 8000 }: Ask = {}): Promise<Answer<T>> {
  const giveUp = new AbortController();
  const timer = setTimeout(() => giveUp.abort(), timeoutMs);
  try {
    const headers: Record<string, string> = { accept: 'application/json' };
    if (body !== undefined) headers['content-type'] = 'application/json';
    if (raw) headers['content-type'] = 'application/octet-stream';
    if (etag) headers['if-none-match'] = etag;
    const answer = await fetch(base + path, {
      method, headers, signal: giveUp.signal, cache: 'no-store',
      body: raw ?? (body === undefined ? undefined : JSON.stringify(body)),
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

export async function value<T>(path: string, how: Ask = {}): Promise<T> {
  const { value: got } = await ask<T>(path, how);
  return got as T;
}

export const sentenceOf = (error: unknown): string => (error instanceof ApiProblem ? error.message : String(error));
export const inPath = encodeURIComponent;
export function withQuery(path: string, query: object): string {
  const words = new URLSearchParams();
  for (const [name, given] of Object.entries(query)) if (given !== undefined && given !== '') words.set(name, String(given));
  const tail = words.toString();
  return tail ? `${path}?${tail}` : path;
}
