import { readdirSync, readFileSync } from "node:fs";
import { describe, expect, it } from "vitest";
import { configJsonSchema, loadConfig, referenceTable } from "../src/index.js";

const read = (name: string) => readFileSync(new URL(`../${name}`, import.meta.url), "utf8");
/** Table text without the padding that a formatter may add. */
const cellsOf = (text: string) => text.replace(/ {2,}/g, " ").replace(/ ?-{3,} ?/g, "---");
const examples = new URL("../../../deploy/examples/", import.meta.url);

describe("what is published of the config", () => {
  it("moorline.schema.json equals the schema that checks", () => {
    expect(JSON.parse(read("moorline.schema.json"))).toEqual(JSON.parse(JSON.stringify(configJsonSchema())));
  });

  it("the README has the reference tables as they are", () => {
    expect(cellsOf(read("README.md"))).toContain(cellsOf(referenceTable()));
  });

  it("every key has a meaning in the reference", () => {
    const rows = referenceTable()
      .split("\n")
      .filter((row) => row.startsWith("| `"));
    const blocks = rows.filter((row) => !row.includes("| block |"));
    expect(blocks.filter((row) => row.endsWith("|  |"))).toEqual([]);
  });

  const files = readdirSync(examples).filter((file) => file.endsWith(".yaml"));
  it.each(files.filter((file) => file.startsWith("moorline")))("loads deploy/examples/%s", (file) => {
    const config = loadConfig(new URL(file, examples).pathname, {});
    expect(config.streams.length).toBeGreaterThan(0);
  });

  it("there is an example for Kafka with PostgreSQL, for files and for one process", () => {
    expect(files.filter((file) => file.startsWith("moorline"))).toEqual([
      "moorline.files.yaml",
      "moorline.kafka-postgres.yaml",
      "moorline.one-process.yaml",
    ]);
  });
});
