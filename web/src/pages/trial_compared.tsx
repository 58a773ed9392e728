// Two outlooks side by side: the plan as it is, and another.
import type { Snapshot } from '../api.ts';
import type { Outlook } from '../contract_outlook.ts';
import { carbonBandText, depthBandText, endsText, moreMinutesText, percentText, standingLine } from '../outlook_words.ts';
import { Ends } from '../pictures/end_mark.tsx';
import { Shape } from '../pictures/mark_shape.tsx';
import { prefs } from '../prefs.ts';
import { useStore } from '../store.ts';

interface Props { snapshot: Snapshot; present: Outlook; other: Outlook; otherName: string; item: string }
export function Compared({ snapshot, present, other, otherName, item }: Props) {
  const { length } = useStore(prefs);
  const several = present.items.length > 1;
  const partOf = (name: string) => snapshot.items.find((each) => each.name === name)?.part ?? name;
  const otherOf = (name: string) => other.items.find((each) => each.name === name);
  const minutes = (Date.parse(other.ends_at) - Date.parse(present.ends_at)) / 60_000;
  const shown = present.items.find((each) => each.name === item) ?? present.items[0];
  const shownOther = shown && otherOf(shown.name);
  const window = snapshot.items.find((each) => each.name === shown?.name)?.case_depth_window_mm;
  return <div class="compared">
    <table class="rows">
      <thead><tr><th scope="col"><span class="aside">what</span></th><th scope="col">as planned</th><th scope="col">{otherName}</th></tr></thead>
      <tbody>
        <tr class="strong"><th scope="row">{several ? 'all items inside' : 'all windows'}</th><td>{percentText(present.joint_chance)}</td><td data-testid="compared-chance">{percentText(other.joint_chance)}</td></tr>
        <tr><th scope="row">end</th><td>{endsText(present.minutes_left)}</td><td>{moreMinutesText(minutes)}</td></tr>
        {present.items.map((each) => { const there = otherOf(each.name); return [
          <tr key={`${each.name}s`} class="of-item"><th scope="row">{several ? partOf(each.name) : 'standing'}</th><td><Shape name={each.standing} /> {standingLine(each)}</td><td>{there && <><Shape name={there.standing} /> {standingLine(there)}</>}</td></tr>,
          <tr key={`${each.name}d`}><th scope="row">case depth</th><td>{depthBandText(each.case_depth_mm, length)}</td><td>{there && depthBandText(there.case_depth_mm, length)}</td></tr>,
          <tr key={`${each.name}c`}><th scope="row">surface carbon</th><td>{carbonBandText(each.surface_carbon_wt_pct)}</td><td>{there && carbonBandText(there.surface_carbon_wt_pct)}</td></tr>,
        ]; })}
      </tbody>
    </table>
    {shown && shownOther && window && <Ends window={window} unit={length} rows={[{ name: 'as planned', band: shown.case_depth_mm }, { name: otherName, band: shownOther.case_depth_mm }]} />}
  </div>;
}
