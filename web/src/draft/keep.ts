// Keeps what is being typed while its tab lives, in memory and, where the browser allows, for a reload.
const inMemory = new Map<string, unknown>();
const keyOf = (name: string): string => `hearthfront.typed.${name}`;

export function keep(name: string, typed: unknown): void {
  inMemory.set(name, typed);
  try { sessionStorage.setItem(keyOf(name), JSON.stringify(typed)); } catch { /* memory alone, then */ }
}

export function kept<T>(name: string): T | null {
  if (inMemory.has(name)) return inMemory.get(name) as T;
  try {
    return JSON.parse(sessionStorage.getItem(keyOf(name)) ?? 'null') as T | null;
  } catch {
    return null;
  }
}

export function forget(name: string): void {
  inMemory.delete(name);
  try { sessionStorage.removeItem(keyOf(name)); } catch { /* nothing was kept */ }
}
