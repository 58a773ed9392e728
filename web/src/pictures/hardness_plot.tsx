// Hardness below the surface as it will be after quench and tempering, with the criterion's limit, and retained
// austenite as a quiet second curve on a scale of its own at the right.
import { useMemo, useRef } from 'preact/hooks';
import type uPlot from 'uplot';
import type { Hardness, Item } from '../contract.ts';
import { type LengthUnit, type TemperatureUnit, capital, depthNumber, fromMm, lengthName, withTemperatures } from '../units.ts';
import { type Palette, Plot, axes, inside } from './plot.tsx';
import { itemEndMm } from './strip_geometry.ts';

interface Props { item: Item; hardness: Hardness; unit: LengthUnit; temperature: TemperatureUnit }
const whole = (value: number | null | undefined): string => (value === null || value === undefined ? '–' : value.toFixed(0));

export function HardnessPlot({ item, hardness, unit, temperature }: Props) {
  const seen = useRef({ item, unit });
  seen.current = { item, unit };
  const end = fromMm(itemEndMm(item), unit);
  const data = useMemo<uPlot.AlignedData>(() => [hardness.depth_mm.map((mm) => fromMm(mm, unit)), hardness.hv, hardness.retained_austenite_pct], [hardness, unit]);
  const top = Math.max(800, Math.ceil(Math.max(...hardness.hv, 0) / 100) * 100);
  const most = Math.max(40, Math.ceil(Math.max(...hardness.retained_austenite_pct, 0) / 10) * 10);
  const make = (colours: Palette) => {
    const [across, up] = axes(colours, 'HV') as [uPlot.Axis, uPlot.Axis];
    return {
      scales: { x: { time: false, range: (): [number, number] => [0, end] }, y: { range: (): [number, number] => [200, top] }, ra: { range: (): [number, number] => [0, most] } },
      axes: [across, up, { ...up, scale: 'ra', side: 1 as const, label: '% retained austenite', grid: { show: false }, size: colours.px * 3 }],
      series: [{}, { stroke: colours.ink, width: 3, points: { show: false } }, { scale: 'ra', stroke: colours.line, width: 2, dash: [10, 3], points: { show: false } }],
      hooks: { drawClear: [(plot: uPlot) => asked(plot, seen.current, colours)], draw: [(plot: uPlot) => limits(plot, seen.current, colours)] },
    };
  };
  const limit = item.criterion.kind === 'hardness_hv' ? item.criterion.limit_hv : undefined;
  const text = `${hardness.as}. Surface ${whole(hardness.surface_hv)} HV with ${whole(hardness.surface_retained_austenite_pct)} % retained austenite.`;
  return <Plot title="Hardness below the surface" text={text} data={data} make={make} makeKey={`${item.name} ${unit} ${end} ${top} ${most}`} height={250} note={withTemperatures(capital(hardness.as), temperature)}
    readout={(i) => `${depthNumber(hardness.depth_mm[i] ?? null, unit)} ${lengthName(unit)}: ${whole(hardness.hv[i])} HV, ${whole(hardness.retained_austenite_pct[i])} % retained austenite`}
    legend={<ul class="legend">
      <li><svg viewBox="0 0 34 16"><path class="k-line" d="M1 8h32" /></svg>hardness</li>
      <li><svg viewBox="0 0 34 16"><path class="k-thin k-long" d="M1 8h32" /></svg>retained austenite</li>
      {limit !== undefined && <li><svg viewBox="0 0 34 16"><path class="k-dash" d="M1 8h32" /></svg>limit {limit} HV</li>}
      <li><svg viewBox="0 0 34 16"><rect class="k-asked" x="1" y="1" width="32" height="14" /></svg>asked depth</li>
    </ul>} />;
}

function asked(plot: uPlot, { item, unit }: Pick<Props, 'item' | 'unit'>, colours: Palette): void {
  inside(plot, (ctx) => {
    const stock = item.grinding_stock_mm ?? 0;
    const [low, high] = item.case_depth_window_mm.map((mm) => plot.valToPos(fromMm(mm + stock, unit), 'x', true)) as [number, number];
    ctx.fillStyle = colours.asked;
    ctx.fillRect(low, plot.bbox.top, high - low, plot.bbox.height);
  });
}

function limits(plot: uPlot, { item, unit }: Pick<Props, 'item' | 'unit'>, colours: Palette): void {
  inside(plot, (ctx, ratio) => {
    const { left, top, width, height } = plot.bbox;
    if (item.criterion.kind === 'hardness_hv' && item.criterion.limit_hv !== undefined) {
      const y = plot.valToPos(item.criterion.limit_hv, 'y', true);
      ctx.strokeStyle = colours.mid;
      ctx.lineWidth = 1.5 * ratio;
      ctx.setLineDash([8 * ratio, 5 * ratio]);
      ctx.beginPath();
      ctx.moveTo(left, y);
      ctx.lineTo(left + width, y);
      ctx.stroke();
    }
    if (item.case_depth_mm !== null) {
      const x = plot.valToPos(fromMm(item.case_depth_mm, unit), 'x', true);
      ctx.strokeStyle = colours.ink;
      ctx.lineWidth = 3 * ratio;
      ctx.setLineDash([]);
      ctx.beginPath();
      ctx.moveTo(x, top);
      ctx.lineTo(x, top + height);
      ctx.stroke();
    }
  });
}
