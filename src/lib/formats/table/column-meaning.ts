/** What a column holds, by its name. */
import type { ChannelKind } from '../recording';

export type ColumnMeaning =
	| { role: 'time'; elapsed: boolean; dateOnly: boolean }
	| {
			role: 'channel';
			kind: ChannelKind;
			/** Value in the unit of the channel = value in the file × factor + offset. */
			factor: number;
			offset: number;
			/** True where name or unit says that both feet are counted. */
			countsSteps: boolean;
	  }
	| { role: 'name' }
	| { role: 'value' };

/** A summary or a setting, no series of its own. */
const NO_SERIES =
	/\b(avg|average|mean|max(imum)?|min(imum)?|zones?|rest(ing)?|reserve|limit|target|threshold|variability|rmssd|sdnn|confidence|quality|accuracy|source|status|error|valid)\b/;

const HEART_RATE =
	/\b(hr|hrm|bpm|pulse?|puls|heart ?rates?|heartrate|heart ?frequency|herzfrequenz|herzrate|hf|frequence cardiaque|frequenza cardiaca|frecuencia cardiaca|fc|hjertefrekvens|hartslag|hartfrequentie|pulso|polso|puls(slag|aciones)?|ritmo cardiaco|ppm|tetno|syke|sykkeet|hjartfrekvens)\b|пульс|чсс|心率|心拍/;
const RR =
	/^(.*\b)?(rr|rri|ibi|nn|rr ?intervals?|r r( ?intervals?)?|inter ?beat ?intervals?|beat ?intervals?|pp ?intervals?|ppi)\b/;
const CHANNELS: [RegExp, ChannelKind][] = [
	[
		/\b(cadence|cad|spm|rpm|steps? ?rate|steps? per min(ute)?|steps? min|step ?frequency|stride ?rate|strides? per min(ute)?|stroke ?rate|trittfrequenz|schrittfrequenz|run ?cadence)\b/,
		'cadence'
	],
	[/\b(speed|velocity|geschwindigkeit|vitesse|velocidad)\b/, 'speed'],
	[/\b(power|watts?|leistung|puissance)\b/, 'power'],
	[/\b(altitudes?|elevation|alt|ele|hohe|hoehe|height)\b/, 'altitude'],
	[/\b(distances?|dist|strecke|distanz)\b/, 'distance'],
	[/\b(temperatures?|temp|temperatur)\b/, 'temperature']
];
const ELAPSED =
	/\b(elapsed|duration|seconds?|secs?|millis|milliseconds?|minutes?|since|offset|dauer|relative)\b|^(s|t|ms)$/;
const TIME =
	/^(.*\b)?(time|timestamps?|ts|datetime|date|utc|epoch|unix|unixtime|zeit|uhrzeit|zeitstempel|datum|temps|heure|tiempo|hora|fecha|ora|tid|clock|when|start|begin|elapsed|duration|seconds?|secs?|millis|milliseconds?)\b|^(s|t|ms)$/;

/** Words of a name in lower case without accents, and the unit in brackets or behind an underscore. */
export function nameWords(header: string): { words: string; unit: string } {
	const plain = header
		.normalize('NFD')
		.replace(/[\u0300-\u036f]/g, '')
		.replace(/([a-z\d])([A-Z])/g, '$1 $2')
		.toLowerCase();
	const unit = /[([{]\s*([^)\]}]*?)\s*[)\]}]/.exec(plain)?.[1] ?? '';
	const words = plain
		.replace(/[([{].*?[)\]}]/g, ' ')
		.replace(/m\/s|m_s\b/g, ' mps ')
		.replace(/km\/h|km_h|kmh|kph/g, ' kmh ')
		.replace(/[^\p{L}\p{N}%°]+/gu, ' ')
		.trim();
	return { words, unit: unit.replace(/[^a-z0-9/%°]+/g, '') };
}

/**
 * The meaning of a column name.
 *
 * @param header as in the file, with or without a unit
 * @returns undefined where the name says nothing that a recording can hold
 */
export function columnMeaning(header: string): ColumnMeaning | undefined {
	if (header.length > 80) return undefined;
	const { words, unit } = nameWords(header);
	if (words === '' && unit === '') return undefined;
	if (/^(value|val|wert|reading|values)$/.test(words)) return { role: 'value' };
	if (
		/^(type|metric|channel|name|measure|measurement|signal|parameter|kind|field|data ?type|variable|item|key|sensor)$/.test(
			words
		)
	)
		return { role: 'name' };
	const text = `${words} ${unit}`.trim();
	if (/\bpace\b|\bpercent\b|%/.test(text) || NO_SERIES.test(words)) return undefined;
	const channel = (kind: ChannelKind, factor = 1, offset = 0, countsSteps = false): ColumnMeaning => ({
		role: 'channel',
		kind,
		factor,
		offset,
		countsSteps
	});
	if (RR.test(words))
		return channel('rrInterval', /(^|\b)s(ec)?$/.test(unit) || /\b(s|sec|seconds)$/.test(words) ? 1000 : 1);
	if (HEART_RATE.test(words) || (unit === 'bpm' && !TIME.test(words))) return channel('heartRate');
	for (const [pattern, kind] of CHANNELS) {
		if (!pattern.test(words)) continue;
		if (kind === 'temperature' && /\bbody\b|\bskin\b|\bcore\b/.test(words)) return undefined;
		if (kind === 'cadence')
			return channel(kind, /stride/.test(text) ? 2 : 1, 0, /\bspm\b|\bsteps?\b|stride/.test(text));
		if (kind === 'speed' && /vertical/.test(words)) return undefined;
		if (kind === 'speed')
			return channel(kind, /kmh|km\/h/.test(text) ? 1 / 3.6 : /\bmph\b|mi\/h/.test(text) ? 0.44704 : 1);
		if (kind === 'altitude') return channel(kind, /\b(ft|feet)\b/.test(text) ? 0.3048 : 1);
		if (kind === 'distance')
			return channel(kind, /\bkm\b/.test(text) ? 1000 : /\b(mi|miles)\b/.test(text) ? 1609.344 : 1);
		if (kind === 'temperature' && /(^|\s|°)f$|fahrenheit/.test(text)) return channel(kind, 5 / 9, -160 / 9);
		return channel(kind);
	}
	if (/\b(zone|tz)\b/.test(words)) return undefined;
	if (TIME.test(words))
		return {
			role: 'time',
			elapsed: ELAPSED.test(words) || /^(s|ms|sec|min)$/.test(unit),
			dateOnly: /^(date|datum|fecha)$/.test(words)
		};
	return undefined;
}
