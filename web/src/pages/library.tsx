// The library: parts and recipes that loads are filled from. A list for each, and the page of one entry.
import { useState } from 'preact/hooks';
import { type LibraryEntry, type PartBody, type RecipeBody, getLibrary } from '../api_plant.ts';
import { segmentLine, steelName } from '../draft/describe.ts';
import { prefs } from '../prefs.ts';
import { type Shelf, entryLink, libraryLink } from '../routes.ts';
import { useStore } from '../store.ts';
import { windowText } from '../units.ts';
import { useAsked } from '../use_asked.ts';
import { dayText } from '../words.ts';
import { PartPage, RecipePage } from './library_entry.tsx';

export function Library({ shelf, entry }: { shelf: Shelf; entry: string | null }) {
  if (entry !== null) return shelf === 'parts' ? <PartPage entryKey={entry} key={entry} /> : <RecipePage entryKey={entry} key={entry} />;
  return <>
    <div class="load-title"><h1 class="title">Library</h1>
      <div class="actions"><a class="button plain" href={entryLink(shelf, '')} data-testid="new-entry">{shelf === 'parts' ? 'New part' : 'New recipe'}</a></div></div>
    <nav class="shelves" aria-label="Library">
      {(['parts', 'recipes'] as const).map((each) => <a class="page-link" key={each} href={libraryLink(each)} aria-current={each === shelf ? 'page' : undefined}>{each === 'parts' ? 'Parts' : 'Recipes'}</a>)}
    </nav>
    {shelf === 'parts' ? <Parts /> : <Recipes />}
  </>;
}

function Parts() {
  const { length } = useStore(prefs);
  return <Entries shelf="parts" ask={() => getLibrary('parts')} line={(body: PartBody) => `${body.part === '' ? '' : `${body.part} · `}${steelName(body.steel)} · ${body.section.shape} · ${windowText(body.case_depth_window_mm, length)}`} />;
}
function Recipes() {
  const units = useStore(prefs);
  return <Entries shelf="recipes" ask={() => getLibrary('recipes')} line={(body: RecipeBody) => body.segments.map((segment) => segmentLine(segment, units)).join(', ')} />;
}

interface EntriesProps<Body> { shelf: Shelf; ask: () => Promise<LibraryEntry<Body>[]>; line: (body: Body) => string }
function Entries<Body>({ shelf, ask, line }: EntriesProps<Body>) {
  const { value, problem } = useAsked(ask, 30_000, shelf);
  const [find, setFind] = useState('');
  const words = find.trim().toLowerCase();
  const shown = (value ?? []).filter((each) => words === '' || `${each.name} ${line(each.body)}`.toLowerCase().includes(words));
  return <>
    {problem && <p class="said" role="alert">{problem}</p>}
    {value?.length === 0 && <p class="waiting">Nothing is kept here yet. What is kept here fills the form of a new load.</p>}
    {value && value.length > 8 && <p class="find"><label>Find<input type="search" value={find} onInput={(event) => setFind(event.currentTarget.value)} /></label></p>}
    <ul class="loads shelf">{shown.map((each) => <li key={each.key}><a href={entryLink(shelf, each.key)} data-testid="entry"><b>{each.name}</b><span class="when">{line(each.body)}</span><span class="by">version {each.version}, {each.person}, {dayText(Date.parse(each.at))}</span></a></li>)}</ul>
  </>;
}
