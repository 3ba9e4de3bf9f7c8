/** The browser's store for edits on their way: one entry a tab, so that two tabs of a session never overwrite each other's. */
import type { EditStore } from './saving';

const PREFIX = 'nonius.unsaved';

/**
 * @param person whoever edits: another person at the same browser does not send what this one left
 * @param tab a word of this tab's own
 * @param storage default this browser's own; null where there is none
 */
export function browserEditStore(sessionId: string, person: string, tab: string, storage: Storage | null = ownStorage()): EditStore {
	const group = `${PREFIX}.${sessionId}.${person}.`;
	const own = group + tab;
	return {
		read() {
			if (!storage) return [];
			const keys = Array.from({ length: storage.length }, (_, i) => storage.key(i)).filter((key): key is string => key?.startsWith(group) ?? false);
			const texts = keys.flatMap((key) => storage.getItem(key) ?? []);
			// What is read goes on under this tab's name; the old entries go only when that is kept.
			if (texts.length > 0 && storeText(storage, own, JSON.stringify(texts.flatMap(parsedList)))) for (const key of keys) if (key !== own) storage.removeItem(key);
			return texts;
		},
		write: (text) => storeText(storage, own, text)
	};
}

/** Reading the storage throws where the browser forbids it. */
function ownStorage(): Storage | null {
	try {
		return typeof localStorage === 'undefined' ? null : localStorage;
	} catch {
		return null;
	}
}

function parsedList(text: string): unknown[] {
	try {
		const parsed: unknown = JSON.parse(text);
		return Array.isArray(parsed) ? parsed : [];
	} catch {
		return [];
	}
}

/** @returns false when it is not kept: full, or switched off. Then a reload would lose what waits, and the page asks first. */
function storeText(storage: Storage | null, key: string, text: string | null): boolean {
	try {
		if (text === null) storage?.removeItem(key);
		else if (storage) storage.setItem(key, text);
		return text === null || storage !== null;
	} catch {
		return false;
	}
}
