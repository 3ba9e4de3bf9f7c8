/**
 * Agreement of one session from where its offsets and tags stand now, through the one engine. The page runs it while
 * an offset moves; the server runs the same function over what is stored.
 */
import { agreementFigures, pairsOf, pairTraces, type AnalysisPlan, type Figures, type PairTable } from '../agreement';
import type { PairingTag, TagKind } from '../agreement/tag';
import type { Trace } from '../formats/recording';
import type { AlignmentState, SessionDocument, Tag } from './model';
import type { EditorState, EditorTrack } from './state';

/** Figures of one wearable against the reference. */
export interface WearableFigures {
	recordingId: string;
	number: number;
	name: string;
	shortName: string;
	/** Null when nothing can be paired; `why` says the reason. */
	table: PairTable | null;
	primary: Figures | null;
	cleaned: Figures | null;
	/** Why there are no figures; empty when there are. */
	why: string;
	/** Whether the study counts them: an offset that is only proposed and not reliable has to be decided first. */
	counted: boolean;
}

export interface SessionBasis {
	code: string;
	participantCode: string | null;
	plan: AnalysisPlan;
	kinds: readonly TagKind[];
}

/** What the figures of one wearable rest on. Equal parts give equal figures, to the last digit. */
interface PairBasis {
	reference: EditorTrack;
	wearable: EditorTrack;
	offsetS: number;
	driftPpm: number;
	referenceTags: readonly Tag[];
	wearableTags: readonly Tag[];
	session: SessionBasis;
}

type Made = Pick<WearableFigures, 'table' | 'primary' | 'cleaned'>;

const heartRate = (track: EditorTrack): Trace | null => track.traces.find((t) => t.kind === 'heartRate') ?? null;

/** Accepted tags by time, as pairing takes them. */
function pairingTags(tags: readonly Tag[]): PairingTag[] {
	return tags
		.map(({ kind, startS, endS, cleanedOverride }): PairingTag => ({ kind, startS, endS, cleanedOverride }))
		.sort((a, b) => a.startS - b.startS);
}

function figuresOf(basis: PairBasis, reference: Trace, wearable: Trace): Made {
	const { code, participantCode, plan, kinds } = basis.session;
	const table = pairTraces({
		reference,
		wearable,
		offsetS: basis.offsetS,
		driftPpm: basis.driftPpm,
		wearableFirstS: basis.wearable.firstS,
		referenceTags: pairingTags(basis.referenceTags),
		wearableTags: pairingTags(basis.wearableTags),
		plan,
		kinds
	});
	const of = (analysis: 'primary' | 'cleaned') =>
		agreementFigures(
			[
				{
					session: code,
					participant: participantCode ?? undefined,
					...pairsOf(table, analysis),
					soundReferenceS: table.counts.soundReferenceS,
					pairedS: table.counts.pairedS
				}
			],
			{ plan }
		);
	return { table, primary: of('primary'), cleaned: of('cleaned') };
}

/** Figures of a session's wearables, each remembered until something that it rests on changes. */
export class FigureMemory {
	private readonly remembered = new Map<string, { basis: PairBasis; made: Made }>();

	of(tracks: readonly EditorTrack[], alignments: Readonly<Record<string, AlignmentState>>, tags: readonly Tag[], session: SessionBasis): WearableFigures[] {
		const reference = tracks.find((t) => t.role === 'reference') ?? null;
		const accepted = new Map<string, Tag[]>();
		for (const tag of tags) {
			if (tag.status !== 'accepted') continue;
			const same = accepted.get(tag.recordingId);
			if (same) same.push(tag);
			else accepted.set(tag.recordingId, [tag]);
		}
		return tracks
			.filter((t) => t.role === 'wearable')
			.map((wearable): WearableFigures => {
				const { recordingId, number, name, shortName } = wearable;
				const alignment = Object.hasOwn(alignments, recordingId) ? alignments[recordingId] : null;
				const counted = alignment !== null && (alignment.method !== 'proposed' || alignment.estimate?.reliable === true);
				const none = (why: string): WearableFigures => ({ recordingId, number, name, shortName, table: null, primary: null, cleaned: null, why, counted: false });
				const referenceHeartRate = reference && heartRate(reference);
				const wearableHeartRate = heartRate(wearable);
				if (!reference) return none('This session has no reference to compare with.');
				if (!referenceHeartRate) return none('The reference holds no heart rate.');
				if (!wearableHeartRate) return none('The file holds no heart rate.');
				if (!alignment) return none('No offset has been searched or set yet.');
				const basis: PairBasis = {
					reference,
					wearable,
					offsetS: alignment.offsetS,
					driftPpm: alignment.driftPpm,
					referenceTags: accepted.get(reference.recordingId) ?? [],
					wearableTags: accepted.get(recordingId) ?? [],
					session
				};
				const before = this.remembered.get(recordingId);
				const made = before && sameBasis(before.basis, basis) ? before.made : figuresOf(basis, referenceHeartRate, wearableHeartRate);
				this.remembered.set(recordingId, { basis, made });
				const why = made.table?.n === 0 ? 'At this offset the two recordings share no moment.' : '';
				return { recordingId, number, name, shortName, ...made, why, counted };
			});
	}
}

/** A note or a new version of a tag changes no figure. */
const sameTag = (a: Tag, b: Tag): boolean => a === b || (a.kind === b.kind && a.startS === b.startS && a.endS === b.endS && a.cleanedOverride === b.cleanedOverride);
const sameTags = (a: readonly Tag[], b: readonly Tag[]): boolean => a.length === b.length && a.every((tag, i) => sameTag(tag, b[i]));

function sameBasis(a: PairBasis, b: PairBasis): boolean {
	return (
		a.reference === b.reference &&
		a.wearable === b.wearable &&
		a.offsetS === b.offsetS &&
		a.driftPpm === b.driftPpm &&
		a.session.plan === b.session.plan &&
		a.session.kinds === b.session.kinds &&
		a.session.code === b.session.code &&
		a.session.participantCode === b.session.participantCode &&
		sameTags(a.referenceTags, b.referenceTags) &&
		sameTags(a.wearableTags, b.wearableTags)
	);
}

const basisOf = ({ code, participantCode, plan, kinds }: SessionDocument): SessionBasis => ({ code, participantCode, plan, kinds });

/** Figures of where the editor stands. */
export function liveFigures(state: Pick<EditorState, 'tracks' | 'alignments' | 'tags' | 'document'>, memory: FigureMemory): WearableFigures[] {
	return memory.of(state.tracks, state.alignments, state.tags, basisOf(state.document));
}
