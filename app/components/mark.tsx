/** The mark: two coils and the beam between them. */
export function Mark() {
  return (
    <svg
      width="24"
      height="24"
      viewBox="0 0 24 24"
      fill="none"
      stroke="currentColor"
      strokeWidth="2"
      aria-hidden="true"
    >
      <ellipse cx="5" cy="12" rx="3" ry="9.5" />
      <ellipse cx="19" cy="12" rx="3" ry="9.5" />
      <circle cx="12" cy="12" r="3.6" className="stroke-beam" />
    </svg>
  )
}
