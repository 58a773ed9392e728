// The page that an address after # asks for. Unknown addresses lead to the Floor.
export type Route =
  | { page: 'floor' }
  | { page: 'load'; id: number }
  | { page: 'start'; furnace: string }
  | { page: 'loads' };

export function routeOf(hash: string): Route {
  const [path = '', query = ''] = hash.replace(/^#\/?/, '').split('?');
  const load = /^load\/(\d+)$/.exec(path);
  if (load) return { page: 'load', id: Number(load[1]) };
  if (path === 'start') return { page: 'start', furnace: new URLSearchParams(query).get('furnace') ?? '' };
  if (path === 'loads') return { page: 'loads' };
  return { page: 'floor' };
}

export const floorLink = '#/';
export const loadsLink = '#/loads';
export const loadLink = (id: number): string => `#/load/${id}`;
export const startLink = (furnace?: string): string => `#/start${furnace ? `?furnace=${encodeURIComponent(furnace)}` : ''}`;
