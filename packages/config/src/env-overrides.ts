/** An environment variable that stands in for a key of the config. */
export interface EnvOverride {
  readonly variable: string;
  readonly key: string;
  readonly meaning: string;
}

export type Environment = Readonly<Record<string, string | undefined>>;

/** Every override, for the README; `streams[]` means every stream that has the block. */
export const ENV_OVERRIDES: readonly EnvOverride[] = [
  { variable: "MOORLINE_STORE", key: "store", meaning: "keeps a password out of the file" },
  { variable: "MOORLINE_GATEWAY_HOST", key: "gateway.host", meaning: "`0.0.0.0` in a container" },
  { variable: "MOORLINE_GATEWAY_PORT", key: "gateway.port", meaning: "when 7460 is taken" },
  { variable: "MOORLINE_GATEWAY_PUBLIC_URL", key: "gateway.publicUrl", meaning: "behind a proxy" },
  { variable: "MOORLINE_COLLECTOR_HOST", key: "collector.host", meaning: "`0.0.0.0` in a container" },
  {
    variable: "MOORLINE_COLLECTOR_PORT",
    key: "collector.port",
    meaning: "several collectors on one machine",
  },
  { variable: "MOORLINE_EVALUATOR_HOST", key: "evaluator.host", meaning: "`0.0.0.0` in a container" },
  {
    variable: "MOORLINE_EVALUATOR_PORT",
    key: "evaluator.port",
    meaning: "several evaluators on one machine",
  },
  {
    variable: "MOORLINE_KAFKA_BROKERS",
    key: "streams[].source.kafka.brokers",
    meaning: "`host:port,host:port`, for every Kafka source",
  },
];

type Block = Record<string, unknown>;

/** The config as written with what the environment overrides, and which variable stands at which key. */
export function applyEnvOverrides(
  data: unknown,
  env: Environment,
): { readonly data: unknown; readonly from: ReadonlyMap<string, string> } {
  const from = new Map<string, string>();
  const set = ENV_OVERRIDES.filter(({ variable }) => (env[variable] ?? "") !== "");
  if (set.length === 0 || !isBlock(data)) return { data, from };
  const copy = structuredClone(data);
  for (const { variable, key } of set) {
    const text = env[variable]!;
    if (key.startsWith("streams[]")) overrideBrokers(copy, text, variable, from);
    else overrideKey(copy, key, text, variable, from);
  }
  return { data: copy, from };
}

function overrideKey(
  data: Block,
  key: string,
  text: string,
  variable: string,
  from: Map<string, string>,
): void {
  const parts = key.split(".");
  const last = parts.pop()!;
  let block = data;
  for (const part of parts) {
    if (!isBlock(block[part])) block[part] = {};
    block = block[part] as Block;
  }
  block[last] = last === "port" && /^\d+$/.test(text) ? Number(text) : text;
  from.set(key, variable);
}

function overrideBrokers(data: Block, text: string, variable: string, from: Map<string, string>): void {
  const streams = Array.isArray(data["streams"]) ? data["streams"] : [];
  for (const [index, stream] of streams.entries()) {
    const kafka = isBlock(stream) && isBlock(stream["source"]) ? stream["source"]["kafka"] : undefined;
    if (!isBlock(kafka)) continue;
    kafka["brokers"] = text.split(",").map((broker) => broker.trim());
    from.set(`streams[${index}].source.kafka.brokers`, variable);
  }
}

function isBlock(value: unknown): value is Block {
  return typeof value === "object" && value !== null && !Array.isArray(value);
}
