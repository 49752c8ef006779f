/** Hands the person a file made here; nothing is sent. */
export function saveFile(name: string, type: string, pieces: readonly BlobPart[]): void {
  const address = URL.createObjectURL(new Blob([...pieces], { type }));
  const link = document.createElement('a');
  link.href = address;
  link.download = name;
  link.click();
  // The browser reads the address after the click returns.
  setTimeout(() => {
    URL.revokeObjectURL(address);
  }, 60_000);
}
