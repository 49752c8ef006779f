import { useState } from 'react';
import { useSessionQuery } from './session.ts';

/** The server's clock when this page was opened, UTC seconds; this device's own may be wrong. */
export function useServerNow(): number {
  const { data, dataUpdatedAt } = useSessionQuery();
  const [opened] = useState(() => Date.now());
  return data ? data.now + Math.max(0, Math.floor((opened - dataUpdatedAt) / 1000)) : Math.floor(opened / 1000);
}
