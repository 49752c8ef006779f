import { readFileSync } from 'node:fs';
import { gzipSync } from 'node:zlib';
import { single, type Bench } from './measure.ts';

interface Part {
  file: string;
  isEntry?: boolean;
  isDynamicEntry?: boolean;
  imports?: string[];
}

/** What a first load of any page may weigh. */
const mostKilobytes = 220;
const client = new URL('../../dist/client/', import.meta.url);

/** Scripts of a first load of each page, compressed as a proxy would: the shell, the page and what either imports at once. */
export const firstLoadBenches: Bench[] = [
  {
    name: 'first load',
    run: () => {
      const parts = JSON.parse(readFileSync(new URL('parts.json', client), 'utf8')) as Partial<Record<string, Part>>;
      const sizes = new Map<string, number>();
      const sizeOf = (file: string) => {
        const size = sizes.get(file) ?? gzipSync(readFileSync(new URL(file, client))).length;
        sizes.set(file, size);
        return size;
      };
      const gather = (key: string, into: Set<string>): Set<string> => {
        const part = parts[key];
        if (!part || into.has(part.file)) return into;
        into.add(part.file);
        for (const imported of part.imports ?? []) gather(imported, into);
        return into;
      };
      const weigh = (page: string | null) => {
        const files = gather('index.html', new Set<string>());
        if (page !== null) gather(page, files);
        return [...files].filter((file) => file.endsWith('.js')).reduce((sum, file) => sum + sizeOf(file), 0) / 1000;
      };
      const pages = Object.keys(parts)
        .filter((key) => parts[key]?.isDynamicEntry && /Page\.tsx$/.test(key))
        .sort();
      if (pages.length === 0) throw new Error('dist/client/parts.json names no page: build first (npm run build).');
      const figure = (name: string, size: number) =>
        single(
          { name: `first load, scripts compressed: ${name}`, unit: 'kB', better: 'lower', goal: mostKilobytes },
          size,
        );
      return [
        figure('the shell alone', weigh(null)),
        ...pages.map((page) => figure(/([^/]+)Page\.tsx$/.exec(page)?.[1] ?? page, weigh(page))),
      ];
    },
  },
];
