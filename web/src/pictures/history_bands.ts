// The band of a curve over time, on canvas: a wash over what was, hatching over what is ahead, the diamond at its end.
import type uPlot from 'uplot';
import type { Bands } from './history_plots.tsx';
import type { Palette } from './plot.tsx';

// Runs of points where both edges are known, as polygons; `from` to `to` of the list.
function outline(plot: uPlot, ctx: CanvasRenderingContext2D, { time_s, low, high }: Bands, from: number, to: number): void {
  ctx.beginPath();
  for (let i = from; i < to;) {
    let end = i;
    while (end < to && typeof low[end] === 'number' && typeof high[end] === 'number') ++end;
    if (end - i > 1) {
      for (let k = i; k < end; ++k) ctx[k === i ? 'moveTo' : 'lineTo'](plot.valToPos(time_s[k]!, 'x', true), plot.valToPos(high[k]!, 'y', true));
      for (let k = end - 1; k >= i; --k) ctx.lineTo(plot.valToPos(time_s[k]!, 'x', true), plot.valToPos(low[k]!, 'y', true));
      ctx.closePath();
    }
    i = Math.max(end, i + 1);
  }
}

export function drawBands(plot: uPlot, bands: Bands, colours: Palette): void {
  const { ctx, bbox } = plot;
  const ratio = devicePixelRatio;
  ctx.save();
  ctx.setLineDash([]);
  ctx.globalAlpha = 0.28;
  ctx.fillStyle = colours.mid;
  outline(plot, ctx, bands, 0, bands.from);
  ctx.fill();
  ctx.globalAlpha = 1;
  outline(plot, ctx, bands, Math.max(0, bands.from - 1), bands.time_s.length);
  ctx.strokeStyle = colours.mid;
  ctx.lineWidth = ratio;
  ctx.stroke();
  ctx.clip();
  ctx.lineWidth = 1.5 * ratio;
  ctx.beginPath();
  for (let x = bbox.left - bbox.height; x < bbox.left + bbox.width; x += 7 * ratio) { ctx.moveTo(x, bbox.top + bbox.height); ctx.lineTo(x + bbox.height, bbox.top); }
  ctx.stroke();
  ctx.restore();
}

export function drawEnd(plot: uPlot, bands: Bands, colours: Palette): void {
  const last = bands.time_s.length - 1, median = bands.median[last];
  if (last < bands.from || typeof median !== 'number') return;
  const { ctx } = plot;
  const ratio = devicePixelRatio, half = 9 * ratio;
  const x = plot.valToPos(bands.time_s[last]!, 'x', true), y = plot.valToPos(median, 'y', true);
  ctx.save();  // not clipped: the end lies on the edge of the picture
  ctx.setLineDash([]);
  ctx.beginPath();
  ctx.moveTo(x, y - half); ctx.lineTo(x + half * 0.75, y); ctx.lineTo(x, y + half); ctx.lineTo(x - half * 0.75, y);
  ctx.closePath();
  ctx.fillStyle = colours.card;
  ctx.fill();
  ctx.strokeStyle = colours.ink;
  ctx.lineWidth = 2.5 * ratio;
  ctx.stroke();
  ctx.restore();
}
