// Recent loads, newest first, a page at a time.
import { useEffect, useState } from 'preact/hooks';
import { ApiProblem, type LoadRow, getLoads } from '../api.ts';
import { live } from '../live.ts';
import { Shape } from '../pictures/mark_shape.tsx';
import { loadLink } from '../routes.ts';
import { useStore } from '../store.ts';
import { dayClockText } from '../words.ts';

export function Loads() {
  const [rows, setRows] = useState<LoadRow[] | null>(null);
  const [next, setNext] = useState<string | number | null>(null);
  const [problem, setProblem] = useState<string | null>(null);
  const { floor } = useStore(live);
  const furnaceName = (id: string) => floor?.furnaces.find((each) => each.id === id)?.name ?? id;
  const more = async (cursor?: string | number) => {
    try {
      const page = await getLoads({ limit: 50, cursor });
      setRows((before) => [...(cursor === undefined ? [] : before ?? []), ...page.loads]);
      setNext(page.next_cursor);
      setProblem(null);
    } catch (error) {
      setProblem(error instanceof ApiProblem ? error.message : String(error));
    }
  };
  useEffect(() => { void more(); }, []);
  return <>
    <h1 class="title">Loads</h1>
    {problem && <p class="said" role="alert"><Shape name="note" />{problem} <button type="button" class="button plain" onClick={() => void more()}>Ask again</button></p>}
    {rows?.length === 0 && <p class="waiting">No load has been started yet.</p>}
    {rows && rows.length > 0 && <ul class="loads">{rows.map((row) => <li key={row.id}><a href={loadLink(row.id)}>
      <b>{row.name}</b><span>{furnaceName(row.furnace)}</span>
      <span class="when">{dayClockText(Date.parse(row.started_at))}{row.ended_at && ` – ${dayClockText(Date.parse(row.ended_at))}`}</span>
      <span class="state"><Shape name={row.state === 'open' ? 'no load' : row.state} />{row.state}</span>
      <span class="by">{row.person}</span></a></li>)}</ul>}
    {next !== null && <p><button type="button" class="button plain" onClick={() => void more(next)}>Older loads</button></p>}
  </>;
}
