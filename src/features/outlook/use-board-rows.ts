import { useState } from 'react';

export interface BoardRows {
  isOpen: (areaId: string) => boolean;
  toggle: (areaId: string) => void;
  open: (areaId: string) => void;
  noteOf: (areaId: string) => string;
  setNote: (areaId: string, note: string) => void;
}

/** Which rows are open, the worst by itself, and what is being typed about each area's risk. */
export function useBoardRows(worstAreaId: string | null): BoardRows {
  const [opened, setOpened] = useState<ReadonlyMap<string, boolean>>(new Map());
  const [notes, setNotes] = useState<ReadonlyMap<string, string>>(new Map());
  const isOpen = (areaId: string) => opened.get(areaId) ?? areaId === worstAreaId;
  return {
    isOpen,
    toggle: (areaId) => setOpened(new Map(opened).set(areaId, !isOpen(areaId))),
    open: (areaId) => setOpened(new Map(opened).set(areaId, true)),
    noteOf: (areaId) => notes.get(areaId) ?? '',
    setNote: (areaId, note) => setNotes((before) => new Map(before).set(areaId, note)),
  };
}
