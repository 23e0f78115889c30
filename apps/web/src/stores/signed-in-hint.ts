/**
 * Whether somebody was signed in in this browser. No secret and no truth: it spares the server, and the console, the
 * question who this is where nobody can be signed in.
 */
const KEPT_UNDER = 'palmette.signed-in';

/** True too where nothing can be kept, so that the server is asked. */
export function mayBeSignedIn(): boolean {
  try {
    return localStorage.getItem(KEPT_UNDER) !== null;
  } catch {
    return true;
  }
}

export function keepSignedInHint(signedIn: boolean): void {
  try {
    if (signedIn) localStorage.setItem(KEPT_UNDER, 'yes');
    else localStorage.removeItem(KEPT_UNDER);
  } catch {
    // without a store the server is asked each time
  }
}
