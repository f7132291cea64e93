import { Component, type ReactNode } from 'react'

interface Props {
  /** "The circuit". */
  what: string
  children: ReactNode
}

/** A drawing that cannot be made leaves its place empty with a sentence; fields and tables around it go on. */
export class DrawingBoundary extends Component<Props, { failed: boolean; children: ReactNode }> {
  override state = { failed: false, children: this.props.children }

  static getDerivedStateFromError() {
    return { failed: true }
  }

  /** Other figures may well be drawn again. */
  static getDerivedStateFromProps(props: Props, state: { failed: boolean; children: ReactNode }) {
    return props.children === state.children ? null : { failed: false, children: props.children }
  }

  override render() {
    return this.state.failed ? (
      <p className="plan-none">{this.props.what} cannot be drawn. Its figures stand in the tables.</p>
    ) : (
      this.props.children
    )
  }
}
