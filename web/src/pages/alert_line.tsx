// Alerts where they belong: on a card or a load's page, the worst in full and the others counted.
import { worstFirst, sinceAge } from '../alert_words.ts';
import type { AlertSummary } from '../contract_alerts.ts';
import { daemonNowMs, live } from '../live.ts';
import { Shape, severityShape } from '../pictures/mark_shape.tsx';
import { prefs } from '../prefs.ts';
import { useStore } from '../store.ts';
import { withUnits } from '../units.ts';

// Severity by shape and word; what a person did about it too.
export function SeverityTag({ alert }: { alert: Pick<AlertSummary, 'severity'> }) {
  return <span class={`severity ${alert.severity}`}><Shape name={severityShape(alert.severity)} /><b>{alert.severity}</b></span>;
}

export function AlertLine({ alert, age = true }: { alert: AlertSummary; age?: boolean }) {
  const units = useStore(prefs);
  const feed = useStore(live);
  return <p class={`alert-line ${alert.acknowledged || alert.shelved ? 'answered' : ''}`} data-testid="alert-line" data-alert={alert.id}>
    <SeverityTag alert={alert} />
    <span class="alert-said"><b>{withUnits(alert.sentence, units)}</b> {alert.advice && !alert.acknowledged && !alert.shelved && withUnits(alert.advice, units)}
      <small>{age && ` for ${sinceAge(alert.since, daemonNowMs(feed))}`}{alert.shelved ? ' · shelved' : alert.acknowledged ? ' · acknowledged' : ''}</small></span>
  </p>;
}

// What is shelved keeps out of the way; it stands on the alerts page.
export function AlertLines({ alerts }: { alerts: readonly AlertSummary[] | null | undefined }) {
  const [first, ...rest] = (alerts ?? []).filter((each) => !each.shelved).sort(worstFirst);
  if (!first) return null;
  return <div class="alert-lines">
    <AlertLine alert={first} />
    {rest.length > 0 && <p class="alert-more">{rest.map((each) => <span key={each.id}><Shape name={severityShape(each.severity)} /> {each.severity}: {each.kind}</span>)}</p>}
  </div>;
}
