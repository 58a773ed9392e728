// Carbon against depth for one item: the computed profile, the asked window, the carbon content that the
// criterion amounts to, case depth now, and where the steel turns from giving carbon up to gaining it.
import { useMemo, useRef } from 'preact/hooks';
import type uPlot from 'uplot';
import type { Item } from '../contract.ts';
import { type LengthUnit, carbonNumber, depthNumber, depthText, fromMm, lengthName } from '../units.ts';
import { type Palette, Plot, axes, inside } from './plot.tsx';
import { itemEndMm } from './strip_geometry.ts';

interface Props { item: Item; unit: LengthUnit }

export function ProfilePlot({ item, unit }: Props) {
  const seen = useRef({ item, unit });
  seen.current = { item, unit };
  const end = fromMm(itemEndMm(item), unit);
  const data = useMemo<uPlot.AlignedData>(() => [item.profile.depth_mm.map((mm) => fromMm(mm, unit)), item.profile.carbon_wt_pct], [item.profile, unit]);
  const limit = item.criterion.carbon_limit_wt_pct;
  const top = Math.max(1.2, Math.ceil(Math.max(...item.profile.carbon_wt_pct, 0) * 10 + 0.5) / 10);
  const make = (colours: Palette) => ({
    scales: { x: { time: false, range: (): [number, number] => [0, end] }, y: { range: (): [number, number] => [0, top] } },
    axes: axes(colours, '% C'),
    series: [{}, { stroke: colours.ink, width: 3, points: { show: false } }],
    hooks: { drawClear: [(plot: uPlot) => behind(plot, seen.current, colours)], draw: [(plot: uPlot) => before(plot, seen.current, colours)] },
  });
  const text = `Surface ${carbonNumber(item.surface_carbon_wt_pct)} % carbon, case depth ${depthText(item.case_depth_mm, unit)}, criterion ${item.criterion.text}${limit === null ? '' : ` at ${carbonNumber(limit)} % carbon`}.`;
  return <Plot title="Carbon below the surface" text={text} data={data} make={make} makeKey={`${item.name} ${unit} ${end} ${top}`} height={250}
    readout={(i) => `${depthNumber(item.profile.depth_mm[i] ?? null, unit)} ${lengthName(unit)}: ${carbonNumber(item.profile.carbon_wt_pct[i] ?? null)} % C`}
    legend={<ul class="legend">
      <li><svg viewBox="0 0 34 16"><path class="k-line" d="M1 8h32" /></svg>computed</li>
      <li><svg viewBox="0 0 34 16"><rect class="k-asked" x="1" y="1" width="32" height="14" /></svg>asked depth</li>
      <li><svg viewBox="0 0 34 16"><path class="k-dash" d="M1 8h32" /></svg>criterion{limit === null ? '' : ` ${carbonNumber(limit)} % C`}</li>
      <li><svg viewBox="0 0 34 16"><path class="k-line" d="M17 0v16" /></svg>case depth</li>
      {item.turnover_depth_mm !== null && <li><svg viewBox="0 0 34 16"><path class="k-dot" d="M17 0v16" /></svg>turnover: gives carbon up, then gains</li>}
    </ul>} />;
}

function behind(plot: uPlot, { item, unit }: Props, colours: Palette): void {
  inside(plot, (ctx) => {
    const [low, high] = item.case_depth_window_mm.map((mm) => plot.valToPos(fromMm(mm + (item.grinding_stock_mm ?? 0), unit), 'x', true)) as [number, number];
    ctx.fillStyle = colours.asked;
    ctx.fillRect(low, plot.bbox.top, high - low, plot.bbox.height);
  });
}

function before(plot: uPlot, { item, unit }: Props, colours: Palette): void {
  inside(plot, (ctx, ratio) => {
    const { left, top, width, height } = plot.bbox;
    const line = (x1: number, y1: number, x2: number, y2: number, thick: number, dash: number[]) => {
      ctx.beginPath();
      ctx.lineWidth = thick * ratio;
      ctx.setLineDash(dash.map((each) => each * ratio));
      ctx.moveTo(x1, y1);
      ctx.lineTo(x2, y2);
      ctx.stroke();
    };
    ctx.strokeStyle = colours.mid;
    if (item.criterion.carbon_limit_wt_pct !== null) {
      const y = plot.valToPos(item.criterion.carbon_limit_wt_pct, 'y', true);
      line(left, y, left + width, y, 1.5, [8, 5]);
    }
    if (item.turnover_depth_mm !== null) {
      const x = plot.valToPos(fromMm(item.turnover_depth_mm, unit), 'x', true);
      line(x, top, x, top + height, 2, [2, 4]);
    }
    ctx.strokeStyle = colours.ink;
    if (item.case_depth_mm !== null) {
      const x = plot.valToPos(fromMm(item.case_depth_mm, unit), 'x', true);
      line(x, top, x, top + height, 3, []);
    }
  });
}
