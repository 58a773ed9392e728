// What this screen prefers: units and light or dark. Kept in the browser where it allows that; where it
// does not (private mode, storage switched off) the choice lasts until the page is left.
import { Store } from './store.ts';
import type { Severity } from './contract_alerts.ts';
import type { LengthUnit, TemperatureUnit } from './units.ts';

export type Theme = 'auto' | 'light' | 'dark';
// The sound of this screen. `silenced` are alerts (id and severity) that stay quiet until `untilMs` of the wall clock.
export interface SoundPrefs { on: boolean; from: Exclude<Severity, 'note'>; untilMs: number; silenced: string[] }
export interface Prefs { temperature: TemperatureUnit; length: LengthUnit; theme: Theme; person: string; sound: SoundPrefs }

const key = 'hearthfront.prefs';
const usual: Prefs = { temperature: 'degc', length: 'mm', theme: 'auto', person: '', sound: { on: true, from: 'warning', untilMs: 0, silenced: [] } };

function recalled(): Prefs {
  try {
    const kept = JSON.parse(localStorage.getItem(key) ?? '{}') as Partial<Prefs>;
    return {
      temperature: kept.temperature === 'degf' ? 'degf' : 'degc',
      length: kept.length === 'inch' ? 'inch' : 'mm',
      theme: kept.theme === 'light' || kept.theme === 'dark' ? kept.theme : 'auto',
      person: typeof kept.person === 'string' ? kept.person.slice(0, 80) : '',
      sound: soundFrom(kept.sound),
    };
  } catch {
    return usual;
  }
}

function soundFrom(kept: Partial<SoundPrefs> | undefined): SoundPrefs {
  const { on, from, untilMs, silenced } = kept ?? {};
  return {
    on: on !== false, from: from === 'urgent' ? 'urgent' : 'warning',
    untilMs: typeof untilMs === 'number' ? untilMs : 0, silenced: Array.isArray(silenced) ? silenced.filter((each) => typeof each === 'string').slice(0, 500) : [],
  };
}

export const prefs = new Store<Prefs>(recalled());

export function prefer(change: Partial<Prefs>): void {
  const next = { ...prefs.get(), ...change };
  prefs.set(next);
  try { localStorage.setItem(key, JSON.stringify(next)); } catch { /* works without it */ }
}

// Another tab of this browser changed them: a silence asked for in one holds in all.
addEventListener('storage', (event) => { if (event.key === key) prefs.set(recalled()); });

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
