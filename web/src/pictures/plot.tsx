// A frame for one uPlot picture: made anew when its size, theme or make-up changes, only fed otherwise.
// Colours come from the style sheet, so that the canvas follows the theme.
import { type ComponentChildren } from 'preact';
import { useEffect, useRef, useState } from 'preact/hooks';
import uPlot from 'uplot';
import { shownTheme } from '../prefs.ts';
import { useStore } from '../store.ts';
import { useWidth } from './use_width.ts';

export interface Palette { ink: string; mid: string; quiet: string; edge: string; line: string; asked: string; guess: string; card: string; px: number; font: string }

function palette(element: Element): Palette {
  const style = getComputedStyle(element);
  const read = (name: string) => style.getPropertyValue(`--${name}`).trim();
  const px = Math.round(parseFloat(getComputedStyle(document.documentElement).fontSize) * 0.8);
  return { ink: read('ink'), mid: read('mid'), quiet: read('quiet'), edge: read('edge'), line: read('line'), asked: read('asked'), guess: read('guess'), card: read('card'), px, font: `${px}px ${style.fontFamily}` };
}

export type PlotMake = (colours: Palette) => Omit<uPlot.Options, 'width' | 'height'>;
interface Props {
  title: string;
  text: string;                 // the picture in words
  data: uPlot.AlignedData;
  make: PlotMake;
  makeKey: string;              // changes when `make` would give another make-up
  height: number;
  note?: string;                // a quiet line below the title
  readout: (index: number) => string;
  legend?: ComponentChildren;
}

export function Plot({ title, text, data, make, makeKey, height, note, readout, legend }: Props) {
  const [box, width] = useWidth<HTMLDivElement>();
  const theme = useStore(shownTheme);
  const plot = useRef<uPlot | null>(null);
  const [under, setUnder] = useState<number | null>(null);
  useEffect(() => {
    if (!box.current || width < 80) return undefined;
    const colours = palette(box.current);
    const options = make(colours);
    const drawn = new uPlot({
      ...options, width, height, padding: [12, 14, 0, 0],
      legend: { show: false },
      cursor: { y: false, drag: { x: false, y: false, setScale: false }, points: { size: 9 } },
      hooks: { ...options.hooks, setCursor: [(self) => setUnder(self.cursor.idx ?? null)] },
    }, data, box.current);
    plot.current = drawn;
    return () => { plot.current = null; drawn.destroy(); };
  }, [width, theme, makeKey, height]);
  useEffect(() => { plot.current?.setData(data); }, [data]);
  return <section class="panel plot">
    <header><h2>{title}{note && <small>{note}</small>}</h2><p class="readout">{under === null ? '' : readout(under)}</p></header>
    <div class="plot-box" ref={box} role="img" aria-label={`${title}. ${text}`} />
    {legend}
  </section>;
}

const plainValues = (splits: number[]): string[] => splits.map((value) => String(Number(value.toFixed(4))));  // no thousands mark

export function axes(colours: Palette, label: string, xValues: (splits: number[]) => string[] = plainValues): uPlot.Axis[] {
  const shared = { stroke: colours.quiet, font: colours.font, grid: { stroke: colours.edge, width: 1 }, ticks: { stroke: colours.line, width: 1, size: 5 } };
  return [
    { ...shared, size: colours.px + 18, space: colours.px * 5, values: (_: uPlot, splits: number[]) => xValues(splits) },
    { ...shared, size: colours.px * 3.9, values: (_: uPlot, splits: number[]) => plainValues(splits), label, labelSize: colours.px + 6, labelFont: colours.font, labelGap: 2 },
  ];
}

// Clips what a hook draws to the plotting area and puts the canvas back as it was.
export function inside(plot: uPlot, draw: (ctx: CanvasRenderingContext2D, pxRatio: number) => void): void {
  const { ctx, bbox } = plot;
  ctx.save();
  ctx.beginPath();
  ctx.rect(bbox.left, bbox.top, bbox.width, bbox.height);
  ctx.clip();
  draw(ctx, uPlot.pxRatio);
  ctx.restore();
}
