"use client";

import "./globals.css";

/** When even the layout failed: plain, in our own look. */
export default function GlobalError({ reset }: { error: Error; reset: () => void }) {
  return (
    <html lang="en">
      <body>
        <main role="alert" className="px-5 py-16 sm:px-10">
          <h1>The page could not be shown</h1>
          <p className="mt-2 mb-4 text-muted">Either something failed on our side, which has been logged, or a newer version of Strandline was just installed.</p>
          <button type="button" className="button" onClick={() => window.location.reload()}>
            Load the page anew
          </button>
          <button type="button" className="button button-quiet" onClick={reset}>
            Try again
          </button>
        </main>
      </body>
    </html>
  );
}
