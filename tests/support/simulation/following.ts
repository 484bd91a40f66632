/** Temperature that standing water drifts to, and over which time. */
export const ROOM_F = 70;
export const DRIFT_MINUTES = 720;

/** First-order following: the share of the gap that closes in one step. */
export const closing = (stepMinutes: number, tauMinutes: number): number => 1 - Math.exp(-stepMinutes / tauMinutes);
