const NEWLINE = 10;
const RETURN = 13;
const SPACE = 32;
const TAB = 9;
const HASH = 35;

/** Steps through the rows of line blocks, past blank lines and comments; `bytes[start, end)` is the current row. */
export class RowCursor {
  bytes = new Uint8Array(0);
  start = 0;
  end = 0;
  /** Line of the current row in the whole file, from 1, comments and blank lines counted. */
  line = 0;
  private next = 0;

  /** Takes the next block of whole lines; the line number runs on. */
  load(block: Uint8Array): void {
    this.bytes = block as Uint8Array<ArrayBuffer>;
    this.next = 0;
  }

  /** Moves to the next row; false at the end of the block. */
  advance(): boolean {
    const { bytes } = this;
    while (this.next < bytes.length) {
      const newline = bytes.indexOf(NEWLINE, this.next);
      const stop = newline < 0 ? bytes.length : newline;
      this.start = this.next;
      this.end = stop > this.start && bytes[stop - 1] === RETURN ? stop - 1 : stop;
      this.next = stop + 1;
      this.line++;
      if (this.holdsRow()) return true;
    }
    return false;
  }

  private holdsRow(): boolean {
    let at = this.start;
    while (at < this.end && (this.bytes[at] === SPACE || this.bytes[at] === TAB)) at++;
    return at < this.end && this.bytes[at] !== HASH;
  }
}
