/** The key under which a document is sent: the same for every new try of the same, another one for another. */

export function onceKey(): (document: string) => string {
  let last = { document: '', key: '' };
  return (document) => {
    if (last.document !== document || last.key === '') last = { document, key: randomKey() };
    return last.key;
  };
}

/** 128 random bits; works on plain http too, where randomUUID does not exist. */
function randomKey(): string {
  return [...crypto.getRandomValues(new Uint8Array(16))].map((byte) => byte.toString(16).padStart(2, '0')).join('');
}
