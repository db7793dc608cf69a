"use client";

export default function GroupError({ reset }: { error: Error; reset: () => void }) {
  return (
    <div role="alert" className="notice notice-error my-8">
      <h1>Something failed on our side</h1>
      <p className="mt-1 mb-3 text-muted">It has been logged, and nothing was changed.</p>
      <button type="button" className="button" onClick={reset}>
        Try again
      </button>
    </div>
  );
}
