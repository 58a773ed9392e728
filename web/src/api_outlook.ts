// Trials, proposals and plans of a load: one function per endpoint. None of them touches a furnace. A trial and a
// proposal are computed while the page waits, so they are given more time than a plain document.
import type { LoadRecord } from './api.ts';
import type { Proposal, RestSegment, Trial } from './contract_outlook.ts';
import { value } from './http.ts';

export type * from './contract_outlook.ts';

export const tryRest = (id: number, segments: RestSegment[]) => value<Trial>(`/loads/${id}/trial`, { method: 'POST', body: { segments }, timeoutMs: 20_000 });
export const propose = (id: number, askedChance: number) => value<Proposal>(`/loads/${id}/proposal`, { method: 'POST', body: { asked_chance: askedChance }, timeoutMs: 90_000 });
export const adoptPlan = (id: number, how: { person: string; reason: string; expected_revision: number; segments: RestSegment[] }) =>
  value<LoadRecord>(`/loads/${id}/plan`, { method: 'POST', body: how, timeoutMs: 20_000 });
