/** The timeline as the session page mounts it, on a document and samples that come over HTTP. */
import '../../../app.css';
import { mount } from 'svelte';
import { TimelineEditor } from '../../../lib/timeline/editor.svelte';
import type { SessionDocument } from '../../../lib/timeline/model';
import { decodeTraceColumns } from '../../../lib/timeline/trace-columns';
import Workstation from '../../../lib/timeline/view/Workstation.svelte';
import { painted } from './painted';

const [document_, samples] = await Promise.all([
	fetch('/document.json').then((r) => r.json() as Promise<SessionDocument>),
	fetch('/samples').then((r) => r.arrayBuffer())
]);
const editor = new TimelineEditor(document_, decodeTraceColumns(samples), { store: { read: () => [], write: () => true } });
const target = document.getElementById('page');
if (!target) throw new Error('The page has no place for the timeline.');
mount(Workstation, { target, props: { editor, me: { initials: 'RT', name: 'RT', email: 'rt@bramling.example', role: 'analyst' }, onneighbour: () => {}, onpaint: painted } });
