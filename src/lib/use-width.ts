import { useEffect, useRef, useState } from 'react';
import type { RefObject } from 'react';

/** The width of an element in px, followed as it changes; 0 before it is laid out. */
export function useWidth<E extends HTMLElement>(): [ref: RefObject<E | null>, width: number] {
  const ref = useRef<E>(null);
  const [width, setWidth] = useState(0);
  useEffect(() => {
    const element = ref.current;
    if (!element) return;
    const observer = new ResizeObserver(([entry]) => {
      setWidth(Math.floor(entry.contentRect.width));
    });
    observer.observe(element);
    return () => {
      observer.disconnect();
    };
  }, []);
  return [ref, width];
}
