// The items of a load: taken from the library or entered, each with its part, and rework of an earlier load.
import type { Steel } from '../api.ts';
import type { LibraryEntry, PartBody } from '../api_plant.ts';
import { type DraftItem, newItem } from '../draft/draft.ts';
import { withLibrarySteel, withPart } from '../draft/take.ts';
import { NumberField, SaidAt, TextField } from './fields.tsx';
import { Analysis, AskedFields, PartFields, RareFields } from './item_form.tsx';
import { LibrarySelect } from './library_select.tsx';
import { ReworkField } from './rework_field.tsx';

interface Props { items: DraftItem[]; set: (items: DraftItem[]) => void; steels: Steel[]; parts: LibraryEntry<PartBody>[] }

export function ItemsForm({ items, set, steels, parts }: Props) {
  const put = (i: number) => (part: Partial<DraftItem>) => set(items.map((each, k) => (k === i ? { ...each, ...part } : each)));
  return <fieldset class="panel">
    <legend><h2>Items</h2></legend>
    <SaidAt path="items" />
    {items.map((item, i) => <section class="item-form" key={item.key} aria-label={`Item ${i + 1}`}>
      <ItemForm item={item} at={`items[${i}]`} put={put(i)} steels={steels} parts={parts} />
      {items.length > 1 && <button type="button" class="button plain" onClick={() => set(items.filter((_, k) => k !== i))}>Remove item {item.name || i + 1}</button>}
    </section>)}
    <button type="button" class="button plain" onClick={() => set([...items, newItem(items.length)])}>Add an item</button>
  </fieldset>;
}

interface ItemProps { item: DraftItem; at: string; put: (part: Partial<DraftItem>) => void; steels: Steel[]; parts: LibraryEntry<PartBody>[] }
function ItemForm(props: ItemProps) {
  const { item, at, put, steels, parts } = props;
  return <>
    <SaidAt path={at} />
    <div class="grid">
      <LibrarySelect path={`${at}.library`} label="part from the library" entries={parts} chosen={item.library} take={(entry) => put(withLibrarySteel(withPart(entry, item), steels))} />
      <TextField path={`${at}.name`} label="item" value={item.name} set={(name) => put({ name })} maxLength={60} />
      <TextField path={`${at}.part`} label="part" value={item.part} set={(part) => put({ part })} />
      <NumberField path={`${at}.quantity`} label="quantity" unit="pieces" value={item.quantity} set={(quantity) => put({ quantity })} step={1} base={1} digits={0} />
      <PartFields {...props} />
    </div>
    <Analysis {...props} />
    <AskedFields {...props} />
    <details class="rare"><summary><span>{item.rework ? `Rework of item ${item.rework.item} of an earlier load · ` : ''}Surface carbon, grinding, core carbon, lag, rework (optional)</span></summary>
      <RareFields {...props} />
      <ReworkField at={at} item={item} put={put} />
    </details>
  </>;
}
