// The recipe's segments: one row each, added, removed and moved by large buttons. What few recipes need is
// folded away below its row.
import type { ComponentChildren } from 'preact';
import type { Until } from '../api.ts';
import { type Units, segmentExtras } from '../draft/describe.ts';
import { type DraftSegment, newSegment } from '../draft/draft.ts';
import { prefs } from '../prefs.ts';
import { useStore } from '../store.ts';
import { differenceName, fromDegc, fromKelvins, fromMm, lengthName, temperatureName, toDegc, toKelvins, toMm } from '../units.ts';
import { NumberField, SaidAt, SelectField, TextField } from './fields.tsx';

interface Props {
  at: string;                   // path of the recipe in the document: "recipe" or "body"
  segments: DraftSegment[];
  set: (segments: DraftSegment[]) => void;
  itemNames: string[];          // empty where the recipe stands alone
  children?: ComponentChildren; // above the segments
}

export function RecipeForm({ at, segments, set, itemNames, children }: Props) {
  const put = (i: number, part: Partial<DraftSegment>) => set(segments.map((each, k) => (k === i ? { ...each, ...part } : each)));
  const move = (i: number, by: number) => {
    const next = [...segments];
    const [moved] = next.splice(i, 1);
    if (moved) next.splice(i + by, 0, moved);
    set(next);
  };
  return <fieldset class="panel">
    <legend><h2>Recipe</h2></legend>
    <SaidAt path={at} />
    {children}
    <ol class="segments">
      {segments.map((segment, i) => <li key={segment.key} class="segment-form" aria-label={`Segment ${i + 1}`}>
        <div class="segment">
          <SegmentFigures at={`${at}.segments[${i}]`} i={i} segment={segment} put={(part) => put(i, part)} />
          <span class="row-buttons">
            <button type="button" class="step" disabled={i === 0} aria-label={`Move segment ${i + 1} earlier`} onClick={() => move(i, -1)}>↑</button>
            <button type="button" class="step" disabled={i === segments.length - 1} aria-label={`Move segment ${i + 1} later`} onClick={() => move(i, 1)}>↓</button>
            <button type="button" class="step" disabled={segments.length === 1} aria-label={`Remove segment ${i + 1}`} onClick={() => set(segments.filter((_, k) => k !== i))}>×</button>
          </span>
          <SaidAt path={`${at}.segments[${i}]`} />
        </div>
        <SegmentRare at={`${at}.segments[${i}]`} segment={segment} put={(part) => put(i, part)} itemNames={itemNames} />
      </li>)}
    </ol>
    <SaidAt path={`${at}.segments`} />
    <button type="button" class="button plain" onClick={() => set([...segments, newSegment()])}>Add a segment</button>
  </fieldset>;
}

interface SegmentProps { at: string; segment: DraftSegment; put: (part: Partial<DraftSegment>) => void }
function SegmentFigures({ at, i, segment, put }: SegmentProps & { i: number }) {
  const { temperature } = useStore(prefs);
  return <>
    <TextField path={`${at}.name`} label={`segment ${i + 1}`} value={segment.name} set={(name) => put({ name })} />
    <NumberField path={`${at}.duration_min`} label={segment.until === '' ? 'time' : 'time, about'} unit="min" value={segment.duration_min} set={(duration_min) => put({ duration_min })} step={5} base={60} digits={1} />
    <NumberField path={`${at}.temperature_degc`} label="temperature" unit={temperatureName(temperature)} value={segment.temperature_degc} set={(temperature_degc) => put({ temperature_degc })}
      step={temperature === 'degc' ? 5 : 10} base={temperature === 'degc' ? 900 : 1650} digits={1} show={(degc) => fromDegc(degc, temperature)} read={(shown) => toDegc(shown, temperature)} />
    <NumberField path={`${at}.carbon_potential_wt_pct`} label="carbon potential" unit="% C" value={segment.carbon_potential_wt_pct} set={(carbon_potential_wt_pct) => put({ carbon_potential_wt_pct })} step={0.05} base={0.8} digits={3} />
  </>;
}

const ends: { value: Until['kind'] | ''; text: string }[] = [
  { value: '', text: 'after its time' }, { value: 'case_depth', text: 'at a case depth' }, { value: 'surface_carbon', text: 'at a surface carbon' }, { value: 'part_temperature', text: 'when the parts are as hot' },
];

function SegmentRare({ at, segment, put, itemNames }: SegmentProps & { itemNames: string[] }) {
  const units: Units = useStore(prefs);
  const { temperature, length } = units;
  const until = `${at}.until`;
  const target = segment.until === 'case_depth'
    ? { label: 'case depth', unit: lengthName(length), step: length === 'mm' ? 0.05 : 0.002, base: length === 'mm' ? 0.8 : 0.03, digits: length === 'mm' ? 3 : 4, show: (mm: number) => fromMm(mm, length), read: (shown: number) => toMm(shown, length) }
    : segment.until === 'surface_carbon' ? { label: 'surface carbon', unit: '% C', step: 0.05, base: 0.75, digits: 3 }
      : { label: 'within', unit: differenceName(temperature), step: 1, base: temperature === 'degc' ? 8 : 15, digits: 1, show: (k: number) => fromKelvins(k, temperature), read: (shown: number) => toKelvins(shown, temperature) };
  const extras = segmentExtras(segment, units);
  return <details class="rare"><summary><span>{extras || 'Ramp, tolerance, what ends it'}</span></summary>
    <div class="grid">
      <NumberField path={`${at}.ramp_min`} label="ramp over" unit="min" value={segment.ramp_min} set={(ramp_min) => put({ ramp_min })} step={5} base={20} digits={1} />
      <NumberField path={`${at}.tolerance_min`} label="called long after" unit="min more" value={segment.tolerance_min} set={(tolerance_min) => put({ tolerance_min })} step={5} base={10} digits={1} />
      <SelectField path={`${until}.kind`} label="it ends" value={segment.until} options={ends} set={(kind) => put({ until: kind as DraftSegment['until'], untilValue: null })} />
      {segment.until !== '' && <NumberField path={until} value={segment.untilValue} set={(untilValue) => put({ untilValue })} {...target} />}
      {(segment.until === 'case_depth' || segment.until === 'surface_carbon') && (itemNames.length > 0
        ? <SelectField path={`${until}.item`} label="of item" value={segment.untilItem} options={itemNames.map((name) => ({ value: name, text: name }))} set={(untilItem) => put({ untilItem })} />
        : <TextField path={`${until}.item`} label="of item" value={segment.untilItem} maxLength={60} set={(untilItem) => put({ untilItem })} />)}
      {segment.until !== '' && <NumberField path={`${at}.longest_min`} label="at the latest after" unit="min" value={segment.longest_min} set={(longest_min) => put({ longest_min })} step={10} base={180} digits={1} />}
    </div>
    <p class="hint">A ramp runs straight from the segment before to these set points. A segment is called long when it runs on so much over its time.</p>
  </details>;
}
