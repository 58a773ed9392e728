// What the model reads off this item's profile, one line each.
import type { ComponentChildren } from 'preact';
import type { ComparedValue, Item } from '../api.ts';
import { noBand, nowBandText } from '../outlook_words.ts';
import { type LengthUnit, type TemperatureUnit, capital, carbonNumber, carbonText, carbonWindowText, channelText, depthText, temperatureText, windowText, withTemperatures } from '../units.ts';

interface Props { item: Item; band: string; length: LengthUnit; temperature: TemperatureUnit }

export function Facts({ item, band, length, temperature }: Props) {
  const limit = item.criterion.carbon_limit_wt_pct;
  const hardness = item.hardness;
  return <section class="panel">
    <h2>Read off the profile <small>{item.part}</small></h2>
    <dl class="facts">
      <Fact name="case depth" value={depthText(item.case_depth_mm, length)}>{item.criterion.text}{limit !== null && `, that is ${carbonNumber(limit)} % C`}. {item.grinding_stock_mm ? '' : `Asked ${windowText(item.case_depth_window_mm, length)}. `}{item.case_depth_band_mm === undefined ? band : item.case_depth_band_mm ? `${item.grinding_stock_mm ? 'Finished' : 'Band'} ${nowBandText(item.case_depth_band_mm, band, length)}, ${band}` : capital(noBand)}.</Fact>
      {!!item.grinding_stock_mm && <Fact name="finished case depth" value={depthText(item.finished_case_depth_mm ?? null, length)}>After {depthText(item.grinding_stock_mm, length)} are ground off. Asked {windowText(item.case_depth_window_mm, length)}.</Fact>}
      <Fact name="surface carbon" value={carbonText(item.surface_carbon_wt_pct)}>{item.surface_carbon_window_wt_pct ? `Asked at the end ${carbonWindowText(item.surface_carbon_window_wt_pct)}.` : 'No window asked.'}{item.surface_carbon_band_wt_pct && ` Now ${carbonWindowText([item.surface_carbon_band_wt_pct.low, item.surface_carbon_band_wt_pct.high])}, ${band}.`}</Fact>
      {hardness && <Fact name="surface hardness" value={hardness.surface_hv === null ? '–' : `${hardness.surface_hv.toFixed(0)} HV`}>{hardness.surface_hrc !== null && `${hardness.surface_hrc.toFixed(1)} HRC. `}{hardness.surface_retained_austenite_pct !== null && `${hardness.surface_retained_austenite_pct.toFixed(0)} % retained austenite. `}{withTemperatures(capital(hardness.as), temperature)}.</Fact>}
      <Fact name="total depth" value={depthText(item.total_depth_mm, length)}>As deep as carbon has risen above the core.</Fact>
      <Fact name="turnover depth" value={item.turnover_depth_mm === null ? 'none' : depthText(item.turnover_depth_mm, length)}>{item.turnover_depth_mm === null ? 'The whole case is gaining carbon.' : 'Nearer the surface the steel is giving carbon up.'}</Fact>
      <Fact name="carbon uptake" value={item.carbon_uptake_g_m2 === null ? '–' : `${item.carbon_uptake_g_m2.toFixed(1)} g/m²`}>Through the surface since the start.</Fact>
      <Fact name="part temperature" value={temperatureText(item.part_temperature_degc, temperature)}>Follows the furnace with its lag.</Fact>
      <Fact name="balance residual" value={item.balance_residual_relative === null ? '–' : item.balance_residual_relative.toExponential(0)}>Carbon that crossed the surface less carbon inside, as a share. Near zero is sound.</Fact>
      <Fact name="calculation" value={item.outcome}>{item.outcome === 'reached' ? '' : 'See the model notes.'}</Fact>
    </dl>
    {hardness?.sources && hardness.sources.length > 0 && <Compared values={hardness.sources} temperature={temperature} />}
  </section>;
}

function Fact({ name, value, children }: { name: string; value: string; children?: ComponentChildren }) {
  return <div><dt>{name}</dt><dd><b>{value}</b> <span>{children}</span></dd></div>;
}

// What published sources give for the same thing; the one used is marked.
function Compared({ values, temperature }: { values: readonly ComparedValue[]; temperature: TemperatureUnit }) {
  const text = (value: number | null, unit: string) => (value === null ? '–' : channelText(value, unit, temperature));
  return <details class="rare"><summary><span>Where published sources differ</span></summary>
    <table class="rows"><thead><tr><th scope="col">quantity</th><th scope="col">source</th><th scope="col">value</th></tr></thead>
      <tbody>{values.flatMap((each) => each.values.map((one, i) => <tr key={`${each.quantity} ${one.source}`} class={one.used ? 'present-row' : ''}>
        <th scope="row">{i === 0 ? each.quantity : ''}</th><td class="wrap">{one.used ? '▸ ' : ''}{one.source}{one.used && <small> used</small>}</td><td>{text(one.value, each.unit)}</td></tr>))}</tbody></table>
  </details>;
}
