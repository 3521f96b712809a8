/** "before → after". Drawn, since the shipped font subsets hold no arrow to the right; read out as "to". */
export function Arrow() {
  return (
    <svg className="mx-[5px] inline-block align-middle" width="13" height="8" viewBox="0 0 13 8" role="img" aria-label="to">
      <path d="M0 4H11M8 1l3.4 3L8 7" fill="none" stroke="currentColor" strokeWidth="1.1" />
    </svg>
  )
}
