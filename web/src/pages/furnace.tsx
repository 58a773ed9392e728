// A furnace: what stands in it, how well its channels speak, what was refused, and the stretches that people
// have marked. Reads only; the one button that changes the record of a line is "Push".
import { useState } from 'preact/hooks';
import type { FloorLoad } from '../api.ts';
import { type Furnace as FurnaceDocument, type Pushed, getFurnace, getMasks, getRefused, pushLine } from '../api_plant.ts';
import { Ask, When, whenUtc } from '../form/ask.tsx';
import { live } from '../live.ts';
import { inOrder } from '../pictures/line_cells.ts';
import { Shape } from '../pictures/mark_shape.tsx';
import { filesLink, floorLink, loadLink, startLink } from '../routes.ts';
import { useStore } from '../store.ts';
import { useAsked } from '../use_asked.ts';
import { clockText } from '../words.ts';
import { Channels } from './furnace_channels.tsx';
import { Masks, Refused } from './furnace_masks.tsx';

export function Furnace({ id }: { id: string }) {
  const furnace = useAsked(() => getFurnace(id), 5000, id);
  const masks = useAsked(() => getMasks(id), 15_000, id);
  const refused = useAsked(() => getRefused(id), 15_000, id);
  const { floor } = useStore(live);
  const loads = floor?.furnaces.find((each) => each.id === id)?.loads ?? [];
  if (!furnace.value) return <p class="waiting" role="status">{furnace.problem ?? 'Asking hearthfront for this furnace …'} {furnace.problem && <a class="button plain" href={floorLink}>Back to the Floor</a>}</p>;
  const document = furnace.value;
  const again = () => { furnace.again(); masks.again(); refused.again(); };
  return <>
    <div class="load-title">
      <h1 class="title">{document.name} <small>{document.process}</small></h1>
      <div class="actions">
        {document.line && <Push furnace={document} again={furnace.again} />}
        <a class="button plain" href={filesLink(id)}>Logger files</a>
        <a class="button plain" href={startLink(id)}>Start a load</a>
      </div>
    </div>
    {furnace.problem && <p class="catching" role="status">{furnace.problem}</p>}
    <Inside furnace={document} loads={loads} />
    <Channels furnace={document} again={again} />
    <div class="columns">
      <Masks furnace={document} masks={masks.value} problem={masks.problem} again={again} />
      <Refused refused={refused.value} problem={refused.problem} />
    </div>
  </>;
}

function Inside({ furnace, loads }: { furnace: FurnaceDocument; loads: FloorLoad[] }) {
  const link = (load: FloorLoad) => <a class="chip" key={load.id} href={loadLink(load.id)}>{load.position && <small>{load.position.place}</small>}<b>{load.name}</b>{load.item && <span>{load.item.part}</span>}</a>;
  return <section class="panel spaced" aria-label="In the furnace">
    <h2>{furnace.line ? 'On the line' : 'In the furnace'}</h2>
    {loads.length === 0 && <p class="nothing">No load.</p>}
    {furnace.line || furnace.chambers.length < 2 ? <div class="chips">{inOrder(loads).map(link)}</div>
      : <dl class="facts">{furnace.chambers.map((chamber) => <div key={chamber.id}><dt>{chamber.name}</dt><dd class="chips">{loads.filter((load) => load.chamber === chamber.id).map(link)}{loads.every((load) => load.chamber !== chamber.id) && <span>empty</span>}</dd></div>)}</dl>}
  </section>;
}

function Push({ furnace, again }: { furnace: FurnaceDocument; again: () => void }) {
  const [time, setTime] = useState<string | null>(null);
  const [done, setDone] = useState<Pushed | null>(null);
  const out = done?.moved.filter((each) => each.to === null) ?? [];
  return <>
    {done && <p class="hint" role="status" data-testid="pushed">{clockText(Date.parse(done.at))}: {done.moved.length} trays moved on{out.length > 0 && `; ${out.map((each) => each.name).join(', ')} left the line and ended`}.</p>}
    <Ask id="push" label="Push" title={`Push ${furnace.name}?`} keep="Not now" confirm="Every tray moves on by one" onOpen={() => setTime(null)}
      act={async (person) => { setDone(await pushLine(furnace.id, person, whenUtc(time))); again(); }}>
      <p><Shape name="note" /> The line was pushed: in the record every tray moves on by one position, and the load in the last one leaves the line and is ended. The furnace itself is not touched.</p>
      <When label="Pushed at" time={time} set={setTime} />
    </Ask>
  </>;
}
