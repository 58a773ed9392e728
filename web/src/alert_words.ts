// Alerts in words and in order, and which of them sound on this screen. Pure.
import type { Floor } from './contract.ts';
import type { Alert, AlertSummary, Severity } from './contract_alerts.ts';
import type { SoundPrefs } from './prefs.ts';
import { ageText } from './words.ts';

const rank: Record<Severity, number> = { urgent: 0, warning: 1, note: 2 };
export const atLeast = (severity: Severity, least: Severity): boolean => rank[severity] <= rank[least];

// Worst first, the unanswered before the answered, then the oldest.
export const worstFirst = (a: AlertSummary, b: AlertSummary): number =>
  Number(a.shelved) - Number(b.shelved) || Number(a.acknowledged) - Number(b.acknowledged) || rank[a.severity] - rank[b.severity] || Date.parse(a.since) - Date.parse(b.since);

// Every alert the Floor carries, each once.
export function alertsOnFloor(floor: Floor | null): AlertSummary[] {
  const found = new Map<number, AlertSummary>();
  const take = (list: AlertSummary[] | null | undefined) => { for (const each of list ?? []) found.set(each.id, each); };
  take(floor?.alerts?.plant);
  for (const furnace of floor?.furnaces ?? []) {
    take(furnace.alerts);
    for (const load of furnace.loads) take(load.alerts);
  }
  return [...found.values()].sort(worstFirst);
}

// The worst of what nobody has answered; of all that is active where everything is answered.
export function worstOf(floor: Floor | null): Severity | null {
  const open = alertsOnFloor(floor).filter((each) => !each.acknowledged && !each.shelved);
  return open[0]?.severity ?? floor?.alerts?.worst ?? null;
}

// The name under which an alert is silenced: one that became worse is another.
export const silenceKey = (alert: AlertSummary): string => `${alert.id} ${alert.severity}`;

// What calls for a person by ear: neither acknowledged nor shelved, severe enough for this screen.
export const calling = (alerts: readonly AlertSummary[], sound: SoundPrefs): AlertSummary[] =>
  alerts.filter((each) => !each.acknowledged && !each.shelved && atLeast(each.severity, sound.from));
// Of those, what is heard now: silence covers what was there when it was asked for, nothing newer.
export const heard = (alerts: readonly AlertSummary[], sound: SoundPrefs, nowMs: number): AlertSummary[] =>
  calling(alerts, sound).filter((each) => nowMs >= sound.untilMs || !sound.silenced.includes(silenceKey(each)));

export function countWords(active: number, unacknowledged: number): string {
  if (active === 0) return 'no alert';
  return `${active} ${active === 1 ? 'alert' : 'alerts'}, ${unacknowledged === 0 ? 'all acknowledged' : `${unacknowledged} not acknowledged`}`;
}

export const summaryOf = (alert: Alert): AlertSummary =>
  ({ id: alert.id, kind: alert.kind, severity: alert.severity, sentence: alert.sentence, advice: alert.advice, since: alert.since, acknowledged: alert.acknowledged !== null, shelved: alert.shelved !== null });

export function whereText(alert: Alert): string {
  const words = [alert.furnace_name ?? alert.furnace, alert.load_name === null ? null : `load ${alert.load_name}`, alert.item === null ? null : `item ${alert.item}`];
  return words.filter(Boolean).join(' · ') || 'hearthfront itself';
}

export const timesText = (times: number): string => (times <= 1 ? '' : `came ${times} times`);
export const sinceAge = (since: string, nowMs: number): string => ageText(Math.max(0, (nowMs - Date.parse(since)) / 1000));
