// Recipes, parts and changes in one line each, for cards and folded parts of a form. Pure.
import type { Change, ItemDefinition, RecipeSegment } from '../contract.ts';
import { type LengthUnit, type TemperatureUnit, depthText, differenceName, fromKelvins, plainNumber, temperatureText } from '../units.ts';
import { minutesText } from '../words.ts';
import { type Draft, type DraftSegment, usualToleranceMin } from './draft.ts';

export interface Units { temperature: TemperatureUnit; length: LengthUnit }

const sure = (value: number | null): number => (value === null || Number.isNaN(value) ? 0 : value);

export const segmentLine = (segment: Pick<RecipeSegment, 'name' | 'duration_min' | 'temperature_degc'>, units: Units): string =>
  `${segment.name} ${minutesText(segment.duration_min)} at ${temperatureText(segment.temperature_degc, units.temperature)}`;

// What a segment has beyond its three figures; empty where it has nothing.
export function segmentExtras(segment: DraftSegment, { temperature, length }: Units): string {
  const words: string[] = [];
  const value = sure(segment.untilValue);
  if (sure(segment.ramp_min) > 0) words.push(`ramp ${minutesText(sure(segment.ramp_min))}`);
  if (segment.until === 'case_depth') words.push(`until item ${segment.untilItem} has ${depthText(value, length)}`);
  if (segment.until === 'surface_carbon') words.push(`until the surface of item ${segment.untilItem} has ${plainNumber(value, 3)} % C`);
  if (segment.until === 'part_temperature') words.push(`until the parts are within ${plainNumber(fromKelvins(value, temperature), 1)} ${differenceName(temperature)}`);
  if (segment.until !== '' && segment.longest_min !== null) words.push(`at the latest after ${minutesText(sure(segment.longest_min))}`);
  if (segment.tolerance_min !== null && segment.tolerance_min !== usualToleranceMin) words.push(`called long after ${minutesText(sure(segment.tolerance_min))} more`);
  return words.join(', ');
}

export const steelName = (steel: ItemDefinition['steel']): string => (typeof steel === 'string' ? steel : steel.name);

export function draftLine(draft: Draft, units: Units): string {
  const items = draft.items.map((item) => `${sure(item.quantity)} × ${item.part || `item ${item.name}`} (${item.ownSteel?.name ?? (item.steel || 'steel not chosen')})`);
  const segments = draft.segments.map((segment) => segmentLine({ name: segment.name, duration_min: sure(segment.duration_min), temperature_degc: sure(segment.temperature_degc) }, units));
  return `${items.join(', ')}. ${draft.recipeName ? `${draft.recipeName}: ` : ''}${segments.join(', ')}.`;
}

// "items[1].case_depth_window_mm" -> "item 2, case depth window". Names of fields are words with units behind.
export function fieldWords(field: string): string {
  const words = field.split('.').filter((part) => part !== 'recipe' && part !== 'load').map((part) => {
    const [, name = part, index] = /^(\w+)\[(\d+)\]$/.exec(part) ?? [];
    if (index === undefined) return part.replace(/_(mm|wt_pct|min|degc|pct|hv|hrc|k)$/, '').replace(/_wt_pct$/, '').replaceAll('_', ' ');
    const one = { items: 'item', segments: 'segment', path: 'stay', masks: 'marked stretch' }[name] ?? name.replaceAll('_', ' ');
    return `${one} ${Number(index) + 1}`;
  });
  return words.join(', ');
}
export function changeWords({ field, before, after }: Change): string {
  if (before === null) return `${fieldWords(field)}: set to ${after ?? 'nothing'}`;
  if (after === null) return `${fieldWords(field)}: ${before} taken away`;
  return `${fieldWords(field)}: ${before} → ${after}`;
}

// The number after the highest plain number among earlier loads, as a first offer; null where none is plain.
export function nextNumber(names: readonly string[]): string | null {
  let best: { head: string; digits: string } | null = null;
  for (const name of names) {
    const found = /^(.*?)(\d{1,12})$/.exec(name.trim());
    if (found && (!best || Number(found[2]) > Number(best.digits))) best = { head: found[1]!, digits: found[2]! };
  }
  return best && best.head + String(Number(best.digits) + 1).padStart(best.digits.length, '0');
}
