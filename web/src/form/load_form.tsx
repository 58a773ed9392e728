// Everything about a load: recipe, quench, items. The head with number, furnace and person is the page's own.
import type { Draft } from '../draft/draft.ts';
import { withLibrarySteels, withRecipe } from '../draft/take.ts';
import { TextField } from './fields.tsx';
import { ItemsForm } from './items_form.tsx';
import { LibrarySelect } from './library_select.tsx';
import type { Lists } from './lists.ts';
import { QuenchForm } from './quench_form.tsx';
import { RecipeForm } from './recipe_form.tsx';

interface Props { draft: Draft; change: (part: Partial<Draft>) => void; lists: Lists }

export function LoadForm({ draft, change, lists }: Props) {
  return <>
    <RecipeForm at="recipe" segments={draft.segments} set={(segments) => change({ segments })} itemNames={draft.items.map((item) => item.name)}>
      <div class="grid">
        <LibrarySelect path="recipe.library" label="recipe from the library" entries={lists.recipes} chosen={draft.recipeLibrary} take={(entry) => change(withLibrarySteels(withRecipe(entry, draft), lists.steels))} />
        <TextField path="recipe.name" label="recipe name" value={draft.recipeName} set={(recipeName) => change({ recipeName })} />
      </div>
    </RecipeForm>
    <div class="panel spaced"><QuenchForm at="quench" quench={draft.quench} set={(quench) => change({ quench })} film={{ value: draft.film_min, set: (film_min) => change({ film_min }) }} /></div>
    <ItemsForm items={draft.items} set={(items) => change({ items })} steels={lists.steels} parts={lists.parts} />
  </>;
}

export const groupsOf = (draft: Draft): string[] =>
  ['recipe', 'recipe.segments', 'items', ...draft.segments.map((_, i) => `recipe.segments[${i}]`), ...draft.items.map((_, i) => `items[${i}]`)];
