// One load on the Floor: who and what at the left, the depth, the section strip of the controlling item.
import type { FloorFurnace, FloorLoad } from '../api.ts';
import { msSince } from '../elapsed.ts';
import { type Live, isCurrent, live, pulse } from '../live.ts';
import { guessedInputs, marksOf, reachText } from '../marks.ts';
import { Strip } from '../pictures/strip.tsx';
import { prefs } from '../prefs.ts';
import { loadLink } from '../routes.ts';
import { MarkRow } from '../shell/mark_row.tsx';
import { useStore } from '../store.ts';
import { depthNumber, lengthName, rangeText } from '../units.ts';
import { ageText, clockText, minutesText } from '../words.ts';

interface Props { furnace: FloorFurnace; load: FloorLoad; band: string }

export const ageNowS = (ageS: number | null, feed: Live): number | null =>
  (ageS === null ? null : ageS + msSince(feed.received) / 1000 * (feed.floor?.clock_speed ?? 1));

export function FloorCard({ furnace, load, band }: Props) {
  const feed = useStore(live);
  useStore(pulse);
  const { length } = useStore(prefs);
  const item = load.item;
  const dataAgeS = ageNowS(furnace.data_age_s, feed);
  const marks = marksOf({ ...load, dataAgeS });
  const guessed = guessedInputs(load.inputs, 'held').length + guessedInputs(load.inputs, 'planned').length > 0;
  const old = !isCurrent(feed);
  return <article class={`card ${marks[0]?.colour ?? 'fine'} ${marks.length > 0 ? 'marked' : ''}`} data-testid="card" data-load={load.id}><div class="card-body">
    <div class="who">
      <h2><a class="whole" href={loadLink(load.id)} aria-label={`${furnace.name}, load ${load.name}`}>{furnace.name}{load.chamber && load.chamber !== 'main' ? ` · ${load.chamber}` : ''}</a></h2>
      <p class="what">Load {load.name}{item && (load.item_count > 1 ? <> · {load.item_count} items, {item.part} controls, <Steel name={item.steel} /></> : <> · {item.part}, <Steel name={item.steel} /></>)}</p>
      <Times load={load} />
      {marks.length > 0 && <div class="marks">{marks.map((mark) => <MarkRow key={mark.shape} mark={mark} />)}</div>}
    </div>
    <div class="depth">
      {old && <p class="then" data-testid="then"><span>old: {clockText(feed.received.wallMs, true)}</span></p>}
      <p class="figure"><span data-testid="depth">{item ? depthNumber(item.case_depth_mm, length) : '–'}</span>{item && item.case_depth_mm !== null && <small>{lengthName(length)}</small>}</p>
      <div class="said-of">
        {item && <p class="asked-line">asked <b>{rangeText(item.case_depth_window_mm, length)}</b></p>}
        {item && <p class="reach">{reachText(item, length)}</p>}
        <p class="age" data-testid="data-age">{dataAgeS === null ? 'no reading yet' : `data ${ageText(dataAgeS)} old`}</p>
        <p class="band">{band}</p>
      </div>
    </div>
    <div class="picture">
      {item && <Strip item={{ ...item.strip, case_depth_mm: item.case_depth_mm, window_mm: item.case_depth_window_mm }} unit={length} metalPx={76} fontPx={17} guessed={guessed || old} labels="few" />}
    </div>
  </div></article>;
}

const Steel = ({ name }: { name: string }) => <span class="steel">{name}</span>;

function Times({ load }: { load: FloorLoad }) {
  const { segment, minutes_left: left } = load;
  return <dl class="times">
    {segment && <div class="now-in"><dt>{segment.name}</dt><dd data-testid="segment-left">{segment.minutes_left >= 0 ? `${minutesText(segment.minutes_left)} left` : `${minutesText(-segment.minutes_left)} over`}</dd></div>}
    {left !== null && <div><dt>planned end</dt><dd>{left >= 0 ? `in ${minutesText(left)}` : `${minutesText(-left)} ago`}</dd></div>}
  </dl>;
}
