// Hands bytes to the reader as a file: a picture, a table, a page.

/** @param name  shown to the reader; only its last part is used */
export function saveFile({ name, type, bytes }: { readonly name: string; readonly type: string; readonly bytes: Uint8Array }): void {
  const address = URL.createObjectURL(new Blob([bytes as BlobPart], { type }));
  const link = document.createElement("a");
  link.href = address;
  link.download = name.split(/[/\\]/).at(-1) || "lagbook";
  link.click();
  setTimeout(() => URL.revokeObjectURL(address), 10000);
}
