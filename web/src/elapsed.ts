// How long ago something was, for deciding that a figure is old. Two clocks are read and the larger
// answer counts: the steady one stands still while some tablets sleep, the wall clock may be set. An age
// that is too large for a second is harmless; one that is too small would show an old figure as current.
export interface Moment { steadyMs: number; wallMs: number }

export const moment = (): Moment => ({ steadyMs: performance.now(), wallMs: Date.now() });

export function msSince(then: Moment, now: Moment = moment()): number {
  return Math.max(0, now.steadyMs - then.steadyMs, now.wallMs - then.wallMs);
}
