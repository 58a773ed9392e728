// Furnaces, their channels and stretches, and the library: one function per endpoint.
import type {
  Choice, Conflicts, Furnace, LibraryEntry, LibraryKind, LibraryRecord, Mask, MaskReason, PartBody, Pushed, RecentLoad, RecipeBody, RefusedReading,
} from './contract_plant.ts';
import { inPath, value, withQuery } from './http.ts';

export type * from './contract_plant.ts';

// The list may come bare or under its own name.
export async function getFurnaces(): Promise<Furnace[]> {
  const got = await value<Furnace[] | { furnaces: Furnace[] }>('/furnaces');
  return Array.isArray(got) ? got : got.furnaces;
}
const at = (furnace: string): string => `/furnaces/${inPath(furnace)}`;
const atChannel = (furnace: string, channel: string): string => `${at(furnace)}/channels/${inPath(channel)}/conflicts`;

export const getFurnace = (id: string) => value<Furnace>(at(id));
export const getRecent = async (id: string): Promise<RecentLoad[]> => (await value<{ loads: RecentLoad[] }>(`${at(id)}/recent`)).loads;
export const pushLine = (id: string, person: string, when?: string) =>
  value<Pushed>(`${at(id)}/push`, { method: 'POST', body: when ? { person, at: when } : { person } });

export const getConflicts = (furnace: string, channel: string, limit: number) => value<Conflicts>(withQuery(atChannel(furnace, channel), { limit }));
export const chooseValues = (furnace: string, channel: string, person: string, choices: Choice[]) =>
  value<Conflicts>(atChannel(furnace, channel), { method: 'POST', body: { person, choices } });

export const getMasks = async (furnace: string): Promise<Mask[]> => (await value<{ masks: Mask[] }>(`${at(furnace)}/masks`)).masks;
export const addMask = (furnace: string, mask: { person: string; channel: string; from: string; to: string; reason: MaskReason }) =>
  value<Mask>(`${at(furnace)}/masks`, { method: 'POST', body: mask });
export const withdrawMask = (furnace: string, mask: number, person: string) =>
  value<Mask>(`${at(furnace)}/masks/${mask}/withdraw`, { method: 'POST', body: { person } });
export const getRefused = async (furnace: string): Promise<RefusedReading[]> =>
  (await value<{ refused: RefusedReading[] }>(withQuery(`${at(furnace)}/refused`, { limit: 50 }))).refused;

interface Bodies { parts: PartBody; recipes: RecipeBody }
export const getLibrary = async <K extends LibraryKind>(kind: K): Promise<LibraryEntry<Bodies[K]>[]> =>
  (await value<{ entries: LibraryEntry<Bodies[K]>[] }>(`/library/${kind}`)).entries;
export const getLibraryRecord = <K extends LibraryKind>(kind: K, key: string) => value<LibraryRecord<Bodies[K]>>(`/library/${kind}/${inPath(key)}`);
export interface Put<Body> { person: string; expected_version: number; name: string; body: Body; retired?: boolean }
export const putLibrary = <K extends LibraryKind>(kind: K, key: string, put: Put<Bodies[K]>) =>
  value<LibraryEntry<Bodies[K]>>(`/library/${kind}/${inPath(key)}`, { method: 'PUT', body: put });
