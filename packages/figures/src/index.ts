export { countText, numberText, rankText } from "./number-text.js";
export { markerKind } from "./qq-marker.js";
export { FIGURE_STYLE, type PlottedPair, QqPlot, type QqPlotData, type QqPlotProps } from "./qq-plot.js";
export { qqPlotSvg, shiftPlotSvg } from "./render-svg.js";
export { type PlottedShift, ShiftPlot, type ShiftPlotData, type ShiftPlotProps } from "./shift-plot.js";
export { type AxisKind, chooseAxis, valueScale } from "./value-scale.js";
