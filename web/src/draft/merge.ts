// Two people changed one thing: what I typed stays mine, everything else becomes theirs. Pure, on plain JSON
// values; `key` only tells rows of a form apart and never counts as a change.
type Plain = Record<string, unknown>;
const isObject = (value: unknown): value is Plain => typeof value === 'object' && value !== null && !Array.isArray(value);

export function sameValue(a: unknown, b: unknown): boolean {
  if (Array.isArray(a) && Array.isArray(b)) return a.length === b.length && a.every((each, i) => sameValue(each, b[i]));
  if (isObject(a) && isObject(b)) return [...new Set([...Object.keys(a), ...Object.keys(b)])].every((name) => name === 'key' || sameValue(a[name], b[name]));
  return Object.is(a ?? null, b ?? null);
}

export function merged<T>(base: T, mine: T, theirs: T): T {
  if (sameValue(base, mine)) return theirs;
  if (Array.isArray(base) && Array.isArray(mine) && Array.isArray(theirs) && base.length === mine.length && base.length === theirs.length) {
    return mine.map((each, i) => merged(base[i] as unknown, each as unknown, theirs[i] as unknown)) as T;
  }
  if (isObject(base) && isObject(mine) && isObject(theirs)) {
    const names = [...new Set([...Object.keys(mine), ...Object.keys(theirs)])];
    return Object.fromEntries(names.map((name) => [name, name === 'key' ? (mine as Plain)[name] : merged(base[name], (mine as Plain)[name], (theirs as Plain)[name])])) as T;
  }
  return mine;
}
