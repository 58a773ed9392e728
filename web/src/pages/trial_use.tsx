// Taking a tried or proposed plan as the load's own: who, why, and the plain word that the controller is set by hand.
import { useState } from 'preact/hooks';
import type { Snapshot } from '../api.ts';
import { type RestSegment, adoptPlan } from '../api_outlook.ts';
import { bodyOf, draftOf, movedTo } from '../draft/rest.ts';
import { Ask } from '../form/ask.tsx';
import { ApiProblem } from '../http.ts';
import { Shape } from '../pictures/mark_shape.tsx';
import { prefs } from '../prefs.ts';
import { useStore } from '../store.ts';
import { carbonText, temperatureText } from '../units.ts';
import { minutesText } from '../words.ts';

interface Props {
  id: string;
  snapshot: Snapshot;
  segments: RestSegment[];
  atMs: number;            // the moment from which its minutes count
  revision: number;        // of the load that the plan was worked out for
  ready: boolean;
  used: () => void;
  again: () => void;
}
export function UsePlan({ id, snapshot, segments: found, atMs, revision, ready, used, again }: Props) {
  const [reason, setReason] = useState('');
  const { temperature } = useStore(prefs);
  const nowMs = Date.parse(snapshot.outlook?.at ?? snapshot.now);
  const segments = bodyOf(movedTo(draftOf(found, atMs), nowMs));  // what has passed since is no part of the rest
  const act = async (person: string) => {
    try {
      await adoptPlan(snapshot.load.id, { person, reason: reason.trim(), expected_revision: revision, segments });
      used();
    } catch (error) {
      if (error instanceof ApiProblem && error.conflict) {
        again();
        throw new Error('Somebody changed this load meanwhile, so this plan was worked out for another one. Nothing was saved. Go back, look at the plan as it is now, and try again.');
      }
      throw error;
    }
  };
  return <div class="use-plan"><Ask id={id} label="Use this plan" title="Use this plan?" keep="Not yet" confirm="Use it, I set the controller" ready={ready && reason.trim() !== ''} act={act} onOpen={() => setReason('')}>
    <p class="mark metal by-hand"><Shape name="by hand" /><span><b>Set the furnace’s controller by hand.</b> <span class="mark-sentence">hearthfront never commands a furnace. It only reckons with this plan from now on:</span></span></p>
    <table class="rows"><thead><tr><th scope="col">segment</th><th scope="col">time</th><th scope="col">temperature</th><th scope="col">carbon potential</th></tr></thead>
      <tbody>{segments.map((each, i) => <tr key={i}><th scope="row">{each.name}{i === 0 && <small class="under">from now</small>}</th><td>{minutesText(each.duration_min)}</td><td>{temperatureText(each.temperature_degc, temperature)}</td><td>{carbonText(each.carbon_potential_wt_pct)}</td></tr>)}</tbody></table>
    <label>Why<input type="text" maxLength={200} autocomplete="off" data-testid={`${id}-reason`} value={reason} onInput={(event) => setReason(event.currentTarget.value)} /></label>
  </Ask></div>;
}
