// Starting a load. What is typed stays typed: through refusals, lost contact, other pages and a reload.
import { useEffect, useRef, useState } from 'preact/hooks';
import { startLoad } from '../api.ts';
import type { RecentLoad } from '../api_plant.ts';
import { definitionOf } from '../draft/build.ts';
import { draftLine, nextNumber } from '../draft/describe.ts';
import { type Draft, isBlank, newDraft } from '../draft/draft.ts';
import { forget, keep, kept } from '../draft/keep.ts';
import { sameAs, withLibrarySteels } from '../draft/take.ts';
import { SaidAt, SaidHere, SelectField, TextField } from '../form/fields.tsx';
import { type Lists, useLists } from '../form/lists.ts';
import { LoadForm, groupsOf } from '../form/load_form.tsx';
import { Refused, useRefusal } from '../form/refusal.tsx';
import { daemonNowMs, live, pulse } from '../live.ts';
import { Shape } from '../pictures/mark_shape.tsx';
import { prefer, prefs } from '../prefs.ts';
import { loadLink } from '../routes.ts';
import { useStore } from '../store.ts';
import { localInput, utcFromLocalInput, utcText } from '../words.ts';
import { FurnacePick, StartAgain, useRecent } from './start_again.tsx';

const keptAs = 'new load';

export function Start({ furnace }: { furnace: string }) {
  const [draft, setDraft] = useState<Draft>(() => {
    const typed = kept<Draft>(keptAs) ?? newDraft(furnace, prefs.get().person);
    return furnace && furnace !== typed.furnace ? { ...typed, furnace, chamber: '' } : typed;
  });
  const lists = useLists();
  const recent = useRecent(draft.furnace);
  const [busy, setBusy] = useState(false);
  const form = useRef<HTMLFormElement>(null);
  const units = useStore(prefs);
  const turn = useRefusal(form, () => groupsOf(draft));
  useEffect(() => { keep(keptAs, draft); }, [draft]);
  useEffect(() => { if (lists.steels.length > 0) setDraft((before) => withLibrarySteels(before, lists.steels)); }, [lists.steels]);
  const line = lists.furnaces.find((each) => each.id === draft.furnace && each.line);
  useEffect(() => { if (line && draft.chamber === '') change({ chamber: line.chambers[0]?.id ?? '' }); }, [line, draft.chamber]);  // trays enter a line at its first zone
  const change = (part: Partial<Draft>) => setDraft((before) => ({ ...before, ...part }));
  const furnaceName = lists.furnaces.find((each) => each.id === draft.furnace)?.name ?? draft.furnace;

  const submit = async (event: Event) => {
    event.preventDefault();
    const feed = live.get();
    // "now" is the daemon's last word, not a guess beyond it, so that a start never lies in its future.
    const startedUtc = draft.startedAt !== null ? utcFromLocalInput(draft.startedAt) : feed.floor ? utcText(Date.parse(feed.floor.now)) : utcText(Date.now());
    const built = definitionOf(draft, startedUtc);
    if ('said' in built) { turn.show('Not sent yet', built.said.detail, built.said.field); return; }
    setBusy(true);
    try {
      const load = await startLoad(built.definition);
      prefer({ person: draft.person.trim() });
      forget(keptAs);
      location.hash = loadLink(load.id);
    } catch (error) {
      turn.showError(error);
    } finally {
      setBusy(false);
    }
  };
  const take = (load: RecentLoad) => {
    setDraft((before) => withLibrarySteels(sameAs(load.body, load.name, before), lists.steels));
    turn.clear();
    setTimeout(() => form.current?.querySelector<HTMLInputElement>('[data-path="name"]')?.focus());
  };
  const { refusal } = turn;
  return <SaidHere.Provider value={{ path: refusal?.path ?? null, text: refusal?.text ?? '' }}>
    <h1 class="title">Start a load</h1>
    <form ref={form} class="start" onSubmit={submit} noValidate data-testid="start-form">
      <Refused refusal={refusal} form={form} />
      {lists.problem && <p class="said spaced" role="alert"><Shape name="note" />{lists.problem}</p>}
      {draft.furnace === '' && lists.furnaces.length > 0 && <FurnacePick furnaces={lists.furnaces} pick={(id) => change({ furnace: id, chamber: '' })} />}
      <StartAgain recent={recent} furnaceName={furnaceName} again={draft.again} take={take} otherwise={() => change({ again: null })} />
      <Head draft={draft} change={change} lists={lists} offer={nextNumber(recent.loads.map((load) => load.name))} />
      {draft.again !== null && <Go draft={draft} busy={busy} />}
      <details class="rare whole-form" open={draft.again === null}>
        <summary class="panel"><span><b>Recipe and items</b> {isBlank(draft) ? 'by hand or from the library' : draftLine(draft, units)}</span></summary>
        <LoadForm draft={draft} change={change} lists={lists} />
      </details>
      {draft.again === null && <Go draft={draft} busy={busy} />}
    </form>
  </SaidHere.Provider>;
}

const Go = ({ draft, busy }: { draft: Draft; busy: boolean }) =>
  <p class="buttons spaced"><button class="button large" data-testid="start-submit" disabled={busy}>{busy ? 'Starting …' : `Start load ${draft.name}`}</button></p>;

interface HeadProps { draft: Draft; change: (part: Partial<Draft>) => void; lists: Lists; offer: string | null }
function Head({ draft, change, lists, offer }: HeadProps) {
  useStore(pulse);
  const chambers = lists.furnaces.find((each) => each.id === draft.furnace)?.chambers ?? [];
  return <fieldset class="panel">
    <legend><h2>Load</h2></legend>
    <div class="grid">
      <TextField path="name" label="load number" value={draft.name} maxLength={60} set={(name) => change({ name })}
        extra={offer !== null && draft.name === '' && <button type="button" class="button plain" data-testid="offer" aria-label={`Load number ${offer}`} onClick={() => change({ name: offer })}>take {offer}</button>} />
      <TextField path="person" label="your name" value={draft.person} set={(person) => change({ person })} />
      <SelectField path="furnace" label="furnace" value={draft.furnace} set={(next) => change({ furnace: next, chamber: '' })} options={[{ value: '', text: 'choose' }, ...lists.furnaces.map((each) => ({ value: each.id, text: each.name }))]} />
      {chambers.length > 1 ? <SelectField path="chamber" label="chamber" value={draft.chamber} set={(chamber) => change({ chamber })} options={[{ value: '', text: 'choose' }, ...chambers.map((each) => ({ value: each.id, text: each.name }))]} /> : <SaidAt path="chamber" />}
      <TextField path="started_at" label="in the hot chamber since" type="datetime-local" value={draft.startedAt ?? localInput(daemonNowMs(live.get()))} set={(startedAt) => change({ startedAt })}
        extra={<button type="button" class="button plain" aria-pressed={draft.startedAt === null} onClick={() => change({ startedAt: null })}>now</button>} />
    </div>
  </fieldset>;
}
