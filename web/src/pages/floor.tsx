// The Floor: every furnace in the daemon's own order, worst first.
import type { FloorFurnace } from '../api.ts';
import { live } from '../live.ts';
import { Shape } from '../pictures/mark_shape.tsx';
import { startLink } from '../routes.ts';
import { Watch } from '../shell/watch.tsx';
import { useStore } from '../store.ts';
import { AlertLines } from './alert_line.tsx';
import { FloorCard, FurnaceName } from './floor_card.tsx';
import { GroupCard, LineCard } from './floor_group.tsx';

export function Floor() {
  const { floor, link } = useStore(live);
  if (!floor) return link === 'away' ? null : <p class="waiting" role="status">Asking hearthfront for the floor …</p>;
  const loads = floor.furnaces.reduce((sum, furnace) => sum + furnace.loads.length, 0);
  const idle = floor.furnaces.filter((furnace) => furnace.loads.length === 0);
  const busy = floor.furnaces.filter((furnace) => furnace.loads.length > 0);
  const cards = busy.flatMap((furnace) => (furnace.line ? <LineCard key={furnace.id} furnace={furnace} band={floor.band} />
    : (furnace.chambers?.length ?? 1) > 1 ? <GroupCard key={furnace.id} furnace={furnace} band={floor.band} />
      : furnace.loads.map((load) => <FloorCard key={load.id} furnace={furnace} load={load} band={floor.band} />)));
  return <>
    <div class="load-title"><h1 class="title">Floor <small>{count(floor.furnaces.length, 'furnace')}, {count(loads, 'load')} · worst first{/\d/.test(floor.band) && ` · bands ${floor.band}`}</small></h1><Watch /></div>
    <AlertLines alerts={floor.alerts?.plant} />
    <div class={`cards ${cards.length > 4 ? 'many' : ''}`}>{cards}</div>
    {idle.length > 0 && <div class="idles">{idle.map((furnace) => <Idle key={furnace.id} furnace={furnace} />)}</div>}
    {floor.furnaces.length === 0 && <p class="waiting">The plant file names no furnace yet.</p>}
  </>;
}

const count = (many: number, word: string): string => `${many} ${word}${many === 1 ? '' : 's'}`;

// A furnace without a load takes no attention: one quiet line and the way to start one.
function Idle({ furnace }: { furnace: FloorFurnace }) {
  return <article class="idle" data-testid="idle" data-furnace={furnace.id}>
    <h2><FurnaceName furnace={furnace} /></h2>
    <AlertLines alerts={furnace.alerts} />
    <p class="mark quiet" data-mark="no load"><Shape name="no load" /><b>no load</b></p>
    <a class="button plain" href={startLink(furnace.id)} aria-label={`Start a load in ${furnace.name}`}>Start a load</a>
  </article>;
}
