// The recipe as one ribbon: each segment as long as it lasts, the past filled, a bar at the present.
import type { Recipe, SegmentNow } from '../contract.ts';
import { minutesText } from '../words.ts';
import { useWidth } from './use_width.ts';

export function PlanRibbon({ recipe, segment }: { recipe: Recipe; segment: SegmentNow | null }) {
  const [box, width] = useWidth<HTMLDivElement>();
  const total = recipe.segments.reduce((sum, each) => sum + each.duration_min, 0) || 1;
  const begun = recipe.segments.slice(0, segment?.index ?? 0).reduce((sum, each) => sum + each.duration_min, 0);
  const now = segment ? Math.min(total, begun + segment.elapsed_min) : null;
  const x = (minutes: number) => 1 + (width - 2) * minutes / total;
  let at = 0;
  return <div class="ribbon" ref={box} role="img" aria-label={`Plan of ${minutesText(total)}${now === null ? '' : `, ${minutesText(now)} gone`}.`}>
    {width > 60 && <svg width={width} height="34" aria-hidden="true">
      {now !== null && <rect class="gone-by" x={x(0)} y="8" width={x(now) - x(0)} height="18" />}
      {recipe.segments.map((each) => {
        const from = at;
        at += each.duration_min;
        return <rect class="piece" x={x(from)} y="8" width={Math.max(1, x(at) - x(from))} height="18" />;
      })}
      {now !== null && <path class="here" d={`M${Math.max(3, Math.min(width - 3, x(now)))} 1v32`} />}
    </svg>}
  </div>;
}
