import type { Response } from '../model/model.ts';

/** A unit as a reader names it: `N01`, or `N01@clamped` where mounts are told apart. */
export function placedUnit({ unit, mount }: { readonly unit: string; readonly mount: string }): string {
  return mount === '' ? unit : `${unit}@${mount}`;
}

/** `N01` where one response serves both roles, else `N01 emit`. */
export function responseName(response: Response): string {
  return response.role === 'both' ? placedUnit(response) : `${placedUnit(response)} ${response.role}`;
}
