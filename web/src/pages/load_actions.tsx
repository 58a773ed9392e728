// What can be done with an open load: correct, move, end, cancel. Each is asked once more before it happens;
// all of them change the record only, never the furnace.
import { useState } from 'preact/hooks';
import { type MoveTo, type Snapshot, cancelLoad, endLoad, moveLoad } from '../api.ts';
import { type Furnace, getFurnaces } from '../api_plant.ts';
import { type Spot, placeText, spotsFor } from '../draft/place.ts';
import { Ask, When, whenUtc } from '../form/ask.tsx';
import { correctLink } from '../routes.ts';

interface Props { snapshot: Snapshot; again: () => void }

export function Actions({ snapshot, again }: Props) {
  const open = snapshot.load.state === 'open';
  return <div class="actions" role="group" aria-label="This load">
    {snapshot.load.state !== 'cancelled' && <a class="button plain" data-testid="correct" href={correctLink(snapshot.load.id)}>Correct</a>}
    {open && <MoveLoad snapshot={snapshot} again={again} />}
    {open && <EndLoad snapshot={snapshot} again={again} />}
    {open && <CancelLoad snapshot={snapshot} again={again} />}
  </div>;
}

function EndLoad({ snapshot, again }: Props) {
  const [time, setTime] = useState<string | null>(null);
  const { load } = snapshot;
  return <Ask id="end" label="End load" title={`End load ${load.name}?`} keep="Keep it open" confirm={`End load ${load.name}`} onOpen={() => setTime(null)}
    act={async (person) => { await endLoad(load.id, person, whenUtc(time)); again(); }}>
    <p>The load has left the hot chamber of {load.furnace_name}. hearthfront closes its record; the furnace itself is not touched.</p>
    <When label="Left the hot chamber at" time={time} set={setTime} />
  </Ask>;
}

function CancelLoad({ snapshot, again }: Props) {
  const [reason, setReason] = useState('');
  const { load } = snapshot;
  return <Ask id="cancel" label="Cancel this load" title={`Cancel load ${load.name}?`} keep="Keep it" confirm={`Cancel load ${load.name}`} ready={reason.trim() !== ''}
    act={async (person) => { await cancelLoad(load.id, person, reason.trim()); again(); }}>
    <p><b>Nothing of it is kept as a result:</b> no case depth, no profile, no record that these parts were treated. It cannot be opened again. Only its line in the list of loads stays, with your reason.</p>
    <p>For a load that was entered by mistake. If the parts were in the furnace, end the load instead.</p>
    <label>Why<input type="text" maxLength={200} autocomplete="off" data-testid="cancel-reason" value={reason} onInput={(event) => setReason(event.currentTarget.value)} /></label>
  </Ask>;
}

const keyOf = (to: MoveTo): string => ('outside' in to ? 'outside' : `${to.furnace} ${to.chamber}`);
const toSpot = (spot: Spot): MoveTo => ({ furnace: spot.furnace, chamber: spot.chamber });

function MoveLoad({ snapshot, again }: Props) {
  const { load, place } = snapshot;
  const [furnaces, setFurnaces] = useState<Furnace[]>([]);
  const [to, setTo] = useState<MoveTo | null>(null);
  const [time, setTime] = useState<string | null>(null);
  const from = place === undefined ? { furnace: load.furnace, chamber: load.chamber } : place;
  const spots = spotsFor(furnaces, from, load.furnace);
  const open = () => {
    setTo(null);
    setTime(null);
    getFurnaces().then(setFurnaces).catch(() => setFurnaces([]));
  };
  const button = (target: MoveTo, first: string, second: string) => <button type="button" class="button plain" key={keyOf(target)} data-testid="move-to" data-spot={keyOf(target)} aria-pressed={to !== null && keyOf(to) === keyOf(target)} onClick={() => setTo(target)}>{first}{second && <small>{second}</small>}</button>;
  const own = spots.filter((spot) => spot.own), other = spots.filter((spot) => !spot.own);
  return <Ask id="move" label="Move" title={`Where does load ${load.name} go?`} keep="Leave it where it is" confirm="Move it" ready={to !== null} onOpen={open}
    act={async (person) => { if (to) { await moveLoad(load.id, person, to, whenUtc(time)); again(); } }}>
    <p>Now: {place === undefined ? load.furnace_name : placeText(place)}. From the time below on, the readings of the new place count for it.</p>
    <div class="pick tall" role="group" aria-label="New place">
      {own.map((spot) => button(toSpot(spot), spot.chamberName || spot.furnaceName, spot.chamberName ? spot.furnaceName : ''))}
      {place !== null && button({ outside: true }, 'Outside', 'no furnace, it cools')}
    </div>
    {other.length > 0 && <details class="rare" open={own.length === 0}><summary><span>Another furnace</span></summary>
      <div class="pick tall" role="group" aria-label="Another furnace">{other.map((spot) => button(toSpot(spot), spot.furnaceName, spot.chamberName))}</div></details>}
    <When label="At" time={time} set={setTime} />
  </Ask>;
}
