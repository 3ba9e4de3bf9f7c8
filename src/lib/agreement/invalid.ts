/** Input that no figure can be computed from because it breaks its own contract (not because there is too little of it). */
export class InvalidInput extends Error {
	constructor(
		/** Stable, kebab-case, for programs. */
		readonly code: string,
		/** What is wrong, where, and what to do: shown to the user as it stands. */
		sentence: string
	) {
		super(sentence);
		this.name = 'InvalidInput';
	}
}
