// A document asked for now and again at a slow beat while the page is looked at. An answer that fails leaves
// the last good one in place, beside the sentence that says so.
import { useEffect, useRef, useState } from 'preact/hooks';
import { moment, msSince } from './elapsed.ts';
import { sentenceOf } from './http.ts';
import { pulse } from './live.ts';

export interface Asked<T> { value: T | null; problem: string | null; again: () => void }

export function useAsked<T>(ask: () => Promise<T>, everyMs: number, key: string): Asked<T> {
  const [got, setGot] = useState<{ value: T | null; problem: string | null }>({ value: null, problem: null });
  const again = useRef(() => undefined as void);
  useEffect(() => {
    let gone = false, asking = false, asked = moment();
    const run = async () => {
      if (asking) return;
      asking = true;
      asked = moment();
      try {
        const value = await ask();
        if (!gone) setGot({ value, problem: null });
      } catch (error) {
        if (!gone) setGot((before) => ({ ...before, problem: sentenceOf(error) }));
      } finally {
        asking = false;
      }
    };
    setGot({ value: null, problem: null });
    again.current = () => void run();
    void run();
    const deaf = pulse.listen(() => { if (!document.hidden && msSince(asked) > everyMs - 200) void run(); });
    return () => { gone = true; deaf(); };
  }, [key]);
  return { ...got, again: () => again.current() };
}
