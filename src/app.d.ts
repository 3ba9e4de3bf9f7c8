import type { Actor } from '$lib/server/auth/actor';
import type { Membership, SignedInUser } from '$lib/server/auth/membership';
import type { Database } from '$lib/server/db/client';
import type { Settings } from '$lib/server/settings';

declare global {
	namespace App {
		interface Error {
			message: string;
		}
		interface Locals {
			db: Database;
			settings: Settings;
			/** The signed-in person; null when signed out. */
			user: SignedInUser | null;
			/** The person as a member of the team that is open; null without one. */
			actor: Actor | null;
			/** All teams of the person. */
			memberships: Membership[];
		}
	}
}

export {};
