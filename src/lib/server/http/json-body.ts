/** The body of a request as JSON, or the sender's fault. */
import { invalid } from '../errors';

export async function jsonBody(request: Request): Promise<unknown> {
	try {
		return await request.json();
	} catch (cause) {
		if (!(cause instanceof SyntaxError)) throw cause;
		throw invalid('The body of the request is not JSON. Send an object with content-type application/json.');
	}
}
