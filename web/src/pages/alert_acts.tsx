// What a person does about an alert: acknowledge, shelve, take off the shelf, note. Each names the person.
import { useState } from 'preact/hooks';
import { type Alert, type AlertSummary, acknowledge, noteAlert, shelve, unshelve } from '../api_alerts.ts';
import { Ask } from '../form/ask.tsx';
import { daemonNowMs, live } from '../live.ts';
import { prefs } from '../prefs.ts';
import { useStore } from '../store.ts';
import { withUnits } from '../units.ts';
import { localInput, minutesText, utcFromLocalInput, utcText } from '../words.ts';

export function Acknowledge({ alert, again }: { alert: AlertSummary; again: () => void }) {
  const [note, setNote] = useState('');
  const units = useStore(prefs);
  return <Ask id={`acknowledge-${alert.id}`} label="Acknowledge" title="Acknowledge this alert?" keep="Not yet" confirm="Acknowledge" onOpen={() => setNote('')}
    act={async (person) => { await acknowledge(alert.id, person, note.trim()); again(); }}>
    <p><b>{withUnits(alert.sentence, units)}</b>{alert.advice && <> {withUnits(alert.advice, units)}</>}</p>
    <p class="hint">It stays in the list until its cause is gone, and it sounds no more. It calls again if it becomes worse.</p>
    <label>Note, if you like<input type="text" maxLength={400} autocomplete="off" value={note} onInput={(event) => setNote(event.currentTarget.value)} /></label>
  </Ask>;
}

const spansMin = [30, 60, 240, 480];
export function Shelve({ alert, again }: { alert: Alert; again: () => void }) {
  const [reason, setReason] = useState('');
  const [minutes, setMinutes] = useState<number | null>(60);  // from now; null: `time` says
  const [time, setTime] = useState('');
  const nowMs = daemonNowMs(useStore(live));
  const until = (): string => {
    if (minutes !== null) return utcText(daemonNowMs(live.get()) + minutes * 60_000);
    const utc = utcFromLocalInput(time);
    if (utc === null) throw new Error('The end of the shelving is not complete. Enter day and time, or press one of the spans.');
    return utc;
  };
  return <Ask id={`shelve-${alert.id}`} label="Shelve" title="Shelve this alert?" keep="Leave it" confirm="Shelve" ready={reason.trim() !== ''} onOpen={() => { setReason(''); setMinutes(60); }}
    act={async (person) => { await shelve(alert.id, person, reason.trim(), until()); again(); }}>
    <p>It calls nobody until the time below. Then it is back by itself, if its cause is still there.</p>
    <div class="pick" role="group" aria-label="For how long">{spansMin.map((each) => <button type="button" key={each} class="button plain" aria-pressed={minutes === each} onClick={() => setMinutes(each)}>{minutesText(each)}</button>)}</div>
    <label>To<input type="datetime-local" value={minutes === null ? time : localInput(nowMs + minutes * 60_000)} onInput={(event) => { setMinutes(null); setTime(event.currentTarget.value); }} /></label>
    <label>Why<input type="text" maxLength={200} autocomplete="off" data-testid={`shelve-${alert.id}-reason`} value={reason} onInput={(event) => setReason(event.currentTarget.value)} /></label>
  </Ask>;
}

export function Unshelve({ alert, again }: { alert: Alert; again: () => void }) {
  return <Ask id={`unshelve-${alert.id}`} label="Off the shelf" title="Take this alert off the shelf?" keep="Leave it there" confirm="Off the shelf"
    act={async (person) => { await unshelve(alert.id, person); again(); }}><p>It calls again at once.</p></Ask>;
}

export function AddNote({ alert, again }: { alert: Alert; again: () => void }) {
  const [text, setText] = useState('');
  return <Ask id={`note-${alert.id}`} label="Note" title="Write a note on this alert" keep="No note" confirm="Save the note" ready={text.trim() !== ''} onOpen={() => setText('')}
    act={async (person) => { await noteAlert(alert.id, person, text.trim()); again(); }}>
    <label>Note<textarea rows={2} maxLength={1000} data-testid={`note-${alert.id}-text`} value={text} onInput={(event) => setText(event.currentTarget.value)} /></label>
  </Ask>;
}
