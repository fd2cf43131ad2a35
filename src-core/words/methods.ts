import { isLinked, isOfCounts } from '../protocol/linked';
import type { Inference, Plan } from '../protocol/plan';
import type { Result } from '../protocol/result';
import { testWords } from './evidence-names';
import { limitMethods } from './methods-of-limits';
import { list } from './numbers';
import { ruleName } from './rules';
import { tiesCells } from './structures';

/** One paragraph of methods with its published sources. */
export interface Method {
  readonly title: string;
  readonly text: string;
  readonly sources: string;
}

/** The methods that this result rests on, and no others, with their sources. */
export function methodsOf(result: Result): Method[] {
  const { plan } = result;
  return [
    structureMethod(plan),
    estimateMethod(plan),
    ...targetMethod(plan),
    inferenceMethod(result),
    ...(result.robustBeside === null ? [] : [tiesCells(plan.variance) ? blocksMethod : robustMethod]),
    evidenceMethod(result),
    ...(result.beside.length === 0 ? [] : [priceMethod]),
    ...(result.breakEven.length === 0 ? [] : [breakEvenMethod]),
    ...(result.exponentSupport === null ? [] : [scanMethod]),
    influenceMethod,
    ...(result.cells.some(({ shrunken }) => shrunken !== null) ? [shrunkenMethod] : []),
    ...(result.betweenRules.length === 0 ? [] : [rulesMethod]),
    ...limitMethods(result),
    isLinked(plan) ? linkedGoodness : goodnessMethod,
    digitsMethod,
  ];
}

function structureMethod({ variance }: Plan): Method {
  const sources = [...new Set(variance.parts.map(({ kind }) => partSources[kind]).filter((one) => one !== ''))];
  return {
    title: 'Variance structure',
    text: tiesCells(variance)
      ? 'The covariance of the errors is a sum of parts, and cells go together. Everything below is computed after whitening, that is, after division by a root of that covariance, block by block.'
      : 'The covariance of the errors is a sum of parts, here diagonal: cells are independent. Everything below is computed after whitening, that is, after division by the root of each cell’s error variance.',
    sources: sources.join('; '),
  };
}

const partSources: { readonly [K in Plan['variance']['parts'][number]['kind']]: string } = {
  constant: '',
  'per-size': 'Prais & Aitchison 1954',
  given: 'Hanushek 1974; Birge 1932 where the scale is free',
  matrix: 'Särndal, Swensson & Wretman 1992',
  'size-power': 'Carroll & Ruppert 1988',
  proxy: 'Carroll & Ruppert 1988',
  'log-linear': 'Harvey 1976',
  'per-class': 'Harvey 1976',
  binomial: 'Berkson 1955',
  counts: 'McCullagh & Nelder 1989',
  between: 'Dickens 1990; Fay & Herriot 1979; Lewis & Linzer 2005',
  shared: 'Laird & Ware 1982',
};

function estimateMethod(plan: Plan): Method {
  const { estimate, outcomeScale } = plan;
  const title = 'Estimation';
  if (isLinked(plan))
    return {
      title,
      text: 'Coefficients maximise the likelihood of the counts, by iteratively reweighted least squares with step halving. What follows from the fit (influence, robust errors, prices, pulls) is that of its last round, linear in the working response. A free scale is the Pearson sum over the residual freedom.',
      sources: 'McCullagh & Nelder 1989; Albert & Anderson 1984 for whether a maximum exists',
    };
  if (isOfCounts(plan) && outcomeScale === 'identity')
    return {
      title,
      text: 'Coefficients come from least squares on whitened data; the variances follow from the fitted means, and both are iterated to a fixed point with step halving. Tests and deletions hold the variances there. No likelihood is told: beside a free factor or another part there is none.',
      sources: 'Wedderburn 1974; McCullagh & Nelder 1989',
    };
  if (isOfCounts(plan))
    return {
      title,
      text: 'Minimum chi-square: least squares on empirical logits (or logs), with variances from the observed shares.',
      sources: 'Berkson 1955',
    };
  const solved =
    'Coefficients come from least squares on whitened data, by orthogonal factors with the columns scaled.';
  switch (estimate.method) {
    case 'least-squares':
      return {
        title,
        text: `${solved} A free scale is the sum of squared whitened residuals over the residual freedom.`,
        sources: 'Aitken 1935',
      };
    case 'two-step':
      return {
        title,
        text: `${solved} Variance parameters maximise the likelihood of the unweighted residuals, held fixed; then one weighted fit, without iteration.`,
        sources: 'Carroll & Ruppert 1988',
      };
    case 'full':
      return {
        title,
        text: `${solved} Variance parameters maximise the full likelihood.`,
        sources: 'Hartley & Rao 1967',
      };
    case 'restricted':
      return {
        title,
        text: `${solved} Variance parameters maximise the restricted likelihood, that of the residuals, so that the coefficients’ own freedom is allowed for. Their intervals are by profile likelihood, at the level of the plan.`,
        sources: 'Patterson & Thompson 1971',
      };
    case 'moments':
      return {
        title,
        text: `${solved} τ² is found by moments (${ruleName(estimate.rule)}), its interval by the Q-profile.`,
        sources: `${momentSources[estimate.rule]}; Viechtbauer 2007`,
      };
  }
}

const momentSources = {
  'dersimonian-laird': 'DerSimonian & Laird 1986',
  'paule-mandel': 'Paule & Mandel 1982',
  hanushek: 'Hanushek 1974; Lewis & Linzer 2005',
} as const;

function targetMethod({ target }: Plan): Method[] {
  if (target === 'structure' || target === 'diagonal') return [];
  const by =
    target === 'persons'
      ? 'persons: cells count by their size'
      : target === 'cells'
        ? 'cells: each counts alike'
        : 'another structure’s weights';
  return [
    {
      title: 'Target',
      text: `The plan’s target is ${by}. Coefficients use those weights; their errors still come from the stated variance structure.`,
      sources: 'Solon, Haider & Wooldridge 2015',
    },
  ];
}

function inferenceMethod({ plan, fit }: Result): Method {
  const title = 'Inference';
  const { inference } = fit;
  switch (inference.kind) {
    case 'model':
      return modelMethod(title, { plan, fit });
    case 'knapp-hartung':
      return {
        title,
        text: 'Every variance is multiplied by the mean squared whitened residual; t on cells less coefficients.',
        sources: 'Knapp & Hartung 2003; Röver, Knapp & Friede 2015 for the floor',
      };
    case 'robust':
      return {
        title,
        text: `Robust errors (${inference.correction}) from residuals and leverages of the whitened design; t on cells less coefficients.`,
        sources: robustMethod.sources,
      };
    case 'kenward-roger':
      return {
        title,
        text: 'Errors allow for the estimated variance parameters, by their expected information in parameters in which the covariance is linear; each combination of coefficients has its own freedom, and a joint question the scaled F of the paper.',
        sources: 'Kenward & Roger 1997',
      };
    case 'clustered':
      return clusteredMethod(title, inference);
    case 'wild':
      return {
        title,
        text: `Wild cluster bootstrap-t by ${list(inference.by)} on the scores of the clusters, each tested value imposed before residuals are drawn, t by CR0, seed ${inference.seed}: signs, or six points where clusters are few. A draw that ties with the cells counts as farther out.`,
        sources: 'Cameron, Gelbach & Miller 2008; Webb 2023',
      };
  }
}

function modelMethod(title: string, { plan, fit }: Pick<Result, 'plan' | 'fit'>): Method {
  const estimated = fit.variance.some(({ fixed }) => !fixed);
  if (fit.errorFreedom !== null && plan.variance.parts.some(({ kind }) => kind === 'matrix'))
    return {
      title,
      text: `Model-based errors; since the given matrix is an estimate itself, t on its freedom${estimated ? ', and on cells less coefficients at most' : ''}.`,
      sources: 'Särndal, Swensson & Wretman 1992',
    };
  if (fit.errorFreedom !== null && !estimated)
    return {
      title,
      text: 'Model-based errors; since the given errors are estimates, each coefficient has Satterthwaite’s freedom.',
      sources: 'Satterthwaite 1946',
    };
  return {
    title,
    text: estimated
      ? 'Model-based errors, with the t distribution on cells less coefficients, since variance parameters were estimated.'
      : 'Model-based errors with the normal distribution, since nothing in the variance was estimated.',
    sources: 'Aitken 1935',
  };
}

function clusteredMethod(title: string, inference: Extract<Inference, { kind: 'clustered' }>): Method {
  const { by, alsoBy, correction } = inference;
  const also = alsoBy === null ? '' : ` and by ${list(alsoBy)}, less what both share`;
  const says = {
    CR0: 'whitened residuals as they are; t and F on the clusters less one',
    CR1: 'whitened residuals times a factor for the number of clusters and cells; t and F on the clusters less one',
    CR2: 'whitened residuals divided by the symmetric root of what the fit leaves them; t with Satterthwaite’s freedom, joint questions by the approximate Hotelling test',
    CR3: 'whitened residuals divided by what the fit leaves them; t and F on the clusters less one',
  } as const;
  const own =
    correction === 'CR2'
      ? 'Bell & McCaffrey 2002; Pustejovsky & Tipton 2018; Tipton & Pustejovsky 2015'
      : 'Liang & Zeger 1986';
  return {
    title,
    text: `Errors clustered by ${list(by)}${also} (${correction}): ${says[correction]}.`,
    sources: alsoBy === null ? own : `${own}; Cameron, Gelbach & Miller 2011`,
  };
}

const robustMethod: Method = {
  title: 'Robust errors beside',
  text: 'HC3: squared whitened residuals over the square of one less the leverage.',
  sources: 'White 1980; MacKinnon & White 1985; Long & Ervin 2000',
};

const blocksMethod: Method = {
  title: 'Robust errors beside',
  text: 'CR2: whitened residuals summed by the blocks of cells that go together, divided by the symmetric root of what the fit leaves them.',
  sources: 'Bell & McCaffrey 2002; Pustejovsky & Tipton 2018',
};

function evidenceMethod({ evidence }: Result): Method {
  const used = new Set(evidence.filter(({ p }) => p !== null).map(({ test }) => test));
  const sources = [...new Set([...used].flatMap((test) => testWords[test].source.split('; ')))].join('; ');
  return {
    title: 'Evidence about the structure',
    text: 'Every test uses whitened residuals and is read at the 5 % level. The smallest departure is the one that would be found with a chance of 80 % at the fitted structure: for tests of variance, the stated variances times a power of size, printed as the ratio that this power makes between the smallest and the largest quarter; exact where the distribution is known, else by 2,000 seeded draws.',
    sources,
  };
}

const priceMethod: Method = {
  title: 'Price of a weighting',
  text: 'The stated structure is taken as true, and the variance of every rival’s coefficients computed under it; the square does the same with each structure as the truth. The claimed error is what the rival’s usual formula reports.',
  sources: 'Aitken 1935; Bloomfield & Watson 1975',
};

const breakEvenMethod: Method = {
  title: 'Break-even',
  text: 'With variance τ² + σ²/m the variances by equal weights and by size are both linear in the two components; the share τ² / (τ² + σ²) at which they agree is solved for in closed form.',
  sources: 'Dickens 1990; Solon, Haider & Wooldridge 2015',
};

const scanMethod: Method = {
  title: 'Exponent scan',
  text: 'The fit is repeated with error variance falling as size to the power d, from 0 to 1.5. Supported are the exponents whose profile log-likelihood is within half the chi-square quantile on 1 of the highest.',
  sources: 'Carroll & Ruppert 1988',
};

const influenceMethod: Method = {
  title: 'Influence and beam',
  text: 'Deletions hold the variance parameters; only a free scale is estimated again. The pull of a cell on a coefficient is the factor with which its value enters it: pulls times values add up to the coefficient. Contributions are measured from the fitted mean.',
  sources: 'Belsley, Kuh & Welsch 1980; Cook & Weisberg 1982',
};

const shrunkenMethod: Method = {
  title: 'Shrunken cell estimates',
  text: 'Each cell’s own value and its fitted value are averaged by the share of the variance that lies between cells; the mean squared error allows for the estimated coefficients and variance.',
  sources: 'Fay & Herriot 1979; Prasad & Rao 1990; Datta & Lahiri 2000',
};

const rulesMethod: Method = {
  title: 'τ² by several rules',
  text: 'The same model under moment rules and both likelihoods. The Q-profile interval is one for all rules.',
  sources: 'DerSimonian & Laird 1986; Paule & Mandel 1982; Hanushek 1974; Lewis & Linzer 2005; Viechtbauer 2007',
};

const goodnessMethod: Method = {
  title: 'Goodness of fit',
  text: 'The weighted R² compares whitened residuals with whitened distances from the weighted mean; the other is on the unweighted scale.',
  sources: 'Buse 1973; Willett & Singer 1988',
};

const linkedGoodness: Method = {
  title: 'Goodness of fit',
  text: 'The deviance and the sum of squared whitened (Pearson) residuals judge the fit; the R² is that of the shares or rates themselves, unweighted.',
  sources: 'McCullagh & Nelder 1989; Willett & Singer 1988',
};

const digitsMethod: Method = {
  title: 'Digits',
  text: 'Decimals of the file are kept to twice the usual precision; every fit is solved twice, and the figures are the same to the last digit on any machine.',
  sources: 'Björck 1967',
};
