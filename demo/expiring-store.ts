import type { Adapter, AdapterFactory, AdapterPayload } from 'oidc-provider';

interface Entry {
  payload: AdapterPayload;
  expiresAt: number;
}

/**
 * The stand-in provider's memory: sessions, codes, tokens and grants, each until it expires.
 * One store belongs to one provider, so that two of them in one process never see each other's sessions.
 * @param now seconds; the provider's own clock.
 */
export function makeExpiringStore(now: () => number): AdapterFactory {
  const entries = new Map<string, Entry>();

  function read(key: string): AdapterPayload | undefined {
    const entry = entries.get(key);
    if (entry && entry.expiresAt <= now()) entries.delete(key);
    else if (entry) return entry.payload;
    return undefined;
  }

  function findWhere(model: string, test: (payload: AdapterPayload) => boolean): AdapterPayload | undefined {
    for (const key of entries.keys()) {
      if (!key.startsWith(`${model}:`)) continue;
      const payload = read(key);
      if (payload && test(payload)) return payload;
    }
    return undefined;
  }

  return (model): Adapter => ({
    upsert: (id, payload, expiresIn) => {
      for (const key of entries.keys()) read(key);
      entries.set(`${model}:${id}`, { payload, expiresAt: expiresIn === undefined ? Infinity : now() + expiresIn });
      return Promise.resolve();
    },
    find: (id) => Promise.resolve(read(`${model}:${id}`)),
    findByUid: (uid) => Promise.resolve(findWhere(model, (payload) => payload.uid === uid)),
    findByUserCode: (userCode) => Promise.resolve(findWhere(model, (payload) => payload.userCode === userCode)),
    consume: (id) => {
      const payload = read(`${model}:${id}`);
      if (payload) payload.consumed = now();
      return Promise.resolve();
    },
    destroy: (id) => {
      entries.delete(`${model}:${id}`);
      return Promise.resolve();
    },
    revokeByGrantId: (grantId) => {
      for (const [key, { payload }] of entries) {
        if (payload.grantId === grantId && !key.startsWith('Session:') && !key.startsWith('Interaction:'))
          entries.delete(key);
      }
      return Promise.resolve();
    },
  });
}
