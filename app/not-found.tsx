import Link from "next/link";

export default function NotFound() {
  return (
    <main className="px-5 py-16 sm:px-10">
      <h1>Nothing here under this name</h1>
      <p className="mt-2 text-muted">
        The page does not exist, or it belongs to another group. <Link href="/runs">To the runs</Link>
      </p>
    </main>
  );
}
