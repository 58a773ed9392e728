// What this screen prefers: units and light or dark. Kept in the browser where it allows that; where it
// does not (private mode, storage switched off) the choice lasts until the page is left.
import { Store } from './store.ts';
import type { LengthUnit, TemperatureUnit } from './units.ts';

export type Theme = 'auto' | 'light' | 'dark';
export interface Prefs { temperature: TemperatureUnit; length: LengthUnit; theme: Theme; person: string }

const key = 'hearthfront.prefs';
const usual: Prefs = { temperature: 'degc', length: 'mm', theme: 'auto', person: '' };

function recalled(): Prefs {
  try {
    const kept = JSON.parse(localStorage.getItem(key) ?? '{}') as Partial<Prefs>;
    return {
      temperature: kept.temperature === 'degf' ? 'degf' : 'degc',
      length: kept.length === 'inch' ? 'inch' : 'mm',
      theme: kept.theme === 'light' || kept.theme === 'dark' ? kept.theme : 'auto',
      person: typeof kept.person === 'string' ? kept.person.slice(0, 80) : '',
    };
  } catch {
    return usual;
  }
}

export const prefs = new Store<Prefs>(recalled());

export function prefer(change: Partial<Prefs>): void {
  const next = { ...prefs.get(), ...change };
  prefs.set(next);
  try { localStorage.setItem(key, JSON.stringify(next)); } catch { /* works without it */ }
}

const darkScreen = matchMedia('(prefers-color-scheme: dark)');
export const shownTheme = new Store<'light' | 'dark'>('light');
function applyTheme(): void {
  const wanted = prefs.get().theme;
  const shown = wanted === 'auto' ? (darkScreen.matches ? 'dark' : 'light') : wanted;
  document.documentElement.dataset.theme = shown;
  shownTheme.set(shown);
}
export function watchTheme(): void {
  prefs.listen(applyTheme);
  darkScreen.addEventListener('change', applyTheme);
  applyTheme();
}
