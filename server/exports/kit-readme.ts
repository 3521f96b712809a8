import { CAUTION } from './manifest.ts'

/** README of a kit: what it holds, and how to prove it with sha256sum and openssl alone. */
export function kitReadme({ machine, version, sequence, keyId }: { machine: string; version: string; sequence: number; keyId: string }): string {
  return `${machine} ${version}, release number ${sequence}

${CAUTION}

What is here
  joints/NAME/    the register image of each joint and the same bytes in other forms
  firmware/       the firmware images of the joints' boards, where they were given
  manifest.json   every file's SHA-256, the release, who signed it, the verdicts of its check
                  (an in-toto statement in RFC 8785 canonical JSON)
  manifest.sig    Ed25519 signature of manifest.json, 64 bytes
  manifest.dsse.json  the same manifest in a DSSE envelope, for in-toto tools
  SHA256SUMS      SHA-256 of every file here but itself and its signature
  SHA256SUMS.sig  Ed25519 signature of SHA256SUMS, 64 bytes
  public-key.pem  the workplace's public key

How to prove it (OpenSSL 3.0 or newer, in the directory this file lies in)

1. The key is the workplace's. This must print the key's name as you know it from the
   workplace, not from this file; at release it was
   ${keyId}

   openssl pkey -pubin -in public-key.pem -outform DER | sha256sum

2. The list of sums and the manifest were signed with that key. Each must print
   "Signature Verified Successfully".

   openssl pkeyutl -verify -pubin -inkey public-key.pem -rawin -in SHA256SUMS -sigfile SHA256SUMS.sig
   openssl pkeyutl -verify -pubin -inkey public-key.pem -rawin -in manifest.json -sigfile manifest.sig

3. Every file is the one that was signed. Every line must end in OK.

   sha256sum --check --strict SHA256SUMS

4. After flashing, read the board back and compare it with the joint's .bin, or give the dump to Detent.
`
}
