import type { ComponentChildren, VNode } from "preact";
import { renderToStaticMarkup } from "preact-render-to-string";
import { CAUTION } from "../api/caution.js";

export interface PageProps {
  readonly title: string;
  readonly notice: string | null;
  /** Style and script names carry a hash of their content, so they may be kept for ever. */
  readonly assets: { readonly style: string; readonly script: string; readonly icon: string };
  readonly children: ComponentChildren;
}

/** What every page has around its live part. */
function Page({ title, notice, assets, children }: PageProps): VNode {
  return (
    <html lang="en">
      <head>
        <meta charset="utf-8" />
        <meta name="viewport" content="width=device-width, initial-scale=1" />
        <title>{`${title} – Moorline`}</title>
        <link rel="stylesheet" href={assets.style} />
        <link rel="icon" href={assets.icon} type="image/svg+xml" />
        <script src={assets.script} defer />
      </head>
      <body>
        <a class="skip" href="#live">
          Skip to the content
        </a>
        <header>
          <p>
            <a href="/">Moorline</a>: live inputs held against the training data
          </p>
        </header>
        {notice === null ? null : <p class="notice">{notice}</p>}
        <main id="live">{children}</main>
        <footer>
          <p>
            <label>
              <input id="follow" type="checkbox" checked /> keep this page up to date
            </label>{" "}
            <span id="stale" role="status" />
          </p>
          <p class="caution">{CAUTION}</p>
        </footer>
      </body>
    </html>
  );
}

export function pageHtml(props: PageProps): string {
  return `<!doctype html>\n${renderToStaticMarkup(<Page {...props} />)}\n`;
}
