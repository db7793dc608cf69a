/**
 * `node scripts/measure-upload.mjs --gib 2`: sends a file of random bytes through the whole product, as a raw body and as a
 * form, and takes it back; prints seconds, resident memory of server and worker beside idle, and whether the hash is
 * sha256sum's. Needs three times the file's size in the temporary directory.
 */
import { spawnSync } from "node:child_process";
import { createCipheriv, createHash, randomBytes } from "node:crypto";
import { createReadStream, createWriteStream } from "node:fs";
import http from "node:http";
import path from "node:path";
import { Readable } from "node:stream";
import { pipeline } from "node:stream/promises";
import { setTimeout as sleep } from "node:timers/promises";
import { parseArgs } from "node:util";
import { watchMemory } from "./measure/resident-memory.mjs";
import { withThrowAwayProduct } from "./measure/throw-away-product.mjs";

const { values: options } = parseArgs({ options: { gib: { type: "string", default: "2" } } });
const bytes = Math.round(Number(options.gib) * 2 ** 30);
const PIECE = Buffer.alloc(2 ** 20);
const BOUNDARY = "strandline-measure-upload";
const SETTLE_MS = 5_000;

await withThrowAwayProduct({}, async (product) => {
  const file = path.join(product.directory, "random.bin");
  await pipeline(Readable.from(randomPieces()), createWriteStream(file));
  const sha256 = spawnSync("sha256sum", [file], { encoding: "utf8" }).stdout.split(" ")[0];
  await sleep(SETTLE_MS);
  const watched = { server: product.webPid, worker: product.workerPid };
  const measured = { idle: watchMemory(watched).stop() };
  for (const form of ["raw", "multipart"]) {
    const { id: runId } = await product.call("POST", "/api/v1/runs", { title: `${form} upload` });
    const measure = async (name, work) => {
      const memory = watchMemory(watched);
      const began = performance.now();
      const answer = await work();
      const seconds = (performance.now() - began) / 1000;
      measured[`${form}: ${name}`] = { ...memory.stop(), seconds: Number(seconds.toFixed(1)), answer: answer.says };
      return answer;
    };
    const uploaded = await measure("upload", () => upload(product, runId, file, form, sha256));
    await measure("reading refused", () => reading(product, uploaded.jobId));
    await measure("download", () => download(product, uploaded.archiveId, sha256));
    await measure("removal", async () => {
      await product.call("DELETE", `/api/v1/runs/${runId}`);
      return { says: "gone" };
    });
  }
  console.log(`${bytes} bytes; resident memory in MiB, the highest of ten looks a second`);
  console.table(measured);
});

/** Random bytes that are quick to make. */
function* randomPieces() {
  const cipher = createCipheriv("aes-128-ctr", randomBytes(16), randomBytes(16));
  for (let left = bytes; left > 0; left -= PIECE.length) yield cipher.update(PIECE.subarray(0, Math.min(left, PIECE.length)));
}

async function upload({ address, call }, runId, file, form, sha256) {
  const query = form === "raw" ? "?filename=random.bin" : "";
  const type = form === "raw" ? "application/octet-stream" : `multipart/form-data; boundary=${BOUNDARY}`;
  const request = http.request(`${address}/api/v1/runs/${runId}/archives${query}`, { method: "POST", headers: { cookie: call.cookie, "content-type": type } });
  const answered = new Promise((resolve, reject) => request.once("response", resolve).once("error", reject));
  await pipeline(form === "raw" ? createReadStream(file, { highWaterMark: PIECE.length }) : formPieces(file), request);
  const answer = await answered;
  const text = Buffer.concat(await answer.toArray()).toString();
  if (answer.statusCode !== 202) throw new Error(`the upload answered ${answer.statusCode}: ${text}`);
  const { archives, job } = JSON.parse(text);
  return { archiveId: archives[0].id, jobId: job.id, says: sameHash(archives[0].sha256, sha256) };
}

async function* formPieces(file) {
  yield `--${BOUNDARY}\r\ncontent-disposition: form-data; name="file"; filename="random.bin"\r\ncontent-type: application/octet-stream\r\n\r\n`;
  yield* createReadStream(file, { highWaterMark: PIECE.length });
  yield `\r\n--${BOUNDARY}--\r\n`;
}

async function reading({ call }, jobId) {
  for (;;) {
    const job = await call("GET", `/api/v1/jobs/${jobId}`);
    if (job.state === "failed") return { says: job.error.detail };
    if (job.state === "done") throw new Error("random bytes were read as shots");
    await sleep(100);
  }
}

async function download({ address, call }, archiveId, sha256) {
  const answer = await fetch(`${address}/api/v1/archives/${archiveId}/raw`, { headers: { cookie: call.cookie } });
  const hash = createHash("sha256");
  for await (const part of answer.body) hash.update(part);
  return { says: sameHash(hash.digest("hex"), sha256) };
}

function sameHash(found, expected) {
  if (found !== expected) throw new Error(`the hash is ${found}, not ${expected}`);
  return "hash as sha256sum's";
}
