// The recipe's segments: one row each, added, removed and moved by large buttons.
import { prefs } from '../prefs.ts';
import { useStore } from '../store.ts';
import { fromDegc, temperatureName, toDegc } from '../units.ts';
import { NumberField, SaidAt, TextField } from './fields.tsx';
import { type Draft, type DraftSegment, newSegment } from './start_draft.ts';

interface Props { draft: Draft; change: (part: Partial<Draft>) => void }

export function RecipeForm({ draft, change }: Props) {
  const { temperature } = useStore(prefs);
  const segments = draft.segments;
  const put = (i: number, part: Partial<DraftSegment>) => change({ segments: segments.map((each, k) => (k === i ? { ...each, ...part } : each)) });
  const move = (i: number, by: number) => {
    const next = [...segments];
    const [moved] = next.splice(i, 1);
    if (moved) next.splice(i + by, 0, moved);
    change({ segments: next });
  };
  return <fieldset class="panel">
    <legend><h2>Recipe</h2></legend>
    <SaidAt path="recipe" />
    <TextField path="recipe.name" label="recipe name" value={draft.recipeName} set={(recipeName) => change({ recipeName })} />
    <ol class="segments">
      {segments.map((segment, i) => {
        const at = `recipe.segments[${i}]`;
        return <li key={segment.key} class="segment" aria-label={`Segment ${i + 1}`}>
          <TextField path={`${at}.name`} label={`segment ${i + 1}`} value={segment.name} set={(name) => put(i, { name })} />
          <NumberField path={`${at}.duration_min`} label="time" unit="min" value={segment.duration_min} set={(duration_min) => put(i, { duration_min })} step={5} base={60} digits={1} />
          <NumberField path={`${at}.temperature_degc`} label="temperature" unit={temperatureName(temperature)} value={segment.temperature_degc} set={(temperature_degc) => put(i, { temperature_degc })}
            step={temperature === 'degc' ? 5 : 10} base={temperature === 'degc' ? 900 : 1650} digits={1} show={(degc) => fromDegc(degc, temperature)} read={(shown) => toDegc(shown, temperature)} />
          <NumberField path={`${at}.carbon_potential_wt_pct`} label="carbon potential" unit="% C" value={segment.carbon_potential_wt_pct} set={(carbon_potential_wt_pct) => put(i, { carbon_potential_wt_pct })} step={0.05} base={0.8} digits={3} />
          <span class="row-buttons">
            <button type="button" class="step" disabled={i === 0} aria-label={`Move segment ${i + 1} earlier`} onClick={() => move(i, -1)}>↑</button>
            <button type="button" class="step" disabled={i === segments.length - 1} aria-label={`Move segment ${i + 1} later`} onClick={() => move(i, 1)}>↓</button>
            <button type="button" class="step" disabled={segments.length === 1} aria-label={`Remove segment ${i + 1}`} onClick={() => change({ segments: segments.filter((_, k) => k !== i) })}>×</button>
          </span>
          <SaidAt path={at} />
        </li>;
      })}
    </ol>
    <SaidAt path="recipe.segments" />
    <button type="button" class="button plain" onClick={() => change({ segments: [...segments, newSegment()] })}>Add a segment</button>
  </fieldset>;
}
