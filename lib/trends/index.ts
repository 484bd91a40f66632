/** Reading trend exports: a preview of the heads of a drop's files, then days of aligned columns from each whole file. */
export { previewDrop, previewTrend } from './preview';
export { createTrendReader } from './reader';
export * from './types';
