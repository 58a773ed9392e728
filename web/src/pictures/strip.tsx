// The section strip: the metal drawn from its surface inward. Air side hatched at the left, tone = computed
// carbon, bracket above = what the drawing asks, bar through the metal = case depth now (broken where it
// rests on guessed inputs) with its band as a pale stretch around it, dotted line with two arrows = turnover depth.
// Below the metal the outlook: its band hatched, a diamond at the median at the end of the plan.
import { useId } from 'preact/hooks';
import type { LengthUnit } from '../units.ts';
import { depthBand } from '../outlook_words.ts';
import { depthText, lengthName, windowText } from '../units.ts';
import { type StripItem, axisCaption, axisEndMm, clampLabel, stripText, ticksOf, toneStops } from './strip_geometry.ts';
import { EndMark, Hatch } from './end_mark.tsx';
import { useWidth } from './use_width.ts';

interface Props { item: StripItem; unit: LengthUnit; metalPx: number; fontPx: number; guessed: boolean; labels: 'few' | 'all' }

const airPx = 26;
const rightPx = 26;
const outlookPx = 27;  // below the metal, above the axis
const dark = '#14120f', pale = '#fbfaf7';  // on the metal, whose tone is the same in every theme

export function Strip(props: Props) {
  const [box, width] = useWidth<HTMLDivElement>();
  return <div class="strip" ref={box} role="img" aria-label={stripText(props.item, props.unit, props.guessed)}>
    {width > 60 && <Drawing {...props} width={width} metalPx={props.metalPx * (width > 640 && props.labels === 'few' ? 1.5 : 1)} />}
  </div>;
}

function Drawing({ item, unit, metalPx, fontPx, guessed, labels, width }: Props & { width: number }) {
  const id = useId();
  const end = axisEndMm(item);
  const x0 = airPx, x1 = width - rightPx;
  const at = (mm: number) => x0 + (x1 - x0) * Math.min(1, Math.max(0, mm / end));
  const metalEnd = at(item.depth_mm[item.depth_mm.length - 1] ?? end);
  const top = fontPx + 26, bottom = top + metalPx;
  const ahead = item.outlook_mm ?? null;
  const axis = bottom + 13 + (ahead ? outlookPx : 0);
  const all = labels === 'all';
  const stock = item.stock_mm ?? 0;
  const height = axis + 14 + fontPx + (all ? (fontPx + 8) * (1 + (ahead ? 1 : 0) + (item.turnover_mm ? 1 : 0) + (stock > 0 ? 1 : 0)) : 0) + 4;
  const [low, high] = item.window_mm.map((mm) => mm + stock) as [number, number];
  const asked = windowText(item.window_mm, unit);
  return <svg width={width} height={height} font-size={fontPx} aria-hidden="true" focusable="false">
    <defs><linearGradient id={`${id}t`} gradientUnits="userSpaceOnUse" x1={x0} x2={x1} y1="0" y2="0">
      {toneStops(item, end).map((stop) => <stop offset={stop.offset.toFixed(4)} stop-color={stop.tone} />)}
    </linearGradient>
      {ahead && <Hatch id={`${id}h`} />}
      {stock > 0 && <pattern id={`${id}g`} width="7" height="7" patternUnits="userSpaceOnUse" patternTransform="rotate(45)"><path d="M0 0v7" stroke={pale} stroke-width="3" /></pattern>}
    </defs>
    <Air top={top} bottom={bottom} />
    <rect class="metal" x={x0} y={top} width={Math.max(0, metalEnd - x0)} height={metalPx} fill={`url(#${id}t)`} />
    {stock > 0 && <><rect x={x0} y={top} width={at(stock) - x0} height={metalPx} fill={`url(#${id}g)`} fill-opacity=".8" /><line x1={at(stock)} x2={at(stock)} y1={top} y2={bottom} stroke={pale} stroke-width="3" /></>}
    <Ask a={at(low)} b={at(high)} top={top} bottom={bottom} />
    <text class="asked" x={clampLabel((at(low) + at(high)) / 2, asked.length * fontPx * 0.56, x0, x1)} y={fontPx} text-anchor="middle">{asked}</text>
    {ticksOf(end, unit, x1 - x0).map((tick) => <line class="tick" x1={at(tick.mm)} x2={at(tick.mm)} y1={axis - 3} y2={axis + (tick.label ? 7 : 3)} />)}
    {ticksOf(end, unit, x1 - x0).map((tick) => tick.label && <text class="tick-text" x={at(tick.mm)} y={axis + 12 + fontPx * 0.8} text-anchor="middle">{tick.mm === 0 ? `0 ${axisCaption(unit)}` : tick.label}</text>)}
    {item.turnover_mm ? <Turnover x={at(item.turnover_mm)} top={top} bottom={bottom} /> : null}
    {item.band_mm && <NowBand a={at(item.band_mm.low + stock)} b={at(item.band_mm.high + stock)} top={top} bottom={bottom} />}
    {ahead && <EndMark low={at(ahead.low + stock)} median={at(ahead.median + stock)} high={at(ahead.high + stock)} y={bottom + 19} hatch={`${id}h`} />}
    {item.case_depth_mm !== null && <Bar x={at(item.case_depth_mm)} top={top - 9} bottom={bottom + 9} guessed={guessed} />}
    {all && <Names item={item} unit={unit} at={at} x0={x0} x1={x1} y={axis + 12 + fontPx * 0.8} fontPx={fontPx} guessed={guessed} />}
  </svg>;
}

function Air({ top, bottom }: { top: number; bottom: number }) {
  const lines = [];
  for (let y = top + 8; y <= bottom + 0.1; y += 7) lines.push(<line class="air" x1={airPx - 15} x2={airPx} y1={y} y2={y - 8} />);
  return <g>{lines}</g>;
}

function Ask({ a, b, top, bottom }: { a: number; b: number; top: number; bottom: number }) {
  return <g>
    <path class="bracket" d={`M${a} ${top - 4}V${top - 15}H${b}V${top - 4}`} />
    {[a, b].map((x) => <g>
      <line x1={x} x2={x} y1={top} y2={bottom} stroke={pale} stroke-width="2.5" stroke-opacity=".55" />
      <line x1={x} x2={x} y1={top} y2={bottom} stroke={dark} stroke-width="1.5" stroke-dasharray="4 5" />
    </g>)}
  </g>;
}

function NowBand({ a, b, top, bottom }: { a: number; b: number; top: number; bottom: number }) {
  return <g>
    <rect x={a} y={top} width={Math.max(0, b - a)} height={bottom - top} fill={pale} fill-opacity=".5" />
    {[a, b].map((x) => <line x1={x} x2={x} y1={top} y2={bottom} stroke={dark} stroke-width="1.5" />)}
  </g>;
}

function Bar({ x, top, bottom, guessed }: { x: number; top: number; bottom: number; guessed: boolean }) {
  return <g>
    <line x1={x} x2={x} y1={top} y2={bottom} stroke={pale} stroke-width="9" />
    <line x1={x} x2={x} y1={top} y2={bottom} stroke={dark} stroke-width="4" stroke-dasharray={guessed ? '9 6' : undefined} />
  </g>;
}

function Turnover({ x, top, bottom }: { x: number; top: number; bottom: number }) {
  const y = (top + bottom) / 2;
  const arrows = `M${x - 7} ${y}h-16m6 -6l-7 6l7 6 M${x + 7} ${y}h16m-6 -6l7 6l-7 6`;
  return <g fill="none">
    <line x1={x} x2={x} y1={top} y2={bottom + 5} stroke={pale} stroke-width="5" stroke-opacity=".8" />
    <line x1={x} x2={x} y1={top} y2={bottom + 5} stroke={dark} stroke-width="2" stroke-dasharray="2 4" />
    <path d={arrows} stroke={dark} stroke-width="5" /><path d={arrows} stroke={pale} stroke-width="2.2" />
  </g>;
}

interface NamesProps { item: StripItem; unit: LengthUnit; at: (mm: number) => number; x0: number; x1: number; y: number; fontPx: number; guessed: boolean }
function Names({ item, unit, at, x0, x1, y, fontPx, guessed }: NamesProps) {
  const line = fontPx + 8;
  const roomy = x1 - x0 > 34 * fontPx * 0.56;
  const now = item.case_depth_mm === null ? (item.ended ? 'no case' : 'no case yet') : `${roomy ? 'case depth ' : ''}${item.ended ? 'at the end' : 'now'} ${depthText(item.case_depth_mm, unit)}${guessed ? ' (guessed)' : ''}`;
  const turn = item.turnover_mm ? `turnover ${depthText(item.turnover_mm, unit)}${roomy ? ': gives carbon up ◂ ▸ gains' : ''}` : '';
  const place = (mm: number, text: string) => clampLabel(at(mm), text.length * fontPx * 0.56, x0, x1);
  const ahead = item.outlook_mm;
  const end = ahead ? `${roomy ? 'at the end of the plan' : 'at the end'} ${depthBand(ahead, unit)} ${lengthName(unit)}` : '';
  const second = ahead ? 2 : 1;
  const ground = item.stock_mm ? `${depthText(item.stock_mm, unit)} ground off${roomy ? ' before the window is measured' : ''}` : '';
  return <g>
    <text class="now" x={place(item.case_depth_mm ?? 0, now)} y={y + line} text-anchor="middle">{now}</text>
    {ahead && <text class="now" x={place(ahead.median + (item.stock_mm ?? 0), end)} y={y + 2 * line} text-anchor="middle">{end}</text>}
    {item.turnover_mm ? <text class="turn" x={place(item.turnover_mm, turn)} y={y + (second + 1) * line} text-anchor="middle">{turn}</text> : null}
    {ground && <text x={place((item.stock_mm ?? 0) / 2, ground)} y={y + (second + (item.turnover_mm ? 2 : 1)) * line} text-anchor="middle">{ground}</text>}
  </g>;
}
