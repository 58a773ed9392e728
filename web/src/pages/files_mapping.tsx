// How the file is read: separator, times, and what each column feeds. The guess's doubts stand at their fields.
import { useMemo } from 'preact/hooks';
import type { Channel } from '../api_plant.ts';
import type { CsvMapping, Preview, Unsure } from '../contract_csv.ts';
import { type Choice, type Use, decimals, encodings, groupings, noValueFrom, noValueText, separators, timeFormats, units, useOf, withColumn, withUse, withValue, withZone, zoneOf } from '../draft/mapping.ts';
import { NumberField, SelectField, TextField } from '../form/fields.tsx';
import { Shape } from '../pictures/mark_shape.tsx';

interface Props { mapping: CsvMapping; set: (mapping: CsvMapping) => void; unsure: Unsure[]; preview: Preview | null; channels: Channel[] }

function useZones(now: string): Choice[] {
  return useMemo(() => {
    const own = Intl.DateTimeFormat().resolvedOptions().timeZone;
    const all = (Intl as unknown as { supportedValuesOf?: (what: string) => string[] }).supportedValuesOf?.('timeZone') ?? [];
    const head = [{ value: '', text: 'UTC' }, ...(own && own !== 'UTC' ? [{ value: own, text: `${own} (this screen’s)` }] : []), { value: 'offset', text: 'a fixed offset' }];
    return withValue([...head, ...all.filter((zone) => zone !== own && zone !== 'UTC').map((zone) => ({ value: zone, text: zone }))], now);
  }, [now]);
}

const Doubt = ({ unsure, field }: { unsure: Unsure[]; field: string }) => <>{unsure.filter((each) => each.field === field || each.field.startsWith(`${field}[`) || each.field.startsWith(`${field}.`)).map((each) => <p class="mark guess doubt" key={each.text}><Shape name="unsure" /><span>{each.text}</span></p>)}</>;

export function MappingForm({ mapping, set, unsure, preview, channels }: Props) {
  const zones = useZones(zoneOf(mapping));
  const put = (part: Partial<CsvMapping>) => set({ ...mapping, ...part });
  const whole = (value: number | null): number => (value === null || Number.isNaN(value) ? 0 : Math.round(value));
  return <fieldset class="panel">
    <legend><h2>How it is read</h2></legend>
    <div class="grid">
      <div><SelectField path="mapping.separator" label="between the cells" value={mapping.separator} options={separators} set={(separator) => put({ separator })} /><Doubt unsure={unsure} field="separator" /></div>
      <div><SelectField path="mapping.decimal" label="decimal sign" value={mapping.decimal} options={decimals} set={(decimal) => put({ decimal })} /><Doubt unsure={unsure} field="decimal" /></div>
      <div><NumberField path="mapping.header_lines" label="lines above the data" unit="lines" value={mapping.header_lines} set={(lines) => put({ header_lines: whole(lines) })} step={1} base={1} digits={0} /><Doubt unsure={unsure} field="header_lines" /></div>
      <div><SelectField path="mapping.time_format" label="times look like" value={mapping.time_format} options={withValue(timeFormats, mapping.time_format)} set={(time_format) => put({ time_format })} /><Doubt unsure={unsure} field="time_format" /></div>
      <div><SelectField path="mapping.time_zone" label="the logger’s clock is set to" value={zoneOf(mapping)} options={zones} set={(zone) => set(withZone(mapping, zone))} /><Doubt unsure={unsure} field="time_zone" /><Doubt unsure={unsure} field="utc_offset_min" /></div>
      {mapping.utc_offset_min !== null && <TextField path="mapping.utc_offset_min" label="minutes ahead of UTC (behind: −)" value={String(mapping.utc_offset_min)} set={(text) => put({ utc_offset_min: Math.round(Number(text.replace('−', '-'))) || 0 })} />}
    </div>
    <Columns mapping={mapping} set={set} preview={preview} channels={channels} />
    <Doubt unsure={unsure} field="columns" /><Doubt unsure={unsure} field="time_column" />
    <details class="rare"><summary><span>Letters, grouping of digits, comments, units line, words for no value, another pattern of times</span></summary>
      <div class="grid">
        <div><SelectField path="mapping.encoding" label="letters (encoding)" value={mapping.encoding} options={encodings} set={(encoding) => put({ encoding })} /><Doubt unsure={unsure} field="encoding" /></div>
        <SelectField path="mapping.thousands" label="thousands grouped by" value={mapping.thousands ?? ''} options={groupings} set={(thousands) => put({ thousands: thousands || null })} />
        <TextField path="mapping.comment" label="comment lines begin with" value={mapping.comment ?? ''} maxLength={5} set={(comment) => put({ comment: comment || null })} />
        <SelectField path="mapping.units_line" label="a line of units below the names" value={mapping.units_line ? 'yes' : 'no'} options={[{ value: 'no', text: 'no' }, { value: 'yes', text: 'yes' }]} set={(yes) => put({ units_line: yes === 'yes' })} />
        <TextField path="mapping.no_value" label="words for no value, with ; between" value={noValueText(mapping)} maxLength={200} set={(text) => put({ no_value: noValueFrom(text) })} />
        <TextField path="mapping.time_format" label="pattern of the times" value={mapping.time_format} maxLength={60} set={(time_format) => put({ time_format })} />
      </div></details>
  </fieldset>;
}

const valueOf = (use: Use): string => (typeof use === 'string' ? use : `to ${use.channel}`);
const useFrom = (value: string): Use => (value.startsWith('to ') ? { channel: value.slice(3) } : value as Use);

function Columns({ mapping, set, preview, channels }: Pick<Props, 'mapping' | 'set' | 'preview' | 'channels'>) {
  const inFile = preview?.columns.map((each) => each.column) ?? [];
  const missing = [mapping.time_column, mapping.date_column ?? '', ...mapping.columns.map((each) => each.column)].filter((name) => name !== '' && !inFile.includes(name));
  const uses: Choice[] = [{ value: 'unused', text: 'nothing' }, { value: 'time', text: mapping.date_column ? 'the time of day' : 'the time' }, { value: 'date', text: 'the date' }, ...channels.map((each) => ({ value: `to ${each.name}`, text: each.name.replaceAll('_', ' ') }))];
  return <ol class="list columns-list" aria-label="Columns of the file">{[...missing, ...inFile].map((column) => {
    const use = useOf(mapping, column), at = mapping.columns.findIndex((each) => each.column === column), fed = mapping.columns[at];
    const sample = preview?.rows[0]?.cells[inFile.indexOf(column)] ?? '';
    return <li key={column}><span class="column-name"><b>{column}</b><small>{inFile.includes(column) ? sample && `first: ${sample}` : 'not in this file'}</small></span>
      <SelectField path={at >= 0 ? `mapping.columns[${at}].channel` : `column ${column}`} label="gives" value={valueOf(use)} options={withValue(uses, valueOf(use))} set={(value) => set(withUse(mapping, column, useFrom(value)))} />
      {fed && <SelectField path={`mapping.columns[${at}].unit`} label="in" value={fed.unit ?? ''} options={withValue(units, fed.unit ?? '')} set={(unit) => set(withColumn(mapping, column, { unit: unit || null }))} />}
      {fed && <NumberField path={`mapping.columns[${at}].factor`} label="multiplied by" unit="" value={fed.factor} set={(factor) => { if (!Number.isNaN(factor)) set(withColumn(mapping, column, { factor })); }} step={1} base={1} digits={6} />}
    </li>;
  })}</ol>;
}
