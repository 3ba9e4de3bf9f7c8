/** Said where a file is too large, before it is sent and by the server. */
export function tooLargeSentence(sizeBytes: number, largestBytes: number): string {
	const megabytes = (bytes: number) => Math.ceil(bytes / (1024 * 1024));
	return `The file has ${megabytes(sizeBytes)} MB; ${megabytes(largestBytes)} MB is the most for one file. Export the session alone, or cut the recording in two.`;
}
