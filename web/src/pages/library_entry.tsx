// One part or recipe: edit, save as the next version, retire, look at earlier versions. Nobody's change is
// overwritten: where somebody saved meanwhile, it says who and when, and both can be seen before saving.
import type { ComponentChildren } from 'preact';
import { useEffect, useRef, useState } from 'preact/hooks';
import { ApiProblem, sentenceOf } from '../api.ts';
import { type LibraryKind, type LibraryRecord, type PartBody, type RecipeBody, getLibraryRecord, putLibrary } from '../api_plant.ts';
import { type Built, partBodyOf, recipeBodyOf } from '../draft/build.ts';
import { type DraftItem, type DraftQuench, type DraftSegment, newItem, newSegment } from '../draft/draft.ts';
import { forget, keep, kept } from '../draft/keep.ts';
import { keyFrom } from '../draft/key.ts';
import { merged } from '../draft/merge.ts';
import { partDraft, quenchFrom, segmentFrom, withLibrarySteel } from '../draft/take.ts';
import { Ask } from '../form/ask.tsx';
import { SaidHere, TextField } from '../form/fields.tsx';
import { Analysis, AskedFields, PartFields, RareFields } from '../form/item_form.tsx';
import { useLists } from '../form/lists.ts';
import { QuenchForm } from '../form/quench_form.tsx';
import { RecipeForm } from '../form/recipe_form.tsx';
import { Refused, useRefusal } from '../form/refusal.tsx';
import { Shape } from '../pictures/mark_shape.tsx';
import { prefer, prefs } from '../prefs.ts';
import { libraryLink } from '../routes.ts';
import { dayClockText } from '../words.ts';

interface Kind<K extends LibraryKind, Body, Shown> {
  kind: K;
  word: string;
  fresh: () => Shown;
  shown: (body: Body) => Shown;
  build: (shown: Shown) => Built<Body, 'body'>;
  fields: (shown: Shown, set: (shown: Shown) => void) => ComponentChildren;
}
interface Typed<Shown> { version: number; base: { name: string; body: Shown }; mine: { name: string; body: Shown }; person: string }
type Saved<Body> = LibraryRecord<Body>;

function EntryPage<K extends LibraryKind, Body, Shown>({ entryKey, kind: how }: { entryKey: string; kind: Kind<K, Body, Shown> }) {
  const keptAs = `library ${how.kind} ${entryKey}`;
  const [typed, setTyped] = useState<Typed<Shown> | null>(() => kept<Typed<Shown>>(keptAs) ?? (entryKey === '' ? fresh(how) : null));
  const [record, setRecord] = useState<Saved<Body> | null>(null);
  const [meanwhile, setMeanwhile] = useState<Saved<Body> | null>(null);
  const [word, setWord] = useState('');
  const [busy, setBusy] = useState(false);
  const form = useRef<HTMLFormElement>(null);
  const turn = useRefusal(form, () => ['body', 'body.segments']);
  const fetched = async () => await getLibraryRecord(how.kind, entryKey) as unknown as Saved<Body>;
  const standing = (got: Saved<Body>): Pick<Typed<Shown>, 'version' | 'base'> => ({ version: got.version, base: { name: got.name, body: how.shown(got.body) } });
  useEffect(() => {
    if (entryKey === '') return;
    fetched().then((got) => {
      setRecord(got);
      setTyped((before) => before ?? { ...standing(got), mine: { name: got.name, body: how.shown(got.body) }, person: prefs.get().person });
    }).catch((error: unknown) => setWord(sentenceOf(error)));
  }, []);
  useEffect(() => { if (typed) keep(keptAs, typed); }, [typed]);
  if (!typed) return <p class="waiting" role="status">{word || 'Asking hearthfront …'} <a class="button plain" href={libraryLink(how.kind)}>Back to the library</a></p>;
  const set = (mine: Partial<Typed<Shown>['mine']>) => setTyped({ ...typed, mine: { ...typed.mine, ...mine } });
  const leave = () => { forget(keptAs); location.hash = libraryLink(how.kind); };

  const put = async (person: string, body: Body, name: string, expected_version: number, retired: boolean) => {
    const key = entryKey === '' ? keyFrom(name) : entryKey;
    await putLibrary(how.kind, key, { person, expected_version, name, body: body as never, ...(retired ? { retired } : {}) });
    prefer({ person });
    leave();
  };
  const save = async (event: Event) => {
    event.preventDefault();
    const built = how.build(typed.mine.body);
    if ('said' in built) { turn.show('Not sent yet', built.said.detail, built.said.field); return; }
    setBusy(true);
    try {
      await put(typed.person.trim(), built.body, typed.mine.name.trim(), typed.version, false);
    } catch (error) {
      turn.showError(error);
      if (entryKey !== '' && error instanceof ApiProblem && error.conflict) setMeanwhile(await fetched().catch(() => null));
    } finally {
      setBusy(false);
    }
  };
  const takeTheirs = (got: Saved<Body>) => {
    const next = standing(got);
    setRecord(got);
    setTyped({ ...typed, ...next, mine: merged(typed.base, typed.mine, next.base) });
    setMeanwhile(null);
    turn.clear();
    setWord(`The form now holds version ${got.version} with what you typed. Look it over and save.`);
  };
  const { refusal } = turn;
  return <SaidHere.Provider value={{ path: refusal?.path ?? null, text: refusal?.text ?? '' }}>
    <div class="load-title"><h1 class="title">{entryKey === '' ? `New ${how.word}` : typed.base.name} <small>{entryKey === '' ? '' : `${how.word}, version ${typed.version}`}{record?.retired ? ', retired' : ''}</small></h1>
      <div class="actions">{record && !record.retired && <Ask id="retire" label="Retire" title={`Retire ${record.name}?`} keep="Keep it" confirm={`Retire ${record.name}`} act={(person) => put(person, record.body, record.name, record.version, true)}>
        <p>It is no longer offered for new loads. Loads that were filled from it keep their copy, and its versions stay here.</p></Ask>}</div></div>
    <form ref={form} class="start" onSubmit={save} noValidate data-testid="entry-form">
      {!meanwhile && <Refused refusal={refusal} form={form} />}
      {meanwhile && <Meanwhile got={meanwhile} since={typed.version} word={how.word} take={() => takeTheirs(meanwhile)} />}
      {word && <p class="panel spaced" role="status">{word}</p>}
      <fieldset class="panel"><legend><h2>Name</h2></legend><div class="grid"><TextField path="name" label={`name of the ${how.word}`} value={typed.mine.name} set={(name) => set({ name })} /></div></fieldset>
      {how.fields(typed.mine.body, (body) => set({ body }))}
      <fieldset class="panel"><legend><h2>Save</h2></legend><div class="grid"><TextField path="person" label="your name" value={typed.person} set={(person) => setTyped({ ...typed, person })} /></div>
        <p class="hint">Saving makes a new version. Loads that were started keep the version they were filled from.</p></fieldset>
      <p class="buttons spaced"><button type="button" class="button plain" onClick={leave}>Leave it as it is</button>
        <button class="button large" data-testid="entry-save" disabled={busy}>{entryKey === '' ? `Save the new ${how.word}` : `Save as version ${typed.version + 1}`}</button></p>
    </form>
    {record && record.versions.length > 0 && <section class="panel"><h2>Versions</h2><ul class="list">{[...record.versions].sort((a, b) => b.version - a.version).map((each) => <li key={each.version}><p class="grow"><b>version {each.version}</b>{each.retired ? ', retired' : ''} by {each.person}, {dayClockText(Date.parse(each.at))} <small>{each.name}</small></p>
      {each.version !== typed.version && <button type="button" class="button plain" onClick={() => { set({ name: each.name, body: how.shown(each.body) }); setWord(`The form holds what version ${each.version} said. Save it to make it the newest.`); scrollTo({ top: 0 }); }}>Bring back</button>}</li>)}</ul></section>}
  </SaidHere.Provider>;
}

function fresh<K extends LibraryKind, Body, Shown>(how: Kind<K, Body, Shown>): Typed<Shown> {
  const body = how.fresh();
  return { version: 0, base: { name: '', body }, mine: { name: '', body }, person: prefs.get().person };
}

function Meanwhile<Body>({ got, since, word, take }: { got: Saved<Body>; since: number; word: string; take: () => void }) {
  const newer = got.versions.filter((each) => each.version > since);
  return <section class="refused" role="alert" data-testid="meanwhile"><Shape name="note" /><div><h2>Somebody was faster</h2>
    <p>{newer.map((each) => `${each.person} saved version ${each.version} of this ${word} at ${dayClockText(Date.parse(each.at))}`).join('; ') || `This ${word} was changed meanwhile`}. Nothing you entered is lost, and nothing of theirs is overwritten.</p></div>
    <button type="button" class="button" data-testid="take-theirs" onClick={take}>Take their version, keep what I typed</button></section>;
}

export function PartPage({ entryKey }: { entryKey: string }) {
  const { steels } = useLists();
  return <EntryPage entryKey={entryKey} kind={{
    kind: 'parts', word: 'part', fresh: () => newItem(0), shown: (body: PartBody) => withLibrarySteel(partDraft(body), steels), build: partBodyOf,
    fields: (item: DraftItem, set) => {
      const props = { item, at: 'body', steels, put: (part: Partial<DraftItem>) => set({ ...item, ...part }) };
      return <fieldset class="panel"><legend><h2>Part</h2></legend><div class="item-form first">
        <div class="grid"><TextField path="body.part" label="part" value={item.part} set={(part) => props.put({ part })} /><PartFields {...props} /></div>
        <Analysis {...props} /><AskedFields {...props} /><RareFields {...props} /></div></fieldset>;
    },
  }} />;
}

interface ShownRecipe { segments: DraftSegment[]; quench: DraftQuench }
export function RecipePage({ entryKey }: { entryKey: string }) {
  return <EntryPage entryKey={entryKey} kind={{
    kind: 'recipes', word: 'recipe', fresh: (): ShownRecipe => ({ segments: [newSegment('boost'), newSegment('diffuse')], quench: quenchFrom(null) }),
    shown: (body: RecipeBody): ShownRecipe => ({ segments: body.segments.map(segmentFrom), quench: quenchFrom(body.quench) }), build: (shown) => recipeBodyOf(shown.segments, shown.quench),
    fields: (shown: ShownRecipe, set) => <RecipeForm at="body" segments={shown.segments} set={(segments) => set({ ...shown, segments })} itemNames={[]}>
      <QuenchForm at="body.quench" quench={shown.quench} set={(quench) => set({ ...shown, quench })} /></RecipeForm>,
  }} />;
}
