"use client";

import { useState } from "react";
import useSWR from "swr";
import { fetchJson, sendJson } from "@/components/data/fetch-json";
import { NewToken } from "./new-token";

export interface TokenRow {
  id: string;
  name: string;
  scopes: string[];
  hint: string;
  createdAt: string;
  expiresAt: string;
  lastUsedAt: string | null;
}

const PATH = "/api/v1/tokens";

/** The member's tokens for scripts: made, shown once, revoked after a confirming step. */
export function TokenPanel({ initial }: { initial: TokenRow[] }) {
  const { data, mutate } = useSWR<{ items: TokenRow[] }>(`${PATH}?limit=100`, fetchJson, { fallbackData: { items: initial }, revalidateOnMount: false });
  const tokens = data?.items ?? [];
  return (
    <div className="grid grid-cols-1 gap-x-12 gap-y-8 lg:grid-cols-[minmax(0,48rem)_22rem]">
      <section className="min-w-0">
        <h2>Tokens for scripts</h2>
        <p className="mt-1 mb-3 max-w-[65ch] text-muted">
          A token lets a script at the apparatus act as you, within its scopes and your role. The calls are described in <a href="/api/v1/openapi.json">the API document</a>.
        </p>
        {tokens.length === 0 ? (
          <p className="notice">You have no tokens yet. Make one at the side; its secret is shown once.</p>
        ) : (
          <div className="overflow-x-auto" tabIndex={0} role="region" aria-label="Tokens">
            <table className="hairline-table figures">
              <thead>
                <tr>
                  <th scope="col">name</th>
                  <th scope="col">begins</th>
                  <th scope="col">scopes</th>
                  <th scope="col">expires</th>
                  <th scope="col">last used</th>
                  <th scope="col">
                    <span className="sr-only">Revoke</span>
                  </th>
                </tr>
              </thead>
              <tbody>
                {tokens.map((token) => (
                  <TokenLine key={token.id} token={token} onRevoked={() => mutate()} />
                ))}
              </tbody>
            </table>
          </div>
        )}
      </section>
      <NewToken onMade={() => mutate()} />
    </div>
  );
}

function TokenLine({ token, onRevoked }: { token: TokenRow; onRevoked: () => void }) {
  const [asking, setAsking] = useState(false);
  const [error, setError] = useState<string | null>(null);

  async function revoke() {
    try {
      await sendJson("DELETE", `${PATH}/${token.id}`);
      onRevoked();
    } catch (reason) {
      setError(reason instanceof Error ? reason.message : "Not revoked.");
    }
  }

  return (
    <tr>
      <td className="font-[600]">{token.name}</td>
      <td className="whitespace-nowrap">{token.hint}…</td>
      <td>{token.scopes.join(", ")}</td>
      <td className="whitespace-nowrap">{token.expiresAt.slice(0, 10)}</td>
      <td className="whitespace-nowrap">{token.lastUsedAt?.slice(0, 10) ?? "never"}</td>
      <td className="text-right whitespace-nowrap">
        {asking ? (
          <>
            <button type="button" className="button" onClick={revoke}>
              Revoke “{token.name}”
            </button>
            <button type="button" className="button button-quiet" onClick={() => setAsking(false)}>
              Keep
            </button>
          </>
        ) : (
          <button type="button" className="button button-quiet" aria-label={`Revoke ${token.name}`} onClick={() => setAsking(true)}>
            Revoke
          </button>
        )}
        {error && (
          <span role="alert" className="block text-error">
            {error}
          </span>
        )}
      </td>
    </tr>
  );
}
