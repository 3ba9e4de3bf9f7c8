/** A reason to stop that is the user's to mend: printed as one sentence, without a stack. */
export class StopSentence extends Error {
	override name = 'StopSentence';
}
