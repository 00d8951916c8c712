import { errorRows } from "../error-row.js";

/** Errors raised by cli. */
export const CLI_ERRORS = errorRows({
  MOORLINE_INPUT_OPTION: {
    category: "INPUT",
    template: "{option} is {value}, which is not {wanted}",
    hint: "moorline {command} --help shows what it takes",
  },
  MOORLINE_INPUT_OPTIONS_TOGETHER: {
    category: "INPUT",
    template: "{command} needs exactly one of {options}",
    hint: "give one of them; moorline {command} --help shows how",
  },
  MOORLINE_INPUT_NOT_YET: {
    category: "INPUT",
    template: "{option} is not handled in this version",
    hint: "{instead}",
  },
  MOORLINE_INPUT_COMPARE_FEATURE: {
    category: "INPUT",
    template: "{file} has no column {name}{meant}; its columns are {columns}",
    hint: "give --feature and --slice-by names that both files have",
  },
  MOORLINE_UPSTREAM_PORT_TAKEN: {
    category: "UPSTREAM",
    template: "port {port} on {host} is taken by another program",
    hint: "stop that program, or take another port: MOORLINE_{service}_PORT=7470",
  },
  MOORLINE_UPSTREAM_PORT_DENIED: {
    category: "UPSTREAM",
    template: "port {port} on {host} cannot be listened on: {reason}",
    hint: "give an address of this machine and a port above 1023 in the config",
  },
  MOORLINE_UPSTREAM_CHECK_FAILED: {
    category: "UPSTREAM",
    template: "{count} of {all} checks failed",
    hint: "put right what the lines above say",
  },
  MOORLINE_UPSTREAM_DEMO_FOLDER: {
    category: "UPSTREAM",
    template: "the demo folder {folder} cannot be written: {reason}",
    hint: "name a folder that can be written with MOORLINE_DEMO_DIR",
  },
  MOORLINE_STATE_STORE_ABSENT: {
    category: "STATE",
    template: "there is no store at {path} yet",
    hint: "start with moorline run or moorline baseline set, or give the config that names the store with --config",
  },
});
