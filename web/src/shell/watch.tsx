// How many alerts there are and whether this screen sounds. Stands in the Floor's and the alerts' heading; on other
// pages only while somebody should come.
import { useRef } from 'preact/hooks';
import { countWords, worstOf } from '../alert_words.ts';
import { live, pulse } from '../live.ts';
import type { MarkShape } from '../marks.ts';
import { Shape, severityShape } from '../pictures/mark_shape.tsx';
import { type SoundPrefs, prefs } from '../prefs.ts';
import { alertsLink } from '../routes.ts';
import { type SoundState, endSilence, play, setSound, silence, soundState, unlock } from '../sound.ts';
import { useStore } from '../store.ts';
import { clockText } from '../words.ts';

export function Watch({ quiet = false }: { quiet?: boolean }) {
  const { floor } = useStore(live);
  const state = useStore(soundState);
  useStore(pulse);
  const { sound } = useStore(prefs);
  const counts = floor?.alerts;
  if (!counts || (quiet && counts.unacknowledged === 0 && state !== 'sounding')) return null;
  const worst = worstOf(floor);
  const call = counts.unacknowledged > 0 && worst !== null;
  return <div class="watch" role="group" aria-label="Alerts and sound">
    <a class={`watch-count ${call ? `calls ${worst}` : ''}`} href={alertsLink()} data-testid="alert-count">
      <Shape name={worst ? severityShape(worst) : 'all clear'} /><span>{call && <b>{worst}</b>} {countWords(counts.active, counts.unacknowledged)}</span></a>
    <Sound state={state} sound={sound} />
  </div>;
}

const shapes: Record<SoundState, MarkShape> = { off: 'sound off', blocked: 'touch', quiet: 'sound on', silenced: 'silenced', sounding: 'sounding' };
function stateWords(state: SoundState, sound: SoundPrefs): string {
  if (state === 'off') return 'sound off here';
  if (state === 'blocked') return 'Sound is off until you touch here';
  if (state === 'silenced') return `silenced to ${clockText(sound.untilMs)}`;
  return state === 'sounding' ? 'sounding' : `sound on: ${sound.from === 'urgent' ? 'urgent only' : 'urgent and warning'}`;
}

function Sound({ state, sound }: { state: SoundState; sound: SoundPrefs }) {
  const dialog = useRef<HTMLDialogElement>(null);
  const words = stateWords(state, sound);
  // Any touch lets the page sound, so by the time of the click the state may be another than the one that was touched.
  const touched = useRef<SoundState>(state);
  const touch = () => { touched.current = state; };
  const press = () => {
    const was = touched.current;
    touched.current = 'quiet';
    if (state === 'blocked' || was === 'blocked') void unlock().then(() => play('warning'));
    else dialog.current?.showModal();
  };
  return <>
    {state === 'sounding' && <button type="button" class="button" data-testid="silence" onClick={silence}><Shape name="silenced" />Silence 10 min</button>}
    <button type="button" class={`sound ${state}`} data-testid="sound" data-state={state} onPointerDown={touch} onKeyDown={touch} onClick={press} aria-label={state === 'blocked' ? words : `${words}. Press to change.`}><Shape name={shapes[state]} />{words}</button>
    <dialog ref={dialog} class="ask" aria-labelledby="sound-title"><div class="stack">
      <h2 id="sound-title">Sound of this screen</h2>
      <div class="pick" role="group" aria-label="What sounds here">
        <button type="button" class="button plain" data-testid="sound-warning" aria-pressed={sound.on && sound.from === 'warning'} onClick={() => turn({ on: true, from: 'warning' })}>Urgent and warning</button>
        <button type="button" class="button plain" data-testid="sound-urgent" aria-pressed={sound.on && sound.from === 'urgent'} onClick={() => turn({ on: true, from: 'urgent' })}>Urgent only</button>
        <button type="button" class="button plain" data-testid="sound-off" aria-pressed={!sound.on} onClick={() => turn({ on: false })}>Off</button>
      </div>
      <p class="hint">Sounds while such an alert is neither acknowledged nor shelved. Kept on this screen only.</p>
      <p class="buttons">
        {state === 'silenced' && <button type="button" class="button plain" onClick={endSilence}>End the silence</button>}
        {sound.on && <button type="button" class="button plain" onClick={() => play(sound.from)}>Hear it once</button>}
        <button type="button" class="button" data-testid="sound-close" onClick={() => dialog.current?.close()}>Done</button></p>
      <p class="hint">Silence lasts 10 min and covers the alerts there are. A new one, or one that becomes worse, sounds at once.</p>
    </div></dialog>
  </>;
}

function turn(change: { on: boolean; from?: 'warning' | 'urgent' }): void {
  setSound(change);
  if (change.on) void unlock();
}

// For the navigation: the count of what is not acknowledged, with the shape of the worst.
export function AlertBadge() {
  const { floor } = useStore(live);
  const counts = floor?.alerts;
  const worst = worstOf(floor);
  if (!counts || counts.unacknowledged === 0 || !worst) return null;
  return <span class="badge"><Shape name={severityShape(worst)} />{counts.unacknowledged}<span class="aside"> not acknowledged</span></span>;
}
