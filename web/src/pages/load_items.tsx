// The items of a mixed load, each with a small strip; pressing one brings it to the large pictures.
import type { Item } from '../api.ts';
import { Strip } from '../pictures/strip.tsx';
import { stripOf } from '../pictures/strip_geometry.ts';
import { type LengthUnit, depthText } from '../units.ts';
import { judgedDepthMm, reachText } from '../marks.ts';

interface Props { items: Item[]; chosen: string; controlling: string | null; unit: LengthUnit; ended: boolean; guessed: boolean; choose: (name: string) => void }

export function Items({ items, chosen, controlling, unit, ended, guessed, choose }: Props) {
  return <div class="items" role="group" aria-label="Items of this load">
    {items.map((item) => <button type="button" key={item.name} class="item" aria-pressed={item.name === chosen} data-testid="item" onClick={() => choose(item.name)}>
      <span class="item-head"><b>{item.part}</b><span>{depthText(judgedDepthMm(item), unit)} · {reachText(item, unit, ended)}</span></span>
      <span class="item-sub">{item.name} · {item.steel}{item.name === controlling ? ' · controls this load' : ''}</span>
      <Strip item={{ ...stripOf(item, item.profile), ended }} unit={unit} metalPx={34} fontPx={14} guessed={guessed} labels="few" />
    </button>)}
  </div>;
}
