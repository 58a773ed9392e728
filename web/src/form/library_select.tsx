// Takes a part or recipe over from the library; says which version was taken and whether it has moved on since.
import type { CopiedFrom } from '../api.ts';
import type { LibraryEntry } from '../api_plant.ts';
import { SelectField } from './fields.tsx';

interface Props<Body> { path: string; label: string; entries: LibraryEntry<Body>[]; chosen: CopiedFrom | null; take: (entry: LibraryEntry<Body>) => void }

export function LibrarySelect<Body>({ path, label, entries, chosen, take }: Props<Body>) {
  if (entries.length === 0) return null;
  const now = chosen && entries.find((each) => each.key === chosen.key);
  const gone = chosen && !now ? [{ value: chosen.key, text: `${chosen.key} (no longer listed)` }] : [];
  const moved = chosen && now && now.version !== chosen.version;
  return <div>
    <SelectField path={path} label={label} value={chosen?.key ?? ''} set={(key) => { const entry = entries.find((each) => each.key === key); if (entry) take(entry); }}
      options={[{ value: '', text: 'choose' }, ...gone, ...entries.map((each) => ({ value: each.key, text: each.name }))]} />
    {moved && now && <p class="hint">Taken from version {chosen.version}; the library has {now.version}. <button type="button" class="button plain" onClick={() => take(now)}>Take version {now.version}</button></p>}
  </div>;
}
