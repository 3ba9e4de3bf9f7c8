/** Where somebody wanted to go before signing in: a path of this server, never another one's address. */
export const HOME = '/studies';

/** @param wanted as it came from an address or a form; anything that is not a plain path of ours leads home */
export function wayBack(wanted: string | null | undefined): string {
	if (!wanted || !wanted.startsWith('/')) return HOME;
	try {
		// Browsers read `/\evil.example` and `//evil.example` as other servers; the parser says what they would do.
		const base = 'http://nonius.invalid';
		const url = new URL(wanted, base);
		if (url.origin !== base || /^\/(auth|signin|signout)(\/|$)/.test(url.pathname)) return HOME;
		return url.pathname + url.search;
	} catch {
		return HOME;
	}
}
