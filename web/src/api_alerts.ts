// Alerts and their targets: one function per endpoint.
import type { AlertRecord, AlertsPage, Target } from './contract_alerts.ts';
import { inPath, value, withQuery } from './http.ts';

export type * from './contract_alerts.ts';

export interface AlertsQuery { state: 'active' | 'past' | 'all'; furnace?: string; load?: number; cursor?: string | number; limit?: number }
export const getAlerts = (query: AlertsQuery) => value<AlertsPage>(withQuery('/alerts', query));
export const getAlert = (id: number) => value<AlertRecord>(`/alerts/${id}`);

const post = (id: number, what: string, body: object) => value<AlertRecord>(`/alerts/${id}/${what}`, { method: 'POST', body });
export const acknowledge = (id: number, person: string, note: string) => post(id, 'acknowledge', note ? { person, note } : { person });
export const shelve = (id: number, person: string, reason: string, until: string) => post(id, 'shelve', { person, reason, until });
export const unshelve = (id: number, person: string) => post(id, 'unshelve', { person });
export const noteAlert = (id: number, person: string, text: string) => post(id, 'notes', { person, text });

export const getTargets = async (): Promise<Target[]> => (await value<{ targets: Target[] }>('/targets')).targets;
export const testTarget = (name: string, person: string) =>  // the daemon itself waits up to 10 s for the other side
  value<{ delivered: boolean; error: string | null }>(`/targets/${inPath(name)}/test`, { method: 'POST', body: { person }, timeoutMs: 15_000 });
export const retryTarget = (name: string, person: string) => value<{ retried: number }>(`/targets/${inPath(name)}/retry`, { method: 'POST', body: { person } });
