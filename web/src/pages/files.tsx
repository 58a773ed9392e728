// Logger files of one furnace: choose a file, see how it would be read, put that right, keep it under a name
// and store the readings. Nothing is stored before the last button.
import { useEffect, useRef, useState } from 'preact/hooks';
import { type CsvMapping, type Preview, type StoredMapping, type Unsure, type Uploaded, getMappings, guessMapping, previewMapping, putMapping, uploadLog } from '../api_csv.ts';
import { getFurnace } from '../api_plant.ts';
import { sameMapping } from '../draft/mapping.ts';
import { SaidHere, TextField } from '../form/fields.tsx';
import { ApiProblem, sentenceOf } from '../http.ts';
import { Shape } from '../pictures/mark_shape.tsx';
import { prefer, prefs } from '../prefs.ts';
import { furnaceLink } from '../routes.ts';
import { useAsked } from '../use_asked.ts';
import { dayClockText } from '../words.ts';
import { MappingForm } from './files_mapping.tsx';
import { Outcome, PreviewPanel } from './files_preview.tsx';

interface Open { file: File; mapping: CsvMapping; unsure: Unsure[]; preview: Preview | null }
interface Trouble { text: string; path: string | null }
const troubleOf = (error: unknown): Trouble => ({ text: sentenceOf(error), path: error instanceof ApiProblem ? error.problem.field ?? null : null });
const afterTypingMs = 350;

export function Files({ id }: { id: string }) {
  const furnace = useAsked(() => getFurnace(id), 60_000, id);
  const stored = useAsked(() => getMappings(id), 60_000, id);
  const [open, setOpen] = useState<Open | null>(null);
  const [name, setName] = useState('');
  const [trouble, setTrouble] = useState<Trouble | null>(null);
  const [reading, setReading] = useState(false);
  const [uploaded, setUploaded] = useState<{ answer: Uploaded; file: string } | null>(null);
  const turn = useRef(0);

  // Only the answer to the latest question counts.
  const latest = async (work: () => Promise<Open>, waitMs = 0) => {
    const mine = ++turn.current;
    if (waitMs > 0) await new Promise((resolve) => { setTimeout(resolve, waitMs); });
    if (mine !== turn.current) return;
    setReading(true);
    try {
      const next = await work();
      if (mine !== turn.current) return;
      setOpen(next);
      setTrouble(null);
    } catch (error) {
      if (mine === turn.current) setTrouble(troubleOf(error));
    } finally {
      if (mine === turn.current) setReading(false);
    }
  };
  const take = (file: File | undefined) => {
    if (!file) return;
    setUploaded(null);
    setName('');
    void latest(async () => ({ file, ...await guessMapping(id, file) }));
  };
  const useStored = (entry: StoredMapping) => {
    if (!open) return;
    setName(entry.name);
    const mapping = entry.mapping;
    void latest(async () => ({ ...open, mapping, unsure: [], preview: await previewMapping(id, mapping, open.file) }));
  };
  const change = (mapping: CsvMapping) => {
    if (!open) return;
    setOpen({ ...open, mapping });
    void latest(async () => ({ ...open, mapping, preview: await previewMapping(id, mapping, open.file) }), afterTypingMs);
  };
  useEffect(() => () => { ++turn.current; }, []);
  const title = furnace.value?.name ?? id;
  return <SaidHere.Provider value={{ path: trouble?.path ?? null, text: trouble?.text ?? '' }}>
    <div class="load-title"><h1 class="title">Logger files · <a class="in-title" href={furnaceLink(id)}>{title}</a></h1></div>
    <FileDrop file={open?.file.name ?? null} take={take} />
    {reading && !open && <p class="waiting" role="status">Reading …</p>}
    {trouble && <p class="refused" role="alert"><Shape name="note" /><span class="grow">{trouble.text}</span></p>}
    {furnace.problem && <p class="said">{furnace.problem}</p>}
    {uploaded && <Outcome uploaded={uploaded.answer} file={uploaded.file} />}
    {open && <>
      <Known stored={stored.value ?? []} chosen={name} pick={useStored} guess={() => take(open.file)} />
      <MappingForm mapping={open.mapping} set={change} unsure={open.unsure} preview={open.preview} channels={furnace.value?.channels ?? []} />
      {open.preview && <PreviewPanel preview={open.preview} busy={reading} channels={furnace.value?.channels ?? []} />}
      <Store id={id} open={open} name={name} setName={setName} stored={stored.value ?? []} again={stored.again} ready={!reading && !trouble} done={(answer) => { setUploaded({ answer, file: open.file.name }); setOpen(null); scrollTo({ top: 0 }); }} />
    </>}
  </SaidHere.Provider>;
}

function FileDrop({ file, take }: { file: string | null; take: (file: File | undefined) => void }) {
  const [over, setOver] = useState(false);
  return <label class={`panel spaced drop ${over ? 'over' : ''}`} onDragOver={(event) => { event.preventDefault(); setOver(true); }} onDragLeave={() => setOver(false)}
    onDrop={(event) => { event.preventDefault(); setOver(false); take(event.dataTransfer?.files[0]); }}>
    <span><b>{file ?? 'Choose a file of the logger'}</b> {file ? 'or choose another' : 'or drop it here. Nothing is stored yet.'}</span>
    <input type="file" data-testid="file" accept=".csv,.txt,.log,.tsv,.dat,text/*" onChange={(event) => { take(event.currentTarget.files?.[0]); event.currentTarget.value = ''; }} />
  </label>;
}

function Known({ stored, chosen, pick, guess }: { stored: StoredMapping[]; chosen: string; pick: (entry: StoredMapping) => void; guess: () => void }) {
  if (stored.length === 0) return null;
  return <section class="panel spaced" aria-label="Read it as"><h2>Read it as</h2>
    <div class="pick"><button type="button" class="button plain" aria-pressed={chosen === ''} onClick={guess}>guessed</button>
      {stored.map((each) => <button type="button" class="button plain" key={each.name} aria-pressed={chosen === each.name} disabled={each.fault !== null} onClick={() => pick(each)}>{each.name}<small>{each.fault ?? (each.source === 'plant file' ? 'from the plant file' : `version ${each.version}`)}</small></button>)}</div></section>;
}

interface StoreProps { id: string; open: Open; name: string; setName: (name: string) => void; stored: StoredMapping[]; again: () => void; ready: boolean; done: (answer: Uploaded) => void }
function Store({ id, open, name, setName, stored, again, ready, done }: StoreProps) {
  const [person, setPerson] = useState(prefs.get().person);
  const [busy, setBusy] = useState(false);
  const [word, setWord] = useState<{ text: string; bad: boolean } | null>(null);
  const entry = stored.find((each) => each.name === name);
  const kept = entry !== undefined && sameMapping(entry.mapping, open.mapping);
  const save = async () => {
    try {
      await putMapping(id, name, person.trim(), { ...open.mapping, name }, entry?.source === 'library' ? entry.version ?? 0 : 0);
    } catch (error) {
      if (!(error instanceof ApiProblem && error.conflict)) throw error;
      again();
      const theirs = (await getMappings(id)).find((each) => each.name === name);
      throw new Error(theirs?.person ? `${theirs.person} saved “${name}” as version ${theirs.version}${theirs.at ? ` at ${dayClockText(Date.parse(theirs.at))}` : ''}. What you set is still here: give it another name, or press again to put yours above theirs.` : sentenceOf(error));
    }
    prefer({ person: person.trim() });
    again();
  };
  const run = (work: () => Promise<void>) => async () => {
    setBusy(true);
    setWord(null);
    try { await work(); } catch (error) { setWord({ text: error instanceof ApiProblem ? sentenceOf(error) : (error as Error).message, bad: true }); } finally { setBusy(false); }
  };
  const readings = open.preview?.totals.readings ?? 0;
  return <fieldset class="panel"><legend><h2>Keep and store</h2></legend>
    <div class="grid">
      <TextField path="mapping.name" label="name for this way of reading" value={name} maxLength={60} set={setName} />
      <TextField path="person" label="your name" value={person} set={setPerson} />
    </div>
    <p class="hint">{kept ? `This is “${name}” as it is kept.` : 'Small letters, digits, hyphens. The next file of this logger is read the same way with one press.'}</p>
    {word && <p class={word.bad ? 'said' : 'hint'} role={word.bad ? 'alert' : 'status'}>{word.bad && <Shape name="note" />}{word.text}</p>}
    <p class="buttons">{!kept && <button type="button" class="button plain" data-testid="keep" disabled={busy || name === ''} onClick={() => void run(async () => { await save(); setWord({ text: `Kept as “${name}”.`, bad: false }); })()}>Keep only the way of reading</button>}
      <button type="button" class="button large" data-testid="store" disabled={busy || !ready || name === '' || !open.preview?.fits} onClick={() => void run(async () => { if (!kept) await save(); done(await uploadLog(id, name, open.file)); })()}>{busy ? 'Storing …' : name === '' ? 'Give it a name first' : `${kept ? 'Store' : `Keep as “${name}” and store`} ${readings} readings`}</button></p>
  </fieldset>;
}
