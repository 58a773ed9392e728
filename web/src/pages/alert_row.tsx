// One alert on the alerts page: what, where, since when, who answered, whether the message got through; what can be
// done about it; and, opened, everything that happened to it.
import { useEffect, useState } from 'preact/hooks';
import { summaryOf, sinceAge, timesText, whereText } from '../alert_words.ts';
import { type Alert, type AlertRecord, type Delivery, getAlert } from '../api_alerts.ts';
import { sentenceOf } from '../http.ts';
import { daemonNowMs, live } from '../live.ts';
import type { MarkShape } from '../marks.ts';
import { Shape } from '../pictures/mark_shape.tsx';
import { prefs } from '../prefs.ts';
import { furnaceLink, loadLink } from '../routes.ts';
import { useStore } from '../store.ts';
import { withUnits } from '../units.ts';
import { momentText } from '../words.ts';
import { Acknowledge, AddNote, Shelve, Unshelve } from './alert_acts.tsx';
import { SeverityTag } from './alert_line.tsx';

interface Props { alert: Alert; again: () => void }

export function AlertRow({ alert, again }: Props) {
  const units = useStore(prefs);
  const nowMs = daemonNowMs(useStore(live));
  const active = alert.state === 'active';
  const at = (time: string) => momentText(Date.parse(time), nowMs);
  const answered = alert.acknowledged !== null || alert.shelved !== null;
  return <article class={`alert ${alert.severity} ${active && !answered ? 'open' : ''}`} data-testid="alert" data-alert={alert.id}>
    <div class="alert-head"><SeverityTag alert={summaryOf(alert)} /><span class="kind">{alert.kind}</span><Where alert={alert} /></div>
    <h2>{withUnits(alert.sentence, units)}</h2>
    {alert.advice && <p class="advice">{withUnits(alert.advice, units)}</p>}
    <p class="alert-facts">
      <span>since {at(alert.since)}{active ? `, ${sinceAge(alert.since, nowMs)}` : alert.cleared_at ? ` to ${at(alert.cleared_at)}` : ''}</span>
      {alert.times > 1 && <span>{timesText(alert.times)}, last {at(alert.last_seen)}</span>}
      {alert.escalated && <span><Shape name="urgent" /> escalated</span>}
      {alert.acknowledged && <span data-testid="acknowledged"><Shape name="acknowledged" /> acknowledged by {alert.acknowledged.person}, {at(alert.acknowledged.at)}</span>}
      {alert.shelved && <span data-testid="shelved"><Shape name="shelved" /> shelved to {at(alert.shelved.until)} by {alert.shelved.person}: {alert.shelved.reason}</span>}
      <Deliveries delivery={alert.delivery} />
    </p>
    <div class="alert-acts">
      {active && !alert.acknowledged && <Acknowledge alert={summaryOf(alert)} again={again} />}
      {active && (alert.shelved ? <Unshelve alert={alert} again={again} /> : <Shelve alert={alert} again={again} />)}
      <AddNote alert={alert} again={again} />
    </div>
    <More alert={alert} />
  </article>;
}

function Where({ alert }: { alert: Alert }) {
  if (alert.load !== null) return <a class="where" href={loadLink(alert.load)}>{whereText(alert)}</a>;
  return alert.furnace !== null ? <a class="where" href={furnaceLink(alert.furnace)}>{whereText(alert)}</a> : <span class="where">{whereText(alert)}</span>;
}

const deliveryShape: Record<Delivery['state'], MarkShape> = { waiting: 'waiting', delivered: 'delivered', stuck: 'not delivered' };
function Deliveries({ delivery }: { delivery: Alert['delivery'] }) {
  const said = (['stuck', 'waiting', 'delivered'] as const).filter((state) => delivery[state] > 0);
  if (said.length === 0) return <span data-testid="delivery">no message asked for</span>;
  return <>{said.map((state) => <span key={state} class={`is-${state}`} data-testid="delivery"><Shape name={deliveryShape[state]} /> {delivery[state]} {state}</span>)}</>;
}

function More({ alert }: { alert: Alert }) {
  const [open, setOpen] = useState(false);
  const [record, setRecord] = useState<AlertRecord | null>(null);
  const [problem, setProblem] = useState<string | null>(null);
  const units = useStore(prefs);
  const nowMs = daemonNowMs(useStore(live));
  const at = (time: string) => momentText(Date.parse(time), nowMs);
  const moved = JSON.stringify([alert.last_seen, alert.delivery, alert.acknowledged, alert.shelved, alert.state]);
  useEffect(() => {
    let gone = false;
    if (open) getAlert(alert.id).then((got) => { if (!gone) { setRecord(got); setProblem(null); } }).catch((error: unknown) => { if (!gone) setProblem(sentenceOf(error)); });
    return () => { gone = true; };
  }, [open, alert.id, moved]);
  return <details class="rare" data-testid="alert-more" onToggle={(event) => setOpen(event.currentTarget.open)}>
    <summary><span>What happened, and who was told</span></summary>
    {problem && <p class="said">{problem}</p>}
    {record && <div class="alert-record">
      <div><h3>Events</h3><ol class="list">{record.events.map((each, i) => <li key={i}><p><b>{each.what}</b>{each.person && ` by ${each.person}`}, {at(each.at)}{each.text && <><br />{withUnits(each.text, units)}</>}</p></li>)}</ol></div>
      <div><h3>Messages</h3>{record.deliveries.length === 0 ? <p class="nothing">None was asked for.</p> : <ul class="list">{record.deliveries.map((each) => <li key={each.key} class={`is-${each.state}`}><Shape name={deliveryShape[each.state]} /><p>
        <b>{each.target}</b>: {each.state}, {each.event}{each.delivered_at ? `, ${at(each.delivered_at)}` : ''}<small> {each.attempts} {each.attempts === 1 ? 'attempt' : 'attempts'}{each.next_try && each.state === 'waiting' ? `, next ${at(each.next_try)}` : ''}</small>
        {each.error && <><br /><span class="error">{each.error}</span></>}</p></li>)}</ul>}</div>
    </div>}
  </details>;
}
