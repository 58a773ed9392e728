// One load on the Floor: who and what at the left, the depth, the section strip of the controlling item. A
// furnace with one chamber is a card; one with several is a card with a row for each chamber (floor_group.tsx).
import type { ComponentChildren } from 'preact';
import type { FloorFurnace, FloorLoad } from '../api.ts';
import type { AlertSummary } from '../contract_alerts.ts';
import { msSince } from '../elapsed.ts';
import { type Live, isCurrent, live, pulse } from '../live.ts';
import { type Mark, anyGuess, judgedDepthMm, marksOf, reachText } from '../marks.ts';
import { depthBand, isMiss, nowBandText } from '../outlook_words.ts';
import { Strip } from '../pictures/strip.tsx';
import { stripOf } from '../pictures/strip_geometry.ts';
import { prefs } from '../prefs.ts';
import { furnaceLink, loadLink } from '../routes.ts';
import { MarkRow } from '../shell/mark_row.tsx';
import { useStore } from '../store.ts';
import { depthNumber, lengthName, rangeText } from '../units.ts';
import { ageText, clockText, minutesText } from '../words.ts';
import { AlertLines } from './alert_line.tsx';
import { StandingMark } from './standing.tsx';

export const ageNowS = (ageS: number | null, feed: Live): number | null =>
  (ageS === null ? null : ageS + msSince(feed.received) / 1000 * (feed.floor?.clock_speed ?? 1));

export const dataAgeOf = (furnace: FloorFurnace, load: FloorLoad, feed: Live): number | null =>
  ageNowS(load.data_age_s === undefined ? furnace.data_age_s : load.data_age_s, feed);
export const loadMarks = (furnace: FloorFurnace, load: FloorLoad, feed: Live): Mark[] => marksOf({ ...load, dataAgeS: dataAgeOf(furnace, load, feed) });

// The colour of a card's edge. Old figures come first; then a miss ahead, which is the part's own trouble.
export function cardColour(marks: readonly Mark[], load: FloorLoad): string {
  const first = marks[0]?.colour;
  if (first !== 'link' && load.item?.outlook && isMiss(load.item.outlook.standing)) return 'metal';
  return first ?? 'fine';
}

export const FurnaceName = ({ furnace }: { furnace: FloorFurnace }) =>
  <a class="to-furnace" href={furnaceLink(furnace.id)} aria-label={`${furnace.name}: the furnace, its channels`}>{furnace.name}</a>;

export function FloorCard({ furnace, load, band }: { furnace: FloorFurnace; load: FloorLoad; band: string }) {
  const feed = useStore(live);
  const marks = loadMarks(furnace, load, feed);
  return <article class={`card ${cardColour(marks, load)} ${marks.length > 0 ? 'marked' : ''}`} data-testid="card" data-load={load.id}>
    <CardBody furnace={furnace} load={load} band={band} alerts={[...load.alerts ?? [], ...furnace.alerts ?? []]} heading={<h2><FurnaceName furnace={furnace} />{load.chamber && load.chamber !== 'main' ? ` · ${load.chamber}` : ''}</h2>} />
  </article>;
}

interface BodyProps { furnace: FloorFurnace; load: FloorLoad; band: string; heading: ComponentChildren; alerts?: AlertSummary[] }
export function CardBody({ furnace, load, band, heading, alerts = load.alerts ?? [] }: BodyProps) {
  const feed = useStore(live);
  useStore(pulse);
  const { length } = useStore(prefs);
  const { item } = load;
  const dataAgeS = dataAgeOf(furnace, load, feed);
  const marks = loadMarks(furnace, load, feed);
  const old = !isCurrent(feed);
  const depth = item && judgedDepthMm(item);
  return <div class="card-body">
    <div class="who">
      {heading}
      <p class="what"><a class="whole" href={loadLink(load.id)} aria-label={`${furnace.name}, load ${load.name}`}>Load {load.name}</a>{item && (load.item_count > 1 ? <> · {load.item_count} items, {item.part} controls, <Steel name={item.steel} /></> : <> · {item.part}, <Steel name={item.steel} /></>)}</p>
      {item?.outlook && <StandingMark standing={item.outlook.standing} chance={item.outlook.joint_chance} />}
      <Times load={load} />
      {marks.length > 0 && <div class="marks">{marks.map((mark) => <MarkRow key={mark.shape} mark={mark} />)}</div>}
    </div>
    <div class="depth">
      {old && <p class="then" data-testid="then"><span>old: {clockText(feed.received.wallMs, true)}</span></p>}
      <p class="figure"><span data-testid="depth">{item ? depthNumber(depth, length) : '–'}</span>{depth !== null && <small>{lengthName(length)}</small>}</p>
      <div class="said-of">
        {item && <p class="asked-line">asked <b>{rangeText(item.case_depth_window_mm, length)}</b></p>}
        {item?.outlook && <p class="ahead-line">at the end <b>{depthBand(item.outlook.case_depth_mm, length)}</b></p>}
        {item && <p class="reach">{reachText(item, length)}</p>}
        <p class="age" data-testid="data-age">{dataAgeS === null ? 'no reading yet' : `data ${ageText(dataAgeS)} old`}</p>
        <p class="band" data-testid="band">{item?.case_depth_band_mm && 'now '}{nowBandText(item?.case_depth_band_mm, band, length)}{item?.grinding_stock_mm ? ', after grinding' : ''}</p>
      </div>
    </div>
    <div class="picture">
      {item?.strip && <Strip item={stripOf(item, item.strip, item.outlook?.case_depth_mm)} unit={length} metalPx={76} fontPx={17} guessed={anyGuess(load.inputs) || old} labels="few" />}
    </div>
    <AlertLines alerts={alerts} />
  </div>;
}

const Steel = ({ name }: { name: string }) => <span class="steel">{name}</span>;

function Times({ load }: { load: FloorLoad }) {
  const { segment, minutes_left: left, position } = load;
  return <dl class="times">
    {segment && <div class="now-in"><dt>{segment.name}</dt><dd data-testid="segment-left">{segment.minutes_left >= 0 ? `${minutesText(segment.minutes_left)} left` : `${minutesText(-segment.minutes_left)} over`}</dd></div>}
    {position && <div><dt>tray position</dt><dd>{position.place} of {position.places}</dd></div>}
    {left !== null && <div><dt>planned end</dt><dd>{left >= 0 ? `in ${minutesText(left)}` : `${minutesText(-left)} ago`}</dd></div>}
  </dl>;
}
