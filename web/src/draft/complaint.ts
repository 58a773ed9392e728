// Where on a form the daemon's complaint belongs, and how it reads there. Pure.
import { capital } from '../units.ts';

// A problem's sentence for a person: without the path in front, which the form shows by its place.
export function plainDetail(detail: string, field: string | undefined): string {
  const bare = field && detail.startsWith(`${field}: `) ? detail.slice(field.length + 2) : detail;
  return capital(bare);
}

// "item 2", "segment 1" or nothing: which of several the path means.
export function whichOf(path: string): string {
  const found = /^(items|(?:recipe|body)\.segments)\[(\d+)\]/.exec(path);
  return found ? `${found[1] === 'items' ? 'item' : 'segment'} ${Number(found[2]) + 1}` : '';
}

// The field on the form that a problem's `field` belongs to: itself or its nearest ancestor that is shown.
export function placeOf(field: string | undefined, shown: readonly string[]): string | null {
  let best: string | null = null;
  for (const path of shown) {
    const fits = field === path || field?.startsWith(`${path}.`) || field?.startsWith(`${path}[`);
    if (fits && path.length > (best?.length ?? -1)) best = path;
  }
  return best;
}
