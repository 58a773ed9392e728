// A furnace with several chambers on the Floor: a row for each chamber, or, for a pusher line, the row of its
// trays, the worst load in full and the others in a list.
import type { FloorFurnace, FloorLoad } from '../api.ts';
import { live, pulse } from '../live.ts';
import { judgedDepthMm, reachText } from '../marks.ts';
import { isMiss, standingLine } from '../outlook_words.ts';
import { cellsOf, inOrder, zonesOf } from '../pictures/line_cells.ts';
import { LineRow, type TrayState } from '../pictures/line_row.tsx';
import { Shape } from '../pictures/mark_shape.tsx';
import { prefs } from '../prefs.ts';
import { loadLink, startLink } from '../routes.ts';
import { useStore } from '../store.ts';
import { depthText } from '../units.ts';
import { AlertLines } from './alert_line.tsx';
import { CardBody, FurnaceName, cardColour, loadMarks } from './floor_card.tsx';

interface Props { furnace: FloorFurnace; band: string }

export function GroupCard({ furnace, band }: Props) {
  const feed = useStore(live);
  const chambers = furnace.chambers ?? [];
  const rank = (id: string) => { const at = furnace.loads.findIndex((load) => load.chamber === id); return at < 0 ? Infinity : at; };
  const homeless = furnace.loads.filter((load) => !chambers.some((each) => each.id === load.chamber));
  return <article class="card group" data-testid="group" data-furnace-card={furnace.id}>
    <h2><FurnaceName furnace={furnace} /></h2>
    <AlertLines alerts={furnace.alerts} />
    {[...chambers].sort((a, b) => rank(a.id) - rank(b.id) || 0).map((chamber) => {
      const here = furnace.loads.filter((load) => load.chamber === chamber.id);
      return here.length > 0
        ? here.map((load) => <Row key={load.id} furnace={furnace} load={load} band={band} name={chamber.name} colour={cardColour(loadMarks(furnace, load, feed), load)} />)
        : <div class="row none" key={chamber.id}><h3>{chamber.name}</h3><p class="mark quiet" data-mark="no load"><Shape name="no load" /><b>empty</b></p>
          <a class="button plain" href={startLink(furnace.id)} aria-label={`Start a load in ${furnace.name}, ${chamber.name}`}>Start a load</a></div>;
    })}
    {homeless.map((load) => <Row key={load.id} furnace={furnace} load={load} band={band} name={load.chamber} colour={cardColour(loadMarks(furnace, load, feed), load)} />)}
  </article>;
}

function Row({ furnace, load, band, name, colour }: Props & { load: FloorLoad; name: string; colour: string }) {
  return <article class={`row ${colour}`} data-testid="card" data-load={load.id}><CardBody furnace={furnace} load={load} band={band} heading={<h3>{name}</h3>} /></article>;
}

export function LineCard({ furnace, band }: Props) {
  const feed = useStore(live);
  useStore(pulse);
  const { length } = useStore(prefs);
  const zones = zonesOf(furnace.chambers ?? []);
  const cells = cellsOf(zones, furnace.loads);
  const marks = (load: FloorLoad) => loadMarks(furnace, load, feed);
  const state = (load: FloorLoad): TrayState => { const colour = cardColour(marks(load), load); return colour === 'quiet' ? 'fine' : colour as TrayState; };
  const worst = furnace.loads[0];
  const troubled = furnace.loads.filter((load) => state(load) !== 'fine').length;
  const said = `${furnace.loads.length} trays on ${cells.length} places, ${troubled === 0 ? 'none needs a look' : `${troubled} need a look`}`;
  const zoneName = (load: FloorLoad) => zones[cells[(load.position?.place ?? 0) - 1]?.zone ?? -1]?.name ?? load.chamber;
  return <article class={`card group line ${worst ? state(worst) : 'fine'}`} data-testid="line" data-furnace-card={furnace.id}>
    <h2><FurnaceName furnace={furnace} /></h2>
    <AlertLines alerts={furnace.alerts} />
    <details class="trays"><summary aria-label={`${furnace.name}: ${said}. Open the list.`}><LineRow zones={zones} cells={cells} state={state} text={said} /><span class="trays-said">{said}</span></summary>
      <ol class="tray-list">{inOrder(furnace.loads).map((load) => <li key={load.id}><a href={loadLink(load.id)} class={state(load)}>
        <span class="tray-place">{load.position?.place ?? '–'}<small>{zoneName(load)}</small></span><b>{load.name}</b><span>{load.item?.part}</span>
        <span>{load.item ? `${depthText(judgedDepthMm(load.item), length)} · ${reachText(load.item, length)}` : ''}</span>
        <span class="tray-marks">{marks(load).map((mark) => <span class={`mark ${mark.colour}`} key={mark.shape}><Shape name={mark.shape} /><b>{mark.word}</b></span>)}{load.item?.outlook && <span class={`mark ${isMiss(load.item.outlook.standing) ? 'metal' : ''}`}><Shape name={load.item.outlook.standing} /><b>{standingLine(load.item.outlook)}</b></span>}</span></a></li>)}</ol>
    </details>
    {worst && <Row furnace={furnace} load={worst} band={band} name={state(worst) === 'fine' ? 'Next off the line' : 'Worst of the line'} colour={state(worst)} />}
  </article>;
}
