/** A text as a file that the browser saves. */
export function saveText(text: string, fileName: string, type: string): void {
  const address = URL.createObjectURL(new Blob([text], { type }));
  const link = document.createElement('a');
  link.href = address;
  link.download = fileName;
  link.click();
  // The browser has taken hold of the file by the next task.
  setTimeout(() => URL.revokeObjectURL(address));
}
