// What the model reads off this item's profile, one line each.
import type { ComponentChildren } from 'preact';
import type { Item } from '../api.ts';
import { type LengthUnit, type TemperatureUnit, carbonNumber, carbonText, carbonWindowText, depthText, temperatureText, windowText } from '../units.ts';

interface Props { item: Item; band: string; length: LengthUnit; temperature: TemperatureUnit }

export function Facts({ item, band, length, temperature }: Props) {
  const limit = item.criterion.carbon_limit_wt_pct;
  return <section class="panel">
    <h2>Read off the profile <small>{item.part}</small></h2>
    <dl class="facts">
      <Fact name="case depth" value={depthText(item.case_depth_mm, length)}>{item.criterion.text}{limit !== null && `, that is ${carbonNumber(limit)} % C`}. Asked {windowText(item.case_depth_window_mm, length)}. {band}.</Fact>
      <Fact name="surface carbon" value={carbonText(item.surface_carbon_wt_pct)}>{item.surface_carbon_window_wt_pct ? `Asked at the end ${carbonWindowText(item.surface_carbon_window_wt_pct)}.` : 'No window asked.'}</Fact>
      <Fact name="total depth" value={depthText(item.total_depth_mm, length)}>As deep as carbon has risen above the core.</Fact>
      <Fact name="turnover depth" value={item.turnover_depth_mm === null ? 'none' : depthText(item.turnover_depth_mm, length)}>{item.turnover_depth_mm === null ? 'The whole case is gaining carbon.' : 'Nearer the surface the steel is giving carbon up.'}</Fact>
      <Fact name="carbon uptake" value={item.carbon_uptake_g_m2 === null ? '–' : `${item.carbon_uptake_g_m2.toFixed(1)} g/m²`}>Through the surface since the start.</Fact>
      <Fact name="part temperature" value={temperatureText(item.part_temperature_degc, temperature)}>Follows the furnace with its lag.</Fact>
      <Fact name="balance residual" value={item.balance_residual_relative === null ? '–' : item.balance_residual_relative.toExponential(0)}>Carbon that crossed the surface less carbon inside, as a share. Near zero is sound.</Fact>
      <Fact name="calculation" value={item.outcome}>{item.outcome === 'reached' ? '' : 'See the model notes.'}</Fact>
    </dl>
  </section>;
}

function Fact({ name, value, children }: { name: string; value: string; children?: ComponentChildren }) {
  return <div><dt>{name}</dt><dd><b>{value}</b> <span>{children}</span></dd></div>;
}
