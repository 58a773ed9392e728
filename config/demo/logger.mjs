#!/usr/bin/env node
// Writes the log of one furnace of the INVENTED demo plant while the daemon's clock runs, row by row, so that the
// furnace can follow the plans that visitors adopt, as if somebody had set its controller. `hearthfront feed
// --follow` sends the file on. May be stopped and started at will: it computes the furnace again from the start of
// the schedule, finds the bytes that are there already, and goes on. Needs node 18 or newer.
//
//   node logger.mjs --url http://127.0.0.1:8473 --schedule FOLDER/schedule.json --furnace batch-5 --file LOG.csv
//
// LOG.csv.plans keeps from which minute on each plan was followed: rows that were written before somebody adopted
// it stay what they are. Exit: 0 stopped by a signal or at the end of the schedule, 2 wrong words.

import { appendFileSync, existsSync, readFileSync, renameSync, writeFileSync } from 'node:fs';
import { setTimeout as sleep } from 'node:timers/promises';
import { Refused, client, endOf, keyOf, options, stopSignal } from './api.mjs';
import { furnaceRows, headerOf, rowTime } from './furnace_logs.mjs';

const MINUTE_MS = 60000;

// The furnace as far as it has been computed, and the plans it follows.
class LiveLog {
  constructor(schedule, furnace, file) {
    this.furnace = furnace;
    this.file = file;
    this.start_ms = Date.parse(schedule.start);
    this.minutes = Math.round((Date.parse(schedule.end) - this.start_ms) / MINUTE_MS);
    this.minute = 0; // the next to be computed
    this.scheduled = schedule.loads
      .filter(({ body }) => body.furnace === furnace)
      .map(({ body, ended_at }) => ({
        key: keyOf(body),
        name: body.name,
        ended_at,
        start_min: this.minuteOf(body.started_at),
        end_min: this.minuteOf(ended_at),
        segments: body.recipe.segments,
        plans: [],
      }));
    this.loads = [...this.scheduled]; // those that come in; furnaceRows looks at it minute by minute
    this.rows = furnaceRows(furnace, this.loads, this.start_ms, this.minutes, schedule.seed);
    this.followed = existsSync(this.plans_file) ? JSON.parse(readFileSync(this.plans_file, 'utf8')) : [];
    for (const record of this.followed) this.follow(record);
    this.begun = false; // the file has been looked at
  }

  get plans_file() {
    return `${this.file}.plans`;
  }

  get over() {
    return this.minute >= this.minutes;
  }

  minuteOf(time) {
    return (new Date(time).getTime() - this.start_ms) / MINUTE_MS;
  }

  // What the daemon knows of a load: a plan not seen before is followed from the next row on, and kept first, so that
  // a restart computes the same rows.
  learn(key, definition) {
    const load = this.loads.find((one) => one.key === key);
    for (const { from, segments } of definition.plans ?? []) {
      const at_min = this.minuteOf(from);
      const text = JSON.stringify(segments);
      if (load.plans.some((plan) => plan.at_min === at_min && JSON.stringify(plan.segments) === text)) continue;
      if (this.minute >= load.end_min) continue; // the load is out already
      const from_min = Math.max(Math.ceil(at_min), this.minute);
      const end_min = Math.max(from_min, this.minuteOf(endOf({ plans: [{ from, segments }] })));
      const record = { key, at_min, from_min, end_min, segments };
      this.followed.push(record);
      writeFileSync(`${this.plans_file}.part`, JSON.stringify(this.followed, null, 1) + '\n');
      renameSync(`${this.plans_file}.part`, this.plans_file);
      this.follow(record);
      console.log(`Load ${load.name}: the controller of ${this.furnace} is set to the adopted plan.`);
    }
  }

  follow({ key, at_min, from_min, end_min, segments }) {
    const load = this.scheduled.find((one) => one.key === key);
    load.plans.push({ at_min, from_min, segments });
    load.end_min = end_min;
    // A load that should come in before the one in the furnace is out does not come.
    let free_min = -Infinity;
    const coming = this.scheduled.filter((one) => one.start_min >= free_min && (free_min = one.end_min));
    this.loads.splice(0, Infinity, ...coming);
  }

  // Computes and writes the rows whose time has come by `now_ms`. The first time it computes what the file has and
  // leaves that where it is, for somebody may be reading it.
  advance(now_ms) {
    const there = !this.begun && existsSync(this.file) ? readFileSync(this.file, 'utf8') : '';
    let text = this.begun ? '' : headerOf(this.furnace).join('\n') + '\n';
    const due = () => rowTime(this.furnace, this.start_ms, this.minute) <= now_ms || text.length < there.length;
    while (!this.over && due()) {
      text += this.rows.next().value.row + '\n';
      this.minute++;
    }
    this.begun = true;
    if (!text.startsWith(there)) writeFileSync(this.file, text); // not this furnace's log: begun anew
    else if (text.length > there.length) appendFileSync(this.file, text.slice(there.length));
  }
}

async function main() {
  const chosen = options(process.argv.slice(2), ['url', 'schedule', 'furnace', 'file']);
  const log = new LiveLog(JSON.parse(readFileSync(chosen.schedule, 'utf8')), chosen.furnace, chosen.file);
  const api = client(chosen.url.replace(/\/$/, ''));
  const stop = stopSignal();
  let told = '';
  let pause_ms = 1000;
  while (!stop.aborted) {
    try {
      const status = await api('GET', '/api/v1/status');
      const own = new Set(log.loads.map((load) => load.key));
      const open = await api('GET', `/api/v1/loads?state=open&limit=100&furnace=${chosen.furnace}`);
      for (const load of open.loads.filter((one) => own.has(keyOf(one)))) {
        log.learn(keyOf(load), (await api('GET', `/api/v1/loads/${load.id}`)).definition);
      }
      log.advance(Date.parse(status.now));
      if (log.over) {
        console.log('The schedule is at its end.');
        return 0;
      }
      // Twice a minute of the daemon's clock: rows come while they are new.
      pause_ms = Math.min(1000, Math.max(100, MINUTE_MS / 2 / status.clock_speed));
      told = '';
    } catch (error) {
      if (stop.aborted) break;
      const text = error instanceof Refused ? error.message : `the daemon does not answer (${error.message})`;
      if (text !== told) console.error(`logger: ${text}. Trying again.`);
      told = text;
    }
    await sleep(pause_ms, undefined, { signal: stop }).catch(() => {});
  }
  return 0;
}

main().then(
  (code) => process.exit(code),
  (error) => {
    console.error(`logger: ${error.message}`);
    process.exit(2);
  },
);
