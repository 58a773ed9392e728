// The page that an address after # asks for. Unknown addresses lead to the Floor.
export type Shelf = 'parts' | 'recipes';
export type Route =
  | { page: 'floor' }
  | { page: 'load'; id: number }
  | { page: 'correct'; id: number }
  | { page: 'start'; furnace: string }
  | { page: 'loads' }
  | { page: 'alerts'; furnace: string }
  | { page: 'furnace'; id: string }
  | { page: 'files'; id: string }
  | { page: 'library'; shelf: Shelf; key: string | null };  // key '' is a new entry, null the list

const plain = (text: string): string => {
  try { return decodeURIComponent(text); } catch { return text; }
};

export function routeOf(hash: string): Route {
  const [path = '', query = ''] = hash.replace(/^#\/?/, '').split('?');
  const load = /^load\/(\d+)(\/correct)?$/.exec(path);
  if (load) return { page: load[2] ? 'correct' : 'load', id: Number(load[1]) };
  const furnace = /^furnace\/([^/]+)(\/files)?$/.exec(path);
  if (furnace) return { page: furnace[2] ? 'files' : 'furnace', id: plain(furnace[1]!) };
  const library = /^library(?:\/(parts|recipes)(?:\/(new|entry\/([^/]+)))?)?$/.exec(path);
  if (library) return { page: 'library', shelf: (library[1] ?? 'parts') as Shelf, key: library[3] !== undefined ? plain(library[3]) : library[2] === 'new' ? '' : null };
  if (path === 'start') return { page: 'start', furnace: new URLSearchParams(query).get('furnace') ?? '' };
  if (path === 'alerts') return { page: 'alerts', furnace: new URLSearchParams(query).get('furnace') ?? '' };
  if (path === 'loads') return { page: 'loads' };
  return { page: 'floor' };
}

export const floorLink = '#/';
export const loadsLink = '#/loads';
export const alertsLink = (furnace?: string): string => `#/alerts${furnace ? `?furnace=${encodeURIComponent(furnace)}` : ''}`;
export const loadLink = (id: number): string => `#/load/${id}`;
export const correctLink = (id: number): string => `#/load/${id}/correct`;
export const startLink = (furnace?: string): string => `#/start${furnace ? `?furnace=${encodeURIComponent(furnace)}` : ''}`;
export const furnaceLink = (id: string): string => `#/furnace/${encodeURIComponent(id)}`;
export const filesLink = (id: string): string => `#/furnace/${encodeURIComponent(id)}/files`;
export const libraryLink = (shelf: Shelf): string => `#/library/${shelf}`;
export const entryLink = (shelf: Shelf, key: string): string => `#/library/${shelf}/${key === '' ? 'new' : `entry/${encodeURIComponent(key)}`}`;
