// Entry of an engine thread: makes TypeScript sources loadable in this thread, then loads the engine.
import { register } from 'tsx/esm/api';
register();
await import('./engine-thread.ts');
