import { describe, expect, test } from 'vitest';
import { SharedReplies } from '../../server/http/shared-replies.ts';

function makeShared() {
  let writes = 0;
  let made = 0;
  const shared = new SharedReplies(() => writes);
  const ask = (now: number, { key = 'a', standing = '' } = {}) =>
    shared.of(key, now, standing, () => Promise.resolve(`reply ${String((made += 1))}`));
  return { shared, ask, store: () => (writes += 1) };
}

describe('a reply that is the same for all who ask', () => {
  test('is made once for those who ask within a second, also at the same time', async () => {
    const { ask } = makeShared();
    expect(await Promise.all([ask(100), ask(100)])).toEqual(['reply 1', 'reply 1']);
    expect(await ask(100)).toBe('reply 1');
  });

  test('is made anew in the next second, after anything was stored, and when something else that it shows has changed', async () => {
    const { ask, store } = makeShared();
    expect(await ask(100)).toBe('reply 1');
    expect(await ask(101)).toBe('reply 2');
    store();
    expect(await ask(101)).toBe('reply 3');
    expect(await ask(101, { standing: 'computing' })).toBe('reply 4');
    expect(await ask(101, { key: 'b', standing: 'computing' })).toBe('reply 5');
    expect(await ask(101, { standing: 'computing' })).toBe('reply 4');
  });

  test('that could not be made is tried again', async () => {
    const { shared, ask } = makeShared();
    await expect(shared.of('a', 100, '', () => Promise.reject(new Error('no room')))).rejects.toThrow('no room');
    expect(await ask(100)).toBe('reply 1');
  });
});
