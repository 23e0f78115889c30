/** What a screen reader is told when something changes without a new page: one polite live region for all. */
import { ref, type Ref } from 'vue';

const words = ref('');

export function announcement(): Readonly<Ref<string>> {
  return words;
}

/** Says a sentence. The same sentence twice is said twice. */
export function announce(sentence: string): void {
  words.value = words.value === sentence ? `${sentence}\u00a0` : sentence;
}
