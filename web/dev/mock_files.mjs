// DEVELOPMENT ONLY: reads logger files just well enough to work on their page: separated cells, decimal comma,
// ISO and day-month-year times. Says what it would store and stores nothing.
const stored = {};
export const mappingsOf = (furnace) => stored[furnace] ??= [];

const cellsOf = (mapping, line) => (mapping.separator === 'spaces' ? line.trim().split(/\s+/) : mapping.separator === 'wide_spaces' ? line.trim().split(/\s{2,}/) : line.split(mapping.separator));
function timeOf(mapping, text) {
  if (mapping.time_format === 'iso') { const ms = Date.parse(text.replace(' ', 'T') + (/[zZ]|[+-]\d\d:?\d\d$/.test(text) ? '' : 'Z')); return Number.isNaN(ms) ? null : ms; }
  const found = /^(\d\d?)\.(\d\d?)\.(\d{4}) (\d\d?):(\d\d)(?::(\d\d))?$/.exec(text);
  if (!found || mapping.time_format !== '%d.%m.%Y %H:%M:%S') return null;
  const ms = Date.UTC(found[3], found[2] - 1, found[1], found[4], found[5], found[6] ?? 0);
  return new Date(ms).getUTCDate() === Number(found[1]) ? ms - (mapping.time_zone === 'Europe/Berlin' ? 3_600_000 : 0) : null;
}
const numberOf = (mapping, text) => { const plain = mapping.decimal === ',' ? text.replace(',', '.') : text; return /^[+-]?\d+(\.\d+)?$/.test(plain) ? Number(plain) : null; };

export function preview(mapping, text) {
  const lines = text.split(/\r?\n/).filter((line, i, all) => line !== '' || i < all.length - 1);
  const header = mapping.header_lines > 0 ? cellsOf(mapping, lines[mapping.header_lines - 1] ?? '') : [];
  const names = header.length ? header : cellsOf(mapping, lines[0] ?? '').map((_, i) => `#${i + 1}`);
  const at = (name) => names.indexOf(name);
  const wanted = [mapping.time_column, ...mapping.columns.map((each) => each.column)].find((name) => at(name) < 0);
  const empty = { rows: 0, readings: 0, refused: 0, no_value: 0, repeated_headers: 0, refused_by_reason: {}, no_value_by_text: {}, first: null, last: null, interval_s: null };
  const result = { fits: wanted === undefined && mapping.time_column !== '', problem: wanted === undefined ? null : { line: mapping.header_lines || null, text: `There is no column "${wanted}" in the file. Choose one of its columns.` },
    encoding: mapping.encoding === 'auto' ? 'utf-8' : mapping.encoding, raw_lines: lines.slice(0, 30).map((each, i) => ({ line: i + 1, text: each })), header, units: [],
    columns: names.map((column) => { const fed = mapping.columns.find((each) => each.column === column); return { column, use: column === mapping.time_column ? 'time' : column === mapping.date_column ? 'date' : fed ? 'channel' : 'unused', channel: fed?.channel ?? null, unit_in_file: fed?.unit ?? null, unit: fed ? 'degC' : null }; }),
    rows: [], totals: empty, channels: mapping.columns.map((each) => ({ channel: each.channel, unit: 'degC', readings: 0, refused: 0, no_value: 0, lowest: null, highest: null })), problems: [], warnings: mapping.time_zone ? [] : [{ kind: 'clock change', text: 'The times carry no zone and are read as UTC. If the logger shows local time, choose its zone.' }] };
  if (!result.fits) return result;
  for (const [i, line] of lines.slice(mapping.header_lines).entries()) {
    const cells = cellsOf(mapping, line), number = i + mapping.header_lines + 1, ms = timeOf(mapping, cells[at(mapping.time_column)] ?? '');
    const reason = ms === null ? 'bad time: it does not fit the date format' : null;
    const values = mapping.columns.map((each, k) => {
      const cell = (cells[at(each.column)] ?? '').trim(), value = numberOf(mapping, cell), tally = result.channels[k];
      if (cell === '') return { channel: each.channel, state: 'empty', value: null, reason: null };
      if (cell === '---') { ++tally.no_value; ++empty.no_value; return { channel: each.channel, state: 'no value', value: null, reason: null }; }
      if (value === null || reason) { ++tally.refused; ++empty.refused; if (!reason) result.problems.push({ line: number, reason: `bad number: "${cell}"` }); return { channel: each.channel, state: 'refused', value: null, reason: reason ?? `bad number: "${cell}"` }; }
      ++tally.readings; ++empty.readings;
      tally.lowest = Math.min(tally.lowest ?? value, value); tally.highest = Math.max(tally.highest ?? value, value);
      return { channel: each.channel, state: 'value', value, reason: null };
    });
    if (reason) result.problems.push({ line: number, reason });
    ++empty.rows;
    if (ms !== null) { empty.first ??= new Date(ms).toISOString(); empty.last = new Date(ms).toISOString(); }
    if (i < 30) result.rows.push({ line: number, cells, time: ms === null ? null : new Date(ms).toISOString().slice(0, 19) + 'Z', local: ms === null ? null : cells[at(mapping.time_column)], reason, values });
  }
  empty.interval_s = 60;
  return result;
}

export function guess(text, channels) {
  const first = text.split(/\r?\n/)[0] ?? '', second = text.split(/\r?\n/)[1] ?? '';
  const separator = first.includes(';') ? ';' : first.includes('\t') ? '\t' : ',';
  const names = first.split(separator);
  const mapping = { name: '', encoding: 'auto', separator, decimal: separator === ';' ? ',' : '.', thousands: null, comment: null, header_lines: 1, units_line: false, time_column: names[0] ?? '', date_column: null,
    time_format: /^\d\d?\./.test(second) ? '%d.%m.%Y %H:%M:%S' : 'iso', time_zone: null, utc_offset_min: null, no_value: null, columns: names.slice(1, 2).map((column) => ({ column, channel: channels[0].name, unit: null, factor: null })) };
  return { mapping, unsure: [{ field: 'time_zone', text: 'The times carry no zone; UTC is assumed. Choose the logger’s.' }, { field: 'columns', text: 'Not every column could be given to a channel. Say which is which.' }], preview: preview(mapping, text) };
}
export function upload(furnace, name, text) {
  const found = mappingsOf(furnace).find((each) => each.name === name);
  const { totals, problems } = preview(found.mapping, text);
  return { rows: totals.rows, stored: totals.readings, duplicate: 0, conflict: 0, refused: totals.refused, no_value: totals.no_value, problems };
}
