// The mark of an outlook: its band hatched, a diamond at the median. The same on strips, in comparisons and, drawn on
// canvas, on the curve of depth over time.
import type { Band3 } from '../contract_outlook.ts';
import { type LengthUnit, lengthName } from '../units.ts';
import { depthBand } from '../outlook_words.ts';
import { useId } from 'preact/hooks';
import { useWidth } from './use_width.ts';

export const Hatch = ({ id }: { id: string }) =>
  <pattern id={id} width="6" height="6" patternUnits="userSpaceOnUse" patternTransform="rotate(45)"><path class="hatch-line" d="M0 0v6" /></pattern>;

interface MarkProps { low: number; median: number; high: number; y: number; hatch: string }
export function EndMark({ low, median, high, y, hatch }: MarkProps) {
  return <g>
    <rect class="end-band" x={low} y={y - 8} width={Math.max(2, high - low)} height="16" fill={`url(#${hatch})`} />
    <path class="end-median" d={`M${median} ${y - 12}l9 12l-9 12l-9-12z`} />
  </g>;
}

// Several ends on one scale, each with its name, behind them the window that the drawing asks.
interface EndsProps { window: readonly [number, number]; rows: { name: string; band: Band3 }[]; unit: LengthUnit }
export function Ends({ window, rows, unit }: EndsProps) {
  const [box, width] = useWidth<HTMLDivElement>();
  const id = useId();
  const lows = rows.map((row) => row.band.low), highs = rows.map((row) => row.band.high);
  const from = Math.min(window[0], ...lows), to = Math.max(window[1], ...highs);
  const margin = (to - from) * 0.12 || 0.1;
  const x = (mm: number) => 12 + (width - 24) * (mm - from + margin) / (to - from + 2 * margin);
  const text = rows.map((row) => `${row.name}: ${depthBand(row.band, unit)} ${lengthName(unit)}`).join('; ');
  return <div class="ends" ref={box} role="img" aria-label={`Case depth at the end. ${text}. Asked ${depthBand({ low: window[0], median: 0, high: window[1] }, unit)} ${lengthName(unit)}.`}>
    {width > 60 && <svg width={width} height={rows.length * 52 + 30} font-size="16" aria-hidden="true">
      <defs><Hatch id={id} /></defs>
      <rect class="end-asked" x={x(window[0])} y="0" width={x(window[1]) - x(window[0])} height={rows.length * 52 + 8} />
      <text class="end-asked-text" x={Math.min(Math.max((x(window[0]) + x(window[1])) / 2, 90), width - 90)} y={rows.length * 52 + 25} text-anchor="middle">asked {depthBand({ low: window[0], median: 0, high: window[1] }, unit)} {lengthName(unit)}</text>
      {rows.map((row, i) => <g key={row.name}>
        <text x="12" y={i * 52 + 18}>{row.name}: {depthBand(row.band, unit)} {lengthName(unit)}</text>
        <EndMark low={x(row.band.low)} median={x(row.band.median)} high={x(row.band.high)} y={i * 52 + 38} hatch={id} />
      </g>)}
    </svg>}
  </div>;
}
