type SymbolName = 'source' | 'bridge' | 'amplifier' | 'filter' | 'converter'

/** Small symbol at the head of a stage's line, in the manner of the schematic. */
export function StageSymbol({ name }: { name: SymbolName }) {
  return (
    <svg className="stage-symbol" width="36" height="30" viewBox="0 0 36 30" aria-hidden="true">
      {name === 'source' && (
        <>
          <circle cx="18" cy="15" r="9" className="g" />
          <path d="M12 15c2-5 4-5 6 0s4 5 6 0" className="g1" />
        </>
      )}
      {name === 'bridge' && (
        <>
          <path d="M18 3l13 12-13 12L5 15z" className="g" />
          <path d="M9.3 8.4l4 3.7M22.7 12.1l4-3.7M9.3 21.6l4-3.7M22.7 17.9l4 3.7" className="g2" />
        </>
      )}
      {name === 'amplifier' && (
        <>
          <path d="M9 3l20 12L9 27z" className="g" />
          <path d="M3 9h6M3 21h6M29 15h5M12 10h4M14 8v4M12 20h4" className="g1" />
        </>
      )}
      {name === 'filter' && (
        <>
          <path d="M4 4h28v22H4z" className="g" />
          <path d="M9 9.5h9c4 0 4.5 11 9 11" className="g1" />
        </>
      )}
      {name === 'converter' && (
        <>
          <path d="M4 15L13 4h19v22H13z" className="g" />
          <path d="M17 20v-3h4v-4h4V9h4" className="g1" />
        </>
      )}
    </svg>
  )
}
