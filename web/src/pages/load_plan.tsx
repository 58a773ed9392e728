// The recipe of the load, the present segment marked by a bar, a word and weight.
import type { Recipe, SegmentNow, Snapshot } from '../api.ts';
import { restLine } from '../outlook_words.ts';
import { Shape } from '../pictures/mark_shape.tsx';
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

// Changes of plan that people took, the newest first. The furnace does not know of them.
export function AdoptedPlans({ snapshot }: { snapshot: Snapshot }) {
  const { temperature } = useStore(prefs);
  const plans = snapshot.plans ?? [];
  const open = snapshot.load.state === 'open';
  if (plans.length === 0) return null;
  return <section class="panel" data-testid="plans">
    <h2>Changed plans</h2>
    {open && <p class="mark metal by-hand"><Shape name="by hand" /><span><b>set by hand</b> <span class="mark-sentence">The furnace’s controller does not know of a changed plan. See that it is set to the newest one.</span></span></p>}
    <ol class="list plans">{[...plans].reverse().map((plan, i) => <li key={plan.at} class={i > 0 ? 'gone-by' : ''}><p>
      <b>{momentText(Date.parse(plan.at), Date.parse(snapshot.now))}</b> by {plan.person}: {plan.reason}{i > 0 && ' (replaced)'}
      {plan.segments.map((each, k) => <span class="change" key={k}>{restLine(each, temperature)}</span>)}</p></li>)}</ol>
  </section>;
}
