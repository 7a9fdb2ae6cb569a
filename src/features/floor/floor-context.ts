import { createContext, useContext } from 'react';
import { useStore } from 'zustand';
import type { FloorState, FloorStore } from './floor-store';

export const FloorContext = createContext<FloorStore | null>(null);

/** The store of the page. */
export function useFloorStore(): FloorStore {
  const store = useContext(FloorContext);
  if (!store) throw new Error('This screen belongs inside the Floor.');
  return store;
}

/** One part of what the Floor knows; the screen is drawn again only when that part changes. */
export function useFloor<T>(select: (state: FloorState) => T): T {
  return useStore(useFloorStore(), select);
}
