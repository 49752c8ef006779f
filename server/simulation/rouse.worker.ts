/** Nothing to do: asking for it makes a pool start a thread, which then takes what waits. */
export default function rouse(): void {
  return;
}
