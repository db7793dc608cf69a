import Link from "next/link";

export default function NotFoundInGroup() {
  return (
    <div className="py-10">
      <h1>Nothing here under this name</h1>
      <p className="mt-2 text-muted">
        The page does not exist, or it belongs to another group. <Link href="/runs">To the runs</Link>
      </p>
    </div>
  );
}
