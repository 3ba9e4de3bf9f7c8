/** A request to a route as the server would hand it over, for tests that call loads, actions and endpoints themselves. */
import type { Cookies, RequestEvent } from '@sveltejs/kit';
import type { Actor } from '../../src/lib/server/auth/actor';
import type { SignedInUser } from '../../src/lib/server/auth/membership';
import type { Database } from '../../src/lib/server/db/client';
import type { Settings } from '../../src/lib/server/settings';

export interface EventOptions {
	db: Database;
	settings: Settings;
	actor?: Actor | null;
	user?: SignedInUser | null;
	method?: string;
	/** Path and query. */
	path?: string;
	params?: Record<string, string>;
	headers?: Record<string, string>;
	form?: Record<string, string>;
	json?: unknown;
	clientAddress?: string;
	/** Shared by the requests of one browser. */
	jar?: Map<string, string>;
	parent?: Record<string, unknown>;
	routeId?: string;
}

/** The event types of routes differ in their params and parents only; the route that takes it says which one it is. */
export function eventOf<Event = RequestEvent>(options: EventOptions): Event {
	const { settings, jar = new Map<string, string>(), actor = null, form, json } = options;
	const url = new URL(options.path ?? '/', settings.origin);
	const method = options.method ?? (form || json !== undefined ? 'POST' : 'GET');
	const headers = new Headers({ host: url.host, cookie: [...jar].map(([name, value]) => `${name}=${value}`).join('; '), ...options.headers });
	const body = form ? new URLSearchParams(form) : json !== undefined ? JSON.stringify(json) : undefined;
	if (form) headers.set('content-type', 'application/x-www-form-urlencoded');
	if (json !== undefined) headers.set('content-type', 'application/json');
	const cookies: Pick<Cookies, 'get' | 'getAll' | 'set' | 'delete'> = {
		get: (name) => jar.get(name),
		getAll: () => [...jar].map(([name, value]) => ({ name, value })),
		set: (name, value) => void jar.set(name, value),
		delete: (name) => void jar.delete(name)
	};
	const user = options.user ?? (actor ? { id: actor.userId, email: `${actor.initials.toLowerCase()}@${actor.teamSlug}.example`, name: actor.initials, theme: 'system' } : null);
	const memberships = actor ? [{ memberId: actor.memberId, teamId: actor.teamId, teamSlug: actor.teamSlug, teamName: actor.teamName, role: actor.role, initials: actor.initials }] : [];
	return {
		url,
		request: new Request(url, { method, headers, body }),
		params: options.params ?? {},
		route: { id: options.routeId ?? null },
		cookies,
		locals: { db: options.db, settings, user, actor, memberships },
		getClientAddress: () => options.clientAddress ?? '127.0.0.1',
		parent: async () => options.parent ?? {},
		depends: () => {},
		untrack: (work: () => unknown) => work(),
		setHeaders: () => {},
		fetch
	} as unknown as Event;
}

/** Takes over what an answer sets, as a browser does. */
export function keepCookies(jar: Map<string, string>, answer: Response): void {
	for (const line of answer.headers.getSetCookie()) {
		const [pair, ...attributes] = line.split(';').map((part) => part.trim());
		const at = pair.indexOf('=');
		const gone = attributes.some((a) => /^max-age=0$/i.test(a) || (/^expires=/i.test(a) && new Date(a.slice(8)) <= new Date()));
		if (gone || at === pair.length - 1) jar.delete(pair.slice(0, at));
		else jar.set(pair.slice(0, at), pair.slice(at + 1));
	}
}
