// One small drawing for each mark. Drawn in the colour of the text beside it; never shown without its word.
// The four standings show what the strip shows: the window as a frame, the outlook as its diamond, surface at the left.
// A severity has as many bars as it is urgent, the most urgent on a full block.
import type { Severity } from '../contract_alerts.ts';
import type { MarkShape } from '../marks.ts';

const lines: Record<MarkShape, string> = {
  'no load': 'M4 9v14h20V9',                                   // an empty tray
  'no data yet': 'M4 14h.01M14 14h.01M24 14h.01',              // dots where a trace should be
  stale: 'M2 17l4-8 5 11 4-7h3M22 4v20',                       // a trace that stops at a wall
  held: 'M2 14a4 4 0 1 0 8 0a4 4 0 1 0-8 0M10 14h16',            // one reading, drawn out flat
  planned: 'M1 23h7M11 23h3v-5M14 14V8h4M21 8h6',              // a broken staircase: the recipe, not the furnace
  'past window': 'M3 14V7h13v7M23 3v22',                       // a bar beyond its bracket
  overdue: 'M14 3a11 11 0 1 0 11 11M14 7v7l8-5',               // a dial run past its end
  'outside range': 'M4 4v20h20M8 12l8-4M20 4l6-2M16 20l6-8',   // points off the paper
  ended: 'M4 9v14h20V9zM9 16l4 4 7-9',                         // a closed tray
  away: 'M2 14h8M10 7v14M18 7v14M18 14h8',                     // a line pulled apart
  note: 'M5 4h13l5 5v15H5zM10 13h8M10 18h8',                   // a written sheet
  masked: 'M6 4v20M13 4v20M20 4v20M2 24h24',                    // bars in front of a stretch
  unsure: 'M9 9a5 5 0 1 1 7 5l-2 2v3M14 23v3',                 // a question
  disagree: 'M2 14h6l16-9M8 14l16 9',                           // one trace that becomes two
  cancelled: 'M4 9v14h20V9M8 5l12 12M20 5L8 17',               // a tray struck out
  good: 'M2 16l6-4 6 3 6-4 6 2',                               // a trace
  silent: 'M2 16l5-4 4 3M14 14h2.5M19 14h2.5M24 14h2.5',        // a trace that ends in dots
  gap: 'M2 16l6-4M20 14l6-3M11 8v12M17 8v12',                  // a trace with a piece taken out
  stuck: 'M2 9l5 5h19M26 9v10',                                // a trace gone flat
  noisy: 'M2 14l3-8 3 16 4-18 4 19 4-15 3 9 3-6',              // a trace all over the place
  jumping: 'M2 21h9V7h9v14h6',                                 // a trace in steps
  drifting: 'M2 22l24-14M19 6h7v7M2 14h14',                    // a trace that leaves its line
  demo: 'M4 4h6M14 4h6M24 4v6M24 14v6M24 24h-6M14 24H8M4 24v-6M4 14V8',  // a dashed frame: not the real thing
  inside: 'M4 4h20v20H4zM14 8.5l5 5.5l-5 5.5l-5-5.5z',         // the diamond in its window
  shallow: 'M18 4h8v20h-8zM8 8l5.2 6L8 20l-5.2-6z',            // before it
  deep: 'M2 4h8v20H2zM20 8l5.2 6L20 20l-5.2-6z',               // beyond it
  undecided: 'M14 2v24M14 6.5l9 7.5l-9 7.5l-9-7.5z',           // across the edge
  urgent: 'M1 1h26v26H1zM5.5 6v16h4V6zM12 6v16h4V6zM18.5 6v16h4V6z',
  warning: 'M2.5 2.5h23v23h-23zM10.3 8v12M17.7 8v12',
  notice: 'M2.5 2.5h23v23h-23zM14 8v12',
  acknowledged: 'M3 15l7 8L25 5',                              // a tick
  shelved: 'M2 22h24M6 22V9h7v13M15 22l3-13l7 2l-3 11',         // things on a shelf
  waiting: 'M6 3h16M6 25h16M8 3c0 8 12 14 12 22M20 3c0 8-12 14-12 22',
  delivered: 'M2 14h15M11 7l7 7l-7 7M24 4v20',                 // arrived
  'not delivered': 'M2 14h9M5 7l7 7l-7 7M16 4v7M16 17v7M21 9l6 10M27 9l-6 10',
  'sound on': 'M3 10v8h5l7 6V4l-7 6zM20 9c3 3 3 7 0 10',
  'sound off': 'M3 10v8h5l7 6V4l-7 6zM20 10l7 8M27 10l-7 8',
  sounding: 'M3 10v8h5l7 6V4l-7 6zM19 9c3 3 3 7 0 10M23 5c5 5 5 13 0 18',
  silenced: 'M3 10v8h5l7 6V4l-7 6zM21 8v12M25 8v12',
  touch: 'M9 26V8a3 3 0 0 1 6 0v8l8 2v8M2 9a9 9 0 0 1 20 0',    // a finger
  'by hand': 'M3 20h22M8 20V8M14 20V8M20 20V8M5 12h6M11 16h6M17 10h6',  // the controller's own settings
  'all clear': 'M2 14h24',
};
const solid: ReadonlySet<MarkShape> = new Set(['urgent']);
const filled: ReadonlySet<MarkShape> = new Set(['shallow', 'deep']);  // its last piece: the diamond of a miss
export const severityShape = (severity: Severity): MarkShape => (severity === 'note' ? 'notice' : severity);

const heavy: Partial<Record<MarkShape, number>> = { 'no data yet': 6 };

export function Shape({ name }: { name: MarkShape }) {
  const drawn = lines[name];
  return <svg class="shape" viewBox="0 0 28 28" aria-hidden="true" focusable="false">
    {filled.has(name) && <path d={drawn.slice(drawn.lastIndexOf('M'))} fill="currentColor" />}
    {solid.has(name) ? <path d={drawn} fill="currentColor" fill-rule="evenodd" /> : <path d={drawn} fill="none" stroke="currentColor" stroke-width={heavy[name] ?? 3.2} stroke-linecap={heavy[name] ? 'round' : 'butt'} stroke-linejoin="miter" />}
  </svg>;
}
