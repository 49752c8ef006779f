/**
 * A module of shared/ as it is shipped: the compiled file (`npm run build` first). Run through tsx, whose output V8 compiles
 * worse, the same code is a seventh slower.
 * @param path below shared/, without ending, for instance 'forecasting/fit-arrivals'
 */
export async function built<Module>(path: string): Promise<Module> {
  return (await import(new URL(`../../dist/shared/${path}.js`, import.meta.url).href)) as Module;
}
