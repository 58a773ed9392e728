// The items of the load: part, steel, section, what the drawing asks.
import type { Criterion, Steel } from '../api.ts';
import { prefs } from '../prefs.ts';
import { useStore } from '../store.ts';
import { fromMm, lengthName, toMm } from '../units.ts';
import { NumberField, SaidAt, SelectField, TextField } from './fields.tsx';
import { type Draft, type DraftItem, type Shape, newItem, sizesOf, usualLimit } from './start_draft.ts';

interface Props { draft: Draft; change: (part: Partial<Draft>) => void; steels: Steel[] }

export function ItemsForm({ draft, change, steels }: Props) {
  const items = draft.items;
  const put = (i: number) => (part: Partial<DraftItem>) => change({ items: items.map((each, k) => (k === i ? { ...each, ...part } : each)) });
  return <fieldset class="panel">
    <legend><h2>Items</h2></legend>
    <SaidAt path="items" />
    {items.map((item, i) => <section class="item-form" key={item.key} aria-label={`Item ${i + 1}`}>
      <ItemForm item={item} at={`items[${i}]`} put={put(i)} steels={steels} />
      {items.length > 1 && <button type="button" class="button plain" onClick={() => change({ items: items.filter((_, k) => k !== i) })}>Remove item {item.name || i + 1}</button>}
    </section>)}
    <button type="button" class="button plain" onClick={() => change({ items: [...items, newItem(items.length)] })}>Add an item</button>
  </fieldset>;
}

const shapes: { value: Shape; text: string }[] = [
  { value: 'plate', text: 'plate, both faces' }, { value: 'cylinder', text: 'solid cylinder' }, { value: 'sphere', text: 'sphere' }, { value: 'bore', text: 'bore, from inside' },
];
const kinds: { value: Criterion['kind']; text: string }[] = [
  { value: 'hardness_hv', text: 'hardness HV' }, { value: 'hardness_hrc', text: 'hardness HRC' }, { value: 'carbon', text: 'carbon content' },
];
const limits: Record<Criterion['kind'], { unit: string; step: number; digits: number }> = {
  hardness_hv: { unit: 'HV', step: 10, digits: 0 }, hardness_hrc: { unit: 'HRC', step: 1, digits: 1 }, carbon: { unit: '% C', step: 0.01, digits: 3 },
};

interface ItemProps { item: DraftItem; at: string; put: (part: Partial<DraftItem>) => void; steels: Steel[] }
function ItemForm({ item, at, put, steels }: ItemProps) {
  const { length } = useStore(prefs);
  const mm = { unit: lengthName(length), show: (value: number) => fromMm(value, length), read: (shown: number) => toMm(shown, length) };
  const size = { ...mm, step: length === 'mm' ? 1 : 0.05, base: length === 'mm' ? 20 : 0.75, digits: length === 'mm' ? 2 : 4 };
  const depth = { ...mm, step: length === 'mm' ? 0.05 : 0.002, digits: length === 'mm' ? 3 : 4 };
  const own = item.ownSteel ? [{ value: '', text: `${item.ownSteel.name} (own analysis)` }] : [{ value: '', text: 'choose' }];
  const limit = limits[item.kind];
  return <>
    <SaidAt path={at} />
    <div class="grid">
      <TextField path={`${at}.name`} label="item" value={item.name} set={(name) => put({ name })} maxLength={60} />
      <TextField path={`${at}.part`} label="part" value={item.part} set={(part) => put({ part })} />
      <NumberField path={`${at}.quantity`} label="quantity" unit="pieces" value={item.quantity} set={(quantity) => put({ quantity })} step={1} base={1} digits={0} />
      <SelectField path={`${at}.steel`} label="steel" value={item.steel} options={[...own, ...steels.map((steel) => ({ value: steel.id, text: `${steel.id} · ${steel.standard}` }))]} set={(steel) => put(steel === '' ? { steel } : { steel, ownSteel: null })} />
      <SelectField path={`${at}.section`} label="section" value={item.shape} options={shapes} set={(shape) => put({ shape: shape as Shape })} />
      {sizesOf[item.shape].map((name) => <NumberField key={name} path={`${at}.section.${name}`} label={name.replace('_mm', '').replace('_', ' ')} value={item.size[name]} set={(value) => put({ size: { ...item.size, [name]: value } })} {...size} />)}
    </div>
    <div class="grid asked-grid">
      <NumberField path={`${at}.case_depth_window_mm`} label="case depth from" value={item.low_mm} set={(low_mm) => put({ low_mm })} base={length === 'mm' ? 0.8 : 0.03} {...depth} />
      <NumberField path={`${at}.case_depth_window_mm[1]`} label="to" value={item.high_mm} set={(high_mm) => put({ high_mm })} base={length === 'mm' ? 1.1 : 0.044} {...depth} />
      <SelectField path={`${at}.criterion.kind`} label="measured at" value={item.kind} options={kinds} set={(kind) => put({ kind: kind as Criterion['kind'], limit: usualLimit[kind as Criterion['kind']] })} />
      <NumberField path={`${at}.criterion`} label="limit" value={item.limit} set={(value) => put({ limit: value })} base={usualLimit[item.kind]} {...limit} />
      {item.kind !== 'carbon' && <NumberField path={`${at}.criterion.martensite_pct`} label="martensite" unit="%" value={item.martensite_pct} set={(martensite_pct) => put({ martensite_pct })} step={1} base={95} digits={1} />}
    </div>
    <details class="rare"><summary>Surface carbon, core carbon, lag (optional)</summary>
      <div class="grid">
        <NumberField path={`${at}.surface_carbon_window_wt_pct`} label="surface carbon from" unit="% C" value={item.surface_low} set={(surface_low) => put({ surface_low })} step={0.05} base={0.7} digits={3} />
        <NumberField path={`${at}.surface_carbon_window_wt_pct[1]`} label="to" unit="% C" value={item.surface_high} set={(surface_high) => put({ surface_high })} step={0.05} base={0.85} digits={3} />
        <NumberField path={`${at}.core_carbon_wt_pct`} label="core carbon" unit="% C" value={item.core_carbon_wt_pct} set={(core_carbon_wt_pct) => put({ core_carbon_wt_pct })} step={0.01} base={0.2} digits={3} />
        <NumberField path={`${at}.lag_min`} label="lag behind furnace" unit="min" value={item.lag_min} set={(lag_min) => put({ lag_min })} step={5} base={20} digits={1} />
      </div>
    </details>
  </>;
}
