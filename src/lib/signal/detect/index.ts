/** Detectors: where a wearable, or the reference, stopped telling the heart rate, and where the wearer rested. */
export { detectEvents, type DetectionInput } from './detect-events';
export { localMaxima, peakProminence, prominentPeaks, type Peak } from './peak-prominence';
export { PROPOSED_KINDS, type ClockMapping, type Proposal, type ProposedKind } from './proposal';
