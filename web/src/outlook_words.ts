// The outlook in words: standing, chances, bands, what is carried on. Pure; figures in the contract's units come in,
// words in the reader's units go out.
import type { Band3, FloorOutlook, Outlook, OutlookItem, RestSegment, Standing } from './contract_outlook.ts';
import {
  type LengthUnit, type TemperatureUnit, carbonNumber, carbonText, depthNumber, depthText, differenceName, fixed, fromKelvins, lengthName, plainNumber, temperatureText,
} from './units.ts';
import { minutesText } from './words.ts';

export interface ReaderUnits { length: LengthUnit; temperature: TemperatureUnit }

// Whole per cent, but never "0 %" or "100 %": no ensemble is so sure.
export function percentText(chance: number): string {
  if (chance > 0.99) return 'over 99 %';
  if (chance < 0.01) return 'under 1 %';
  return `${Math.round(chance * 100)} %`;
}

// Whether a person should look: undecided is normal early in a cycle and stays quiet.
export const isMiss = (standing: Standing): boolean => standing === 'shallow' || standing === 'deep';

// What the joint chance adds to the standing's word. Depth may be inside while the surface carbon is not, and then
// "inside, 40 %" would say the wrong thing.
const insideFrom = 0.8;
export function standingChance(standing: Standing, jointChance: number): string {
  if (standing !== 'inside') return `${percentText(jointChance)} chance inside`;
  return jointChance < insideFrom ? `in depth; all windows ${percentText(jointChance)}` : percentText(jointChance);
}
export const standingLine = (of: Pick<FloorOutlook, 'standing' | 'joint_chance'>): string =>
  (of.standing === 'inside' && of.joint_chance >= insideFrom ? `inside, ${percentText(of.joint_chance)}` : `${of.standing} ${standingChance(of.standing, of.joint_chance)}`);

const dash = ' – ';
export const depthBand = (band: Band3, unit: LengthUnit): string => `${depthNumber(band.low, unit)}${dash}${depthNumber(band.high, unit)}`;
export const depthBandText = (band: Band3, unit: LengthUnit): string => `${depthText(band.median, unit)} (${depthBand(band, unit)})`;
export const carbonBandText = (band: Band3): string => `${carbonText(band.median)} (${carbonNumber(band.low)}${dash}${carbonNumber(band.high)})`;

export const noBand = 'band not computed';
// A document of an older daemon (undefined) leaves the word to what the document says of all bands.
export function nowBandText(band: Band3 | null | undefined, said: string, unit: LengthUnit): string {
  if (band === undefined) return said;
  return band === null ? noBand : `${depthBand(band, unit)} ${lengthName(unit)}`;
}

export const endsText = (minutesLeft: number): string => (minutesLeft >= 0 ? `${minutesText(minutesLeft)} to the end` : `${minutesText(-minutesLeft)} past the end`);

// What is carried on beside set point. Below half a kelvin and 0.005 % there is nothing to say.
export function offsetText(offset: Outlook['offset'], unit: TemperatureUnit): string | null {
  if (!offset) return null;
  const said: string[] = [];
  const side = (value: number) => (value < 0 ? 'below' : 'above');
  const kelvins = fromKelvins(offset.temperature_k, unit);
  if (Math.abs(offset.temperature_k) >= 0.5) said.push(`runs ${fixed(Math.abs(kelvins), 0)} ${differenceName(unit)} ${side(kelvins)} set point`);
  const carbon = offset.carbon_potential_wt_pct;
  if (Math.abs(carbon) >= 0.005) said.push(`carbon potential ${carbonText(Math.abs(carbon))} ${side(carbon)} set point`);
  return said.length === 0 ? null : `${said.join(', ')}; carried on, fading`;
}

// When the joint chance is highest, against now and against the planned end.
export function bestText(outlook: Outlook): string | null {
  const { best } = outlook;
  if (!best) return null;
  const apart = best.minutes_from_now - outlook.minutes_left;
  const chance = percentText(best.joint_chance);
  if (Math.abs(apart) < 1) return `at the planned end, ${chance}`;
  const when = best.minutes_from_now < 1 ? 'now' : `in ${minutesText(best.minutes_from_now)}`;
  return `${when}, ${minutesText(Math.abs(apart))} ${apart > 0 ? 'after' : 'before'} the planned end, ${chance}`;
}

export function againstOffered(outlook: Outlook): string | null {
  const { offered_joint_chance: offered } = outlook;
  return offered === null || offered === undefined ? null : `the recipe offered ${percentText(offered)} at the start`;
}

export function surfaceWords(item: OutlookItem): string {
  const chance = item.surface_chance;
  if (!chance) return 'no window asked';
  const worst = chance.below > chance.above ? `below ${percentText(chance.below)}` : `above ${percentText(chance.above)}`;
  return `inside ${percentText(chance.inside)}${chance.inside > 0.99 ? '' : `, ${worst}`}`;
}
// "shallow 66 %, inside 33 %, deep under 1 %", only what counts for anything.
export function depthChanceText(chance: OutlookItem['chance']): string {
  const parts = (['shallow', 'inside', 'deep'] as const).filter((name) => name === 'inside' || chance[name] >= 0.005);
  return parts.map((name) => `${name} ${percentText(chance[name])}`).join(', ');
}

export const restLine = (segment: RestSegment, unit: TemperatureUnit): string =>
  `${segment.name} ${minutesText(segment.duration_min)} at ${temperatureText(segment.temperature_degc, unit)}, ${carbonText(segment.carbon_potential_wt_pct)}`;

export const moreMinutesText = (minutes: number): string =>
  (Math.abs(minutes) < 0.5 ? 'ends at the same time' : `ends ${minutesText(Math.abs(minutes))} ${minutes > 0 ? 'later' : 'sooner'}`);

// What of a segment is changed, in words; empty where nothing is.
export function segmentChanges(mine: RestSegment, planned: RestSegment | undefined, unit: TemperatureUnit): string {
  if (!planned) return 'added';
  const said: string[] = [];
  const minutes = mine.duration_min - planned.duration_min;
  if (Math.abs(minutes) >= 0.5) said.push(`${minutesText(Math.abs(minutes))} ${minutes > 0 ? 'longer' : 'shorter'}`);
  const kelvins = fromKelvins(mine.temperature_degc - planned.temperature_degc, unit);
  if (Math.abs(kelvins) >= 0.05) said.push(`${plainNumber(Math.abs(kelvins), 1)} ${differenceName(unit)} ${kelvins > 0 ? 'hotter' : 'cooler'}`);
  const carbon = mine.carbon_potential_wt_pct - planned.carbon_potential_wt_pct;
  if (Math.abs(carbon) >= 0.0005) said.push(`${plainNumber(Math.abs(carbon), 3)} % C ${carbon > 0 ? 'more' : 'less'}`);
  return said.join(', ');
}

