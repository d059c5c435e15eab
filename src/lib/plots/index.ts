export { makeAxis, onAxis, type Axis, type AxisOptions, type Tick } from './axis';
export {
	describePlot,
	type LinePlotData,
	type LinePlotPoint,
	type PlotDescription,
	type PlotMark
} from './line-plot';
export {
	describeHistogram,
	describeStrip,
	type HistogramDescription,
	type StripDescription,
	type StripGroup,
	type StripOptions
} from './strip';
