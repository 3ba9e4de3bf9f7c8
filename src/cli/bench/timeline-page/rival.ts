/** The same heart rates in uPlot as its documentation sets it up: series joined on one time axis, its own axes and legend. */
import uPlot from 'uplot';
import 'uplot/dist/uPlot.min.css';
import { decodeTraceColumns } from '../../../lib/timeline/trace-columns';
import { painted } from './painted';

const samples = await fetch('/samples').then((r) => r.arrayBuffer());
const heartRates = [...decodeTraceColumns(samples).values()].flatMap((traces) => traces.filter((t) => t.kind === 'heartRate'));
const data = uPlot.join(heartRates.map((t): uPlot.AlignedData => [Array.from(t.tS), Array.from(t.value)]));
const series: uPlot.Series[] = [{}, ...heartRates.map((_, i) => ({ label: `trace ${i}`, stroke: ['black', 'teal', 'brown', 'orchid'][i % 4], spanGaps: true }))];
const target = document.getElementById('page');
if (!target) throw new Error('The page has no place for the plot.');
new uPlot({ width: window.innerWidth, height: 600, series, hooks: { draw: [painted] } }, data, target);
