// What was changed on a load, newest first: who, when, why, before and after.
import { useEffect, useState } from 'preact/hooks';
import { type Revision, getRevisions, sentenceOf } from '../api.ts';
import { changeWords } from '../draft/describe.ts';
import { dayClockText } from '../words.ts';

export function RevisionList({ revisions }: { revisions: readonly Revision[] }) {
  return <ul class="list">{revisions.map((each) => <li key={each.revision}><p>
    <b>{each.what}</b> by {each.person}, {dayClockText(Date.parse(each.at))} <small>revision {each.revision}</small>
    {each.reason && <><br />“{each.reason}”</>}
    {each.changes.map((change, i) => <span class="change" key={i}>{changeWords(change)}</span>)}
  </p></li>)}</ul>;
}

// Fetched when it is opened, and again whenever the load has a newer revision.
export function Revisions({ id, revision }: { id: number; revision: number }) {
  const [open, setOpen] = useState(false);
  const [revisions, setRevisions] = useState<Revision[] | null>(null);
  const [problem, setProblem] = useState<string | null>(null);
  useEffect(() => {
    if (open) getRevisions(id).then((got) => { setRevisions(got); setProblem(null); }).catch((error: unknown) => setProblem(sentenceOf(error)));
  }, [open, id, revision]);
  return <section class="panel"><details class="rare" data-testid="revisions" onToggle={(event) => setOpen(event.currentTarget.open)}>
    <summary><h2>What was changed <small>revision {revision}</small></h2></summary>
    {problem && <p class="said">{problem}</p>}
    {revisions && (revisions.length > 0 ? <RevisionList revisions={revisions} /> : <p class="nothing">Nothing since the start.</p>)}
  </details></section>;
}
