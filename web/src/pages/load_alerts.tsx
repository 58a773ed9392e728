// The alerts of one load, each with the way to answer it.
import { worstFirst } from '../alert_words.ts';
import type { AlertSummary } from '../contract_alerts.ts';
import { Acknowledge } from './alert_acts.tsx';
import { AlertLine } from './alert_line.tsx';

export function LoadAlerts({ alerts, again }: { alerts: readonly AlertSummary[] | null | undefined; again: () => void }) {
  if (!alerts || alerts.length === 0) return null;
  return <section class="panel load-alerts" aria-label="Alerts of this load" data-testid="load-alerts">
    {[...alerts].sort(worstFirst).map((each) => <div class="load-alert" key={each.id}>
      <AlertLine alert={each} />{!each.acknowledged && !each.shelved && <Acknowledge alert={each} again={again} />}</div>)}
  </section>;
}
