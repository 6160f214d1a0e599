export interface Sample { labels?: Record<string, string>, value: number }
/** Bounds are upper ones; counts are cumulative, and the last, of all, is `count`. */
export interface HistogramSample { labels?: Record<string, string>, buckets: { le: number, count: number }[], sum: number, count: number }

/** What is measured under one name. A counter's name ends in _total. */
export type MetricFamily =
  | { name: string, help: string, type: 'counter' | 'gauge', samples: Sample[] }
  | { name: string, help: string, type: 'histogram', samples: HistogramSample[] }
