// The recipe of the load, the present segment marked by a bar, a word and weight.
import type { Recipe, SegmentNow } from '../api.ts';
import { PlanRibbon } from '../pictures/plan_ribbon.tsx';
import { segmentExtras } from '../draft/describe.ts';
import { segmentFrom } from '../draft/take.ts';
import { prefs } from '../prefs.ts';
import { useStore } from '../store.ts';
import { carbonText, temperatureText } from '../units.ts';
import { minutesText, momentText } from '../words.ts';

interface Props { recipe: Recipe; segment: SegmentNow | null; minutesLeft: number | null; open: boolean; now: string }

const told = { readings: 'as the readings show', 'recipe time': 'by recipe time', model: 'as the model says' };

export function Plan({ recipe, segment, minutesLeft, open, now }: Props) {
  const units = useStore(prefs);
  const { temperature } = units;
  const extras = (each: Recipe['segments'][number]) => segmentExtras(segmentFrom(each), units);
  const present = open ? segment?.index ?? -1 : -1;
  return <section class="panel">
    <h2>Plan <small>{recipe.name}{open && minutesLeft !== null && (minutesLeft >= 0 ? ` · ends in ${minutesText(minutesLeft)}` : ` · ended ${minutesText(-minutesLeft)} ago`)}</small></h2>
    <PlanRibbon recipe={recipe} segment={open ? segment : null} />
    {open && segment?.started_at && <p class="hint" data-testid="segment-by">{segment.name} since {momentText(Date.parse(segment.started_at), Date.parse(now))}{segment.by && `, ${told[segment.by]}`}</p>}
    <table class="rows">
      <thead><tr><th scope="col">segment</th><th scope="col">time</th><th scope="col">temperature</th><th scope="col">carbon potential</th></tr></thead>
      <tbody>{recipe.segments.map((each, i) => <tr key={i} class={i === present ? 'present-row' : ''} aria-current={i === present ? 'step' : undefined}>
        <th scope="row">{i === present ? '▸ ' : ''}{each.name}{i === present ? <small> now</small> : null}{extras(each) && <small class="under">{extras(each)}</small>}</th>
        <td>{minutesText(each.duration_min)}</td><td>{temperatureText(each.temperature_degc, temperature)}</td><td>{carbonText(each.carbon_potential_wt_pct)}</td>
      </tr>)}</tbody>
    </table>
  </section>;
}
