import type { Session, User } from 'lucia';
import type { PlacedCurtain } from '$lib/place-search/placed';
import type { Membership } from '$lib/server/operators/operators';

declare global {
	namespace App {
		interface Error {
			message: string;
			/** Stands in the log too, so that a report can be found. */
			requestId?: string;
		}
		interface PageState {
			/** A curtain that a search found a place for, on its way to the plan table. */
			placed?: PlacedCurtain;
		}
		interface Locals {
			requestId: string;
			/** The session of the cookie; its second step may be open. */
			session: Session | null;
			/** Who is signed in, every step passed. */
			user: User | null;
			/** Who gave a password but not yet the second step. */
			halfSignedIn: User | null;
			/** The operator of a /desk page, and the person's role there. */
			membership: Membership | null;
			/** Why a /desk page is closed to this person, when it is not simply unknown. */
			deskRefusal: { status: number; message: string } | null;
		}
	}
}

export {};
