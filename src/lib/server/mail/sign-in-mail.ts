/** The mail with a sign-in link. */
import type { Mail } from './send';

/** @param minutes how long the link works */
export function signInMail(to: string, link: string, minutes: number): Mail {
	return {
		to,
		subject: 'Your sign-in link for Nonius',
		text: [
			'Follow this link to sign in to Nonius:',
			'',
			link,
			'',
			`It works once, within ${minutes} minutes, in any browser.`,
			'',
			'You get this mail because somebody asked for a sign-in link for this address. If it was not you, do nothing: without the link nobody gets in.'
		].join('\n')
	};
}
