/** The key that a letter's link carries: in the path, as `?key=`, or behind the #. */
import { useRoute } from 'vue-router';

export function useLinkKey(): string {
  const route = useRoute();
  const inPath = Array.isArray(route.params.key) ? route.params.key[0] : route.params.key;
  const inQuery = typeof route.query.key === 'string' ? route.query.key : undefined;
  return inPath || inQuery || route.hash.replace(/^#/, '');
}
