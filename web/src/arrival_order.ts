// Decides whether a Floor document that has just arrived may replace the one shown. Answers to polls and
// events of the stream come by separate connections, so an older one can arrive last.
//
// A document is older when both its sequence and its time lie before those of the one shown. Three older
// ones in a row mean that the daemon itself has gone back (restarted with another clock): then they count.
export interface Stamp { sequence: number; now: string }

const patience = 3;

export class ArrivalOrder {
  private shown_: { sequence: number; nowMs: number } | null = null;
  private refused_ = 0;

  accepts(stamp: Stamp): boolean {
    const nowMs = Date.parse(stamp.now);
    const older = this.shown_ !== null && stamp.sequence < this.shown_.sequence && nowMs <= this.shown_.nowMs;
    if (older && ++this.refused_ < patience) return false;
    this.refused_ = 0;
    this.shown_ = { sequence: stamp.sequence, nowMs };
    return true;
  }

  // After a break in contact whatever comes first is the truth.
  forget(): void {
    this.shown_ = null;
    this.refused_ = 0;
  }
}
