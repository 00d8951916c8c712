import { renderToStaticMarkup } from "preact-render-to-string";
import { QqPlot, type QqPlotData } from "./qq-plot.js";

/** The Q-Q plot as a document of its own: the same code that draws it on the page. */
export function qqPlotSvg(data: QqPlotData): string {
  return `<?xml version="1.0" encoding="UTF-8"?>\n${renderToStaticMarkup(<QqPlot data={data} standalone={true} />)}\n`;
}
