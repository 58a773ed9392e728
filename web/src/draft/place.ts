// Where loads may stand and where they stand, in words. Pure.
import type { PathStay, Place } from '../contract.ts';
import type { Furnace } from '../contract_plant.ts';

export interface Spot { furnace: string; furnaceName: string; chamber: string; chamberName: string; own: boolean }

// Every chamber a load may be moved to: those of its own furnace first, the one it stands in left out.
export function spotsFor(furnaces: readonly Furnace[], from: Pick<Place, 'furnace' | 'chamber'> | null, home: string): Spot[] {
  const own = from?.furnace ?? home;
  const spots = furnaces.flatMap((furnace) => furnace.chambers.map((chamber) => ({
    furnace: furnace.id, furnaceName: furnace.name, chamber: chamber.id, chamberName: furnace.chambers.length > 1 ? chamber.name : '', own: furnace.id === own,
  })));
  const left = spots.filter((spot) => !(spot.furnace === from?.furnace && spot.chamber === from.chamber));
  return [...left.filter((spot) => spot.own), ...left.filter((spot) => !spot.own)];
}

const chamberPart = (chamber: string | undefined, name: string | undefined): string => (chamber && chamber !== 'main' ? `, ${name ?? chamber}` : '');

export function placeText(place: Place | null): string {
  if (!place) return 'Outside any furnace';
  const tray = place.position ? `, tray position ${place.position.place} of ${place.position.places}` : '';
  return `${place.furnace_name}${chamberPart(place.chamber, place.chamber_name)}${tray}`;
}
export const stayText = (stay: PathStay): string =>
  (stay.outside || !stay.furnace ? 'outside any furnace' : `${stay.furnace_name ?? stay.furnace}${chamberPart(stay.chamber, stay.chamber_name)}`);
