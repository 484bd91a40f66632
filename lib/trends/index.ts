/** Reading trend exports: a preview of the head, then days of aligned columns from the whole file. */
export { previewTrend } from './preview';
export { createTrendReader } from './reader';
export * from './types';
