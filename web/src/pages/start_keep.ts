// Keeps the draft of a new load while its tab lives, in memory and, where the browser allows, for a reload.
import type { Draft } from './start_draft.ts';

const key = 'hearthfront.draft';
let inMemory: Draft | null = null;

export function keepDraft(draft: Draft): void {
  inMemory = draft;
  try { sessionStorage.setItem(key, JSON.stringify(draft)); } catch { /* memory alone, then */ }
}

export function keptDraft(): Draft | null {
  if (inMemory) return inMemory;
  try {
    const kept = JSON.parse(sessionStorage.getItem(key) ?? 'null') as Draft | null;
    return kept && Array.isArray(kept.segments) && Array.isArray(kept.items) ? kept : null;
  } catch {
    return null;
  }
}

export function forgetDraft(): void {
  inMemory = null;
  try { sessionStorage.removeItem(key); } catch { /* nothing was kept */ }
}
