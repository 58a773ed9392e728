// Asking the daemon for the plan that reaches a chance in the least time, and its answer in plain words: what to
// change, what it costs in minutes, how sure that is, or why there is none.
import { useEffect, useState } from 'preact/hooks';
import type { Snapshot } from '../api.ts';
import { type Proposal, type RestSegment, propose } from '../api_outlook.ts';
import { sentenceOf } from '../http.ts';
import { moreMinutesText, percentText } from '../outlook_words.ts';
import { Shape } from '../pictures/mark_shape.tsx';
import { prefs } from '../prefs.ts';
import { useStore } from '../store.ts';
import { withUnits } from '../units.ts';
import { clockText } from '../words.ts';
import { Compared } from './trial_compared.tsx';
import { UsePlan } from './trial_use.tsx';

const asked = [0.8, 0.9, 0.95];

interface Props { snapshot: Snapshot; item: string; again: () => void; take: (segments: RestSegment[], atMs: number) => void }
export function ProposalPart({ snapshot, item, again, take }: Props) {
  const [chance, setChance] = useState(0.9);
  const [busy, setBusy] = useState(false);
  const [got, setGot] = useState<Proposal | null>(null);
  const [problem, setProblem] = useState<string | null>(null);
  const ask = async () => {
    setBusy(true);
    setProblem(null);
    setGot(null);
    try { setGot(await propose(snapshot.load.id, chance)); } catch (error) { setProblem(sentenceOf(error)); } finally { setBusy(false); }
  };
  const passed = got !== null && got.revision !== snapshot.load.revision;
  useEffect(() => { if (passed) setProblem('The load was changed since this plan was found. Look for one again.'); }, [passed]);
  return <div class="proposal">
    <div class="proposal-ask">
      <div class="pick" role="group" aria-label="Chance asked for">{asked.map((each) => <button type="button" key={each} class="button plain" aria-pressed={chance === each} onClick={() => setChance(each)}>{percentText(each)}</button>)}</div>
      <button type="button" class="button large" data-testid="propose" disabled={busy} onClick={() => void ask()}>{busy ? 'Looking …' : 'Find a plan that saves it'}</button>
    </div>
    {problem && <p class="said" role="alert"><Shape name="note" />{problem}</p>}
    {got && !passed && <Found proposal={got} snapshot={snapshot} item={item} again={again} take={take} used={() => { setGot(null); again(); }} />}
  </div>;
}

interface FoundProps { proposal: Proposal; snapshot: Snapshot; item: string; again: () => void; take: (segments: RestSegment[], atMs: number) => void; used: () => void }
function Found({ proposal, snapshot, item, again, take, used }: FoundProps) {
  const units = useStore(prefs);
  const { found, segments, outlook, confirmed } = proposal;
  return <div class={`found ${found ? '' : 'none'}`} role="status" data-testid="proposal" data-found={found}>
    <p class="sentence"><Shape name={found ? 'inside' : 'not delivered'} /><span>{found ? withUnits(proposal.sentence, units)
      : <><b>No plan reaches {percentText(proposal.asked_chance)}.</b> {withUnits(proposal.reason ?? proposal.sentence, units)}</>}</span></p>
    {!found && segments && <p>The best there is: {withUnits(proposal.sentence, units)}</p>}
    {proposal.changes.length > 1 && <ul class="changes">{proposal.changes.map((each) => <li key={each}>{withUnits(each, units)}</li>)}</ul>}
    {(proposal.minutes_more !== null || confirmed) && <p class="cost">
      {proposal.minutes_more !== null && <b>{moreMinutesText(proposal.minutes_more)}</b>}
      {confirmed && <span>confirmed on {confirmed.members.toLocaleString('en')} further draws: {percentText(confirmed.joint_chance)}</span>}
      {outlook && <span>worked out at {clockText(Date.parse(outlook.at))}</span>}</p>}
    {segments && outlook && <><Compared snapshot={snapshot} present={proposal.present} other={outlook} otherName="as proposed" item={item} />
      <div class="use-plan"><button type="button" class="button plain" data-testid="proposal-take" onClick={() => take(segments, Date.parse(outlook.at))}>Change it further</button>
        <UsePlan id="proposal-use" snapshot={snapshot} segments={segments} atMs={Date.parse(outlook.at)} revision={proposal.revision} ready used={used} again={again} /></div></>}
  </div>;
}
