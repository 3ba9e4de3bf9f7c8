/** Narrowing a list by what was typed. */
export interface Narrowed<T> {
	item: T;
	/** The name in parts, those that were typed marked. */
	parts: { text: string; hit: boolean }[];
}

/**
 * Items whose name (or detail) holds every word that was typed, in their own order; those whose name has a word that
 * begins with the query come first within their group.
 */
export function narrow<T extends { name: string; detail: string; group: string }>(items: readonly T[], query: string): Narrowed<T>[] {
	const words = query.trim().toLowerCase().split(/\s+/).filter(Boolean);
	if (words.length === 0) return items.map((item) => ({ item, parts: [{ text: item.name, hit: false }] }));
	const groups = [...new Set(items.map((i) => i.group))];
	const begins = (item: T) => item.name.toLowerCase().split(/\s+/).some((w) => w.startsWith(words[0]));
	return items
		.filter((item) => words.every((w) => `${item.name} ${item.detail}`.toLowerCase().includes(w)))
		.map((item, i) => ({ item, i }))
		.sort((a, b) => groups.indexOf(a.item.group) - groups.indexOf(b.item.group) || Number(begins(b.item)) - Number(begins(a.item)) || a.i - b.i)
		.map(({ item }) => ({ item, parts: marked(item.name, words) }));
}

function marked(name: string, words: readonly string[]): { text: string; hit: boolean }[] {
	const hit = new Array<boolean>(name.length).fill(false);
	const lower = name.toLowerCase();
	for (const word of words) {
		const at = lower.indexOf(word);
		if (at >= 0) hit.fill(true, at, at + word.length);
	}
	const parts: { text: string; hit: boolean }[] = [];
	for (let i = 0; i < name.length; i++) {
		const last = parts[parts.length - 1];
		if (last && last.hit === hit[i]) last.text += name[i];
		else parts.push({ text: name[i], hit: hit[i] });
	}
	return parts;
}
