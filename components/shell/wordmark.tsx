/** The name with its mark: two tide lines and the strandline above them. */
export function Wordmark() {
  return (
    <span className="inline-flex items-center gap-2 text-[1.15rem] font-[650] tracking-tight">
      <svg viewBox="0 0 28 20" width="28" height="20" aria-hidden="true">
        <path d="M1 18 C 8 17.5, 13 15.5, 27 13.5" fill="none" stroke="currentColor" strokeWidth="1.3" opacity="0.45" />
        <path d="M1 17 C 7 15.5, 13 11.5, 27 8.5" fill="none" stroke="currentColor" strokeWidth="1.3" opacity="0.75" />
        <path d="M1 16 C 6 12.5, 12 5.5, 27 2.5" fill="none" stroke="var(--front)" strokeWidth="2" />
      </svg>
      Strandline
    </span>
  );
}
