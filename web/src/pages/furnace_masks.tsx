// Stretches in which a channel does not speak for the furnace (burn-off, air purge, calibration), marked and
// withdrawn by people; and the readings that were refused.
import { useState } from 'preact/hooks';
import { type Furnace, type Mask, type MaskReason, type RefusedReading, addMask, withdrawMask } from '../api_plant.ts';
import { Ask } from '../form/ask.tsx';
import { daemonNowMs, live } from '../live.ts';
import { Shape } from '../pictures/mark_shape.tsx';
import { clockText, dayClockText, localInput, minutesText, utcFromLocalInput } from '../words.ts';

const reasons: MaskReason[] = ['burn-off', 'air purge', 'calibration', 'other'];
const lengths = [5, 15, 30, 60];

export function MarkStretch({ furnace, channel, again }: { furnace: Furnace; channel: string; again: () => void }) {
  const [from, setFrom] = useState('');
  const [to, setTo] = useState('');
  const [reason, setReason] = useState<MaskReason | null>(null);
  const last = (minutes: number) => {
    const now = daemonNowMs(live.get());
    setFrom(localInput(now - minutes * 60_000));
    setTo(localInput(now));
  };
  const send = async (person: string) => {
    const [begin, end] = [utcFromLocalInput(from), utcFromLocalInput(to)];
    if (begin === null || end === null) throw new Error('The stretch is not complete. Enter day and time of both its ends.');
    if (reason === null) throw new Error('Say what it was: choose one of the four.');
    await addMask(furnace.id, { person, channel, from: begin, to: end, reason });
    again();
  };
  return <Ask id={`mark-${channel}`} label="Mark a stretch" title={`Mark a stretch of ${channel.replaceAll('_', ' ')}`} keep="Leave it" confirm="Mark it" act={send} onOpen={() => { last(15); setReason(null); }}>
    <p>In a marked stretch the readings stay stored but do not count. It can be withdrawn.</p>
    <div class="pick" role="group" aria-label="What it was">{reasons.map((each) => <button type="button" class="button plain" key={each} data-testid="mask-reason" aria-pressed={reason === each} onClick={() => setReason(each)}>{each}</button>)}</div>
    <div class="pick" role="group" aria-label="The last minutes">{lengths.map((each) => <button type="button" class="button plain" key={each} onClick={() => last(each)}>last {minutesText(each)}</button>)}</div>
    <label>From<input type="datetime-local" value={from} onInput={(event) => setFrom(event.currentTarget.value)} /></label>
    <label>To<input type="datetime-local" value={to} onInput={(event) => setTo(event.currentTarget.value)} /></label>
  </Ask>;
}

interface MasksProps { furnace: Furnace; masks: Mask[] | null; problem: string | null; again: () => void }
export function Masks({ furnace, masks, problem, again }: MasksProps) {
  const span = (mask: Mask) => `${dayClockText(Date.parse(mask.from))} – ${clockText(Date.parse(mask.to))}`;
  const sorted = [...masks ?? []].sort((a, b) => (a.from < b.from ? 1 : -1));
  return <section class="panel" data-testid="masks">
    <h2>Marked stretches</h2>
    {problem && <p class="said">{problem}</p>}
    {masks?.length === 0 && <p class="nothing">None. A stretch is marked at its channel above.</p>}
    <ul class="list">{sorted.map((mask) => <li key={mask.id} class={mask.withdrawn ? 'gone-by' : ''}><Shape name="masked" /><p class="grow"><b>{mask.reason}</b> {mask.channel.replaceAll('_', ' ')}<br />{span(mask)} <small>by {mask.person}{mask.withdrawn ? ', withdrawn' : ''}</small></p>
      {!mask.withdrawn && <Ask id={`withdraw-${mask.id}`} label="Withdraw" title={`Withdraw this ${mask.reason === 'other' ? 'stretch' : mask.reason}?`} keep="Keep it marked" confirm="Withdraw it"
        act={async (person) => { await withdrawMask(furnace.id, mask.id, person); again(); }}>
        <p>{mask.channel.replaceAll('_', ' ')}, {span(mask)}: its readings count again, and the loads they belong to are worked out anew.</p></Ask>}</li>)}</ul>
  </section>;
}

export function Refused({ refused, problem }: { refused: RefusedReading[] | null; problem: string | null }) {
  return <section class="panel" data-testid="refused-readings">
    <h2>Refused readings <small>the latest {refused?.length || ''}</small></h2>
    {problem && <p class="said">{problem}</p>}
    {refused?.length === 0 && <p class="nothing">None.</p>}
    <ul class="list">{refused?.map((each, i) => <li key={i}><p class="grow"><b>{each.reason}</b><br /><small>{(each.channel ?? 'no channel').replaceAll('_', ' ')}: value “{each.value_text}”, time “{each.time_text}”, came {dayClockText(Date.parse(each.received_at))}</small></p></li>)}</ul>
  </section>;
}
