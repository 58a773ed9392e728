// Alerts: those that are active, worst first, or those of the past, newest first; of one furnace or of all; and the
// targets they are sent to. A condition that comes back is one row that counts.
import { useEffect, useState } from 'preact/hooks';
import { type Alert, type AlertsPage, getAlerts } from '../api_alerts.ts';
import { sentenceOf } from '../http.ts';
import { alertsMoved, live } from '../live.ts';
import { Shape } from '../pictures/mark_shape.tsx';
import { alertsLink } from '../routes.ts';
import { Watch } from '../shell/watch.tsx';
import { useStore } from '../store.ts';
import { useAsked } from '../use_asked.ts';
import { AlertRow } from './alert_row.tsx';
import { Targets } from './alert_targets.tsx';

const pageLength = 50;

export function Alerts({ furnace }: { furnace: string }) {
  const [state, setState] = useState<'active' | 'past'>('active');
  const { floor } = useStore(live);
  const furnaces = floor?.furnaces ?? [];
  return <>
    <div class="load-title"><h1 class="title">Alerts</h1><Watch /></div>
    <div class="filters">
      <div class="pick" role="group" aria-label="Which alerts">
        <button type="button" class="button plain" data-testid="alerts-active" aria-pressed={state === 'active'} onClick={() => setState('active')}>Active</button>
        <button type="button" class="button plain" data-testid="alerts-past" aria-pressed={state === 'past'} onClick={() => setState('past')}>Past</button>
      </div>
      <label>Furnace<select value={furnace} data-testid="alerts-furnace" onChange={(event) => { location.hash = alertsLink(event.currentTarget.value); }}>
        <option value="" selected={furnace === ''}>all furnaces</option>
        {[...furnaces].sort((a, b) => a.name.localeCompare(b.name)).map((each) => <option key={each.id} value={each.id} selected={each.id === furnace}>{each.name}</option>)}
      </select></label>
    </div>
    <List state={state} furnace={furnace} key={`${state} ${furnace}`} />
    <Targets />
  </>;
}

function List({ state, furnace }: { state: 'active' | 'past'; furnace: string }) {
  const [older, setOlder] = useState<AlertsPage | null>(null);  // pages beyond the first; the first is kept current
  const [trouble, setTrouble] = useState<string | null>(null);
  const ask = (cursor?: string | number) => getAlerts({ state, furnace, cursor, limit: pageLength });
  const { value, problem, again } = useAsked(() => ask(), 5000, `${state} ${furnace}`);
  useEffect(() => alertsMoved.listen(again), [state, furnace]);
  const next = older ? older.next_cursor : value?.next_cursor ?? null;
  const more = async () => {
    if (next === null) return;
    try {
      const page = await ask(next);
      setOlder({ alerts: [...older?.alerts ?? [], ...page.alerts], next_cursor: page.next_cursor });
      setTrouble(null);
    } catch (error) { setTrouble(sentenceOf(error)); }
  };
  const said = problem ?? trouble;
  const first = value?.alerts ?? [];
  const known = new Set(first.map((each) => each.id));
  const rows: Alert[] = [...first, ...(older?.alerts ?? []).filter((each) => !known.has(each.id))];
  return <>
    {said && <p class="said" role="alert"><Shape name="note" />{said}</p>}
    {!value && !said && <p class="waiting" role="status">Asking hearthfront for the alerts …</p>}
    {value && rows.length === 0 && <p class="waiting" data-testid="no-alerts">{state === 'active' ? 'Nothing is wrong that hearthfront can see.' : 'No alert so far.'}</p>}
    <div class="alerts">{rows.map((each) => <AlertRow key={each.id} alert={each} again={again} />)}</div>
    {next !== null && <p><button type="button" class="button plain" onClick={() => void more()}>{state === 'past' ? 'Older alerts' : 'More alerts'}</button></p>}
  </>;
}
