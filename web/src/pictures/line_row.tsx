// The row of tray positions, drawn. A tray's state is a shape: full, lined (guessed inputs), crossed (no fresh
// data), full with a peak (the plan or the part needs somebody); a bare tick is an empty place.
import type { MarkColour } from '../marks.ts';
import { type Cell, type Zone } from './line_cells.ts';
import { useWidth } from './use_width.ts';

export type TrayState = 'empty' | 'fine' | Exclude<MarkColour, 'quiet'>;
const trayPx = 34, peakPx = 12;

export function Tray({ x, width, state, top = peakPx }: { x: number; width: number; state: TrayState; top?: number }) {
  const left = x + 1.5, wide = Math.max(3, width - 3), bottom = top + trayPx;
  if (state === 'empty') return <path class="tray none" d={`M${left} ${bottom}h${wide}`} />;
  const body = `M${left} ${top}h${wide}v${trayPx}h${-wide}z`;
  const lines = [7, 14, 21, 28].map((y) => `M${left} ${top + y}h${wide}`).join('');
  return <g class={`tray ${state}`}>
    <path class={state === 'fine' || state === 'metal' ? 'full' : 'open'} d={body} />
    {state === 'guess' && <path class="inner" d={lines} />}
    {state === 'link' && <path class="inner" d={`M${left} ${top}L${left + wide} ${bottom}M${left + wide} ${top}L${left} ${bottom}`} />}
    {state === 'metal' && <path class="full" d={`M${left} ${top - 3}h${wide}L${left + wide / 2} ${top - peakPx}z`} />}
  </g>;
}

interface Props<Load> { zones: readonly Zone[]; cells: readonly Cell<Load>[]; state: (load: Load) => TrayState; text: string }
export function LineRow<Load>({ zones, cells, state, text }: Props<Load>) {
  const [box, width] = useWidth<HTMLSpanElement>();
  const step = width / Math.max(1, cells.length);
  const bottom = peakPx + trayPx;
  const fits = (zone: Zone) => (zone.to - zone.from + 1) * step > zone.name.length * 8.4;
  return <span class="line-row" ref={box} role="img" aria-label={text}>
    {width > 60 && <svg width={width} height={bottom + 30} font-size="15" aria-hidden="true">
      {cells.map((cell) => <Tray key={cell.place} x={(cell.place - 1) * step} width={step} state={cell.load ? state(cell.load) : 'empty'} />)}
      {zones.map((zone, i) => <g key={i}>
        <path class="zone" d={`M${(zone.from - 1) * step + 1.5} ${bottom + 5}v5h${(zone.to - zone.from + 1) * step - 3}v-5`} />
        {fits(zone) && <text x={((zone.from - 1) + zone.to) / 2 * step} y={bottom + 26} text-anchor="middle">{zone.name}</text>}
      </g>)}
    </svg>}
  </span>;
}
