/** A JSON Pointer inside a source in words: “row 2, entry 3”, “vertex 3, weight”, “summand 2”. */

const LISTS: Readonly<Record<string, string>> = {
  rows: 'row',
  vertices: 'vertex',
  edges: 'edge',
  fibres: 'slope',
  slopes: 'slope',
  pretzel: 'strand',
  pd: 'crossing',
  of: 'summand',
};

export function placeInWords(path: string): string {
  const steps = path.split('/').slice(1);
  const words: string[] = [];
  let list = '';
  for (const step of steps) {
    if (/^\d+$/.test(step)) {
      const number = Number(step) + 1;
      if (list !== '') words.push(`${LISTS[list] ?? list} ${number}`);
      else words.push(`${words.at(-1)?.startsWith('edge') ? 'end' : 'entry'} ${number}`);
      list = '';
    } else if (LISTS[step] !== undefined) list = step;
    else words.push(step === 'centre' ? 'central weight' : step);
  }
  return words.join(', ');
}

/** “Refused, row 2, entry 3: expected …”, without saying the place twice. */
export function faultSentence(fault: { readonly path: string; readonly message: string }): string {
  const place = placeInWords(fault.path);
  const message = /[.!?]$/.test(fault.message) ? fault.message : `${fault.message}.`;
  const named = place === '' || message.toLowerCase().startsWith(place.split(',')[0]!);
  return `Refused${named ? '' : `, ${place}`}: ${message}`;
}
