// A gas that hovers at a limit leaves a note for each moment: people want one line for each kind and item.
import type { Snapshot } from './contract.ts';

type Note = Snapshot['notes'][number];
export interface NoteGroup { kind: string; item: string; text: string; from: string; to: string; times: number; minutes: number }

export function groupedNotes(notes: Note[]): NoteGroup[] {
  const groups = new Map<string, NoteGroup>();
  for (const { kind, item, text, from, to } of notes) {
    const minutes = (Date.parse(to) - Date.parse(from)) / 60_000;
    const group = groups.get(`${kind}/${item}`);
    if (group) {
      group.to = to;
      group.times += 1;
      group.minutes += minutes;
    } else {
      groups.set(`${kind}/${item}`, { kind, item: item ?? '', text, from, to, times: 1, minutes });
    }
  }
  return [...groups.values()];
}
