// What needs a person's eye on a load, worst first. Each kind has a shape, a word and one of three colours:
//   link  - the figures are old or there are none
//   guess - an input of the model is not measured
//   metal - the plan or the part itself
// Nothing to say gives an empty list, and the screen stays quiet.
import type { Basis, Condition, FloorItem, Inputs, SegmentNow } from './contract.ts';
import type { Severity } from './contract_alerts.ts';
import type { Standing } from './contract_outlook.ts';
import type { HealthState } from './contract_plant.ts';
import { type LengthUnit, carbonText, depthText, leastDepthMm } from './units.ts';
import { ageText, minutesText } from './words.ts';

export type MarkColour = 'link' | 'guess' | 'metal' | 'quiet';
export type MarkShape = 'no load' | 'no data yet' | 'stale' | 'held' | 'planned' | 'past window' | 'overdue' | 'outside range' | 'ended' | 'away' | 'note' | 'demo' | 'masked' | 'unsure' | 'disagree' | 'cancelled' | HealthState
  | Standing | Exclude<Severity, 'note'> | 'notice' | 'acknowledged' | 'shelved' | 'waiting' | 'delivered' | 'not delivered' | 'sound on' | 'sound off' | 'sounding' | 'silenced' | 'touch' | 'by hand' | 'all clear';
export interface Mark { shape: MarkShape; colour: MarkColour; word: string; sentence: string }

export type Judged = Pick<FloorItem, 'case_depth_mm' | 'case_depth_window_mm' | 'finished_case_depth_mm' | 'grinding_stock_mm'>;

// The depth that the window is for: what grinding leaves, where something is ground off.
export const judgedDepthMm = (item: Judged): number | null =>
  (item.grinding_stock_mm && item.finished_case_depth_mm !== undefined ? item.finished_case_depth_mm : item.case_depth_mm);

export interface Marked {
  condition: Condition;
  message: string | null;
  inputs: Inputs;
  segment: SegmentNow | null;
  item: Judged & { outcome?: string } | null;
  dataAgeS: number | null;
}

export function guessedInputs(inputs: Inputs, basis: Basis): string[] {
  const names: string[] = [];
  if (inputs.temperature.basis === basis) names.push('temperature');
  if (inputs.carbon_potential.basis === basis) names.push('carbon potential');
  return names;
}

// Whether any figure rests on an input that is not measured now.
export const anyGuess = (inputs: Inputs): boolean => inputs.temperature.basis !== 'measured' || inputs.carbon_potential.basis !== 'measured';

const inputsWord = (basis: string, names: readonly string[]): string =>
  (names.length > 1 ? `${basis} inputs` : `${basis}: ${names[0]}`);

export function marksOf(on: Marked): Mark[] {
  const marks: Mark[] = [];
  const { condition, message, item } = on;
  let told = false;  // the daemon's own sentence is said once, by the first mark it fits
  const say = (otherwise: string): string => {
    if (message === null || told) return otherwise;
    told = true;
    return message;
  };
  if (condition === 'stale') {
    const old = on.dataAgeS === null ? '' : ` for ${ageText(on.dataAgeS)}`;
    marks.push({ shape: 'stale', colour: 'link', word: 'stale data', sentence: say(`No new reading${old}. Check the logger and its line.`) });
  }
  if (condition === 'no data yet') {
    marks.push({ shape: 'no data yet', colour: 'link', word: 'no data yet', sentence: say('No reading of this load has come. Check the logger and its line.') });
  }
  const planned = guessedInputs(on.inputs, 'planned');
  if (planned.length > 0) {
    marks.push({ shape: 'planned', colour: 'guess', word: inputsWord('planned', planned), sentence: say(marks.length > 0 ? '' : 'The recipe’s own values stand in for readings.') });
  }
  const held = guessedInputs(on.inputs, 'held');
  if (held.length > 0) {
    marks.push({ shape: 'held', colour: 'guess', word: inputsWord('held', held), sentence: say(marks.length > 0 ? '' : 'The last reading is carried on.') });
  }
  const masked = guessedInputs(on.inputs, 'masked');
  if (masked.length > 0) {
    marks.push({ shape: 'masked', colour: 'guess', word: inputsWord('marked stretch', masked), sentence: say('Its readings are left out until the stretch ends.') });
  }
  if (on.inputs.carbon_potential.disagree) {
    const apart = on.inputs.carbon_potential.disagreement_wt_pct;
    marks.push({ shape: 'disagree', colour: 'guess', word: 'carbon sources disagree', sentence: `${apart ? `By ${carbonText(apart)}. ` : ''}Check probe and gas analysis.` });
  }
  if (on.segment?.doubt) {
    marks.push({ shape: 'unsure', colour: 'guess', word: 'unsure where the recipe is', sentence: afterColon(on.segment.doubt, 'Unsure where the recipe is') });
  }
  if (item?.outcome === 'outside range' || item?.outcome === 'failed') {
    marks.push({ shape: 'outside range', colour: 'metal', word: item.outcome === 'failed' ? 'calculation failed' : 'outside the law’s range', sentence: 'Do not rely on this depth. The model notes say why.' });
  }
  const depth = item && judgedDepthMm(item);
  if (item && depth !== null && depth > item.case_depth_window_mm[1]) {
    marks.push({ shape: 'past window', colour: 'metal', word: 'past the window', sentence: 'Depth cannot go back: tell the supervisor.' });
  }
  const long = on.segment?.long_by_min ?? 0;
  if (on.segment && (on.segment.overdue || long > 0)) {
    const by = long > 0 ? long : -on.segment.minutes_left;
    marks.push({ shape: 'overdue', colour: 'metal', word: 'runs long', sentence: `${on.segment.name} by ${minutesText(by)}. ${on.segment.overdue ? 'End the load here once it is out.' : 'Correct the recipe if that is meant.'}` });
  }
  return marks;
}

// The daemon's sentence without the words that stand in front of it already.
function afterColon(sentence: string, head: string): string {
  const rest = sentence.startsWith(`${head}:`) ? sentence.slice(head.length + 1).trim() : sentence;
  return rest.charAt(0).toUpperCase() + rest.slice(1);
}

// Where the depth stands against the drawing, as plain arithmetic: no forecast and no chance.
export function reachText(item: Judged, unit: LengthUnit, ended = false): string {
  const [low, high] = item.case_depth_window_mm;
  const depth = judgedDepthMm(item);
  if (depth === null) return ended ? 'no case' : 'no case yet';
  if (depth < low) return `${depthText(Math.max(low - depth, leastDepthMm(unit)), unit)} ${ended ? 'short' : 'to go'}`;
  if (depth <= high) return 'in the window';
  return `${depthText(Math.max(depth - high, leastDepthMm(unit)), unit)} too deep`;
}
