import { Component } from 'react';
import type { ReactNode } from 'react';
import { ProblemNotice } from './Notice.tsx';

/** Keeps a fault in one part of a page from taking the rest with it. */
export class PanelBoundary extends Component<{ children: ReactNode; className?: string }, { error: unknown }> {
  override state: { error: unknown } = { error: null };

  static getDerivedStateFromError(error: unknown) {
    return { error };
  }

  override render() {
    if (this.state.error === null) return this.props.children;
    return (
      <div className={this.props.className ?? 'page-pad py-4'}>
        <ProblemNotice error={this.state.error} onRetry={() => this.setState({ error: null })} />
      </div>
    );
  }
}
