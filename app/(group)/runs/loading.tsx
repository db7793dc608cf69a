export default function Loading() {
  return (
    <p aria-busy="true" className="label py-6">
      Reading…
    </p>
  );
}
