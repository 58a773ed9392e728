// What the forms choose from: furnaces, steels, and the library's parts and recipes. A list that does not come
// is empty and said; the form works without it.
import { useEffect, useState } from 'preact/hooks';
import { type Steel, getSteels } from '../api.ts';
import { type Furnace, type LibraryEntry, type PartBody, type RecipeBody, getFurnaces, getLibrary } from '../api_plant.ts';
import { sentenceOf } from '../http.ts';

export interface Lists {
  furnaces: Furnace[];
  steels: Steel[];
  parts: LibraryEntry<PartBody>[];
  recipes: LibraryEntry<RecipeBody>[];
  problem: string | null;
}

export function useLists(): Lists {
  const [lists, setLists] = useState<Lists>({ furnaces: [], steels: [], parts: [], recipes: [], problem: null });
  useEffect(() => {
    let gone = false;
    const into = <T extends keyof Lists>(name: T, list: Promise<Lists[T]>) => {
      list.then((got) => { if (!gone) setLists((before) => ({ ...before, [name]: got })); })
        .catch((error: unknown) => { if (!gone) setLists((before) => ({ ...before, problem: `The list of ${name} did not come. ${sentenceOf(error)}` })); });
    };
    into('furnaces', getFurnaces());
    into('steels', getSteels());
    into('parts', getLibrary('parts'));
    into('recipes', getLibrary('recipes'));
    return () => { gone = true; };
  }, []);
  return lists;
}
