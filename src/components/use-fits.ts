import { useEffect, useState } from 'react';
import type { RefObject } from 'react';

/** Whether what an element holds is no wider than the element, followed as either changes. */
export function useFits(ref: RefObject<HTMLElement | null>): boolean {
  const [fits, setFits] = useState(false);
  useEffect(() => {
    const element = ref.current;
    const child = element?.firstElementChild;
    if (!element || !child) return;
    const observer = new ResizeObserver(() => {
      setFits(child.getBoundingClientRect().width <= element.clientWidth + 1);
    });
    observer.observe(element);
    observer.observe(child);
    return () => {
      observer.disconnect();
    };
  }, [ref]);
  return fits;
}
