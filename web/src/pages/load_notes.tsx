// What the model has to say about this load, stretches without measurement, and the shift's own notes.
import { useState } from 'preact/hooks';
import { ApiProblem, type Snapshot, addNote } from '../api.ts';
import { Shape } from '../pictures/mark_shape.tsx';
import { prefer, prefs } from '../prefs.ts';
import { groupedNotes } from '../note_groups.ts';
import { clockText, dayClockText, minutesText } from '../words.ts';

const span = (from: string, to: string): string => `${clockText(Date.parse(from))} – ${clockText(Date.parse(to))}`;

export function ModelNotes({ snapshot }: { snapshot: Snapshot }) {
  return <section class="panel">
    <h2>Model notes</h2>
    {snapshot.notes.length === 0 ? <p class="nothing">None.</p> : <ul class="list">{groupedNotes(snapshot.notes).map((group) => <li key={group.kind + group.item}>
      <Shape name="note" /><p><b>{group.kind}</b>{group.item && `, item ${group.item}`}, {span(group.from, group.to)}{group.times > 1 && ` (${group.times} times, ${minutesText(group.minutes)} in all)`}<br />{group.text}</p></li>)}</ul>}
  </section>;
}

const inputName = (input: string): string => input.replaceAll('_', ' ');

export function GapList({ snapshot }: { snapshot: Snapshot }) {
  return <section class="panel">
    <h2>Stretches without measurement</h2>
    {snapshot.gaps.length === 0 ? <p class="nothing">None: both inputs were measured throughout.</p> : <ul class="list">{snapshot.gaps.map((gap, i) => <li key={i} class="guess">
      <Shape name={gap.basis === 'measured' ? 'held' : gap.basis} /><p><b>{inputName(gap.input)} {gap.basis}</b> {span(gap.from, gap.to)}, {minutesText((Date.parse(gap.to) - Date.parse(gap.from)) / 60_000)}</p></li>)}</ul>}
  </section>;
}

export function ShiftNotes({ snapshot, again }: { snapshot: Snapshot; again: () => void }) {
  const [person, setPerson] = useState(prefs.get().person);
  const [text, setText] = useState('');
  const [busy, setBusy] = useState(false);
  const [problem, setProblem] = useState<string | null>(null);
  const add = async (event: Event) => {
    event.preventDefault();
    setBusy(true);
    try {
      await addNote(snapshot.load.id, person.trim(), text.trim());
      prefer({ person: person.trim() });
      setText('');
      setProblem(null);
      again();
    } catch (error) {
      setProblem(error instanceof ApiProblem ? error.message : String(error));
    } finally {
      setBusy(false);
    }
  };
  return <section class="panel notes">
    <h2>Shift notes</h2>
    {snapshot.shift_notes.length === 0 ? <p class="nothing">None yet.</p> : <ul class="list">{snapshot.shift_notes.map((note, i) => <li key={i}>
      <p><b>{note.person}</b>, {dayClockText(Date.parse(note.at))}<br />{note.text}</p></li>)}</ul>}
    <form class="note-form" onSubmit={add} noValidate>
      <label>Note<textarea rows={2} maxLength={1000} data-testid="note-text" value={text} onInput={(event) => setText(event.currentTarget.value)} /></label>
      <label>Your name<input type="text" maxLength={80} autocomplete="off" data-testid="note-person" value={person} onInput={(event) => setPerson(event.currentTarget.value)} /></label>
      <button class="button plain" data-testid="note-add" disabled={busy}>Add note</button>
      {problem && <p class="said" role="alert"><Shape name="note" />{problem}</p>}
    </form>
  </section>;
}
