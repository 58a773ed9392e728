// Times for which a channel sent two values or more. Until somebody chooses, none of them counts.
import { useState } from 'preact/hooks';
import { type Channel, type Choice, type Conflict, chooseValues, getConflicts } from '../api_plant.ts';
import { type Picks, picksAll, unsaved } from '../draft/picks.ts';
import { sentenceOf } from '../http.ts';
import { Shape } from '../pictures/mark_shape.tsx';
import { prefer, prefs } from '../prefs.ts';
import { useStore } from '../store.ts';
import { channelText } from '../units.ts';
import { useAsked } from '../use_asked.ts';
import { clockText, dayText } from '../words.ts';

const shownAtOnce = 100;

export function ConflictList({ furnace, channel, again }: { furnace: string; channel: Channel; again: () => void }) {
  const { temperature } = useStore(prefs);
  const asked = useAsked(() => getConflicts(furnace, channel.name, shownAtOnce), 600_000, `${furnace} ${channel.name}`);
  const [picks, setPicks] = useState<Picks>({});
  const [person, setPerson] = useState(prefs.get().person);
  const [problem, setProblem] = useState<string | null>(null);
  const [busy, setBusy] = useState(false);
  if (!asked.value) return <p class="nothing" role="status">{asked.problem ?? 'Asking …'}</p>;
  const { conflicts, undecided } = asked.value;
  const choices = unsaved(conflicts, picks);
  const save = async (event: Event) => {
    event.preventDefault();
    setBusy(true);
    try {
      await chooseValues(furnace, channel.name, person.trim(), choices);
      prefer({ person: person.trim() });
      setPicks({});
      setProblem(null);
      asked.again();
      again();
    } catch (error) {
      setProblem(sentenceOf(error));
    } finally {
      setBusy(false);
    }
  };
  return <form class="conflicts" onSubmit={save} noValidate data-testid="conflicts">
    <p class="hint">Two values came for the same time. Until one is chosen, none counts. {undecided > 0 ? `${undecided} to decide${undecided > conflicts.length ? `, the first ${conflicts.length} shown` : ''}.` : 'All are decided; a choice can be changed.'}</p>
    <div class="pick"><button type="button" class="button plain" data-testid="all-lower" onClick={() => setPicks(picksAll(conflicts, 'lower'))}>Lower for all shown</button>
      <button type="button" class="button plain" data-testid="all-higher" onClick={() => setPicks(picksAll(conflicts, 'higher'))}>Higher for all shown</button></div>
    <ol class="list conflict-list">{conflicts.map((each) => <Row key={each.at} conflict={each} pick={picks[each.at]} text={(value) => channelText(value, channel.unit, temperature)}
      set={(value) => setPicks((before) => ({ ...before, [each.at]: value }))} />)}</ol>
    {problem && <p class="said" role="alert"><Shape name="note" />{problem}</p>}
    <p class="save-line"><label>Your name<input type="text" maxLength={80} autocomplete="off" data-testid="conflicts-person" value={person} onInput={(event) => setPerson(event.currentTarget.value)} /></label>
      <button class="button" data-testid="conflicts-save" disabled={busy || choices.length === 0}>{choices.length === 0 ? 'Nothing chosen yet' : `Save ${choices.length} ${choices.length === 1 ? 'choice' : 'choices'}`}</button></p>
  </form>;
}

interface RowProps { conflict: Conflict; pick: Choice['value'] | undefined; text: (value: number) => string; set: (value: Choice['value']) => void }
function Row({ conflict, pick, text, set }: RowProps) {
  const at = Date.parse(conflict.at);
  const now = pick === undefined ? conflict.chosen?.value : pick;
  const button = (value: number | null, label: string) => <button type="button" class="button plain" key={String(value)} data-testid="conflict-value" aria-pressed={now !== undefined && now === value} onClick={() => set(value)}>{label}</button>;
  return <li><span class="conflict-at"><b>{clockText(at, true)}</b><small>{dayText(at)}</small></span>
    <span class="pick" role="group" aria-label={`Value at ${clockText(at, true)}`}>{[...conflict.values].sort((a, b) => a - b).map((value) => button(value, text(value)))}{button(null, 'none')}</span>
    {pick === undefined && conflict.chosen && <small>chosen by {conflict.chosen.person}</small>}</li>;
}
