export { writeCsv, type WriteCsvOptions } from './write-csv';
export { writeFit, type WriteFitOptions } from './write-fit';
export { writeGpx } from './write-gpx';
export { writeTcx } from './write-tcx';
export type { RecordingToWrite } from './recording-to-write';
