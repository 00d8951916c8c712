import { fork } from "node:child_process";
import { availableParallelism } from "node:os";
import { fileURLToPath } from "node:url";

/** Runs jobs in a process for every core: `file` is a module that calls `answerJobs`. Answers come in the order of the jobs. */
export async function runJobs<Job, Answer>(
  file: URL,
  jobs: readonly Job[],
  onDone: (done: number) => void,
): Promise<Answer[]> {
  const answers = new Array<Answer>(jobs.length);
  let next = 0;
  let done = 0;
  const workOn = () =>
    new Promise<void>((resolve, reject) => {
      const worker = fork(fileURLToPath(file), { execArgv: ["--import", "tsx"] });
      let index = -1;
      const give = () => {
        index = next;
        next += 1;
        if (index < jobs.length) worker.send({ job: jobs[index] });
        else worker.disconnect();
      };
      worker.on("message", ({ answer }: { readonly answer: Answer }) => {
        answers[index] = answer;
        done += 1;
        onDone(done);
        give();
      });
      worker.on("error", reject);
      worker.on("exit", (code) => {
        if (code === 0) resolve();
        else reject(new Error(`a worker of ${file.pathname} ended with ${code}`));
      });
      give();
    });
  await Promise.all(Array.from({ length: Math.min(jobs.length, availableParallelism()) }, workOn));
  return answers;
}

/** In a process of `runJobs`: answers each job. */
export function answerJobs<Job, Answer>(answer: (job: Job) => Answer): void {
  process.on("message", ({ job }: { readonly job: Job }) => process.send!({ answer: answer(job) }));
}
