// The audible signal of this screen. Made of two sine tones here, no file. A browser lets a page sound only after a
// touch or a key, so until then the state is 'blocked' and the screen says so.
// Failure looks like: 'blocked' that stays, because the browser has no sound device or forbids it.
import { alertsOnFloor, calling, heard, silenceKey } from './alert_words.ts';
import type { AlertSummary, Severity } from './contract_alerts.ts';
import { live, pulse } from './live.ts';
import { prefer, prefs } from './prefs.ts';
import { Store } from './store.ts';

export type SoundState = 'off' | 'blocked' | 'quiet' | 'silenced' | 'sounding';
export const soundState = new Store<SoundState>('blocked');

export const silenceMs = 10 * 60_000;
const everyMs: Record<Severity, number> = { urgent: 5000, warning: 20_000, note: 60_000 };
const playedKey = 'hearthfront.sounded';  // shared by the tabs of one browser, so that they do not sound together

let context: AudioContext | null = null;
let playedMs = 0;

const mayPlay = (): boolean => context?.state === 'running';

// One tone that swells and fades, so that it neither clicks nor startles.
function tone(at: number, hertz: number, seconds: number, loud: number): void {
  if (!context) return;
  const swing = context.createOscillator(), level = context.createGain();
  swing.frequency.value = hertz;
  level.gain.setValueAtTime(0, at);
  level.gain.linearRampToValueAtTime(loud, at + 0.04);
  level.gain.setValueAtTime(loud, at + seconds * 0.6);
  level.gain.linearRampToValueAtTime(0, at + seconds);
  swing.connect(level).connect(context.destination);
  swing.start(at);
  swing.stop(at + seconds + 0.05);
}

// Urgent: three rising pairs. Warning: one pair that falls.
export function play(severity: Severity): void {
  if (!context || !mayPlay()) return;
  const begin = context.currentTime + 0.05;
  if (severity === 'urgent') for (let i = 0; i < 3; ++i) { tone(begin + i * 0.55, 587, 0.25, 0.5); tone(begin + i * 0.55 + 0.24, 880, 0.25, 0.5); }
  else { tone(begin, 587, 0.4, 0.3); tone(begin + 0.35, 440, 0.5, 0.3); }
}

// Called from a touch or a key; at the start too, for a browser that is set up to allow sound without one.
export async function unlock(): Promise<void> {
  try {
    if (!context) {
      context = new AudioContext();
      context.onstatechange = judge;
    }
    if (context.state !== 'running') await Promise.race([context.resume(), new Promise((done) => setTimeout(done, 500))]);
  } catch { /* no sound device: the state stays 'blocked' */ }
  judge();
}

const onFloor = (): AlertSummary[] => alertsOnFloor(live.get().floor);

export function silence(): void {
  const { sound } = prefs.get();
  prefer({ sound: { ...sound, untilMs: Date.now() + silenceMs, silenced: calling(onFloor(), sound).map(silenceKey) } });
}
export function endSilence(): void {
  prefer({ sound: { ...prefs.get().sound, untilMs: 0, silenced: [] } });
}
export function setSound(change: { on?: boolean; from?: 'warning' | 'urgent' }): void {
  prefer({ sound: { ...prefs.get().sound, ...change, untilMs: 0, silenced: [] } });
}

export function stateOf(sound: { on: boolean; untilMs: number }, allowed: boolean, callingNow: number, heardNow: number, nowMs: number): SoundState {
  if (!sound.on) return 'off';
  if (!allowed) return 'blocked';
  if (heardNow > 0) return 'sounding';
  return nowMs < sound.untilMs && callingNow > 0 ? 'silenced' : 'quiet';
}

// A silence longer ahead than it can have been asked for comes from a clock that was set back: it is over.
const sane = (untilMs: number, nowMs: number): number => (untilMs > nowMs + silenceMs ? 0 : untilMs);

function judge(): void {
  const nowMs = Date.now();
  const asked = prefs.get().sound;
  const sound = { ...asked, untilMs: sane(asked.untilMs, nowMs) };
  const all = onFloor();
  const now = heard(all, sound, nowMs);
  const state = stateOf(sound, mayPlay(), calling(all, sound).length, now.length, nowMs);
  soundState.set(state);
  if (state === 'sounding') repeat(now[0]!.severity, nowMs);
}

function repeat(severity: Severity, nowMs: number): void {
  const since = (then: number) => (then > nowMs ? Infinity : nowMs - then);
  let elsewhere = 0;
  try { elsewhere = Number(localStorage.getItem(playedKey) ?? 0); } catch { /* each tab for itself */ }
  if (since(playedMs) < everyMs[severity] - 300 || since(elsewhere) < everyMs[severity] - 300) return;
  playedMs = nowMs;
  try { localStorage.setItem(playedKey, String(nowMs)); } catch { /* each tab for itself */ }
  play(severity);
}

// Owner: main.tsx, one per page.
export function watchSound(): void {
  const touched = () => { if (prefs.get().sound.on && !mayPlay()) void unlock(); };
  for (const kind of ['pointerup', 'keydown', 'touchend'] as const) addEventListener(kind, touched, { capture: true, passive: true });
  prefs.listen(judge);
  live.listen(judge);
  pulse.listen(judge);
  void unlock();
}
