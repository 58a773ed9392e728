// One event stream per browser, however many tabs are open: the tab that holds the browser-wide lock reads
// the stream and passes each event on to the others. Where the browser offers no locks (pages served
// without TLS from another machine) every tab reads a stream of its own, which works as well and costs more.
const lockName = 'hearthfront.stream';

export class StreamTurn {
  private giveBack_: (() => void) | null = null;
  private waiting_: AbortController | null = null;

  // onTurn is called once this tab may open the stream; it stays allowed until release().
  request(onTurn: () => void): void {
    if (this.giveBack_ || this.waiting_) return;
    if (!('locks' in navigator) || !navigator.locks) {
      this.giveBack_ = () => undefined;
      onTurn();
      return;
    }
    const waiting = new AbortController();
    this.waiting_ = waiting;
    navigator.locks.request(lockName, { signal: waiting.signal }, () => new Promise<void>((resolve) => {
      this.waiting_ = null;
      this.giveBack_ = resolve;
      onTurn();
    })).catch(() => undefined);  // only the abort of release() ends here
  }

  release(): void {
    this.waiting_?.abort();
    this.waiting_ = null;
    this.giveBack_?.();
    this.giveBack_ = null;
  }
}
