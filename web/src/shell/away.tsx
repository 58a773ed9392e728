// The word on contact with the daemon. Nothing while all is well; over everything when it is away.
import { live, pulse } from '../live.ts';
import { Shape } from '../pictures/mark_shape.tsx';
import { useStore } from '../store.ts';
import { ageText, clockText } from '../words.ts';
import { msSince } from '../elapsed.ts';

export function Away() {
  const { floor, link, received, trouble } = useStore(live);
  useStore(pulse);
  if (link === 'catching up') return <p class="catching" role="status">Catching up: figures are from {clockText(received.wallMs, true)}.</p>;
  if (link !== 'away') return null;
  return <section class="gone" role="alert" data-testid="away">
    <Shape name="away" />
    <div>
      <h1>{trouble ? 'hearthfront is not ready' : 'hearthfront is away'}</h1>
      {floor
        ? <p>{trouble ? 'Last figures' : 'Last answer'} at <b>{clockText(received.wallMs, true)}</b>, {ageText(msSince(received) / 1000)} ago. Every figure below is <b>old</b>.</p>
        : <p>No answer yet. There is nothing to show.</p>}
      <p class="gone-do">{trouble ?? 'The furnace is not affected: read its own controller. Check that the hearthfront computer and the network are on.'}</p>
    </div>
  </section>;
}
