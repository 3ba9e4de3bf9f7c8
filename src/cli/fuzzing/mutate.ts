/** Seeded damage to files: the same seed gives the same damage, so that a finding can be repeated. */

/** Random numbers 0 to 1 from a seed (mulberry32; Tommy Ettinger, public domain; from memory). */
export function seededRandom(seed: number): () => number {
	let state = seed >>> 0;
	return () => {
		state = (state + 0x6d2b79f5) >>> 0;
		let t = state;
		t = Math.imul(t ^ (t >>> 15), t | 1);
		t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
		return ((t ^ (t >>> 14)) >>> 0) / 4_294_967_296;
	};
}

const ODD_BYTES = [0x00, 0x01, 0x7f, 0x80, 0xfe, 0xff, 0x22, 0x2c, 0x3b, 0x3c, 0x3e, 0x26, 0x0a, 0x0d];
const ODD_TEXTS = [
	'-1',
	'0',
	'255',
	'99999999999999999999',
	'1e308',
	'NaN',
	'-9999-13-45T99:99:99Z',
	'9999-12-31T23:59:59Z',
	'0001-01-01T00:00:00Z',
	'275760-09-13T00:00:00Z',
	'1.7186E9',
	'1,5',
	'"',
	'""',
	'<![CDATA[',
	'<!--',
	'&amp;',
	'&#x110000;',
	'<!DOCTYPE a [<!ENTITY b "c">]>',
	'\u0000',
	'\ufeff',
	'hr,hr,hr,time',
	';;;;;;;;',
	'\t\t\t'
];

/** One damaged copy; `others` lend pieces. */
export function mutate(bytes: Uint8Array, others: readonly Uint8Array[], random: () => number): Uint8Array {
	let out: Uint8Array = bytes.slice();
	const rounds = 1 + Math.floor(random() * 4);
	for (let i = 0; i < rounds && out.length > 0; i++) out = once(out, others, random);
	return out;
}

function once(bytes: Uint8Array, others: readonly Uint8Array[], random: () => number): Uint8Array {
	const place = () => Math.floor(random() * bytes.length);
	const stretch = (longest: number) => {
		const from = place();
		return [from, Math.min(bytes.length, from + 1 + Math.floor(random() ** 2 * longest))] as const;
	};
	switch (Math.floor(random() * 10)) {
		case 0:
			for (let k = 0; k < 1 + random() * 20; k++) bytes[place()] ^= 1 << Math.floor(random() * 8);
			return bytes;
		case 1:
			for (let k = 0; k < 1 + random() * 20; k++) bytes[place()] = ODD_BYTES[Math.floor(random() * ODD_BYTES.length)];
			return bytes;
		case 2:
			return bytes.slice(0, place());
		case 3: {
			const [from, to] = stretch(bytes.length / 2);
			return splice(bytes, from, to, new Uint8Array(0));
		}
		case 4: {
			const [from, to] = stretch(2000);
			const piece = bytes.slice(from, to);
			return splice(bytes, place(), null, repeat(piece, 1 + Math.floor(random() * 20)));
		}
		case 5: {
			const noise = Uint8Array.from({ length: Math.floor(random() * 300) }, () => Math.floor(random() * 256));
			return splice(bytes, place(), null, noise);
		}
		case 6: {
			const other = others[Math.floor(random() * others.length)];
			const from = Math.floor(random() * other.length);
			return splice(bytes, place(), null, other.slice(from, from + Math.floor(random() * 5000)));
		}
		case 7:
			return splice(bytes, place(), null, new TextEncoder().encode(ODD_TEXTS[Math.floor(random() * ODD_TEXTS.length)]));
		case 8: {
			// Sizes and counts stand near the beginning of most binary formats.
			const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
			if (bytes.length >= 4)
				view.setUint32(
					Math.floor(random() * Math.min(bytes.length - 3, 64)),
					Math.floor(random() * 2 ** 32),
					random() < 0.5
				);
			return bytes;
		}
		default: {
			const [from, to] = stretch(400);
			bytes.fill(random() < 0.5 ? 0 : 0xff, from, to);
			return bytes;
		}
	}
}

function repeat(piece: Uint8Array, times: number): Uint8Array {
	const out = new Uint8Array(piece.length * times);
	for (let i = 0; i < times; i++) out.set(piece, i * piece.length);
	return out;
}

function splice(bytes: Uint8Array, from: number, to: number | null, piece: Uint8Array): Uint8Array {
	const end = to ?? from;
	const out = new Uint8Array(from + piece.length + bytes.length - end);
	out.set(bytes.subarray(0, from));
	out.set(piece, from);
	out.set(bytes.subarray(end), from + piece.length);
	return out;
}
