import { firstBytes } from "@/lib/formats/byte-stream";
import { isGzip, plainStream } from "@/lib/formats/gunzip";
import { lineBlocks } from "@/lib/formats/line-blocks";
import { isNpy } from "@/lib/formats/npy-header";
import { RowCursor } from "@/lib/formats/row-cursor";
import type { ByteSource, ReadOptions, ShotFormat } from "@/lib/formats/shot-batch";
import { isLongForm, readTableHead } from "@/lib/formats/table-head";
import { listZipMembers } from "@/lib/formats/zip-members";
import { invalidAt, isProblem, problem, type Problem } from "@/lib/problem";

const HEAD_BYTES = 65_536;

/** First bytes, as latin1 text, of files that people have and that are not read. */
const OTHERS: [string, string][] = [
  ["\x89HDF\r\n\x1a\n", "an HDF5 file"],
  ["\x89PNG", "a picture (PNG)"],
  ["\xff\xd8\xff", "a picture (JPEG)"],
  ["GIF8", "a picture (GIF)"],
  ["II*\0", "a picture (TIFF)"],
  ["MM\0*", "a picture (TIFF)"],
  ["%PDF", "a PDF document"],
  ["BZh", "a bzip2 archive"],
  ["\xfd7zXZ", "an xz archive"],
  ["(\xb5/\xfd", "a zstd archive"],
  ["7z\xbc\xaf", "a 7z archive"],
  ["\x1f\x8b", "gzip within gzip"],
];

/**
 * Recognises a source by its content, looking inside gzip. A gzipped array or archive is `packed`: unpack it and ask
 * again. Anything that is not read is a Problem `unknown-format` that says what it is; UTF-16 is an encoding fault.
 */
export async function recognise(source: ByteSource, options: ReadOptions): Promise<ShotFormat | "packed" | Problem> {
  if (source.size === 0) return invalidAt("file", "is empty");
  const opening = await source.read(0, 2);
  const head = await firstBytes(plainStream(source, options.maxExpandedBytes), HEAD_BYTES);
  if (isProblem(head)) return head;
  if (head.length === 0) return invalidAt("file", "is empty");
  const array = isNpy(head);
  const archive = isZip(head);
  if ((array || archive) && isGzip(opening)) return "packed";
  if (array) return "npy";
  if (archive) return recogniseZip(source);
  return notText(head) ?? recogniseText(source, options);
}

async function recogniseZip(source: ByteSource): Promise<ShotFormat | Problem> {
  const members = await listZipMembers(source);
  if (isProblem(members)) return members;
  if (members.some(({ name }) => name.endsWith(".npy"))) return "npz";
  return unknown(members.length === 0 ? "a ZIP archive without members" : "a ZIP archive without NPY arrays");
}

async function recogniseText(source: ByteSource, options: ReadOptions): Promise<ShotFormat | Problem> {
  const rows = new RowCursor();
  for await (const block of lineBlocks(plainStream(source, options.maxExpandedBytes))) {
    if (isProblem(block)) return block;
    rows.load(block);
    if (!rows.advance()) continue;
    const head = readTableHead(rows, options.filename);
    if (isProblem(head)) return head;
    return isLongForm(head) ? "csv-counts" : "csv-shots";
  }
  return invalidAt("file", "holds no table");
}

/** Returns why the first bytes are no text in UTF-8 or ASCII, or null. */
function notText(head: Uint8Array): Problem | null {
  const start = String.fromCharCode(...head.subarray(0, 16));
  const other = OTHERS.find(([magic]) => start.startsWith(magic));
  if (other !== undefined) return unknown(other[1]);
  if (String.fromCharCode(...head.subarray(257, 262)) === "ustar") return unknown("a TAR archive");
  if (isUtf16(head)) return invalidAt("encoding", "the text is UTF-16; save it as UTF-8");
  const binary = head.some((byte) => byte < 32 && (byte < 9 || byte > 13) && byte !== 27);
  return binary ? unknown("a binary file of a kind unknown here") : null;
}

/** A byte order mark, or text whose every second byte is zero. */
function isUtf16(head: Uint8Array): boolean {
  if ((head[0] === 0xff && head[1] === 0xfe) || (head[0] === 0xfe && head[1] === 0xff)) return true;
  const zeros = [0, 0];
  head.forEach((byte, at) => (zeros[at % 2] += byte === 0 ? 1 : 0));
  const most = Math.max(...zeros);
  return most > 0.4 * head.length && zeros[0] + zeros[1] - most < 0.05 * head.length;
}

function isZip(head: Uint8Array): boolean {
  const signature = String.fromCharCode(...head.subarray(0, 4));
  return signature === "PK\x03\x04" || signature === "PK\x05\x06" || signature === "PK\x07\x08";
}

function unknown(what: string): Problem {
  const message = `this is ${what}, which is not read yet; CSV, TSV, NPY and NPZ are, each plain or gzipped`;
  return problem("unknown-format", `file: ${message}`, [{ where: "file", message }]);
}
