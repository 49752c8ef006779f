/** A word of a file without its case and the number of its spaces: what is the same under it means the same. */
export function sameWord(word: string): string {
  return word.trim().replace(/\s+/gu, ' ').toLowerCase();
}

/** Spellings of one word, the most frequent first, and the rows of all of them. */
export interface WordGroup {
  spellings: string[];
  rows: number;
}

/** Values that differ in case or spaces only, together; in the order of their rows. */
export function groupWords(values: readonly { value: string; rows: number }[]): WordGroup[] {
  const groups = new Map<string, { value: string; rows: number }[]>();
  for (const each of values) {
    const key = sameWord(each.value);
    const group = groups.get(key);
    if (group) group.push(each);
    else groups.set(key, [each]);
  }
  return [...groups.values()]
    .map((group) => ({
      spellings: group.sort((a, b) => b.rows - a.rows).map(({ value }) => value),
      rows: group.reduce((sum, { rows }) => sum + rows, 0),
    }))
    .sort((a, b) => b.rows - a.rows);
}
