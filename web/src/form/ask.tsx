// A question in a dialog: what is going to happen, who does it, and two answers. Stays open with the daemon's
// words where it is refused; what was entered stays.
import type { ComponentChildren } from 'preact';
import { useRef, useState } from 'preact/hooks';
import { sentenceOf } from '../http.ts';
import { daemonNowMs, live, pulse } from '../live.ts';
import { Shape } from '../pictures/mark_shape.tsx';
import { prefer, prefs } from '../prefs.ts';
import { useStore } from '../store.ts';
import { localInput, utcFromLocalInput } from '../words.ts';

interface AskProps {
  id: string;                 // of the tests' handles: <id>-open, <id>-person, <id>-confirm
  label: string;
  title: string;
  confirm: string;
  keep: string;
  act: (person: string) => Promise<void>;
  onOpen?: () => void;
  ready?: boolean;
  children?: ComponentChildren;
}

export function Ask({ id, label, title, confirm, keep, act, onOpen, ready = true, children }: AskProps) {
  const dialog = useRef<HTMLDialogElement>(null);
  const [person, setPerson] = useState(prefs.get().person);
  const [busy, setBusy] = useState(false);
  const [problem, setProblem] = useState<string | null>(null);
  const open = () => {
    setProblem(null);
    setPerson(prefs.get().person);
    onOpen?.();
    dialog.current?.showModal();
  };
  const send = async (event: Event) => {
    event.preventDefault();
    setBusy(true);
    try {
      await act(person.trim());
      prefer({ person: person.trim() });
      dialog.current?.close();
    } catch (error) {
      setProblem(error instanceof Error && !('problem' in error) ? error.message : sentenceOf(error));
    } finally {
      setBusy(false);
    }
  };
  return <>
    <button type="button" class="button plain" data-testid={`${id}-open`} onClick={open}>{label}</button>
    <dialog ref={dialog} class="ask" aria-labelledby={`${id}-title`}>
      <form onSubmit={send} noValidate>
        <h2 id={`${id}-title`}>{title}</h2>
        {children}
        <label>Your name<input type="text" maxLength={80} autocomplete="off" data-testid={`${id}-person`} value={person} onInput={(event) => setPerson(event.currentTarget.value)} /></label>
        {problem && <p class="said" role="alert"><Shape name="note" />{problem}</p>}
        <p class="buttons"><button type="button" class="button plain" onClick={() => dialog.current?.close()}>{keep}</button>
          <button class="button" data-testid={`${id}-confirm`} disabled={busy || !ready}>{confirm}</button></p>
      </form>
    </dialog>
  </>;
}

// A time that is now unless somebody says otherwise. null is now, whenever the button is pressed.
export function When({ label, time, set }: { label: string; time: string | null; set: (time: string | null) => void }) {
  useStore(pulse);
  return <label>{label}<span class="with-button"><input type="datetime-local" value={time ?? localInput(daemonNowMs(live.get()))} onInput={(event) => set(event.currentTarget.value)} />
    <button type="button" class="button plain" aria-pressed={time === null} onClick={() => set(null)}>now</button></span></label>;
}
export function whenUtc(time: string | null): string | undefined {
  if (time === null) return undefined;
  const utc = utcFromLocalInput(time);
  if (utc === null) throw new Error('The time is not complete. Enter day and time, or press "now".');
  return utc;
}
