/** Signal methods: from traces on clocks of their own to one time axis. */
export { alignRecordings, type RecordingAlignment } from './align-recordings';
export { beatOffset, type BeatOffset } from './beat-offset';
export { judge, searchBestFitShift, type Evidence, type ShiftSearch } from './best-fit-shift';
export { coarseSearch, HEART_RATE_SEARCH, peaksOf, type CoarseResult } from './coarse-search';
export { clockOffset, type ClockOffset } from './clock-offset';
export { estimateBestFitShift, estimateInParts } from './estimate-shift';
export { crossCorrelate } from './fft-plan';
export { correlationAtShift, prepareTrace, shiftCurve, type PreparedTrace } from './shift-curve';
export type { Part } from './pause-split';
export type { ShiftCandidate, ShiftCurve, ShiftEstimate } from './shift';
export { zoneWords } from './zone';
