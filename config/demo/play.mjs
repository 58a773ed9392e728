#!/usr/bin/env node
// Plays the people of the INVENTED demo plant over the public API: puts loads in when their data time comes (and
// those already begun), leaves a shift note, ends each load on time or at the end of the plan that somebody adopted
// for it. Follows the daemon's own clock. May be stopped and started at will: what is already there is left alone.
// Needs node 18 or newer.
//
//   node play.mjs --url http://127.0.0.1:8473 --schedule FOLDER/schedule.json [--clock-file FILE]
//
// --clock-file keeps the last data time seen, so that a restarted demo goes on from there. Exit: 0 stopped by a
// signal or at the end of the schedule, 2 wrong words.

import { readFileSync, renameSync, writeFileSync } from 'node:fs';
import { setTimeout as sleep } from 'node:timers/promises';
import { Refused, client, endOf, keyOf, knownLoads, options, stopSignal } from './api.mjs';

const POLL_MS = 1000;

const NOTES = [
  { after_min: 95, person: 'Early shift', text: 'Invented note: charge fans quiet, seal pot topped up.' },
  { after_min: 190, person: 'Late shift', text: 'Invented note: foil taken at the sample port, sent to the lab.' },
];

async function writeNotes(api, entry, state, now_ms) {
  const due = NOTES.filter((note) => now_ms >= Date.parse(entry.body.started_at) + note.after_min * 60000);
  if (!due.length || state.noted >= due.length) return;
  if (state.noted === undefined) {
    const snapshot = await api('GET', `/api/v1/loads/${state.id}/snapshot`);
    const texts = new Set((snapshot.shift_notes ?? []).map((note) => note.text));
    state.noted = NOTES.filter((note) => texts.has(note.text)).length;
  }
  for (; state.noted < due.length; state.noted++) {
    const { person, text } = due[state.noted];
    await api('POST', `/api/v1/loads/${state.id}/notes`, { person, text });
  }
}

async function actOn(api, entry, known, now_ms) {
  const key = keyOf(entry.body);
  if (!known.has(key)) {
    const load = await api('POST', '/api/v1/loads', entry.body);
    known.set(key, { id: load.id, state: 'open', noted: 0 });
    console.log(`Load ${entry.body.name} is in ${entry.body.furnace} (${entry.body.recipe.name}).`);
  }
  const state = known.get(key);
  if (state.state !== 'open') return;
  await writeNotes(api, entry, state, now_ms);
  await move(api, entry, state, now_ms);
  // The push signal takes trays out; nobody ends them by hand.
  if (entry.pushed) return;
  // Looked at each time: a plan may shorten a load as well.
  const end_ms = endOf((await api('GET', `/api/v1/loads/${state.id}`)).definition, entry.ended_at);
  if (now_ms >= end_ms) {
    const end = { person: entry.body.person, ended_at: new Date(end_ms).toISOString() };
    await api('POST', `/api/v1/loads/${state.id}/end`, end);
    state.state = 'ended';
    console.log(`Load ${entry.body.name} is out of ${entry.body.furnace}.`);
  }
}

async function move(api, entry, state, now_ms) {
  const due = (entry.moves ?? []).filter((each) => now_ms >= Date.parse(each.at));
  if (!due.length || state.moved >= due.length) return;
  if (state.moved === undefined) state.moved = (await api('GET', `/api/v1/loads/${state.id}`)).definition.path.length - 1;
  for (; state.moved < due.length; state.moved++) {
    const { at, chamber } = due[state.moved];
    await api('POST', `/api/v1/loads/${state.id}/move`, { person: entry.body.person, at, chamber });
    console.log(`Load ${entry.body.name} moved to ${chamber}.`);
  }
}

// One look at the clock: does what has come due. In order of start, so that a chamber is emptied before it is
// filled. What the daemon refuses is told once and left: a visitor may have put in or ended a load by hand.
async function act(api, plan, known, now_ms) {
  for (const entry of plan.loads) {
    if (now_ms < Date.parse(entry.body.started_at)) continue;
    try {
      await actOn(api, entry, known, now_ms);
    } catch (error) {
      if (!(error instanceof Refused) || error.status >= 500) throw error;
      // The push that makes room has not been followed yet.
      if (entry.pushed && error.status === 409) return;
      console.error(`play: load ${entry.body.name} is left alone, the daemon says ${error.message}`);
      known.set(keyOf(entry.body), { state: 'left alone' });
    }
  }
}

function keepClock(file, now) {
  if (!file) return;
  writeFileSync(`${file}.part`, now + '\n');
  renameSync(`${file}.part`, file);
}

async function main() {
  const chosen = options(process.argv.slice(2), ['url', 'schedule'], ['clock-file']);
  const plan = JSON.parse(readFileSync(chosen.schedule, 'utf8'));
  plan.loads.sort((a, b) => Date.parse(a.body.started_at) - Date.parse(b.body.started_at));
  const api = client(chosen.url.replace(/\/$/, ''));
  const stop = stopSignal();
  let known = null;
  let told = '';
  while (!stop.aborted) {
    try {
      const status = await api('GET', '/api/v1/status');
      known ??= await knownLoads(api);
      await act(api, plan, known, Date.parse(status.now));
      keepClock(chosen['clock-file'], status.now);
      told = '';
      if (Date.parse(status.now) > Date.parse(plan.end)) {
        console.log('The demo logs are at their end. Start the demo again for new ones.');
        return 0;
      }
    } catch (error) {
      if (stop.aborted) break;
      known = null; // after a restart of the daemon, look again at what it has
      const text = error instanceof Refused ? error.message : `the daemon does not answer (${error.message})`;
      if (text !== told) console.error(`play: ${text}. Trying again.`);
      told = text;
    }
    await sleep(POLL_MS, undefined, { signal: stop }).catch(() => {});
  }
  return 0;
}

main().then(
  (code) => process.exit(code),
  (error) => {
    console.error(`play: ${error.message}`);
    process.exit(2);
  },
);
