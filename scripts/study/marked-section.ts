/** Returns the text with what stands between `<!-- study:name -->` and `<!-- /study:name -->` replaced; null without these marks. */
export function replaceMarked(text: string, name: string, content: string): string | null {
  const [open, close] = [`<!-- study:${name} -->`, `<!-- /study:${name} -->`];
  const start = text.indexOf(open);
  const end = text.indexOf(close);
  if (start === -1 || end < start) return null;
  return `${text.slice(0, start + open.length)}\n\n${content}\n\n${text.slice(end)}`;
}
