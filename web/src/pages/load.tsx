// One load: its section now, every item, the pictures over depth and time, the plan, the facts, the notes.
import { useState } from 'preact/hooks';
import type { Item, Snapshot } from '../api.ts';
import { msSince } from '../elapsed.ts';
import { isCurrent, live, pulse } from '../live.ts';
import { anyGuess, judgedDepthMm, marksOf, reachText } from '../marks.ts';
import { HardnessPlot } from '../pictures/hardness_plot.tsx';
import { depthBand, isMiss, nowBandText } from '../outlook_words.ts';
import { HistoryPlots } from '../pictures/history_plots.tsx';
import { validRecipe } from '../pictures/history_series.ts';
import { Shape } from '../pictures/mark_shape.tsx';
import { ProfilePlot } from '../pictures/profile_plot.tsx';
import { Strip } from '../pictures/strip.tsx';
import { stripOf } from '../pictures/strip_geometry.ts';
import { prefs } from '../prefs.ts';
import { floorLink, furnaceLink } from '../routes.ts';
import { MarkRow } from '../shell/mark_row.tsx';
import { useStore } from '../store.ts';
import { depthNumber, depthText, lengthName, windowText } from '../units.ts';
import { type LoadView, useLoad } from '../use_load.ts';
import { ageText, clockText, dayClockText, minutesText } from '../words.ts';
import { Actions } from './load_actions.tsx';
import { LoadAlerts } from './load_alerts.tsx';
import { Facts } from './load_facts.tsx';
import { Items } from './load_items.tsx';
import { GapList, ModelNotes, ShiftNotes } from './load_notes.tsx';
import { OutlookPanel } from './load_outlook.tsx';
import { AdoptedPlans, Plan } from './load_plan.tsx';
import { Revisions } from './load_revisions.tsx';
import { TrialPanel } from './load_trial.tsx';
import { StandingMark } from './standing.tsx';
import { CarbonSources, Where } from './load_where.tsx';

const oldAfterMs = 10_000;

export function Load({ id }: { id: number }) {
  const [view, again] = useLoad(id);
  const feed = useStore(live);
  const [chosen, setChosen] = useState<string | null>(null);
  useStore(pulse);
  const { length, temperature } = useStore(prefs);
  const { snapshot, history } = view;
  if (!snapshot) return <p class="waiting" role="status">{view.problem ?? 'Asking hearthfront for this load …'} {view.problem && <a href={floorLink}>Back to the Floor</a>}</p>;
  const items = ordered(snapshot);
  const item = items.find((each) => each.name === chosen) ?? items[0];
  const old = snapshot.load.state === 'open' && (!isCurrent(feed) || msSince(view.confirmed) > oldAfterMs);
  return <div class={old ? 'old' : ''}>
    <Title snapshot={snapshot} again={again} />
    {old && feed.link !== 'away' && <p class="catching" role="status">These figures are from {clockText(view.confirmed.wallMs, true)}. {view.problem ?? 'Asking again …'}</p>}
    {item && <Present view={view} snapshot={snapshot} item={item} old={old} speed={feed.floor?.clock_speed ?? 1} />}
    {items.length > 1 && item && <Items outlook={snapshot.load.state === 'open' ? snapshot.outlook ?? null : null} items={items} chosen={item.name} controlling={snapshot.controlling_item} unit={length} ended={snapshot.load.state !== 'open'} guessed={guessedNow(snapshot)} choose={setChosen} />}
    <LoadAlerts alerts={snapshot.alerts} again={again} />
    {snapshot.load.state === 'open' && <OutlookPanel snapshot={snapshot} />}
    {snapshot.load.state === 'open' && snapshot.outlook && snapshot.rest && snapshot.rest.length > 0 && <TrialPanel snapshot={snapshot} item={item?.name ?? ''} again={again} />}
    <div class="plots">
      {item && <ProfilePlot item={item} unit={length} />}
      {item?.hardness && <HardnessPlot item={item} hardness={item.hardness} unit={length} temperature={temperature} />}
      {item && history && history.time_s.length > 1 && <HistoryPlots snapshot={snapshot} history={history} item={item} length={length} temperature={temperature} />}
    </div>
    <div class="columns">
      <div class="stack"><Plan recipe={validRecipe(snapshot.load.recipe, snapshot.plans)} segment={snapshot.segment} minutesLeft={snapshot.minutes_left} open={snapshot.load.state === 'open'} now={snapshot.now} />
        <AdoptedPlans snapshot={snapshot} />
        <Where snapshot={snapshot} />
        <CarbonSources snapshot={snapshot} />
        <ModelNotes snapshot={snapshot} />
        <GapList snapshot={snapshot} /></div>
      <div class="stack">{item && <Facts item={item} band={snapshot.band} length={length} temperature={temperature} />}
        <ShiftNotes snapshot={snapshot} again={again} />
        <Revisions id={id} revision={snapshot.load.revision} /></div>
    </div>
  </div>;
}

// The controlling item first, the others as the load names them.
function ordered(snapshot: Snapshot): Item[] {
  const first = snapshot.items.filter((each) => each.name === snapshot.controlling_item);
  return [...first, ...snapshot.items.filter((each) => each.name !== snapshot.controlling_item)];
}

function Title({ snapshot, again }: { snapshot: Snapshot; again: () => void }) {
  const { load, place } = snapshot;
  return <div class="load-title">
    <h1 class="title">Load {load.name} · <a class="in-title" href={furnaceLink(place?.furnace ?? load.furnace)}>{placeName(snapshot)}</a>
      <small>started {dayClockText(Date.parse(load.started_at))} by {load.person}</small></h1>
    {load.state !== 'open' && <p class="mark quiet"><Shape name={load.state} /><b>{load.state} {load.ended_at && dayClockText(Date.parse(load.ended_at))}</b></p>}
    <Actions snapshot={snapshot} again={again} />
  </div>;
}

function placeName({ load, place }: Snapshot): string {
  if (place === null) return 'outside';
  const [furnace, chamber, name] = place ? [place.furnace_name, place.chamber, place.chamber_name] : [load.furnace_name, load.chamber, load.chamber];
  return chamber && chamber !== 'main' ? `${furnace} · ${name}` : furnace;
}

const guessedNow = ({ load, inputs }: Snapshot): boolean => load.state === 'open' && anyGuess(inputs);

interface PresentProps { view: LoadView; snapshot: Snapshot; item: Item; old: boolean; speed: number }
function Present({ view, snapshot, item, old, speed }: PresentProps) {
  const { length } = useStore(prefs);
  const open = snapshot.load.state === 'open';
  const ageS = snapshot.data_age_s === null ? null : snapshot.data_age_s + (open ? msSince(view.received) / 1000 * speed : 0);
  const marks = marksOf({ ...snapshot, segment: open ? snapshot.segment : null, item, dataAgeS: ageS }).filter((mark) => open || mark.colour === 'metal');
  const guessed = guessedNow(snapshot);
  const ahead = open ? snapshot.outlook?.items.find((each) => each.name === item.name) : undefined;
  const first = marks[0]?.colour;
  const colour = first !== 'link' && ahead && isMiss(ahead.standing) ? 'metal' : first ?? 'fine';
  return <section class={`panel present ${colour}`} aria-label="Section">
    <div class="present-body">
      <div class="depth">
        <h2>{item.part} <small>{item.name}{item.quantity > 1 ? ` · ${item.quantity} pieces` : ''} · {item.steel} · {item.shape}</small></h2>
        {old && <p class="then" data-testid="then"><span>old: {clockText(view.confirmed.wallMs, true)}</span></p>}
        <p class="big"><span data-testid="depth">{depthNumber(judgedDepthMm(item), length)}</span>{judgedDepthMm(item) !== null && <small>{lengthName(length)}</small>}</p>
        {ahead && <StandingMark standing={ahead.standing} chance={ahead.joint_chance} />}
        <p class="asked-line">asked <b>{windowText(item.case_depth_window_mm, length)}</b></p>
        {ahead && <p class="ahead-line">at the end <b>{depthBand(ahead.case_depth_mm, length)}</b> {lengthName(length)}</p>}
        <p class="reach">{reachText(item, length, !open)}</p>
        {!!item.grinding_stock_mm && <p class="band">finished: {depthText(item.grinding_stock_mm, length)} ground off {depthText(item.case_depth_mm, length)}</p>}
        {open && snapshot.segment && <p class="asked-line now-line"><b>{snapshot.segment.name}</b>: {snapshot.segment.minutes_left >= 0 ? `${minutesText(snapshot.segment.minutes_left)} left` : `${minutesText(-snapshot.segment.minutes_left)} over`}</p>}
        <p class="age" data-testid="data-age">{open ? (ageS === null ? 'no reading yet' : `data ${ageText(ageS)} old`) : snapshot.load.state === 'cancelled' ? 'cancelled: not a result' : 'final'}</p>
        <p class="band">{item.case_depth_band_mm ? 'now ' : ''}{nowBandText(item.case_depth_band_mm, snapshot.band, length)}{item.case_depth_band_mm && `, ${snapshot.band}`}</p>
      </div>
      <div class="picture">
        <Strip item={{ ...stripOf(item, item.profile, ahead?.case_depth_mm), turnover_mm: item.turnover_depth_mm, ended: !open }} unit={length} metalPx={120} fontPx={17} guessed={guessed || old} labels="all" />
      </div>
    </div>
    {marks.length > 0 && <div class="marks">{marks.map((mark) => <MarkRow key={mark.shape} mark={mark} />)}</div>}
  </section>;
}
