// What reading the file so would give: totals in words, warnings, the first rows as read and as written; and,
// after storing, what became of the lines.
import type { Channel } from '../api_plant.ts';
import type { LineProblem, Preview, PreviewRow, PreviewValue, Uploaded } from '../contract_csv.ts';
import { Shape } from '../pictures/mark_shape.tsx';
import { prefs } from '../prefs.ts';
import { useStore } from '../store.ts';
import { channelText } from '../units.ts';
import { ageText, dayClockText } from '../words.ts';

const counted = (counts: Record<string, number>): string => Object.entries(counts).map(([what, many]) => `${many} ${what}`).join(', ');

export function PreviewPanel({ preview, busy, channels }: { preview: Preview; busy: boolean; channels: Channel[] }) {
  const { temperature } = useStore(prefs);
  const { totals } = preview;
  const unitOf = (name: string) => channels.find((each) => each.name === name)?.unit ?? preview.channels.find((each) => each.channel === name)?.unit ?? '';
  const cell = (value: PreviewValue) => (value.state === 'value' && value.value !== null ? channelText(value.value, unitOf(value.channel), temperature) : value.state === 'refused' ? value.reason ?? 'refused' : value.state);
  // The cells as they are written, by what they are used for.
  const written = (row: PreviewRow, used: (column: Preview['columns'][number]) => boolean) => preview.columns.flatMap((column, i) => (used(column) ? [row.cells[i] ?? ''] : [])).join(' ');
  return <section class={`panel spaced ${busy ? 'reading' : ''}`} data-testid="preview" aria-busy={busy}>
    <h2>What would be stored <small>{busy ? 'reading …' : `read as ${preview.encoding}`}</small></h2>
    {preview.problem && <p class="mark metal"><Shape name="note" /><span><b>It does not fit.</b> <span class="mark-sentence">{preview.problem.line !== null && `Line ${preview.problem.line}: `}{preview.problem.text}</span></span></p>}
    {preview.fits && <p><b>{totals.readings} readings</b> from {totals.rows} rows{totals.first && totals.last && `, ${dayClockText(Date.parse(totals.first))} to ${dayClockText(Date.parse(totals.last))} by this screen’s clock`}{totals.interval_s !== null && `, a row each ${ageText(totals.interval_s)}`}.
      {totals.refused > 0 && ` Refused: ${totals.refused}${Object.keys(totals.refused_by_reason).length > 0 ? ` (${counted(totals.refused_by_reason)})` : ''}.`}{totals.no_value > 0 && ` Without a value: ${totals.no_value}.`}{totals.repeated_headers > 0 && ` Headers that came again: ${totals.repeated_headers}.`}</p>}
    {preview.warnings.map((each) => <p class="mark guess" key={each.text}><Shape name="note" /><span><b>{each.kind}</b> <span class="mark-sentence">{each.text}</span></span></p>)}
    {preview.fits && <ul class="list">{preview.channels.map((each) => <li key={each.channel}><p><b>{each.channel.replaceAll('_', ' ')}</b> {each.readings} readings{each.lowest !== null && each.highest !== null && `, ${channelText(each.lowest, unitOf(each.channel), temperature)} to ${channelText(each.highest, unitOf(each.channel), temperature)}`}{each.refused > 0 && `, ${each.refused} refused`}{each.no_value > 0 && `, ${each.no_value} without a value`}</p></li>)}</ul>}
    {preview.rows.length > 0 && <div class="scroll-x" tabIndex={0} role="region" aria-label="First rows as they are read"><table class="rows">
      <thead><tr><th scope="col">line</th><th scope="col">written</th><th scope="col">read as</th>{preview.rows[0]?.values.map((each) => <th scope="col" key={each.channel}>{each.channel.replaceAll('_', ' ')}</th>)}</tr></thead>
      <tbody>{preview.rows.map((row) => <tr key={row.line} class={row.reason ? 'refused-row' : ''}><th scope="row">{row.line}</th>
        <td>{written(row, (column) => column.use === 'date' || column.use === 'time')}</td><td>{row.local ?? '–'}{row.time && <small class="under">{row.time}</small>}</td>
        {row.reason ? <td colSpan={Math.max(1, row.values.length)}><Shape name="note" /> {row.reason}</td> : row.values.map((each) => <td key={each.channel} class={each.state}>{each.state === 'refused' && <Shape name="note" />}{cell(each)}<small class="under">{written(row, (column) => column.channel === each.channel)}</small></td>)}</tr>)}</tbody></table></div>}
    <details class="rare"><summary><span>The file as it is written</span></summary><pre class="scroll-x" tabIndex={0}>{preview.raw_lines.map((each) => `${String(each.line).padStart(3)}  ${each.text}`).join('\n')}</pre></details>
    <Lines problems={preview.problems} />
  </section>;
}

export function Lines({ problems }: { problems: LineProblem[] }) {
  if (problems.length === 0) return null;
  return <details class="rare"><summary><span>Lines that are refused: {problems.length}{problems.length >= 100 ? ' or more' : ''}</span></summary>
    <ul class="list">{problems.map((each, i) => <li key={i}><p><b>line {each.line}</b> {each.reason}</p></li>)}</ul></details>;
}

export function Outcome({ uploaded, file }: { uploaded: Uploaded; file: string }) {
  const parts = [['stored', uploaded.stored], ['there already', uploaded.duplicate ?? 0], ['against a value that was there: choose on the furnace’s page', uploaded.conflict ?? 0], ['refused', uploaded.refused], ['without a value', uploaded.no_value ?? 0]] as const;
  return <section class="panel spaced" role="status" data-testid="outcome">
    <h2>{file} is stored</h2>
    <ul class="list">{parts.filter(([what, many]) => many > 0 || what === 'stored').map(([what, many]) => <li key={what}><p><b>{many}</b> {what}</p></li>)}</ul>
    <Lines problems={uploaded.problems} />
  </section>;
}
