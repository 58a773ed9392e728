// Quench, tempering and, for a load, the film on the parts. Folded away: most loads take the usual ones.
import type { DraftQuench, Entered } from '../draft/draft.ts';
import { usualQuenchDegc } from '../draft/draft.ts';
import { prefs } from '../prefs.ts';
import { useStore } from '../store.ts';
import { fromDegc, temperatureName, temperatureText, toDegc } from '../units.ts';
import { NumberField } from './fields.tsx';

interface Props { at: string; quench: DraftQuench; set: (quench: DraftQuench) => void; film?: { value: Entered; set: (film_min: Entered) => void } }

export function QuenchForm({ at, quench, set, film }: Props) {
  const { temperature } = useStore(prefs);
  const heat = { unit: temperatureName(temperature), digits: 1, step: temperature === 'degc' ? 5 : 10, show: (degc: number) => fromDegc(degc, temperature), read: (shown: number) => toDegc(shown, temperature) };
  const round = (degc: number) => Math.round(fromDegc(degc, temperature));
  const said = [
    quench.temperature_degc === null ? '' : `quench to ${temperatureText(quench.temperature_degc, temperature)}`,
    quench.temper_degc === null ? '' : `tempering at ${temperatureText(quench.temper_degc, temperature)}, ${quench.temper_h ?? '–'} h`,
    film?.value ? `slow start ${film.value} min` : '',
  ].filter(Boolean).join(', ');
  return <details class="rare"><summary><span>{said || `Quench, tempering${film ? ', slow start of the surface' : ''} (usual: quench to ${round(usualQuenchDegc)} ${temperatureName(temperature)}, not tempered)`}</span></summary>
    <div class="grid">
      <NumberField path={`${at}.temperature_degc`} label="coldest in the quench" value={quench.temperature_degc} set={(temperature_degc) => set({ ...quench, temperature_degc })} base={round(usualQuenchDegc)} {...heat} />
      <NumberField path={`${at}.tempering.temperature_degc`} label="tempering at" value={quench.temper_degc} set={(temper_degc) => set({ ...quench, temper_degc })} base={round(180)} {...heat} />
      <NumberField path={`${at}.tempering.hours`} label="tempering for" unit="h" value={quench.temper_h} set={(temper_h) => set({ ...quench, temper_h })} step={0.5} base={2} digits={2} />
      {film && <NumberField path="film_min" label="slow start" unit="min" value={film.value} set={film.set} step={5} base={15} digits={1} />}
    </div>
    {film && <p class="hint">Slow start: for so long oxide or wash residue on the parts holds the carbon back.</p>}
  </details>;
}
