/** The summands of a sum: one on each line, as one would type it alone, or a source in JSON. */
import { readStrictJson, Refusal, source as sourceSchema, validate, type Source } from '@palmette/contracts';
import { readSourceText, SourceFault } from '@palmette/lattice';

/** @throws SourceFault whose path begins with /of and the number of the summand */
export function readSummands(text: string): Source[] {
  const lines = text
    .split('\n')
    .map((line) => line.trim())
    .filter((line) => line !== '');
  if (lines.length === 0) throw new SourceFault('/of', 'expected summands, one on each line, found none');
  return lines.map((line, k) => {
    try {
      return line.startsWith('{') ? validate(sourceSchema, readStrictJson(line)) : (readSourceText(line) as Source);
    } catch (error) {
      if (error instanceof SourceFault) throw new SourceFault(`/of/${k}${error.path}`, error.message, error.code);
      if (error instanceof Refusal) throw new SourceFault(`/of/${k}${error.path ?? ''}`, error.message);
      throw error;
    }
  });
}
