// Correcting a load: the form filled with its definition, a reason, and care that nobody's change is lost.
import { useEffect, useRef, useState } from 'preact/hooks';
import { ApiProblem, type Revision, type Stay, correctLoad, getLoad, getRevisions, sentenceOf } from '../api.ts';
import { definitionOf } from '../draft/build.ts';
import type { Draft } from '../draft/draft.ts';
import { forget, keep, kept } from '../draft/keep.ts';
import { merged, sameValue } from '../draft/merge.ts';
import { correctionOf, withLibrarySteels } from '../draft/take.ts';
import { SaidAt, SaidHere, SelectField, TextField } from '../form/fields.tsx';
import { type Lists, useLists } from '../form/lists.ts';
import { LoadForm, groupsOf } from '../form/load_form.tsx';
import { Refused, useRefusal } from '../form/refusal.tsx';
import { Shape } from '../pictures/mark_shape.tsx';
import { prefer, prefs } from '../prefs.ts';
import { loadLink } from '../routes.ts';
import { localInput, utcFromLocalInput } from '../words.ts';
import { RevisionList } from './load_revisions.tsx';

// What the load was when the form was filled, what has been typed since, and why.
interface Correction { revision: number; startedUtc: string; base: Draft; mine: Draft; reason: string; person: string }

export function Correct({ id }: { id: number }) {
  const keptAs = `correction ${id}`;
  const [correction, setCorrection] = useState<Correction | null>(() => kept<Correction>(keptAs));
  const [problem, setProblem] = useState<string | null>(null);
  const [meanwhile, setMeanwhile] = useState<Revision[] | null>(null);
  const [word, setWord] = useState('');
  const [busy, setBusy] = useState(false);
  const lists = useLists();
  const form = useRef<HTMLFormElement>(null);
  const turn = useRefusal(form, () => (correction ? groupsOf(correction.mine) : []));
  const fetched = async () => {
    const load = await getLoad(id);
    return { revision: load.revision, startedUtc: load.definition.started_at, base: correctionOf(load.definition) };
  };
  useEffect(() => {
    if (correction === null) fetched().then((got) => setCorrection({ ...got, mine: got.base, reason: '', person: prefs.get().person })).catch((error: unknown) => setProblem(sentenceOf(error)));
  }, []);
  useEffect(() => { if (correction) keep(keptAs, correction); }, [correction]);
  useEffect(() => {
    if (correction && lists.steels.length > 0) setCorrection({ ...correction, base: withLibrarySteels(correction.base, lists.steels), mine: withLibrarySteels(correction.mine, lists.steels) });
  }, [lists.steels, correction === null]);
  if (!correction) return <p class="waiting" role="status">{problem ?? 'Asking hearthfront for this load …'} <a class="button plain" href={loadLink(id)}>Back to the load</a></p>;
  const { mine } = correction;
  const set = (part: Partial<Correction>) => setCorrection((before) => before && { ...before, ...part });
  const change = (part: Partial<Draft>) => setCorrection((before) => before && { ...before, mine: { ...before.mine, ...part } });

  const takeTheirs = async () => {
    try {
      const got = await fetched();
      const base = withLibrarySteels(got.base, lists.steels);
      set({ ...got, base, mine: merged(correction.base, mine, base) });
      setMeanwhile(null);
      turn.clear();
      setWord(`The form now holds revision ${got.revision} with what you typed. Look it over and save.`);
    } catch (error) {
      setProblem(sentenceOf(error));
    }
  };
  const save = async (event: Event) => {
    event.preventDefault();
    if (sameValue(correction.base, mine)) { turn.show('Nothing to save', 'No field differs from the load as it stands.'); return; }
    const startedUtc = mine.startedAt === localInput(Date.parse(correction.startedUtc)) ? correction.startedUtc : utcFromLocalInput(mine.startedAt ?? '');
    const built = definitionOf(mine, startedUtc);
    if ('said' in built) { turn.show('Not sent yet', built.said.detail, built.said.field); return; }
    setBusy(true);
    try {
      await correctLoad(id, { person: correction.person.trim(), reason: correction.reason.trim(), expected_revision: correction.revision, load: built.definition });
      prefer({ person: correction.person.trim() });
      forget(keptAs);
      location.hash = loadLink(id);
    } catch (error) {
      if (error instanceof ApiProblem && error.conflict) {
        const all = await getRevisions(id).catch(() => []);
        setMeanwhile(all.filter((each) => each.revision > correction.revision));
        turn.clear();
        scrollTo({ top: 0 });
      } else turn.showError(error);
    } finally {
      setBusy(false);
    }
  };
  const leave = () => { forget(keptAs); location.hash = loadLink(id); };
  const { refusal } = turn;
  return <SaidHere.Provider value={{ path: refusal?.path ?? null, text: refusal?.text ?? '' }}>
    <h1 class="title">Correct load {correction.base.name} <small>revision {correction.revision}</small></h1>
    <form ref={form} class="start" onSubmit={save} noValidate data-testid="correct-form">
      <Refused refusal={refusal} form={form} />
      {meanwhile && <section class="refused" role="alert" data-testid="meanwhile"><Shape name="note" /><div><h2>Somebody was faster</h2>
        <p>The load was changed while you typed. Nothing you entered is lost, and nothing of theirs is overwritten.</p><RevisionList revisions={meanwhile} /></div>
        <button type="button" class="button" data-testid="take-theirs" onClick={() => void takeTheirs()}>Take their changes, keep what I typed</button></section>}
      {word && <p class="panel spaced" role="status">{word}</p>}
      {problem && <p class="said" role="alert"><Shape name="note" />{problem}</p>}
      <Head mine={mine} change={change} lists={lists} />
      <LoadForm draft={mine} change={change} lists={lists} />
      <fieldset class="panel"><legend><h2>Why</h2></legend>
        <div class="grid wide"><TextField path="reason" label="what was wrong, or why it changes" value={correction.reason} maxLength={200} set={(reason) => set({ reason })} />
          <TextField path="correction.person" label="your name" value={correction.person} set={(person) => set({ person })} /></div>
        <p class="hint">The load is worked out anew from its readings. What it said before stays in its list of changes.</p>
      </fieldset>
      <p class="buttons spaced"><button type="button" class="button plain" onClick={leave}>Leave it as it is</button>
        <button class="button large" data-testid="correct-submit" disabled={busy}>{busy ? 'Saving …' : `Save the correction of load ${correction.base.name}`}</button></p>
    </form>
  </SaidHere.Provider>;
}

interface HeadProps { mine: Draft; change: (part: Partial<Draft>) => void; lists: Lists }
function Head({ mine, change, lists }: HeadProps) {
  const chambers = lists.furnaces.find((each) => each.id === mine.furnace)?.chambers ?? [];
  const name = (stay: Stay) => {
    if (stay.outside) return 'outside any furnace since';
    const furnace = lists.furnaces.find((each) => each.id === stay.furnace);
    return `${furnace?.name ?? stay.furnace}, ${furnace?.chambers.find((each) => each.id === stay.chamber)?.name ?? stay.chamber} since`;
  };
  const path = mine.path ?? [];
  const put = (k: number, text: string) => {
    const utc = utcFromLocalInput(text);
    if (utc !== null) change({ path: path.map((stay, i) => (i === k ? { ...stay, from: utc } : stay)) });
  };
  return <fieldset class="panel">
    <legend><h2>Load</h2></legend>
    <div class="grid">
      <TextField path="name" label="load number" value={mine.name} maxLength={60} set={(next) => change({ name: next })} />
      <TextField path="person" label="started by" value={mine.person} set={(person) => change({ person })} />
      <SelectField path="furnace" label="furnace" value={mine.furnace} set={(furnace) => change({ furnace, chamber: '' })} options={lists.furnaces.map((each) => ({ value: each.id, text: each.name }))} />
      {chambers.length > 1 ? <SelectField path="chamber" label="chamber at the start" value={mine.chamber} set={(chamber) => change({ chamber })} options={[{ value: '', text: 'choose' }, ...chambers.map((each) => ({ value: each.id, text: each.name }))]} /> : <SaidAt path="chamber" />}
      <TextField path="started_at" label="in the hot chamber since" type="datetime-local" value={mine.startedAt ?? localInput(Date.now())} set={(startedAt) => change({ startedAt })} />
      {path.slice(1).map((stay, i) => <TextField key={i} path={`path[${i + 1}]`} label={name(stay)} type="datetime-local" value={localInput(Date.parse(stay.from))} set={(text) => put(i + 1, text)}
        extra={<button type="button" class="button plain" aria-label={`Take away: ${name(stay)}`} onClick={() => change({ path: path.filter((_, k) => k !== i + 1) })}>Take away</button>} />)}
    </div>
    <SaidAt path="path" />
  </fieldset>;
}
