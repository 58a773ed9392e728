// The caution that stands under every page.
export function Foot() {
  return <footer class="foot">
    <p><b>Advice only.</b> hearthfront reads the furnace and never commands it; it is no safety function. A case is released by measurement on a
      coupon or part, not by prediction. Atmospheres are flammable and toxic, parts and oil are hot: follow NFPA 86, EN 746, ISO 13577,
      the local authority and licensed practice.</p>
  </footer>;
}
