// Ending a load is asked twice: a dialog with the name and the time. It ends the record, not the furnace.
import { useRef, useState } from 'preact/hooks';
import { ApiProblem, type Snapshot, endLoad } from '../api.ts';
import { daemonNowMs, live, pulse } from '../live.ts';
import { Shape } from '../pictures/mark_shape.tsx';
import { prefer, prefs } from '../prefs.ts';
import { useStore } from '../store.ts';
import { localInput, utcFromLocalInput } from '../words.ts';

export function EndLoad({ snapshot, again }: { snapshot: Snapshot; again: () => void }) {
  const dialog = useRef<HTMLDialogElement>(null);
  const [person, setPerson] = useState(prefs.get().person);
  const [time, setTime] = useState<string | null>(null);  // null: now, whenever the button is pressed
  const [busy, setBusy] = useState(false);
  const [problem, setProblem] = useState<string | null>(null);
  useStore(pulse);
  const end = async (event: Event) => {
    event.preventDefault();
    const at = time === null ? undefined : utcFromLocalInput(time);
    if (at === null) { setProblem('The time is not complete. Enter day and time, or press "now".'); return; }
    setBusy(true);
    try {
      await endLoad(snapshot.load.id, person.trim(), at);
      prefer({ person: person.trim() });
      dialog.current?.close();
      again();
    } catch (error) {
      setProblem(error instanceof ApiProblem ? error.message : String(error));
    } finally {
      setBusy(false);
    }
  };
  return <>
    <button type="button" class="button plain" data-testid="end-open" onClick={() => { setProblem(null); dialog.current?.showModal(); }}>End load</button>
    <dialog ref={dialog} class="ask" aria-labelledby="end-title">
      <form onSubmit={end} noValidate>
        <h2 id="end-title">End load {snapshot.load.name}?</h2>
        <p>The load has left the hot chamber of {snapshot.load.furnace_name}. hearthfront closes its record; the furnace itself is not touched.</p>
        <label>Your name<input type="text" maxLength={80} autocomplete="off" data-testid="end-person" value={person} onInput={(event) => setPerson(event.currentTarget.value)} /></label>
        <label>Left the hot chamber at<span class="with-button"><input type="datetime-local" value={time ?? localInput(daemonNowMs(live.get()))} onInput={(event) => setTime(event.currentTarget.value)} />
          <button type="button" class="button plain" aria-pressed={time === null} onClick={() => setTime(null)}>now</button></span></label>
        {problem && <p class="said" role="alert"><Shape name="note" />{problem}</p>}
        <p class="buttons"><button type="button" class="button plain" onClick={() => dialog.current?.close()}>Keep it open</button>
          <button class="button" data-testid="end-confirm" disabled={busy}>End load {snapshot.load.name}</button></p>
      </form>
    </dialog>
  </>;
}
