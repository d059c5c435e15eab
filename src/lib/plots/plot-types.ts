import type { Axis } from './axis';

/** Points with their fits, as an evaluation's figure gives them; all in the units of the axes. */
export interface LinePlotData {
	x: { label: string; symbol: string; unit: string };
	y: { label: string; symbol: string; unit: string };
	series: PlotSeries[];
}

export interface PlotSeries {
	label: string;
	points: LinePlotPoint[];
	/** the fitted line or curve with its band, in order of x */
	curve?: { x: number; y: number; low: number; high: number }[];
}

export interface LinePlotPoint {
	row: string;
	x: number;
	y: number;
	ux: number | null;
	uy: number | null;
	residual: number | null;
	used: boolean;
}

/** What is drawn, in px, in drawing order. `class` says what it is; looks are the style sheet's. */
export type PlotMark =
	| { kind: 'path'; class: 'band' | 'band-edge' | 'zero' | 'fit' | 'dots' | 'crosses'; d: string }
	| {
			kind: 'line';
			class: 'error-bar' | 'axis' | 'tick' | 'leader';
			x1: number;
			y1: number;
			x2: number;
			y2: number;
	  }
	/** series are told apart by shape first; a point left out of the fit is a cross */
	| { kind: 'point'; class: 'point' | 'left-out'; series: number; row: string; x: number; y: number }
	/** a series' name beside it, its shape before it */
	| { kind: 'label'; class: 'series-label'; series: number; x: number; y: number; text: string }
	| {
			kind: 'text';
			class: 'tick-label';
			x: number;
			y: number;
			anchor: 'start' | 'middle' | 'end';
			text: string;
	  };

export interface PlotDescription {
	width: number;
	height: number;
	x: Axis;
	y: Axis;
	/** null where nothing is fitted */
	residual: Axis | null;
	marks: PlotMark[];
}
