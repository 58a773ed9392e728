// Keeps the Floor current: one event stream, a poll wherever the stream is silent, and the plain statement
// that the daemon is away when neither brought an answer for ten seconds. Owner: main.tsx, one per page.
// Failure looks like: link 'away' with the last good Floor kept beside the time it was received.
import { ApiProblem, getFloor, type Floor } from './api.ts';
import { ArrivalOrder } from './arrival_order.ts';
import { type Moment, moment, msSince } from './elapsed.ts';
import { Store } from './store.ts';
import { StreamTurn } from './stream_turn.ts';

export type Link = 'starting' | 'stream' | 'polling' | 'catching up' | 'away';
export interface Live { floor: Floor | null; received: Moment; link: Link; trouble: string | null }

const awayAfterMs = 10_000;
const pollEveryMs = 2_000;         // without a stream
const askWhenSilentMs = 4_000;     // with one: its heartbeat is invisible to a page, so silence is checked by asking
const streamDeadAfterMs = 40_000;  // asking works but the stream says nothing: open it again
const streamRetryMs = 12_000;      // after a refusal (the daemon caps its streams)
const hiddenGraceMs = 60_000;      // a hidden tab keeps its stream so long
const wakeGraceMs = 5_000;         // after being hidden: time to catch up before calling the daemon away

export const live = new Store<Live>({ floor: null, received: moment(), link: 'starting', trouble: null });
export const pulse = new Store(Date.now());  // moves once a second: ages and clocks redraw on it
export const loadMoved = new Store<{ id: number; sequence: number }>({ id: 0, sequence: 0 });
export const alertsMoved = new Store<{ sequence: number }>({ sequence: 0 });

type Passed = { kind: 'floor'; floor: Floor } | { kind: 'load'; id: number; sequence: number } | { kind: 'alerts'; sequence: number };

export class Feed {
  private heard_ = moment();
  private asked_ = moment();
  private woke_ = moment();
  private hidden_: Moment | null = null;
  private streamHeard_: Moment | null = null;
  private streamOpened_ = moment();
  private streamRefused_: Moment | null = null;
  private stream_: EventSource | null = null;
  private asking_ = false;
  private readonly order_ = new ArrivalOrder();
  private readonly turn_ = new StreamTurn();
  private readonly others_ = 'BroadcastChannel' in globalThis ? new BroadcastChannel('hearthfront.live') : null;

  start(): void {
    if (this.others_) this.others_.onmessage = (event: MessageEvent<Passed>) => this.take_(event.data);
    document.addEventListener('visibilitychange', () => this.visibility_());
    setInterval(() => this.tick_(), 1000);
    void this.ask_();
    this.turn_.request(() => this.openStream_());
  }

  private visibility_(): void {
    if (document.hidden) {
      this.hidden_ = moment();
      return;
    }
    this.hidden_ = null;
    this.woke_ = moment();
    this.turn_.request(() => this.openStream_());
    void this.ask_();
    this.tick_();
  }

  private tick_(): void {
    if (this.hidden_ && msSince(this.hidden_) > hiddenGraceMs) {
      this.closeStream_();
      this.turn_.release();
    }
    if (!document.hidden) this.keepAsking_();
    this.judge_();
    pulse.set(Date.now());
  }

  private keepAsking_(): void {
    const patience = live.get().link === 'stream' ? askWhenSilentMs : pollEveryMs - 100;
    if (msSince(this.heard_) > patience && msSince(this.asked_) > pollEveryMs - 100) void this.ask_();
    if (this.streamRefused_ && msSince(this.streamRefused_) > streamRetryMs) this.openStream_();
    const silent = Math.min(msSince(this.streamOpened_), this.streamHeard_ ? msSince(this.streamHeard_) : Infinity);
    if (this.stream_ && silent > streamDeadAfterMs && msSince(this.heard_) < awayAfterMs) this.openStream_();
  }

  private judge_(): void {
    const before = live.get();
    let link: Link = before.link;
    if (msSince(this.heard_) > awayAfterMs) link = msSince(this.woke_) > wakeGraceMs ? 'away' : 'catching up';
    else if (before.floor) link = this.streamHeard_ && msSince(this.streamHeard_) < awayAfterMs ? 'stream' : 'polling';
    if (link === 'away' && before.link !== 'away') this.order_.forget();
    if (link !== before.link) live.set({ ...before, link });
  }

  private async ask_(): Promise<void> {
    if (this.asking_) return;
    this.asking_ = true;
    this.asked_ = moment();
    try {
      this.accept_(await getFloor(5000));
    } catch (error) {
      const said = error instanceof ApiProblem && error.answered ? error.message : null;
      if (said !== live.get().trouble) live.set({ ...live.get(), trouble: said });
    } finally {
      this.asking_ = false;
      this.judge_();
    }
  }

  private openStream_(): void {
    this.closeStream_();
    this.streamOpened_ = moment();
    const stream = new EventSource('/api/v1/events');
    this.stream_ = stream;
    stream.onopen = () => this.order_.forget();
    stream.onerror = () => {
      if (stream.readyState !== EventSource.CLOSED || this.stream_ !== stream) return;  // else it reconnects by itself
      this.closeStream_();
      this.streamRefused_ = moment();
    };
    stream.addEventListener('floor', (event) => this.fromStream_(() => ({ kind: 'floor', floor: JSON.parse(event.data) as Floor })));
    stream.addEventListener('alerts', (event) => this.fromStream_(() => ({ kind: 'alerts', ...JSON.parse(event.data) as { sequence: number } })));
    stream.addEventListener('load', (event) => this.fromStream_(() => ({ kind: 'load', ...JSON.parse(event.data) as { id: number; sequence: number } })));
  }

  private closeStream_(): void {
    this.stream_?.close();
    this.stream_ = null;
    this.streamRefused_ = null;
  }

  private fromStream_(read: () => Passed): void {
    let passed: Passed;
    try { passed = read(); } catch { return; }  // a torn event: the next one, or the poll, sets it right
    this.others_?.postMessage(passed);
    this.take_(passed);
  }

  private take_(passed: Passed): void {
    this.streamHeard_ = moment();
    if (passed.kind === 'floor') this.accept_(passed.floor);
    else if (passed.kind === 'alerts') {
      alertsMoved.set({ sequence: passed.sequence });
      void this.ask_();  // counts and marks of the Floor, and with them the sound, follow at once
    } else loadMoved.set({ id: passed.id, sequence: passed.sequence });
    this.judge_();
  }

  private accept_(floor: Floor): void {
    this.heard_ = moment();
    if (this.order_.accepts(floor)) live.set({ ...live.get(), floor, received: this.heard_, trouble: null });
  }
}

// The daemon's clock now: its last word carried on at its own speed.
export function daemonNowMs({ floor, received }: Live): number {
  return floor ? Date.parse(floor.now) + msSince(received) * floor.clock_speed : Date.now();
}
// Whether figures on the screen may still be called current.
export const isCurrent = ({ link }: Live): boolean => link === 'stream' || link === 'polling';
