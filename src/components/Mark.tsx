/** The mark: six hourly steps on a bank, two of which break the surface. */
export function Mark({ className }: { className?: string }) {
  return (
    <svg viewBox="0 0 40 40" aria-hidden="true" className={className}>
      <path d="M2 33H8V29H14V24H20V20H32V27H38V37H2z" fill="var(--g1)" />
      <path d="M20 20V6H26V12H32V20z" fill="var(--r4)" />
      <path d="M0 17H18.4V20H0zM33.6 17H40V20H33.6z" fill="var(--ink)" />
    </svg>
  );
}
