/** Addresses of pages and of what stands behind them; every name is data and is encoded. */
export function featurePath(
  stream: string,
  feature: string,
  query: Readonly<Record<string, string | undefined>> = {},
): string {
  return `/streams/${encodeURIComponent(stream)}/features/${encodeURIComponent(feature)}${queryText(query)}`;
}

export function pairsPath(
  stream: string,
  feature: string,
  query: Readonly<Record<string, string | undefined>> = {},
): string {
  return `/v1/streams/${encodeURIComponent(stream)}/features/${encodeURIComponent(feature)}/quantile-pairs${queryText(query)}`;
}

export function streamPath(stream: string, slice: string): string {
  return `/streams/${encodeURIComponent(stream)}${queryText({ slice: slice === "all" ? undefined : slice })}`;
}

function queryText(query: Readonly<Record<string, string | undefined>>): string {
  const set = Object.entries(query).filter((entry): entry is [string, string] => entry[1] !== undefined);
  return set.length === 0 ? "" : `?${new URLSearchParams(set).toString()}`;
}
