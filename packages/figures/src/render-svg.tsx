import { renderToStaticMarkup } from "preact-render-to-string";
import { QqPlot, type QqPlotData } from "./qq-plot.js";
import { ShiftPlot, type ShiftPlotData } from "./shift-plot.js";

/** The Q-Q plot as a document of its own: the same code that draws it on the page. */
export function qqPlotSvg(data: QqPlotData): string {
  return `<?xml version="1.0" encoding="UTF-8"?>\n${renderToStaticMarkup(<QqPlot data={data} standalone={true} />)}\n`;
}

/** The shift function as a document of its own. */
export function shiftPlotSvg(data: ShiftPlotData): string {
  return `<?xml version="1.0" encoding="UTF-8"?>\n${renderToStaticMarkup(<ShiftPlot data={data} standalone={true} />)}\n`;
}
