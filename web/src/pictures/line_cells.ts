// A pusher line as a row of tray positions in the order the trays pass them: which zone, which load. Pure.
import type { Chamber, FloorLoad } from '../contract.ts';

export interface Cell<Load> { place: number; zone: number; load: Load | null }
export interface Zone { name: string; from: number; to: number }  // places, both included

export function zonesOf(chambers: readonly Chamber[]): Zone[] {
  let before = 0;
  return chambers.map((chamber) => {
    const from = before + 1;
    before += Math.max(1, chamber.places ?? 1);
    return { name: chamber.name, from, to: before };
  });
}

// Loads without a position are left out: the list below the row names them.
export function cellsOf<Load extends Pick<FloorLoad, 'position'>>(zones: readonly Zone[], loads: readonly Load[]): Cell<Load>[] {
  const places = zones[zones.length - 1]?.to ?? 0;
  return Array.from({ length: places }, (_, i) => ({
    place: i + 1, zone: zones.findIndex((zone) => i + 1 <= zone.to), load: loads.find((each) => each.position?.place === i + 1) ?? null,
  }));
}

export const inOrder = <Load extends Pick<FloorLoad, 'position'>>(loads: readonly Load[]): Load[] =>
  [...loads].sort((a, b) => (a.position?.place ?? Infinity) - (b.position?.place ?? Infinity));
