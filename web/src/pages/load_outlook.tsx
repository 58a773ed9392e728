// Where a load will stand at the end of its plan: for the whole of it, and for each item with its band and chances.
import type { Item, Snapshot } from '../api.ts';
import type { DepthChance, Outlook, OutlookItem } from '../contract_outlook.ts';
import { againstOffered, bestText, carbonBandText, depthBandText, depthChanceText, endsText, noBand, offsetText, percentText, surfaceWords } from '../outlook_words.ts';
import { Shape } from '../pictures/mark_shape.tsx';
import { prefs } from '../prefs.ts';
import { useStore } from '../store.ts';
import { carbonWindowText, windowText, withUnits } from '../units.ts';
import { clockText } from '../words.ts';
import { StandingMark } from './standing.tsx';

export function OutlookPanel({ snapshot }: { snapshot: Snapshot }) {
  const units = useStore(prefs);
  const { outlook, outlook_missing: missing } = snapshot;
  if (outlook === undefined && missing === undefined) return null;  // a daemon that has none
  return <section class="panel outlook" data-testid="outlook">
    <h2>Outlook <small>{outlook ? `at the end of the plan, ${clockText(Date.parse(outlook.ends_at))}` : ''}</small></h2>
    {outlook ? <><Whole outlook={outlook} several={snapshot.items.length > 1} parts={snapshot.items} />
      <div class="outlook-items">{outlook.items.map((each) => <One key={each.name} ahead={each} item={snapshot.items.find((item) => item.name === each.name)} />)}</div>
      <p class="hint">Bands are 5 to 95 %. A chance is of the drawing’s own criterion; a lab’s own scatter makes its figure another. No outlook replaces the coupon.</p></>
      : <p class="mark" data-testid="outlook-missing"><Shape name="no data yet" /><span><b>{noBand}</b> <span class="mark-sentence">{withUnits(missing ?? 'There is no outlook for this load at present.', units)}</span></span></p>}
  </section>;
}

function Whole({ outlook, several, parts }: { outlook: Outlook; several: boolean; parts: Item[] }) {
  const { temperature } = useStore(prefs);
  const offset = offsetText(outlook.offset, temperature);
  const best = bestText(outlook), offered = againstOffered(outlook);
  const controls = parts.find((each) => each.name === outlook.controlling_item);
  return <dl class="outlook-whole">
    <div><dt>everything inside</dt><dd><b class="chance" data-testid="joint-chance">{percentText(outlook.joint_chance)}</b>{offered && <span>{offered}</span>}</dd></div>
    <div><dt>time left</dt><dd><b>{endsText(outlook.minutes_left)}</b><span>at {clockText(Date.parse(outlook.ends_at))}</span></dd></div>
    {best && <div><dt>best time to end</dt><dd><b>{best.split(',')[0]}</b><span>{best.split(', ').slice(1).join(', ')}</span></dd></div>}
    {several && controls && <div><dt>controls</dt><dd><b>{controls.part}</b><span>item {controls.name}, the least chance</span></dd></div>}
    {offset && <div data-testid="offset"><dt>carried on</dt><dd><b>{offset.split(';')[0]}</b><span>{offset.split('; ')[1]}</span></dd></div>}
  </dl>;
}

function One({ ahead, item }: { ahead: OutlookItem; item: Item | undefined }) {
  const { length } = useStore(prefs);
  return <article class={`outlook-item ${ahead.standing}`} data-testid="outlook-item">
    <h3>{item?.part ?? ahead.name} <small>{ahead.name}</small></h3>
    <StandingMark standing={ahead.standing} chance={ahead.joint_chance} />
    <dl class="facts">
      <div><dt>case depth{item?.grinding_stock_mm ? ', finished' : ''}</dt><dd><b>{depthBandText(ahead.case_depth_mm, length)}</b> {item && <span>asked {windowText(item.case_depth_window_mm, length)}</span>}</dd></div>
      <div><dt>true depth</dt><dd><ChanceBar chance={ahead.chance} /><span>{depthChanceText(ahead.chance)}</span></dd></div>
      <div><dt>as a lab measures</dt><dd><ChanceBar chance={ahead.lab_chance} /><span>{depthChanceText(ahead.lab_chance)}</span></dd></div>
      <div><dt>surface carbon</dt><dd><b>{carbonBandText(ahead.surface_carbon_wt_pct)}</b> <span>{item?.surface_carbon_window_wt_pct ? `asked ${carbonWindowText(item.surface_carbon_window_wt_pct)}; ` : ''}{surfaceWords(ahead)}</span></dd></div>
    </dl>
  </article>;
}

// Shallow at the left, deep at the right, as in the section; the words beside it carry the figures.
function ChanceBar({ chance }: { chance: DepthChance }) {
  const parts = (['shallow', 'inside', 'deep'] as const).filter((name) => chance[name] > 0.004);
  let at = 0;
  return <svg class="chance-bar" viewBox="0 0 200 14" preserveAspectRatio="none" aria-hidden="true">
    {parts.map((name) => { const x = at; at += 200 * chance[name]; return <rect key={name} class={name} x={x} y="1" width={Math.max(1, 200 * chance[name])} height="12" />; })}
  </svg>;
}

