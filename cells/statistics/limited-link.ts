// A link between limits: μ = A + (B − A)·F(η), F the mean of a link onto (0, 1). For a background, guessing, lapses or immunity, where no
// mean comes below A or above B.

import type { Link } from "./link.ts"

export function limitedLink(link: Link, low: number, high: number): Link {
  const width = high - low
  const complement = link.complement ?? ((eta: number): number => 1 - link.mean(eta))
  const limited: Link = {
    name: `${link.name} from ${low} to ${high}`,
    range: { low, high },
    reach: link.reach,
    eta: (mu) => link.eta((mu - low) / width),
    mean: (eta) => {
      const share = link.mean(eta)
      return share === 1 ? high : low + width * share
    },
    complement: (eta) => 1 - high + width * complement(eta),
    slope: (eta) => width * link.slope(eta),
    curvature: (eta) => width * link.curvature(eta),
  }
  const { bend } = link
  if (!bend) return limited
  return {
    ...limited,
    bend: (eta, out) => {
      bend(eta, out)
      for (let k = 0; k < out.length; k++) out[k] = width * (out[k] as number)
    },
  }
}
