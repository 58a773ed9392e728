// Where alerts are sent, whether that works, a test, and another try for what is stuck.
import { useState } from 'preact/hooks';
import { type Target, getTargets, retryTarget, testTarget } from '../api_alerts.ts';
import { Ask } from '../form/ask.tsx';
import { daemonNowMs, live } from '../live.ts';
import { Shape } from '../pictures/mark_shape.tsx';
import { useStore } from '../store.ts';
import { useAsked } from '../use_asked.ts';
import { momentText } from '../words.ts';

export function Targets() {
  const { value, problem, again } = useAsked(getTargets, 10_000, 'targets');
  return <section class="panel" data-testid="targets">
    <h2>Where alerts are sent</h2>
    {problem && <p class="said" role="status"><Shape name="note" />{problem}</p>}
    {value && value.length === 0 && <p class="nothing">Nowhere: alerts stand on this page and on the Floor only. Targets are named in the settings file.</p>}
    {value && value.length > 0 && <ul class="targets">{value.map((each) => <TargetRow key={each.name} target={each} again={again} />)}</ul>}
  </section>;
}

function TargetRow({ target, again }: { target: Target; again: () => void }) {
  const [said, setSaid] = useState<{ good: boolean; text: string } | null>(null);
  const nowMs = daemonNowMs(useStore(live));
  const at = (time: string) => momentText(Date.parse(time), nowMs);
  const test = async (person: string) => {
    setSaid(null);
    const got = await testTarget(target.name, person);
    setSaid(got.delivered ? { good: true, text: 'The test arrived.' } : { good: false, text: `The test did not arrive. ${got.error ?? ''}` });
    again();
  };
  const retry = async (person: string) => {
    const { retried } = await retryTarget(target.name, person);
    setSaid({ good: true, text: `${retried} ${retried === 1 ? 'message is' : 'messages are'} tried again.` });
    again();
  };
  return <li data-testid="target" data-target={target.name}>
    <div class="target-words">
      <p><b>{target.name}</b> <small>{target.kind}, {target.where}</small></p>
      <p>{target.routes}</p>
      <p class="alert-facts">
        <span>{target.last_delivered_at ? `last arrived ${at(target.last_delivered_at)}` : 'nothing has arrived yet'}</span>
        {target.waiting > 0 && <span class="is-waiting"><Shape name="waiting" /> {target.waiting} waiting</span>}
        {target.stuck > 0 && <span class="is-stuck"><Shape name="not delivered" /> {target.stuck} stuck</span>}
      </p>
      {target.last_error && (target.stuck > 0 || target.waiting > 0) && <p class="error">{target.last_error}</p>}
      {said && <p class={said.good ? 'hint' : 'said'} role="status" data-testid="target-said"><Shape name={said.good ? 'delivered' : 'not delivered'} /> {said.text}</p>}
    </div>
    <div class="alert-acts">
      <Ask id={`test-${target.name}`} label="Send a test" title={`Send a test to ${target.name}?`} keep="No" confirm="Send it" act={test}>
        <p>A message marked as a test goes out now. The answer takes up to 10 s.</p></Ask>
      {target.stuck > 0 && <Ask id={`retry-${target.name}`} label="Try stuck ones again" title={`Try what is stuck for ${target.name} again?`} keep="No" confirm={`Try ${target.stuck} again`} act={retry}>
        <p>Whoever receives them may see an old alert once more; each message carries its own key.</p></Ask>}
    </div>
  </li>;
}
