import assert from 'node:assert/strict';
import { test } from 'node:test';
import { groupedNotes } from '../src/note_groups.ts';

const note = (kind: string, item: string, from: string, to: string) => ({ kind, item, text: `${kind}.`, from: `2026-03-02T${from}:00Z`, to: `2026-03-02T${to}:00Z` });

test('a limit that was met again and again is one line, with how often and how long in all', () => {
  const groups = groupedNotes([note('capped', 'A', '01:00', '01:02'), note('capped', 'B', '01:01', '01:02'), note('capped', 'A', '02:00', '02:05')]);
  assert.equal(groups.length, 2);
  assert.deepEqual(groups[0], { kind: 'capped', item: 'A', text: 'capped.', from: '2026-03-02T01:00:00Z', to: '2026-03-02T02:05:00Z', times: 2, minutes: 7 });
  assert.equal(groups[1]!.times, 1);
});
