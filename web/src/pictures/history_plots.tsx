// The load over time: case depth towards its window, temperature and carbon potential against the recipe.
// Stretches where an input was held or planned carry a pattern, named in the legend.
import type { ComponentChildren } from 'preact';
import { useMemo, useRef } from 'preact/hooks';
import type uPlot from 'uplot';
import type { History, Item, Snapshot } from '../contract.ts';
import { type LengthUnit, type TemperatureUnit, carbonNumber, depthText, fromDegc, fromMm, lengthName, rangeText, temperatureName, temperatureText } from '../units.ts';
import { clockText } from '../words.ts';
import { type RecipeStep, type Stretch, depthCourse, extent, nearRecipe, plannedSteps, stretchesOf } from './history_series.ts';
import { drawBands, drawEnd } from './history_bands.ts';
import { type Palette, Plot, axes, inside } from './plot.tsx';

interface Props { snapshot: Snapshot; history: History; item: Item; length: LengthUnit; temperature: TemperatureUnit }

interface Behind { stretches: Stretch[]; steps: { from_s: number; to_s: number; ramp_s: number; value: number }[]; band: [number, number] | null; now_s: number | null; bands?: Bands }
// `from` is the first point of the outlook; before it the band is of what was, after it of what is ahead.
export interface Bands { time_s: number[]; low: (number | null)[]; high: (number | null)[]; median: (number | null)[]; from: number }

export function HistoryPlots({ snapshot, history, item, length, temperature }: Props) {
  const now_s = snapshot.load.state === 'open' && snapshot.state_time ? Date.parse(snapshot.state_time) / 1000 : null;
  const restFromS = snapshot.outlook ? Date.parse(snapshot.outlook.at) / 1000 : now_s;
  const steps = plannedSteps(snapshot.load.recipe, Date.parse(snapshot.load.started_at) / 1000, snapshot.plans ?? [], snapshot.rest ?? null, restFromS);
  const stock = item.grinding_stock_mm ?? 0;
  const course = useMemo(() => depthCourse(history, item.name, stock), [history, item.name, stock]);
  const times = history.time_s;
  const startS = Math.min(times[0] ?? Infinity, steps[0]?.from_s ?? Infinity);
  const endS = Math.max(times[times.length - 1] ?? -Infinity, steps[steps.length - 1]?.to_s ?? -Infinity, course.time_s[course.time_s.length - 1] ?? -Infinity);
  const series = history.items.find((each) => each.name === item.name);
  const shared = { times, startS, endS, dataKey: `${item.name} ${length} ${temperature} ${snapshot.load.state}` };
  const shown = (list: (number | null)[]) => list.map((mm) => (mm === null ? null : fromMm(mm, length)));
  const depth = shown(course.depth), ahead = shown(course.ahead);
  const bands: Bands = { time_s: course.time_s, low: shown(course.low), high: shown(course.high), median: ahead, from: course.aheadFrom };
  const hasBand = bands.high.some((value) => value !== null), hasAhead = ahead.some((value) => value !== null);
  const end = snapshot.outlook?.items.find((each) => each.name === item.name);
  const clock = (i: number) => clockText((course.time_s[i] ?? 0) * 1000);
  const depthAt = (i: number) => {
    const mm = course.depth[i] ?? course.ahead[i] ?? null, low = course.low[i] ?? null, high = course.high[i] ?? null;
    return `${clock(i)}: ${i >= course.aheadFrom ? 'outlook ' : ''}${depthText(mm, length)}${low !== null && high !== null ? ` (${rangeText([low, high], length)})` : ''}`;
  };
  const heat = history.temperature_degc.map((degc) => (degc === null ? null : fromDegc(degc, temperature)));
  const part = series?.part_temperature_degc.map((degc) => (degc === null ? null : fromDegc(degc, temperature))) ?? [];
  const band = item.case_depth_window_mm.map((mm) => fromMm(mm + stock, length)) as [number, number];
  const at = (i: number) => clockText((times[i] ?? 0) * 1000);
  const stepsOf = (pick: (step: RecipeStep) => number) => steps.map((step) => ({ from_s: step.from_s, to_s: step.to_s, ramp_s: step.ramp_s, value: pick(step) }));
  const heatSteps = stepsOf((step) => fromDegc(step.temperature_degc, temperature));
  const carbonSteps = stepsOf((step) => step.carbon_potential_wt_pct);
  return <div class="histories">
    <Timeline {...shared} times={course.time_s} title="Case depth over the cycle" unitName={lengthName(length)} lines={[depth, ahead]} dashed
      text={`Case depth of ${item.part} over time, now ${depthText(item.case_depth_mm, length)}.${end ? ` At the end of the plan ${depthText(end.case_depth_mm.median + stock, length)}, band ${rangeText([end.case_depth_mm.low + stock, end.case_depth_mm.high + stock], length)}.` : ''}`}
      range={[0, Math.max(extent([...depth, ...bands.high, band[1]], band[1])[1], band[1] * 1.15)]} behind={{ stretches: [], steps: [], band, now_s, bands }} readout={depthAt}
      legend={<ul class="legend"><Key kind="line">computed depth</Key>{hasBand && <Key kind="band">its band</Key>}{hasAhead && <Key kind="ahead">outlook with band</Key>}<Key kind="asked">{stock ? 'asked, before grinding' : 'asked'}</Key>{now_s !== null && <Key kind="now">now</Key>}</ul>} />
    <Timeline {...shared} title="Temperature" text="Measured temperature against the recipe." unitName={temperatureName(temperature)} lines={[heat, part]} range={nearRecipe(heat, heatSteps, temperature === 'degc' ? 100 : 180)}
      behind={{ stretches: stretchesOf(times, history.temperature_basis), steps: heatSteps, band: null, now_s }}
      readout={(i) => `${at(i)}: ${temperatureText(history.temperature_degc[i] ?? null, temperature)}, ${history.temperature_basis[i] ?? ''}`} legend={<InputLegend thin="part" masked={history.temperature_basis.includes('masked')} />} />
    <Timeline {...shared} title="Carbon potential" text="Carbon potential against the recipe." unitName="% C" lines={[history.carbon_potential_wt_pct, series?.surface_carbon_wt_pct ?? []]} range={nearRecipe(history.carbon_potential_wt_pct, carbonSteps, 0.3)}
      behind={{ stretches: stretchesOf(times, history.carbon_potential_basis), steps: carbonSteps, band: null, now_s }}
      readout={(i) => `${at(i)}: ${carbonNumber(history.carbon_potential_wt_pct[i] ?? null)} % C, ${history.carbon_potential_basis[i] ?? ''}`} legend={<InputLegend thin="surface of the part" masked={history.carbon_potential_basis.includes('masked')} />} />
  </div>;
}

function InputLegend({ thin, masked }: { thin: string; masked: boolean }) {
  return <ul class="legend"><Key kind="line">furnace</Key><Key kind="thin">{thin}</Key><Key kind="dash">recipe</Key><Key kind="held">held</Key><Key kind="planned">planned</Key>{masked && <Key kind="masked">marked stretch</Key>}</ul>;
}

const keys = {
  line: <path class="k-line" d="M1 8h32" />, thin: <path class="k-thin" d="M1 8h32" />, dash: <path class="k-dash" d="M1 8h32" />, now: <path class="k-dash" d="M17 0v16" />,
  band: <><rect class="k-band" x="1" y="1" width="32" height="14" /><path class="k-line" d="M1 8h32" /></>,
  ahead: <><path class="k-hatch" d="M1 14l6-12M8 14l6-12M15 14l6-12M22 14l6-12" /><path class="k-dash" d="M1 8h24" /><path class="k-end" d="M28 2l5 6l-5 6l-5-6z" /></>,
  asked: <rect class="k-asked" x="1" y="1" width="32" height="14" />,
  held: <path class="k-guess" d="M1 3h32M1 8h32M1 13h32" />,
  masked: <path class="k-guess" d="M3 1v14M10 1v14M17 1v14M24 1v14M31 1v14" />,
  planned: <path class="k-guess k-dots" d="M3 4h30M3 12h30M8 8h24" />,
};
const Key = ({ kind, children }: { kind: keyof typeof keys; children: string }) => <li><svg viewBox="0 0 34 16" aria-hidden="true">{keys[kind]}</svg>{children}</li>;

interface TimelineProps { title: string; text: string; unitName: string; dataKey: string; times: number[]; startS: number; endS: number; lines: (number | null)[][]; range: [number, number]; behind: Behind; readout: (i: number) => string; legend: ComponentChildren; dashed?: boolean }
function Timeline({ title, text, unitName, dataKey, times, startS, endS, lines, range, behind, readout, legend, dashed = false }: TimelineProps) {
  const seen = useRef({ behind, startS, endS, range });
  seen.current = { behind, startS, endS, range };
  const data = useMemo<uPlot.AlignedData>(() => [times, ...lines.map((line) => (line.length === times.length ? line : times.map(() => null)))], [times, dataKey]);
  const make = (colours: Palette) => ({
    scales: { x: { time: true, range: (): [number, number] => [seen.current.startS, seen.current.endS] }, y: { range: (): [number, number] => seen.current.range } },
    axes: axes(colours, unitName, (splits) => splits.map((second) => clockText(second * 1000))),
    series: [{}, { stroke: colours.ink, width: 3, points: { show: false } }, { ...(dashed ? { stroke: colours.ink, width: 3, dash: [9, 6] } : { stroke: colours.line, width: 2 }), points: { show: false } }].slice(0, lines.length + 1),
    hooks: { drawClear: [(plot: uPlot) => drawBehind(plot, seen.current.behind, colours)], draw: [(plot: uPlot) => { if (seen.current.behind.bands) drawEnd(plot, seen.current.behind.bands, colours); }] },
  });
  return <Plot title={title} text={text} data={data} make={make} makeKey={unitName} height={250} readout={readout} legend={legend} />;
}

function drawBehind(plot: uPlot, behind: Behind, colours: Palette): void {
  inside(plot, (ctx, ratio) => {
    const { left, top, width, height } = plot.bbox;
    const x = (second: number) => plot.valToPos(second, 'x', true);
    const y = (value: number) => plot.valToPos(value, 'y', true);
    if (behind.band) {
      ctx.fillStyle = colours.asked;
      ctx.fillRect(left, y(behind.band[1]), width, y(behind.band[0]) - y(behind.band[1]));
    }
    if (behind.bands) drawBands(plot, behind.bands, colours);
    for (const stretch of behind.stretches) pattern(ctx, x(stretch.from_s), Math.max(x(stretch.to_s), x(stretch.from_s) + 3 * ratio), top, height, stretch.basis, colours.guess, ratio);
    ctx.strokeStyle = colours.mid;
    ctx.lineWidth = 2 * ratio;
    ctx.setLineDash([7 * ratio, 5 * ratio]);
    ctx.beginPath();
    for (const step of behind.steps) { ctx.lineTo(x(step.from_s + step.ramp_s), y(step.value)); ctx.lineTo(x(step.to_s), y(step.value)); }
    if (behind.now_s !== null) { ctx.moveTo(x(behind.now_s), top); ctx.lineTo(x(behind.now_s), top + height); }
    ctx.stroke();
  });
}

function pattern(ctx: CanvasRenderingContext2D, from: number, to: number, top: number, height: number, basis: Stretch['basis'], colour: string, ratio: number): void {
  ctx.save();
  ctx.fillStyle = colour;
  ctx.globalAlpha = 0.12;
  ctx.fillRect(from, top, to - from, height);
  ctx.globalAlpha = 0.85;
  const gap = 7 * ratio;
  if (basis === 'masked') for (let x = from; x < to; x += gap) ctx.fillRect(x, top, ratio, height);
  else for (let y = top + gap, row = 0; y < top + height; y += gap, ++row) {
    if (basis === 'held') ctx.fillRect(from, y, to - from, ratio);
    else for (let x = from + (row % 2) * gap / 2; x < to; x += gap) ctx.fillRect(x, y, 2 * ratio, 2 * ratio);
  }
  ctx.restore();
}
