// A part: steel, section, what the drawing asks. The same fields serve an item of a load and a part of the library.
import type { Criterion, Steel } from '../api.ts';
import { type DraftItem, type Shape, elements, sizesOf, usualLimit } from '../draft/draft.ts';
import { prefs } from '../prefs.ts';
import { useStore } from '../store.ts';
import { fromMm, lengthName, toMm } from '../units.ts';
import { NumberField, SelectField, TextField } from './fields.tsx';

const shapes: { value: Shape; text: string }[] = [
  { value: 'plate', text: 'plate, both faces' }, { value: 'cylinder', text: 'solid cylinder' }, { value: 'sphere', text: 'sphere' }, { value: 'bore', text: 'bore, from inside' },
];
const kinds: { value: Criterion['kind']; text: string }[] = [
  { value: 'hardness_hv', text: 'hardness HV' }, { value: 'hardness_hrc', text: 'hardness HRC' }, { value: 'carbon', text: 'carbon content' },
];
const limits: Record<Criterion['kind'], { unit: string; step: number; digits: number }> = {
  hardness_hv: { unit: 'HV', step: 10, digits: 0 }, hardness_hrc: { unit: 'HRC', step: 1, digits: 1 }, carbon: { unit: '% C', step: 0.01, digits: 3 },
};
const ownMark = ' own';  // no steel of the library is called so

export interface PartProps { item: DraftItem; at: string; put: (part: Partial<DraftItem>) => void; steels: Steel[] }

function useLengths() {
  const { length } = useStore(prefs);
  const mm = { unit: lengthName(length), show: (value: number) => fromMm(value, length), read: (shown: number) => toMm(shown, length) };
  return {
    size: { ...mm, step: length === 'mm' ? 1 : 0.05, base: length === 'mm' ? 20 : 0.75, digits: length === 'mm' ? 2 : 4 },
    depth: { ...mm, step: length === 'mm' ? 0.05 : 0.002, digits: length === 'mm' ? 3 : 4 },
    inMm: length === 'mm',
  };
}

// Steel and section; the caller's own fields come before and after.
export function PartFields({ item, at, put, steels }: PartProps) {
  const { size } = useLengths();
  const pick = (steel: string) => {
    if (steel === ownMark) {
      const from = steels.find((each) => each.id === item.steel);
      put({ ownSteel: item.ownSteel ?? { name: from ? `${from.id} ` : '', composition_wt_pct: Object.fromEntries(elements.map((element) => [element, from?.composition_wt_pct[element] ?? null])) } });
    } else put({ steel, ownSteel: null });
  };
  return <>
    <SelectField path={`${at}.steel`} label="steel" value={item.ownSteel ? ownMark : item.steel} set={pick}
      options={[{ value: '', text: 'choose' }, ...steels.map((steel) => ({ value: steel.id, text: `${steel.id} · ${steel.standard}` })), { value: ownMark, text: item.ownSteel?.name.trim() ? `${item.ownSteel.name} (own analysis)` : 'the heat’s own analysis' }]} />
    <SelectField path={`${at}.section`} label="section" value={item.shape} options={shapes} set={(shape) => put({ shape: shape as Shape })} />
    {sizesOf[item.shape].map((name) => <NumberField key={name} path={`${at}.section.${name}`} label={name.replace('_mm', '').replace('_', ' ')} value={item.size[name]} set={(value) => put({ size: { ...item.size, [name]: value } })} {...size} />)}
  </>;
}

export function Analysis({ item, at, put }: PartProps) {
  const own = item.ownSteel;
  if (!own) return null;
  const names = [...elements, ...Object.keys(own.composition_wt_pct).filter((name) => !(elements as readonly string[]).includes(name))];
  return <div class="grid small asked-grid" role="group" aria-label="The heat’s own analysis">
    <TextField path={`${at}.steel.name`} label="heat" value={own.name} set={(name) => put({ ownSteel: { ...own, name } })} />
    {names.map((element) => <NumberField key={element} path={`${at}.steel.composition_wt_pct.${element}`} label={element} unit="%" value={own.composition_wt_pct[element] ?? null}
      set={(share) => put({ ownSteel: { ...own, composition_wt_pct: { ...own.composition_wt_pct, [element]: share } } })} step={element === 'C' ? 0.01 : 0.05} base={element === 'C' ? 0.2 : 0.5} digits={3} />)}
  </div>;
}

export function AskedFields({ item, at, put }: PartProps) {
  const { depth, inMm } = useLengths();
  return <div class="grid asked-grid">
    <NumberField path={`${at}.case_depth_window_mm`} label="case depth from" value={item.low_mm} set={(low_mm) => put({ low_mm })} base={inMm ? 0.8 : 0.03} {...depth} />
    <NumberField path={`${at}.case_depth_window_mm[1]`} label="to" value={item.high_mm} set={(high_mm) => put({ high_mm })} base={inMm ? 1.1 : 0.044} {...depth} />
    <SelectField path={`${at}.criterion.kind`} label="measured at" value={item.kind} options={kinds} set={(kind) => put({ kind: kind as Criterion['kind'], limit: usualLimit[kind as Criterion['kind']] })} />
    <NumberField path={`${at}.criterion`} label="limit" value={item.limit} set={(value) => put({ limit: value })} base={usualLimit[item.kind]} {...limits[item.kind]} />
    {item.kind !== 'carbon' && <NumberField path={`${at}.criterion.martensite_pct`} label="martensite" unit="%" value={item.martensite_pct} set={(martensite_pct) => put({ martensite_pct })} step={1} base={95} digits={1} />}
  </div>;
}

export function RareFields({ item, at, put }: PartProps) {
  const { depth, inMm } = useLengths();
  return <div class="grid">
    <NumberField path={`${at}.surface_carbon_window_wt_pct`} label="surface carbon from" unit="% C" value={item.surface_low} set={(surface_low) => put({ surface_low })} step={0.05} base={0.7} digits={3} />
    <NumberField path={`${at}.surface_carbon_window_wt_pct[1]`} label="to" unit="% C" value={item.surface_high} set={(surface_high) => put({ surface_high })} step={0.05} base={0.85} digits={3} />
    <NumberField path={`${at}.grinding_stock_mm`} label="grinding stock" value={item.grinding_stock_mm} set={(grinding_stock_mm) => put({ grinding_stock_mm })} base={inMm ? 0.15 : 0.006} {...depth} />
    <NumberField path={`${at}.core_carbon_wt_pct`} label="core carbon" unit="% C" value={item.core_carbon_wt_pct} set={(core_carbon_wt_pct) => put({ core_carbon_wt_pct })} step={0.01} base={0.2} digits={3} />
    <NumberField path={`${at}.lag_min`} label="lag behind furnace" unit="min" value={item.lag_min} set={(lag_min) => put({ lag_min })} step={5} base={20} digits={1} />
  </div>;
}
