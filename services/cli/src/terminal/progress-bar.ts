import type { OnProgress, ReadProgress } from "@moorline/baseline";
import { Presets, SingleBar } from "cli-progress";
import type { CommandIo } from "./command-io.js";

/** A bar on standard error, only where that is a terminal. `onProgress` is undefined elsewhere. */
export function progressBar(io: CommandIo): { readonly onProgress: OnProgress | undefined; stop(): void } {
  if (!io.isTerminal) return { onProgress: undefined, stop: () => undefined };
  const bar = new SingleBar(
    {
      stream: process.stderr,
      clearOnComplete: true,
      hideCursor: true,
      format: "{stage} [{bar}] {rows} rows, {rate} rows/s, {left} left",
    },
    Presets.shades_classic,
  );
  bar.start(1_000, 0, { stage: "reading", rows: "0", rate: "…", left: "…" });
  let stage: ReadProgress["stage"] | null = null;
  let startedMs = 0;
  return {
    onProgress: (progress) => {
      if (progress.stage !== stage) {
        stage = progress.stage;
        startedMs = performance.now();
      }
      const seconds = (performance.now() - startedMs) / 1_000;
      const { done, rows } = progress;
      const left =
        done === null || done <= 0 || seconds <= 0 ? "…" : `${Math.ceil((seconds * (1 - done)) / done)} s`;
      const rate = seconds <= 0 ? "…" : Math.round(rows / seconds).toLocaleString("en-US");
      bar.update(Math.round((done ?? 0) * 1_000), { stage, rows: rows.toLocaleString("en-US"), rate, left });
    },
    stop: () => bar.stop(),
  };
}

/** A bar over feature-slice series; `option` is empty where standard error is no terminal. */
export function seriesBar(
  io: CommandIo,
  stage: string,
): { readonly option: { onProgress?: (done: number, series: number) => void }; stop(): void } {
  if (!io.isTerminal) return { option: {}, stop: () => undefined };
  const bar = new SingleBar(
    {
      stream: process.stderr,
      clearOnComplete: true,
      hideCursor: true,
      format: `${stage} [{bar}] {value} of {total} features and slices, {eta_formatted} left`,
    },
    Presets.shades_classic,
  );
  bar.start(1, 0);
  return {
    option: {
      onProgress: (done, series) => {
        bar.setTotal(series);
        bar.update(done);
      },
    },
    stop: () => bar.stop(),
  };
}
