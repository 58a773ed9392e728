// Where the load is and was, and what the sources of the carbon potential say beside each other.
import type { Snapshot } from '../api.ts';
import { placeText, stayText } from '../draft/place.ts';
import { Shape } from '../pictures/mark_shape.tsx';
import { carbonText } from '../units.ts';
import { dayClockText, momentText } from '../words.ts';

export function Where({ snapshot }: { snapshot: Snapshot }) {
  const { place, load } = snapshot;
  const path = load.path ?? [];
  if (place === undefined && path.length < 2) return null;
  const now = Date.parse(snapshot.now);
  return <section class="panel" data-testid="where">
    <h2>Where it {load.state === 'open' ? 'is' : 'was'}</h2>
    {load.state === 'open' && place !== undefined && <p class="place"><b>{placeText(place)}</b>{place && ` since ${momentText(Date.parse(place.since), now)}`}</p>}
    {(path.length > 1 || load.state !== 'open') && <ol class="list">{path.map((stay, i) => <li key={i}><p>{stayText(stay)}<br />
      <small>{dayClockText(Date.parse(stay.from))}{stay.to ? ` – ${momentText(Date.parse(stay.to), Date.parse(stay.from))}` : ' until now'}</small></p></li>)}</ol>}
  </section>;
}

export function CarbonSources({ snapshot }: { snapshot: Snapshot }) {
  const { sources, disagreement_wt_pct: apart, disagree } = snapshot.inputs.carbon_potential;
  if (!sources || sources.length === 0) return null;
  return <section class="panel" data-testid="sources">
    <h2>Carbon potential, by source</h2>
    <table class="rows">
      <thead><tr><th scope="col">source</th><th scope="col">now</th><th scope="col">basis</th></tr></thead>
      <tbody>{sources.map((each) => <tr key={each.source} class={each.leads ? 'present-row' : ''}>
        <th scope="row">{each.leads ? '▸ ' : ''}{each.source}{each.leads && <small> leads</small>}<small class="under">{each.channels.join(', ')}</small></th>
        <td>{carbonText(each.value_wt_pct)}</td><td>{each.basis}</td></tr>)}</tbody>
    </table>
    {apart !== null && apart !== undefined && <p class={disagree ? 'mark guess' : 'hint'}>{disagree && <Shape name="disagree" />}<span>{disagree
      ? `They lie ${carbonText(apart)} apart. Check probe and gas analysis; the depth follows the one that leads.` : `They lie ${carbonText(apart)} apart.`}</span></p>}
  </section>;
}
