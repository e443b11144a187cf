import { createElement, type ReactNode } from 'react';

const greek: Record<string, string> = {
  alpha: 'α',
  beta: 'β',
  gamma: 'γ',
  delta: 'δ',
  epsilon: 'ε',
  zeta: 'ζ',
  eta: 'η',
  theta: 'θ',
  iota: 'ι',
  kappa: 'κ',
  lambda: 'λ',
  mu: 'μ',
  nu: 'ν',
  xi: 'ξ',
  pi: 'π',
  rho: 'ρ',
  sigma: 'σ',
  tau: 'τ',
  upsilon: 'υ',
  phi: 'φ',
  chi: 'χ',
  psi: 'ψ',
  omega: 'ω',
  Gamma: 'Γ',
  Delta: 'Δ',
  Theta: 'Θ',
  Lambda: 'Λ',
  Xi: 'Ξ',
  Pi: 'Π',
  Sigma: 'Σ',
  Phi: 'Φ',
  Psi: 'Ψ',
  Omega: 'Ω',
};

/**
 * A symbol typeset: italic quantity, upright subscript (ISO 80000-1, 7.1), `tau` as τ. A column of a trace (`t1.P`)
 * stays in the letters it is written with.
 */
export function symbolMath(symbol: string): ReactNode {
  if (symbol.includes('.')) return createElement('mtext', { className: 'figures' }, symbol);
  const [stem = '', ...rest] = symbol.split('_');
  const letter = greek[stem] ?? stem;
  // One letter is italic by itself; several would be upright unless told.
  const base = createElement('mi', letter.length > 1 ? { mathvariant: 'italic' } : {}, letter);
  const below = rest.join(', ');
  return below ? createElement('msub', {}, base, createElement('mtext', {}, greek[below] ?? below)) : base;
}

export function SymbolMath({ symbol, equals = false }: { symbol: string; equals?: boolean }) {
  return createElement('math', {}, symbolMath(symbol), equals ? createElement('mo', {}, '=') : null);
}
