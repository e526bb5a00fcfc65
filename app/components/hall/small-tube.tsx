type Props = {
  bulbRadiusMetres: number
  gun: { xMetres: number; yMetres: number }
  /** The beam in millimetres, as the bridge relays it. */
  points: [number, number][]
  widthMillimetres: number
  isDark: boolean
}

/** The tube at the size of a tile: the bulb, the gun and the beam. It shows that there is a beam, not how wide it is. */
export function SmallTube({ bulbRadiusMetres, gun, points, widthMillimetres, isDark }: Props) {
  const bulb = bulbRadiusMetres * 1000
  const [gunX, gunY] = [gun.xMetres * 1000, -gun.yMetres * 1000]
  const size = bulb * 1.08
  return (
    <svg
      viewBox={`${-size} ${-size} ${2 * size} ${2 * size}`}
      fill="none"
      aria-hidden="true"
      className="w-full"
    >
      <circle r={bulb} className="fill-glass stroke-rule" strokeWidth="1.5" />
      {!isDark && points.length > 1 && (
        <polyline
          points={points.map(([x, y]) => `${x},${-y}`).join(' ')}
          className="stroke-beam"
          strokeWidth={Math.max(2.4, widthMillimetres)}
          strokeLinejoin="round"
        />
      )}
      <path
        d={`M${gunX - 4} ${gunY + 12}v-9h8v9zM${gunX} ${gunY + 12}V${Math.sqrt(Math.max(0, bulb ** 2 - gunX ** 2))}`}
        className="fill-glass stroke-ink-soft"
        strokeWidth="1.6"
      />
    </svg>
  )
}
