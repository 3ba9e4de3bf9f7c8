/** What is shown beside the plot, and the boxes that commands open. */
import { show, type Command } from '../transaction';

export const toggleRule: Command = (state, dispatch) => show(dispatch, { ruleOpen: !state.ruleOpen });

const toggle =
	(part: 'difference' | 'cadence' | 'cadenceOverPlot', words: string): Command =>
	(state, dispatch) =>
		show(dispatch, { show: { ...state.show, [part]: !state.show[part] } }, `${words} ${state.show[part] ? 'hidden' : 'shown'}.`);
export const toggleDifference = toggle('difference', 'Difference strip');
export const toggleCadence = toggle('cadence', 'Cadence lane');
export const toggleCadenceOverPlot = toggle('cadenceOverPlot', 'Cadence over the plot');

/** Changes the figures between the primary and the cleaned analysis. */
export const toggleAnalysis: Command = (state, dispatch) =>
	showAnalysis(state.analysis === 'primary' ? 'cleaned' : 'primary')(state, dispatch);
export const showAnalysis =
	(analysis: 'primary' | 'cleaned'): Command =>
	(_state, dispatch) =>
		show(dispatch, { analysis }, `Figures of the ${analysis} analysis.`);

const open =
	(what: 'command list' | 'keys' | 'table'): Command =>
	(_state, dispatch) =>
		show(dispatch, { asking: { what } });
export const openCommandList = open('command list');
export const openKeys = open('keys');
export const openTable = open('table');

/** Closes whatever box is open. */
export const closeBox: Command = (state, dispatch) => (state.asking === null ? false : show(dispatch, { asking: null }));
