export { makeAxis, onAxis, type Axis, type AxisOptions, type Tick } from './axis';
export { describePlot } from './line-plot';
export type { LinePlotData, LinePlotPoint, PlotDescription, PlotMark, PlotSeries } from './plot-types';
export {
	describeHistogram,
	describeStrip,
	type HistogramDescription,
	type StripDescription,
	type StripGroup,
	type StripOptions
} from './strip';
