// Parts that were in an earlier load already: that load's item is picked, its last profile is where this one begins.
import { useState } from 'preact/hooks';
import { type LoadRecord, type LoadRow, getLoad, getLoads } from '../api.ts';
import type { DraftItem } from '../draft/draft.ts';
import { sentenceOf } from '../http.ts';
import { Shape } from '../pictures/mark_shape.tsx';
import { dayClockText } from '../words.ts';
import { SaidAt } from './fields.tsx';

interface Props { at: string; item: DraftItem; put: (part: Partial<DraftItem>) => void }

export function ReworkField({ at, item, put }: Props) {
  const [rows, setRows] = useState<LoadRow[] | null>(null);
  const [picked, setPicked] = useState<LoadRecord | null>(null);
  const [problem, setProblem] = useState<string | null>(null);
  const trying = async (work: () => Promise<void>) => {
    try { await work(); setProblem(null); } catch (error) { setProblem(sentenceOf(error)); }
  };
  const look = () => trying(async () => setRows((await getLoads({ state: 'ended', limit: 20 })).loads));
  const pick = (id: number) => trying(async () => setPicked(await getLoad(id)));
  const take = (load: LoadRecord, name: string) => {
    put({ rework: { load: load.id, item: name }, initialProfile: undefined });
    setRows(null);
    setPicked(null);
  };
  return <div class="rework" data-path={`${at}.rework_of`}>
    {item.rework
      ? <p class="with-button"><span class="grow">Rework: these parts begin with the profile that item <b>{item.rework.item}</b> of load record {item.rework.load} ended with.</span>
        <button type="button" class="button plain" onClick={() => put({ rework: null, initialProfile: undefined })}>Not a rework</button></p>
      : rows === null && <button type="button" class="button plain" onClick={() => void look()}>These parts were in a load before …</button>}
    {rows && !picked && <><p>Which load were they in?</p><div class="pick">{rows.map((row) => <button type="button" class="button plain" key={row.id} onClick={() => void pick(row.id)}>{row.name}<small>{dayClockText(Date.parse(row.started_at))}</small></button>)}</div>
      {rows.length === 0 && <p class="nothing">No load has ended yet.</p>}<button type="button" class="button plain" onClick={() => setRows(null)}>Leave it</button></>}
    {picked && <><p>Which item of load {picked.name}?</p><div class="pick">{picked.definition.items.map((each) => <button type="button" class="button plain" key={each.name} onClick={() => take(picked, each.name)}>{each.name}<small>{each.part ?? ''}</small></button>)}</div>
      <button type="button" class="button plain" onClick={() => setPicked(null)}>Another load</button></>}
    {problem && <p class="said" role="alert"><Shape name="note" />{problem}</p>}
    <SaidAt path={`${at}.rework_of`} />
  </div>;
}
