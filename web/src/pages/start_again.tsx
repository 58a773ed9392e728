// "Start again": the last different loads of a furnace as large cards. One press fills recipe and items.
import { useEffect, useState } from 'preact/hooks';
import { type Furnace, type RecentLoad, getRecent } from '../api_plant.ts';
import { segmentLine } from '../draft/describe.ts';
import { sentenceOf } from '../http.ts';
import { Shape } from '../pictures/mark_shape.tsx';
import { prefs } from '../prefs.ts';
import { useStore } from '../store.ts';
import { dayText } from '../words.ts';

export function useRecent(furnace: string): { loads: RecentLoad[]; problem: string | null } {
  const [recent, setRecent] = useState<{ loads: RecentLoad[]; problem: string | null }>({ loads: [], problem: null });
  useEffect(() => {
    let gone = false;
    setRecent({ loads: [], problem: null });
    if (furnace === '') return undefined;
    getRecent(furnace).then((loads) => { if (!gone) setRecent({ loads, problem: null }); })
      .catch((error: unknown) => { if (!gone) setRecent({ loads: [], problem: `Earlier loads of this furnace did not come. ${sentenceOf(error)}` }); });
    return () => { gone = true; };
  }, [furnace]);
  return recent;
}

export function FurnacePick({ furnaces, pick }: { furnaces: Furnace[]; pick: (id: string) => void }) {
  return <section class="panel spaced" aria-label="Which furnace">
    <h2>Which furnace?</h2>
    <div class="pick">{furnaces.map((each) => <button type="button" class="button plain" key={each.id} onClick={() => pick(each.id)}>{each.name}</button>)}</div>
  </section>;
}

interface Props { recent: { loads: RecentLoad[]; problem: string | null }; furnaceName: string; again: string | null; take: (load: RecentLoad) => void; otherwise: () => void }
export function StartAgain({ recent, furnaceName, again, take, otherwise }: Props) {
  const units = useStore(prefs);
  if (recent.problem) return <p class="said spaced" role="alert"><Shape name="note" />{recent.problem}</p>;
  if (again !== null) {
    return <p class="panel spaced taken" role="status" data-testid="again-taken"><span class="grow">As load <b>{again}</b>: recipe and items are filled in.</span>
      <button type="button" class="button plain" onClick={otherwise}>Choose another</button></p>;
  }
  if (recent.loads.length === 0) return null;
  return <section class="panel spaced" aria-label="Start again">
    <h2>Start again <small>as on {furnaceName} before, newest first</small></h2>
    <div class="again">{recent.loads.map((load) => <button type="button" key={load.id} class="again-card" data-testid="again" onClick={() => take(load)}>
      {load.items.map((item, i) => <b key={i}>{item.quantity} × {item.part} <small>{item.steel}</small></b>)}
      <span>{typeof load.recipe === 'string' ? load.recipe : load.recipe.name}: {load.body.recipe.segments.map((segment) => segmentLine(segment, units)).join(', ')}</span>
      <small>load {load.name}, {dayText(Date.parse(load.started_at))}</small>
    </button>)}</div>
  </section>;
}
