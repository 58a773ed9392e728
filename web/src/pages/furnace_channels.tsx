// The channels of a furnace: health in a word, a shape and a sentence, the last value, what came and what was
// refused, and the way to choose between conflicting values.
import { useState } from 'preact/hooks';
import type { Channel, Furnace } from '../api_plant.ts';
import { daemonNowMs, live, pulse } from '../live.ts';
import { Shape } from '../pictures/mark_shape.tsx';
import { prefs } from '../prefs.ts';
import { useStore } from '../store.ts';
import { channelText } from '../units.ts';
import { ageText, momentText } from '../words.ts';
import { ConflictList } from './furnace_conflicts.tsx';
import { MarkStretch } from './furnace_masks.tsx';

// The worst first, and among equals in the plant file's own order.
const rank = (channel: Channel): number => (channel.health && channel.health.state !== 'good' ? 0 : (channel.undecided ?? 0) > 0 ? 1 : 2);

export function Channels({ furnace, again }: { furnace: Furnace; again: () => void }) {
  const [open, setOpen] = useState<string | null>(null);
  const sorted = [...furnace.channels].sort((a, b) => rank(a) - rank(b));
  return <section aria-label="Channels">
    <h2 class="section-title">Channels</h2>
    {sorted.length === 0 && <p class="nothing">The plant file names no channel of this furnace.</p>}
    <div class="channels">{sorted.map((channel) => <article class={`panel channel ${rank(channel) === 0 ? 'guess' : ''}`} key={channel.name} data-testid="channel" data-channel={channel.name}>
      <ChannelFacts channel={channel} chamber={furnace.chambers.length > 1 ? furnace.chambers.find((each) => each.id === channel.chamber)?.name ?? '' : ''} />
      <div class="channel-buttons">
        {channel.conflicts > 0 && <button type="button" class="button plain" data-testid="conflicts-open" aria-expanded={open === channel.name} onClick={() => setOpen(open === channel.name ? null : channel.name)}>
          Conflicting values: {channel.undecided === undefined ? channel.conflicts : channel.undecided > 0 ? `${channel.undecided} to decide` : 'all decided'}</button>}
        <MarkStretch furnace={furnace} channel={channel.name} again={again} />
      </div>
      {open === channel.name && <ConflictList furnace={furnace.id} channel={channel} again={again} />}
    </article>)}</div>
  </section>;
}

function ChannelFacts({ channel, chamber }: { channel: Channel; chamber: string }) {
  const { temperature } = useStore(prefs);
  const feed = useStore(live);
  useStore(pulse);
  const { health, last } = channel;
  const nowMs = daemonNowMs(feed);
  const lastAt = last && Date.parse(last.at ?? last.time ?? '');
  const refused = Object.entries(channel.refused).filter(([, many]) => many > 0);
  const good = health?.state === 'good';
  return <>
    <h3>{channel.name.replaceAll('_', ' ')} <small>{channel.role.replaceAll('_', ' ')}{chamber && ` · ${chamber}`}</small></h3>
    <p class="last"><b>{last ? channelText(last.value, channel.unit, temperature) : '–'}</b> <span>{lastAt ? `${ageText((nowMs - lastAt) / 1000)} ago` : 'no reading yet'}</span></p>
    {health && <p class={`mark ${good ? 'quiet' : 'guess'}`} data-health={health.state}><Shape name={health.state} /><span><b>{health.state}</b> <span class="mark-sentence">{health.sentence}</span>
      {!good && health.since && <small class="under">since {momentText(Date.parse(health.since), nowMs)}</small>}</span></p>}
    <p class="hint">{channel.stored} stored{channel.typical_interval_s ? `, one each ${ageText(channel.typical_interval_s)}` : ''}{channel.conflicts > 0 && `; times with two values: ${channel.conflicts}`}{refused.length > 0 && `; refused: ${refused.map(([reason, many]) => `${many} ${reason}`).join(', ')}`}</p>
  </>;
}
