/** Who signs, and as what; what has to be done before stands there in words. */
export function SignsAs({ signer, meaning, blocked }: { signer: string; meaning: string; blocked: string | null }) {
  return (
    <>
      {blocked && <p className="border-l-[3px] border-l-plum bg-plum-wash px-3 py-[6px] text-13">{blocked}</p>}
      <p className="text-13 text-ink-2">
        Signs as <b className="text-ink">{signer}</b>, meaning <b className="text-ink">{meaning}</b>:
      </p>
    </>
  )
}
