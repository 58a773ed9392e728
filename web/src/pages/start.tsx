// Starting a load. What is typed stays typed: through refusals, lost contact, other pages and a reload.
import { useEffect, useRef, useState } from 'preact/hooks';
import { ApiProblem, type Furnace, type Steel, getDefinition, getFurnaces, getLoads, getSteels, startLoad } from '../api.ts';
import { daemonNowMs, live, pulse } from '../live.ts';
import { Shape } from '../pictures/mark_shape.tsx';
import { prefer, prefs } from '../prefs.ts';
import { loadLink } from '../routes.ts';
import { useStore } from '../store.ts';
import { localInput, utcFromLocalInput, utcText } from '../words.ts';
import { SaidAt, SaidHere, SelectField, TextField } from './fields.tsx';
import { type Draft, definitionOf, newDraft, placeOf, plainDetail, sameAs, whichOf, withLibrarySteels } from './start_draft.ts';
import { ItemsForm } from './start_items.tsx';
import { RecipeForm } from './start_recipe.tsx';
import { forgetDraft, keepDraft, keptDraft } from './start_keep.ts';

interface Refusal { path: string | null; text: string; title: string; where?: string }

export function Start({ furnace }: { furnace: string }) {
  const [draft, setDraft] = useState<Draft>(() => {
    const kept = keptDraft() ?? newDraft(furnace, prefs.get().person);
    return furnace ? { ...kept, furnace } : kept;
  });
  const [furnaces, setFurnaces] = useState<Furnace[]>([]);
  const [steels, setSteels] = useState<Steel[]>([]);
  const [refusal, setRefusal] = useState<Refusal | null>(null);
  const [word, setWord] = useState('');
  const [busy, setBusy] = useState(false);
  const form = useRef<HTMLFormElement>(null);
  useStore(pulse);
  useEffect(() => { keepDraft(draft); }, [draft]);
  const fetchLists = () => Promise.all([getFurnaces().then(setFurnaces), getSteels().then(setSteels)])
    .catch((error: unknown) => setRefusal({ path: null, title: 'The lists of furnaces and steels did not come', text: error instanceof ApiProblem ? error.message : String(error) }));
  useEffect(() => { void fetchLists(); }, []);
  const change = (part: Partial<Draft>) => setDraft((before) => ({ ...before, ...part }));
  const chambers = furnaces.find((each) => each.id === draft.furnace)?.chambers ?? [];

  const show = (title: string, text: string, field?: string) => {
    const shown = [...form.current?.querySelectorAll<HTMLElement>('[data-path]') ?? []].map((each) => each.dataset.path ?? '');
    const places = [...shown, 'recipe', 'recipe.segments', 'items', ...draft.segments.map((_, i) => `recipe.segments[${i}]`), ...draft.items.map((_, i) => `items[${i}]`)];
    const path = placeOf(field, places);
    const input = path === null ? undefined : form.current?.querySelector<HTMLInputElement>(`[data-path="${CSS.escape(path)}"]`);
    const where = [whichOf(path ?? ''), input?.labels?.[0]?.firstChild?.textContent?.trim() ?? ''].filter(Boolean).join(', ');
    setRefusal({ path, text: plainDetail(text, field), title, where });
    scrollTo({ top: 0 });
  };
  const submit = async (event: Event) => {
    event.preventDefault();
    const feed = live.get();
    // "now" is the daemon's last word, not a guess beyond it, so that a start never lies in its future.
    const startedUtc = draft.startedAt !== null ? utcFromLocalInput(draft.startedAt) : feed.floor ? utcText(Date.parse(feed.floor.now)) : utcText(Date.now());
    const built = definitionOf(draft, startedUtc);
    if ('said' in built) { show('Not sent yet', built.said.detail, built.said.field); return; }
    setBusy(true);
    try {
      const load = await startLoad(built.definition);
      prefer({ person: draft.person.trim() });
      forgetDraft();
      location.hash = loadLink(load.id);
    } catch (error) {
      if (error instanceof ApiProblem) show(error.problem.title ?? 'Not accepted', error.message, error.problem.field);
      else show('Not sent', String(error));
    } finally {
      setBusy(false);
    }
  };
  const copyLast = async () => {
    try {
      const { loads } = await getLoads({ furnace: draft.furnace, limit: 1 });
      const last = loads[0];
      if (!last) { setWord('No earlier load on this furnace.'); return; }
      const earlier = await getDefinition(last.id);
      setDraft((before) => withLibrarySteels(sameAs(earlier, before), steels));
      setWord(`Recipe and items are those of load ${last.name}.`);
    } catch (error) {
      setWord(error instanceof ApiProblem ? error.message : String(error));
    }
  };
  return <SaidHere.Provider value={{ path: refusal?.path ?? null, text: refusal?.text ?? '' }}>
    <h1 class="title">Start a load</h1>
    <form ref={form} class="start" onSubmit={submit} noValidate data-testid="start-form">
      {refusal && <Refused refusal={refusal} form={form.current} />}
      <fieldset class="panel">
        <legend><h2>Load</h2></legend>
        <div class="grid">
          <TextField path="name" label="load number" value={draft.name} maxLength={60} set={(name) => change({ name })} />
          <SelectField path="furnace" label="furnace" value={draft.furnace} set={(next) => change({ furnace: next, chamber: '' })} options={[{ value: '', text: 'choose' }, ...furnaces.map((each) => ({ value: each.id, text: each.name }))]} />
          {chambers.length > 1 ? <SelectField path="chamber" label="chamber" value={draft.chamber} set={(chamber) => change({ chamber })} options={[{ value: '', text: 'choose' }, ...chambers.map((each) => ({ value: each.id, text: each.name }))]} /> : <SaidAt path="chamber" />}
          <TextField path="person" label="your name" value={draft.person} set={(person) => change({ person })} />
          <TextField path="started_at" label="in the hot chamber since" type="datetime-local" value={draft.startedAt ?? localInput(daemonNowMs(live.get()))} set={(startedAt) => change({ startedAt })}
            extra={<button type="button" class="button plain" aria-pressed={draft.startedAt === null} onClick={() => change({ startedAt: null })}>now</button>} />
        </div>
        {draft.furnace && <p class="same"><button type="button" class="button plain" data-testid="same" onClick={() => void copyLast()}>Same as the last load on this furnace</button> <span role="status">{word}</span></p>}
      </fieldset>
      <RecipeForm draft={draft} change={change} />
      <ItemsForm draft={draft} change={change} steels={steels} />
      <p class="buttons"><button class="button large" data-testid="start-submit" disabled={busy}>{busy ? 'Starting …' : `Start load ${draft.name}`}</button></p>
    </form>
  </SaidHere.Provider>;
}

function Refused({ refusal, form }: { refusal: Refusal; form: HTMLFormElement | null }) {
  const go = () => {
    const field = refusal.path === null ? null : form?.querySelector<HTMLElement>(`[data-path="${CSS.escape(refusal.path)}"]`);
    field?.closest('details')?.setAttribute('open', '');
    field?.scrollIntoView({ block: 'center' });
    field?.focus({ preventScroll: true });
  };
  return <section class="refused" role="alert" data-testid="refusal">
    <Shape name="note" /><div><h2>{refusal.title}</h2><p>{refusal.where && <b>{refusal.where}: </b>}{refusal.text} Nothing you entered is lost.</p></div>
    {refusal.path && <button type="button" class="button plain" data-testid="go-to-field" onClick={go}>Go to the field</button>}
  </section>;
}
