/** The path that hangs on the wire under the header: from the studies to where the reader is. Each page says its own. */
import { shallowRef, toValue, watchEffect, type MaybeRefOrGetter, type ShallowRef } from 'vue';

export interface PathPlace {
  /** May hold `Z^9`, which is set with a real superscript. */
  readonly label: string;
  /** Left out for the place where one is. */
  readonly to?: string;
}

const path: ShallowRef<readonly PathPlace[]> = shallowRef([]);

/** Read by the header only. */
export function currentPath(): Readonly<ShallowRef<readonly PathPlace[]>> {
  return path;
}

/** Hangs a page's path on the wire and names the window after its last place. */
export function usePagePath(places: MaybeRefOrGetter<readonly PathPlace[]>): void {
  watchEffect(() => {
    // Only written here, never read: two pages, one inside the other, would otherwise answer each other for ever.
    const mine = toValue(places);
    path.value = mine;
    const here = mine.at(-1)?.label.replaceAll(/\^\{?([^}\s]*)\}?/g, '^$1');
    document.title = here === undefined ? 'Palmette' : `${here} · Palmette`;
  });
}
