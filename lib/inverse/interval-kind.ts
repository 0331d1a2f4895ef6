/** Whether each interval covers by itself, or all of a line together; light, since help texts read it. */
export const INTERVAL_KINDS = ["single", "simultaneous"] as const;

export type IntervalKind = (typeof INTERVAL_KINDS)[number];
