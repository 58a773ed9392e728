// Trying another rest of the recipe: change minutes, carbon potential and temperature and see the outlook beside the
// present one. Nothing is changed until somebody uses the plan, and even then only the record is: the furnace's
// controller has to be set by hand.
import { useEffect, useRef, useState } from 'preact/hooks';
import type { Snapshot } from '../api.ts';
import { type RestSegment, type Trial, tryRest } from '../api_outlook.ts';
import { type DraftRest, bodyOf, complete, draftOf, movedTo, plannedFor } from '../draft/rest.ts';
import { NumberField } from '../form/fields.tsx';
import { sentenceOf } from '../http.ts';
import { segmentChanges } from '../outlook_words.ts';
import { Shape } from '../pictures/mark_shape.tsx';
import { prefs } from '../prefs.ts';
import { useStore } from '../store.ts';
import { fromDegc, temperatureName, toDegc, withUnits } from '../units.ts';
import { clockText } from '../words.ts';
import { Compared } from './trial_compared.tsx';
import { ProposalPart } from './trial_proposal.tsx';
import { UsePlan } from './trial_use.tsx';

interface Props { snapshot: Snapshot; item: string; again: () => void }
interface Tried { trial: Trial; segments: RestSegment[]; atMs: number; revision: number }

const settleMs = 700;  // after the last press, before the daemon is asked

export function TrialPanel({ snapshot, item, again }: Props) {
  const units = useStore(prefs);
  const [draft, setDraft] = useState<DraftRest | null>(null);  // null: nothing is being tried
  const [edits, setEdits] = useState(0);
  const [tried, setTried] = useState<Tried | null>(null);
  const [busy, setBusy] = useState(false);
  const [problem, setProblem] = useState<string | null>(null);
  const rest = snapshot.rest ?? [];
  const nowMs = Date.parse(snapshot.outlook?.at ?? snapshot.now);
  const seen = useRef({ draft, nowMs, snapshot });
  seen.current = { draft: draft && movedTo(draft, nowMs), nowMs, snapshot };
  const mine = seen.current.draft ?? draftOf(rest, nowMs);
  const change = (next: DraftRest) => { setDraft(next); setEdits((before) => before + 1); };
  const put = (i: number, part: Partial<RestSegment>) => change({ ...mine, segments: mine.segments.map((each, k) => (k === i ? { ...each, ...part } : each)) });
  const reset = () => { setDraft(null); setTried(null); setProblem(null); setEdits((before) => before + 1); };

  const tenMinutes = Math.floor(nowMs / 600_000);  // what is tried is worked out anew as the plant's time runs

  useEffect(() => {
    if (!seen.current.draft) return undefined;
    let gone = false;
    setBusy(true);
    const timer = setTimeout(() => {
      const { draft: asked, snapshot: of } = seen.current;
      if (!asked || !complete(asked)) { setBusy(false); return; }
      const segments = bodyOf(asked);
      tryRest(of.load.id, segments).then((trial) => { if (!gone) { setTried({ trial, segments, atMs: asked.atMs, revision: of.load.revision }); setProblem(null); } })
        .catch((error: unknown) => { if (!gone) { setTried(null); setProblem(sentenceOf(error)); } })
        .finally(() => { if (!gone) setBusy(false); });
    }, settleMs);
    return () => { gone = true; clearTimeout(timer); };
  }, [edits, snapshot.load.revision, tenMinutes]);

  const changed = draft !== null && (mine.segments.length !== rest.length || mine.segments.some((each) => segmentChanges(each, plannedFor(rest, each.from), units.temperature) !== ''));
  return <section class="panel trial" data-testid="trial">
    <h2>Try a change <small>nothing is changed by trying</small></h2>
    <ProposalPart snapshot={snapshot} item={item} again={again} take={(segments, atMs) => change(movedTo(draftOf(segments, atMs), nowMs))} />
    <h3>The rest of the recipe, from now on</h3>
    <ol class="rest">{mine.segments.map((segment, i) => <li key={segment.from} aria-label={segment.name}>
      <div class="rest-name"><b>{segment.name}</b><small>{i === 0 ? 'what is left of it' : ''}</small><span class="rest-change" data-testid="rest-change">{draft && segmentChanges(segment, plannedFor(rest, segment.from), units.temperature)}</span></div>
      <RestFigures i={i} segment={segment} put={(part) => put(i, part)} />
      <button type="button" class="button plain" disabled={mine.segments.length === 1} aria-label={`Leave out ${segment.name}`} onClick={() => change({ ...mine, segments: mine.segments.filter((_, k) => k !== i) })}>Leave out</button>
    </li>)}</ol>
    {draft && <p class="buttons"><button type="button" class="button plain" data-testid="trial-reset" onClick={reset}>Back to the plan as it is</button></p>}
    <div data-testid="trial-result" class={busy ? 'working' : ''}>
      {busy && <p class="hint" role="status">Working it out …</p>}
      {problem && <p class="said"><Shape name="note" />{problem}</p>}
      {tried && changed && <>
        <p class="sentence" role="status" data-testid="trial-sentence">{withUnits(tried.trial.sentence, units)} <small>worked out at {clockText(Date.parse(tried.trial.at))}</small></p>
        <Compared snapshot={snapshot} present={tried.trial.present} other={tried.trial.outlook} otherName="as tried" item={item} />
        <UsePlan id="trial-use" snapshot={snapshot} segments={tried.segments} atMs={tried.atMs} revision={tried.revision} ready={!busy} used={() => { reset(); again(); }} again={again} />
      </>}
    </div>
  </section>;
}

interface FiguresProps { i: number; segment: RestSegment; put: (part: Partial<RestSegment>) => void }
function RestFigures({ i, segment, put }: FiguresProps) {
  const { temperature } = useStore(prefs);
  const number = (value: number | null): number => value ?? NaN;  // an empty field is no number yet
  return <>
    <NumberField path={`segments[${i}].duration_min`} label="time" unit="min" value={segment.duration_min} set={(value) => put({ duration_min: number(value) })} step={5} base={30} digits={0} />
    <NumberField path={`segments[${i}].carbon_potential_wt_pct`} label="carbon potential" unit="% C" value={segment.carbon_potential_wt_pct} set={(value) => put({ carbon_potential_wt_pct: number(value) })} step={0.05} base={0.8} digits={3} />
    <NumberField path={`segments[${i}].temperature_degc`} label="temperature" unit={temperatureName(temperature)} value={segment.temperature_degc} set={(value) => put({ temperature_degc: number(value) })}
      step={temperature === 'degc' ? 5 : 10} base={temperature === 'degc' ? 900 : 1650} digits={0} show={(degc) => fromDegc(degc, temperature)} read={(shown) => toDegc(shown, temperature)} />
  </>;
}
