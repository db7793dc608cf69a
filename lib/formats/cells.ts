const QUOTE = 34;
const SHORT_CELL_BYTES = 40;
const decoder = new TextDecoder();

/**
 * Finds the cells of the row `bytes[start, end)` and writes their borders to `bounds` as `[cell][from, to]`, quotes
 * included, as many as fit. Returns the number of cells in the row, or −1 when a quote is not closed.
 */
export function splitCells(bytes: Uint8Array, start: number, end: number, separator: number, bounds: Int32Array): number {
  let cells = 0;
  let from = start;
  let at = start;
  for (;;) {
    if (at < end && bytes[at] === QUOTE) {
      at = afterQuoted(bytes, at + 1, end);
      if (at < 0) return -1;
    }
    while (at < end && bytes[at] !== separator) at++;
    if (2 * cells + 1 < bounds.length) {
      bounds[2 * cells] = from;
      bounds[2 * cells + 1] = at;
    }
    cells++;
    if (at >= end) return cells;
    at++;
    from = at;
  }
}

/** Returns a cell's text without the spaces around it and without its quotes. */
export function cellText(bytes: Uint8Array, from: number, to: number): string {
  const text = decoded(bytes, from, to).trim();
  if (text.length < 2 || !text.startsWith('"') || !text.endsWith('"')) return text;
  return text.slice(1, -1).replaceAll('""', '"').trim();
}

/** Returns the plain whole number in a cell of 1 to 15 digits, or −1 when the cell holds anything else. */
export function wholeNumberAt(bytes: Uint8Array, from: number, to: number): number {
  if (to === from || to - from > 15) return -1;
  let value = 0;
  for (let at = from; at < to; at++) {
    const digit = bytes[at] - 48;
    if (digit < 0 || digit > 9) return -1;
    value = value * 10 + digit;
  }
  return value;
}

function afterQuoted(bytes: Uint8Array, from: number, end: number): number {
  for (let at = from; at < end; at++) {
    if (bytes[at] !== QUOTE) continue;
    if (at + 1 < end && bytes[at + 1] === QUOTE) at++;
    else return at + 1;
  }
  return -1;
}

function decoded(bytes: Uint8Array, from: number, to: number): string {
  if (to - from > SHORT_CELL_BYTES) return decoder.decode(bytes.subarray(from, to));
  let text = "";
  for (let at = from; at < to; at++) {
    if (bytes[at] > 127) return decoder.decode(bytes.subarray(from, to));
    text += String.fromCharCode(bytes[at]);
  }
  return text;
}
