// The section strip in numbers: tone of each carbon content, how far the axis reaches, where the ticks are.
// Pure functions, millimetres in, pixels out; strip.tsx draws what these say.
import type { Item, Profile } from '../contract.ts';
import type { Band3 } from '../contract_outlook.ts';
import { type LengthUnit, carbonNumber, depthText, fromMm, lengthName, toMm, windowText } from '../units.ts';

// Tone is absolute: the same carbon content has the same tone on every strip, whatever the load or theme.
// The steps are our own choice, darkest where an etched section would be darkest.
const tones: [number, [number, number, number]][] = [
  [0.10, [0xec, 0xe8, 0xe1]], [0.20, [0xe4, 0xdf, 0xd6]], [0.35, [0xc9, 0xc0, 0xb2]], [0.50, [0xa5, 0x98, 0x88]],
  [0.70, [0x79, 0x6c, 0x5f]], [0.90, [0x54, 0x4a, 0x40]], [1.10, [0x38, 0x30, 0x29]],
];

export function toneOf(carbonWtPct: number): string {
  const first = tones[0]!, last = tones[tones.length - 1]!;
  const c = Math.min(last[0], Math.max(first[0], carbonWtPct));
  const upper = tones.findIndex(([at]) => at >= c);
  const [highAt, high] = tones[Math.max(upper, 1)]!;
  const [lowAt, low] = tones[Math.max(upper, 1) - 1]!;
  const share = (c - lowAt) / (highAt - lowAt);
  return `#${low.map((part, i) => Math.round(part + (high[i]! - part) * share).toString(16).padStart(2, '0')).join('')}`;
}

export interface StripItem {
  depth_mm: number[];
  carbon_wt_pct: number[];
  case_depth_mm: number | null;
  window_mm: readonly [number, number];
  turnover_mm?: number | null;
  stock_mm?: number;  // ground off after hardening: the window is for what is left
  ended?: boolean;  // the depth is the load's last, not "now"
  band_mm?: Band3 | null;     // of the depth now; like the window of the finished part
  outlook_mm?: Band3 | null;  // at the end of the plan, finished part
}

// Round ends, so that the picture does not creep as the case grows.
const ends = [0.2, 0.3, 0.4, 0.5, 0.6, 0.8, 1, 1.25, 1.5, 2, 2.5, 3, 4, 5, 6, 8, 10, 12, 16, 20];
export function axisEndMm(item: StripItem): number {
  const stock = item.stock_mm ?? 0;
  const highest = item.window_mm[1] + stock;
  const farthest = Math.max(item.case_depth_mm ?? 0, (item.band_mm?.high ?? 0) + stock, (item.outlook_mm?.high ?? 0) + stock);
  const reach = Math.max(highest * 1.5, farthest * 1.15, 0.15);
  const round = ends.find((end) => end >= reach) ?? reach;
  const metal = item.depth_mm[item.depth_mm.length - 1] ?? round;
  // A thin part ends before the round figure: its centre is the end of the picture.
  return Math.min(round, Math.max(metal, highest * 1.04, farthest * 1.02));
}

// An item of the contract as the strip takes it.
interface Stripped { case_depth_mm: number | null; case_depth_window_mm: readonly [number, number]; grinding_stock_mm?: number; case_depth_band_mm?: Band3 | null }
export const stripOf = (item: Stripped, profile: Profile, outlook: Band3 | null = null): StripItem =>
  ({ ...profile, case_depth_mm: item.case_depth_mm, window_mm: item.case_depth_window_mm, stock_mm: item.grinding_stock_mm ?? 0, band_mm: item.case_depth_band_mm ?? null, outlook_mm: outlook });
export const itemEndMm = (item: Item): number => axisEndMm(stripOf(item, item.profile));

export interface Tick { mm: number; label: string | null }
export function ticksOf(endMm: number, unit: LengthUnit, widthPx: number): Tick[] {
  const end = fromMm(endMm, unit);
  const wanted = Math.max(2, widthPx / 80);
  const steps = unit === 'mm' ? [0.05, 0.1, 0.2, 0.25, 0.5, 1, 2, 5] : [0.002, 0.005, 0.01, 0.02, 0.05, 0.1, 0.2];
  const step = steps.find((each) => end / each <= wanted) ?? steps[steps.length - 1]!;
  const digits = Math.max(1, (String(step).split('.')[1] ?? '').length);
  const ticks: Tick[] = [];
  const count = Math.floor(end / step + 1e-9);
  for (let i = 0; i <= count; ++i) {
    ticks.push({ mm: toMm(i * step, unit), label: (i * step).toFixed(digits) });
    const half = (i + 0.5) * step;
    if (half <= end) ticks.push({ mm: toMm(half, unit), label: null });
  }
  return ticks;
}

export interface ToneStop { offset: number; tone: string }
// Gradient stops over [0, endMm]. Straight-line tone between the points, as the solver's profile is between its nodes.
export function toneStops(item: StripItem, endMm: number, most = 64): ToneStop[] {
  const { depth_mm: depth, carbon_wt_pct: carbon } = item;
  const stops: ToneStop[] = [];
  let before = -1;
  for (let i = 0; i < depth.length; ++i) {
    const offset = depth[i]! / endMm;
    if (offset > 1) {
      const share = (endMm - depth[i - 1]!) / (depth[i]! - depth[i - 1]!);
      stops.push({ offset: 1, tone: toneOf(carbon[i - 1]! + (carbon[i]! - carbon[i - 1]!) * share) });
      break;
    }
    if (offset - before >= 0.6 / most || i === depth.length - 1) {
      stops.push({ offset, tone: toneOf(carbon[i]!) });
      before = offset;
    }
  }
  return stops;
}

export function carbonAt(item: StripItem, mm: number): number | null {
  const { depth_mm: depth, carbon_wt_pct: carbon } = item;
  if (depth.length === 0) return null;
  const after = depth.findIndex((each) => each >= mm);
  if (after <= 0) return carbon[after === 0 ? 0 : carbon.length - 1]!;
  const share = (mm - depth[after - 1]!) / (depth[after]! - depth[after - 1]!);
  return carbon[after - 1]! + (carbon[after]! - carbon[after - 1]!) * share;
}

const bandWords = (band: Band3, unit: LengthUnit): string => windowText([band.low, band.high], unit).replace('–', 'to');

// The same strip in words, for a screen reader.
export function stripText(item: StripItem, unit: LengthUnit, guessed: boolean): string {
  const end = axisEndMm(item);
  const surface = carbonAt(item, 0);
  const words = [`Section from the surface inward to ${depthText(end, unit)}.`];
  words.push(item.case_depth_mm === null ? (item.ended ? 'No case.' : 'No case yet.') : `Case depth ${item.ended ? 'at the end' : 'now'} ${depthText(item.case_depth_mm, unit)}${guessed ? ', computed from inputs that are not measured' : ''}.`);
  if (item.band_mm) words.push(`Its band is ${bandWords(item.band_mm, unit)}.`);
  words.push(`The drawing asks ${windowText(item.window_mm, unit).replace('–', 'to')}.`);
  if (item.stock_mm) words.push(`${depthText(item.stock_mm, unit)} are ground off before that is measured.`);
  if (item.outlook_mm) words.push(`At the end of the plan ${depthText(item.outlook_mm.median, unit)}, band ${bandWords(item.outlook_mm, unit)}.`);
  if (surface !== null) words.push(`Carbon ${carbonNumber(surface)} % at the surface, ${carbonNumber(carbonAt(item, end))} % at ${depthText(end, unit)}.`);
  if (item.turnover_mm) words.push(`Turnover at ${depthText(item.turnover_mm, unit)}: nearer the surface the steel gives carbon up.`);
  return words.join(' ');
}

// Moves a label of the given width so that it stays between two edges.
export const clampLabel = (centrePx: number, widthPx: number, leftPx: number, rightPx: number): number =>
  Math.min(Math.max(centrePx, leftPx + widthPx / 2), Math.max(rightPx - widthPx / 2, leftPx + widthPx / 2));

export const axisCaption = (unit: LengthUnit): string => lengthName(unit);
