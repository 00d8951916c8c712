import { MoorlineError } from "@moorline/errors";
import { AtomTable, MAX_ATOMS, type TableAtom } from "../atom-table.js";
import { stateProblems } from "../check-invariants.js";
import { LEAST_COMPRESSION, MOST_COMPRESSION, SEAL_RATIO } from "../compression.js";
import { SketchState } from "../sketch-state.js";
import { MAX_THRESHOLD_ID_LENGTH, MAX_THRESHOLDS, ThresholdCounter } from "../threshold-counter.js";
import { ByteReader } from "./byte-reader.js";
import { crc32 } from "./crc32.js";
import * as layout from "./layout.js";

/** The state that encodeState() wrote. Counts are checked against the bytes left before anything is allocated. */
export function decodeState(bytes: Uint8Array): SketchState {
  const { compression, flags } = readHeader(bytes);
  const reader = new ByteReader(bytes, layout.HEADER_BYTES);
  const state = new SketchState(compression, null, []);
  state.compressed = (flags & layout.FLAG_COMPRESSED) !== 0;
  state.descending = (flags & layout.FLAG_DESCENDING) !== 0;
  state.sealed = state.compressed;
  readCounts(reader, state);
  state.atoms = readAtoms(reader);
  if (flags & layout.FLAG_THRESHOLDS) state.thresholds = readThresholds(reader);
  if (state.compressed) {
    state.coarsest = reader.varint("the coarsest compression", compression);
    if (state.coarsest < LEAST_COARSEST) reader.fail("the coarsest compression is out of range");
  }
  readEntries(reader, state);
  if (reader.left > 0) reader.fail("bytes are left over");
  const problem = stateProblems(state)[0];
  if (problem !== undefined) reader.fail(`invariant ${problem}`);
  return state;
}

/** A seal of the least compression. */
const LEAST_COARSEST = Math.floor(LEAST_COMPRESSION * SEAL_RATIO);

function readHeader(bytes: Uint8Array): { compression: number; flags: number } {
  const fail = (reason: string, offset: number): never => {
    throw new MoorlineError("MOORLINE_FORMAT_SKETCH", { reason, offset, length: bytes.length });
  };
  if (bytes.length < layout.HEADER_BYTES) fail("the header is cut off", bytes.length);
  if (!layout.MAGIC.every((byte, i) => bytes[i] === byte)) fail("the magic is missing", 0);
  const version = bytes[layout.VERSION_AT]!;
  if (version !== layout.VERSION) {
    throw new MoorlineError("MOORLINE_FORMAT_SKETCH_VERSION", { version, newest: layout.VERSION });
  }
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  if (view.getUint32(layout.LENGTH_AT, true) !== bytes.length)
    fail("the length is another", layout.LENGTH_AT);
  const header = crc32(bytes, 0, layout.CHECKSUM_AT);
  const checksum = crc32(bytes, layout.HEADER_BYTES, bytes.length, header);
  if (view.getUint32(layout.CHECKSUM_AT, true) !== checksum)
    fail("the checksum is another", layout.CHECKSUM_AT);
  const flags = bytes[layout.FLAGS_AT]!;
  if (flags & ~layout.ALL_FLAGS) fail("a flag is unknown", layout.FLAGS_AT);
  const compression = view.getUint16(layout.COMPRESSION_AT, true);
  if (compression < LEAST_COMPRESSION || compression > MOST_COMPRESSION) {
    fail("the compression is out of range", layout.COMPRESSION_AT);
  }
  return { compression, flags };
}

function readCounts(reader: ByteReader, state: SketchState): void {
  state.finite = reader.varint("the finite count");
  state.missing = reader.varint("the missing count");
  state.nan = reader.varint("the NaN count");
  state.positiveInfinity = reader.varint("the +Infinity count");
  state.negativeInfinity = reader.varint("the −Infinity count");
  if (state.finite === 0) return;
  state.min = reader.float64("the minimum");
  state.max = reader.float64("the maximum");
  state.sum = reader.float64("the sum");
  if (state.min > state.max) reader.fail("the minimum is above the maximum");
}

function readAtoms(reader: ByteReader): AtomTable {
  const rows: TableAtom[] = [];
  const length = reader.varint("the number of atoms", MAX_ATOMS);
  for (let i = 0; i < length; i++) {
    const value = reader.float64("an atom");
    const known = reader.varint("an atom's kind", 1) === 1;
    rows.push({ value, known, count: reader.varint("an atom's count") });
  }
  const table = new AtomTable([]);
  table.rows = rows;
  return table;
}

function readThresholds(reader: ByteReader): ThresholdCounter {
  const idBytes = reader.raw("the threshold id", reader.varint("the id length", 4 * MAX_THRESHOLD_ID_LENGTH));
  const id = new TextDecoder("utf-8", { fatal: false, ignoreBOM: true }).decode(idBytes);
  const length = reader.varint("the number of thresholds", MAX_THRESHOLDS);
  const values = Array.from({ length }, () => reader.float64("a threshold"));
  const counts = Array.from({ length }, () => reader.varint("a threshold count"));
  if (values.some((value, i) => i > 0 && value < values[i - 1]!)) reader.fail("the thresholds do not ascend");
  if (id.length > MAX_THRESHOLD_ID_LENGTH) reader.fail("the threshold id is too long");
  return new ThresholdCounter({ id, values }, counts);
}

/** An entry takes nine bytes at the least. */
const LEAST_ENTRY_BYTES = 9;

function readEntries(reader: ByteReader, state: SketchState): void {
  const size = reader.varint("the number of entries", Math.floor(reader.left / LEAST_ENTRY_BYTES));
  state.means = new Float64Array(size);
  state.weights = new Float64Array(size);
  state.size = size;
  for (let i = 0; i < size; i++) state.means[i] = reader.float64("a mean");
  for (let i = 0; i < size; i++) {
    const code = reader.varint("a weight");
    if (!state.compressed) state.weights[i] = code;
    else state.weights[i] = code % 2 === 0 ? code / 2 : -(code - 1) / 2;
  }
}
