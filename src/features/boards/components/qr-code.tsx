import QRCode from 'qrcode'
import { useMemo } from 'react'

/** A QR code with the quiet zone of four modules that ISO/IEC 18004 asks for, drawn as one path; dark on light in either theme. */
export function QrCode({ text, label, className = '' }: { text: string; label: string; className?: string }) {
  const { d, width } = useMemo(() => {
    const { modules } = QRCode.create(text, { errorCorrectionLevel: 'M' })
    let path = ''
    for (let y = 0; y < modules.size; y += 1) for (let x = 0; x < modules.size; x += 1) if (modules.get(y, x)) path += `M${x + 4} ${y + 4}h1v1h-1z`
    return { d: path, width: modules.size + 8 }
  }, [text])
  return (
    <svg role="img" aria-label={label} className={`flex-none ${className}`} viewBox={`0 0 ${width} ${width}`} shapeRendering="crispEdges">
      <rect width={width} height={width} fill="#fff" />
      <path d={d} fill="#000" />
    </svg>
  )
}
