// The items of a mixed load, each with a small strip; pressing one brings it to the large pictures.
import type { Item } from '../api.ts';
import type { Outlook } from '../contract_outlook.ts';
import { standingLine } from '../outlook_words.ts';
import { Shape } from '../pictures/mark_shape.tsx';
import { Strip } from '../pictures/strip.tsx';
import { stripOf } from '../pictures/strip_geometry.ts';
import { type LengthUnit, depthText } from '../units.ts';
import { judgedDepthMm, reachText } from '../marks.ts';

interface Props { outlook: Outlook | null; items: Item[]; chosen: string; controlling: string | null; unit: LengthUnit; ended: boolean; guessed: boolean; choose: (name: string) => void }

export function Items({ outlook, items, chosen, controlling, unit, ended, guessed, choose }: Props) {
  const aheadOf = (name: string) => outlook?.items.find((each) => each.name === name);
  return <div class="items" role="group" aria-label="Items of this load">
    {items.map((item) => <button type="button" key={item.name} class="item" aria-pressed={item.name === chosen} data-testid="item" onClick={() => choose(item.name)}>
      <span class="item-head"><b>{item.part}</b><span>{depthText(judgedDepthMm(item), unit)} · {reachText(item, unit, ended)}</span></span>
      <span class="item-sub">{item.name} · {item.steel}{item.name === controlling ? ' · controls this load' : ''}</span>
      {aheadOf(item.name) && <span class={`item-standing ${aheadOf(item.name)!.standing}`}><Shape name={aheadOf(item.name)!.standing} />{standingLine(aheadOf(item.name)!)}</span>}
      <Strip item={{ ...stripOf(item, item.profile, aheadOf(item.name)?.case_depth_mm), ended }} unit={unit} metalPx={34} fontPx={14} guessed={guessed} labels="few" />
    </button>)}
  </div>;
}
