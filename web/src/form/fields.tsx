// Form fields made for gloves: 52 px high, numbers with steps beside them, the daemon's complaint right below.
import { type ComponentChildren, createContext } from 'preact';
import { useContext, useId, useState } from 'preact/hooks';
import { Shape } from '../pictures/mark_shape.tsx';
import { numberFrom, plainNumber } from '../units.ts';

export const SaidHere = createContext<{ path: string | null; text: string }>({ path: null, text: '' });
const useSaid = (path: string): string | null => {
  const said = useContext(SaidHere);
  return said.path === path ? said.text : null;
};

export function SaidAt({ path, id }: { path: string; id?: string }) {
  const text = useSaid(path);
  return text === null ? null : <p class="said" id={id} data-said={path}><Shape name="note" />{text}</p>;
}

interface TextProps { path: string; label: string; value: string; set: (text: string) => void; type?: 'text' | 'datetime-local'; maxLength?: number; extra?: ComponentChildren }
export function TextField({ path, label, value, set, type = 'text', maxLength = 80, extra }: TextProps) {
  const id = useId(), said = useSaid(path);
  const shared = {
    id, value, 'data-path': path, autocomplete: 'off', 'aria-invalid': said !== null, 'aria-describedby': said === null ? undefined : `${id}s`,
    onInput: (event: { currentTarget: HTMLInputElement }) => set(event.currentTarget.value),
  };
  return <div class="field">
    <label for={id}>{label}</label>
    <span class="with-button">{type === 'text' ? <input {...shared} type="text" maxLength={maxLength} /> : <input {...shared} type="datetime-local" />}{extra}</span>
    <SaidAt path={path} id={`${id}s`} />
  </div>;
}

interface SelectProps { path: string; label: string; value: string; set: (value: string) => void; options: { value: string; text: string }[] }
export function SelectField({ path, label, value, set, options }: SelectProps) {
  const id = useId(), said = useSaid(path);
  return <div class="field">
    <label for={id}>{label}</label>
    <select id={id} data-path={path} value={value} aria-invalid={said !== null} aria-describedby={said === null ? undefined : `${id}s`} onChange={(event) => set(event.currentTarget.value)}>
      {options.map((option) => <option key={option.value} value={option.value} selected={option.value === value}>{option.text}</option>)}
    </select>
    <SaidAt path={path} id={`${id}s`} />
  </div>;
}

interface NumberProps {
  path: string;                              // of the value in the load document
  label: string;
  unit: string;
  value: number | null;                      // in the contract's unit; NaN while the text is no number
  set: (value: number | null) => void;
  step: number;                              // in the shown unit
  base: number;                              // where the first press begins, in the shown unit
  digits: number;
  show?: (value: number) => number;          // contract's unit -> shown unit
  read?: (shown: number) => number;
  quiet?: boolean;                           // the complaint is shown by a group around this field
}
export function NumberField({ path, label, unit, value, set, step, base, digits, show = same, read = same, quiet }: NumberProps) {
  const id = useId(), said = useSaid(path);
  const [typed, setTyped] = useState<string | null>(null);  // the text while it is being typed, or while it is no number
  const text = typed ?? (value === null || Number.isNaN(value) ? '' : plainNumber(show(value), digits));
  const type = (next: string) => {
    setTyped(next);
    const number = numberFrom(next);
    set(next.trim() === '' ? null : number === null ? NaN : read(number));
  };
  const press = (direction: number) => () => {
    setTyped(null);
    const shown = value === null || Number.isNaN(value) ? base : Math.max(0, (Math.round(show(value) / step) + direction) * step);
    set(read(shown));
  };
  return <div class="field number">
    <label for={id}>{label} <span class="unit">{unit}</span></label>
    <span class="steps">
      <button type="button" class="step" tabIndex={-1} aria-label={`${label}: less`} onClick={press(-1)}>−</button>
      <input id={id} type="text" inputMode="decimal" autocomplete="off" data-path={path} value={text} aria-invalid={said !== null} aria-describedby={said === null || quiet ? undefined : `${id}s`}
        onInput={(event) => type(event.currentTarget.value)} onBlur={() => { if (value === null || !Number.isNaN(value)) setTyped(null); }} />
      <button type="button" class="step" tabIndex={-1} aria-label={`${label}: more`} onClick={press(1)}>+</button>
    </span>
    {!quiet && <SaidAt path={path} id={`${id}s`} />}
  </div>;
}
const same = (value: number): number => value;
