// One load's snapshot and history, kept current: asked again when the stream says that the load moved, and
// at a slow beat besides. A snapshot that is only confirmed (304) keeps its figures and counts as heard.
import { useEffect, useRef, useState } from 'preact/hooks';
import { ApiProblem, type History, type Snapshot, getHistory, getSnapshot } from './api.ts';
import { ArrivalOrder } from './arrival_order.ts';
import { type Moment, moment, msSince } from './elapsed.ts';
import { live, loadMoved, pulse } from './live.ts';

export interface LoadView {
  snapshot: Snapshot | null;
  received: Moment;    // when the figures came
  confirmed: Moment;   // when the daemon last said that they still hold
  history: History | null;
  problem: string | null;
}

const beatWithStreamMs = 5000, beatWithoutMs = 2000, historyEveryMs = 5000;
const beatWhileTroubledMs = 1000;  // a load just started or just ended is worked out within a second or two

export function useLoad(id: number): [LoadView, () => void] {
  const [view, setView] = useState<LoadView>({ snapshot: null, received: moment(), confirmed: moment(), history: null, problem: null });
  const again = useRef(() => undefined as void);
  useEffect(() => {
    const order = new ArrivalOrder();
    let gone = false, asking = false, askAgain = false, etag: string | null = null;
    let troubled = true, asked = moment(), historyAsked: Moment | null = null, historyFor = -1, sequence = -1;

    const ask = async () => {
      if (asking) { askAgain = true; return; }
      asking = true;
      asked = moment();
      try {
        const got = await getSnapshot(id, etag);
        troubled = false;
        if (gone) return;
        const at = moment();
        if (got.value && order.accepts(got.value)) {
          etag = got.etag;
          sequence = got.value.sequence;
          const snapshot = got.value;
          setView((before) => ({ ...before, snapshot, received: at, confirmed: at, problem: null }));
        } else if (got.notModified) {
          setView((before) => ({ ...before, confirmed: at, problem: null }));
        }
        await askHistory();
      } catch (error) {
        order.forget();
        troubled = true;
        if (!gone) setView((before) => ({ ...before, problem: error instanceof ApiProblem && error.answered ? error.message : null }));
      } finally {
        asking = false;
        if (askAgain && !gone) { askAgain = false; void ask(); }
      }
    };
    const askHistory = async () => {
      if (sequence === historyFor || (historyAsked && msSince(historyAsked) < historyEveryMs)) return;
      historyAsked = moment();
      historyFor = sequence;
      const history = await getHistory(id);
      if (!gone) setView((before) => ({ ...before, history }));
    };

    const beatMs = () => (troubled ? beatWhileTroubledMs : live.get().link === 'stream' ? beatWithStreamMs : beatWithoutMs);
    again.current = () => { etag = null; historyFor = -1; historyAsked = null; void ask(); };
    void ask();
    const deaf = [
      loadMoved.listen((moved) => { if (moved.id === id && moved.sequence !== sequence && msSince(asked) > 900) void ask(); }),
      pulse.listen(() => { if (!document.hidden && msSince(asked) > beatMs() - 200) void ask(); }),
    ];
    return () => { gone = true; deaf.forEach((stop) => stop()); };
  }, [id]);
  return [view, () => again.current()];
}
