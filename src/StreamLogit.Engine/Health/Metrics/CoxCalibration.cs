using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Health.Metrics;

/// <summary>
/// The logistic recalibration of Cox (Biometrika 45, 1958, 562): the labels follow log-odds a + b z, where z are the published log-odds. Maximum likelihood;
/// a = 0 and b = 1 where the probabilities hold. A slope below 1 says that they are too extreme, above 1 that they are too timid.
/// </summary>
public readonly record struct CoxCalibration
{
    private const int MostSteps = 60;
    private const double FarthestParameter = 1e4;

    /// <summary>a, fitted together with the slope; NaN where no finite fit exists, as with labels of one kind only.</summary>
    public double Intercept { get; private init; }

    /// <summary>b.</summary>
    public double Slope { get; private init; }

    /// <summary>The standard error of the intercept, from the observed information.</summary>
    public double InterceptStandardError { get; private init; }

    /// <summary>The standard error of the slope.</summary>
    public double SlopeStandardError { get; private init; }

    /// <summary>Calibration in the large: a alone, with b = 1.</summary>
    public double InTheLarge { get; private init; }

    /// <summary>The standard error of the calibration in the large.</summary>
    public double InTheLargeStandardError { get; private init; }

    /// <summary>Twice the log-likelihood that the fit gains over a = 0, b = 1 (Miller, Hui &amp; Tierney 1991); about chi-square with 2 degrees of freedom where the probabilities hold.</summary>
    public double LikelihoodRatio { get; private init; }

    /// <summary>
    /// How far, to first order, the intercept of the single labels can be from this one because their log-odds are known to their bin only.
    /// 0 where groups hold equal probabilities.
    /// </summary>
    public double InterceptErrorBound { get; private init; }

    /// <summary>The same for the slope.</summary>
    public double SlopeErrorBound { get; private init; }

    /// <summary>The probability of so large a likelihood ratio where the probabilities hold.</summary>
    public double PValue => ReferenceDistributions.ChiSquareTail(LikelihoodRatio, 2);

    private static CoxCalibration None { get; } = new()
    {
        Intercept = double.NaN,
        Slope = double.NaN,
        InterceptStandardError = double.NaN,
        SlopeStandardError = double.NaN,
        InTheLarge = double.NaN,
        InTheLargeStandardError = double.NaN,
        LikelihoodRatio = double.NaN,
        InterceptErrorBound = double.NaN,
        SlopeErrorBound = double.NaN,
    };

    /// <summary>Fits to groups. Groups at probability 0 or 1 exactly are left out: no slope moves them.</summary>
    /// <param name="groups">The groups.</param>
    /// <param name="positiveLogOdds">
    /// The sum of weight times log-odds over the labels that are 1, where it is known better than the groups tell it. Bins then enter only
    /// by what the fit expects of them.
    /// </param>
    public static CoxCalibration Of(ReadOnlySpan<ScoreGroup> groups, double? positiveLogOdds = null)
    {
        double positives = 0, positivesTimesLogOdds = 0, negatives = 0;
        foreach (ref readonly var group in groups)
        {
            if (!double.IsFinite(group.LogOdds)) continue;
            positives += group.Positive;
            positivesTimesLogOdds += group.Positive * group.LogOdds;
            negatives += group.Negative;
        }
        if (!(positives > 0 && negatives > 0)) return None;
        double momentum = positiveLogOdds ?? positivesTimesLogOdds;

        if (!TryFit(groups, positives, momentum, slopeIsFree: false, out double inTheLarge, out _, out var largeSums)) return None;
        if (AreSeparated(groups) || !TryFit(groups, positives, momentum, slopeIsFree: true, out double intercept, out double slope, out var sums))
            return None with { InTheLarge = inTheLarge, InTheLargeStandardError = Math.Sqrt(1 / largeSums.Information00) };
        double determinant = sums.Determinant;
        var (error0, error1) = QuadratureErrors(groups, intercept, slope);
        return new CoxCalibration
        {
            Intercept = intercept,
            Slope = slope,
            InterceptStandardError = Math.Sqrt(sums.Information11 / determinant),
            SlopeStandardError = Math.Sqrt(sums.Information00 / determinant),
            InTheLarge = inTheLarge,
            InTheLargeStandardError = Math.Sqrt(1 / largeSums.Information00),
            LikelihoodRatio = 2 * (sums.LogLikelihood - CoxSums.At(groups, 0, 1, positives, momentum).LogLikelihood),
            InterceptErrorBound = (sums.Information11 * error0 + Math.Abs(sums.Information01) * error1) / determinant,
            SlopeErrorBound = (Math.Abs(sums.Information01) * error0 + sums.Information00 * error1) / determinant,
        };
    }

    /// <summary>Newton's method from a = 0, b = 1, steps halved where they would lose likelihood, which is concave.</summary>
    private static bool TryFit(
        ReadOnlySpan<ScoreGroup> groups, double positives, double momentum, bool slopeIsFree, out double intercept, out double slope, out CoxSums sums)
    {
        (intercept, slope) = (0, 1);
        sums = CoxSums.At(groups, intercept, slope, positives, momentum);
        for (int step = 0; step < MostSteps; step++)
        {
            double determinant = sums.Determinant;
            if (!(sums.Information00 > 0) || (slopeIsFree && !(determinant > 1e-14 * sums.Information00 * sums.Information11))) return false;
            double moveIntercept = slopeIsFree
                ? (sums.Information11 * sums.Score0 - sums.Information01 * sums.Score1) / determinant
                : sums.Score0 / sums.Information00;
            double moveSlope = slopeIsFree ? (sums.Information00 * sums.Score1 - sums.Information01 * sums.Score0) / determinant : 0;
            bool isSmall = Math.Abs(moveIntercept) <= 1e-12 * (1 + Math.Abs(intercept)) && Math.Abs(moveSlope) <= 1e-12 * (1 + Math.Abs(slope));

            var moved = CoxSums.At(groups, intercept + moveIntercept, slope + moveSlope, positives, momentum);
            for (int halving = 0; !isSmall && halving < 40 && !(moved.LogLikelihood >= sums.LogLikelihood - 1e-12 * Math.Abs(sums.LogLikelihood)); halving++)
            {
                moveIntercept /= 2;
                moveSlope /= 2;
                moved = CoxSums.At(groups, intercept + moveIntercept, slope + moveSlope, positives, momentum);
            }
            intercept += moveIntercept;
            slope += moveSlope;
            sums = moved;
            if (isSmall) return true;
            if (Math.Abs(intercept) > FarthestParameter || Math.Abs(slope) > FarthestParameter) return false;
        }
        return false;
    }

    /// <summary>Whether some log-odds divides the labels, so that the likelihood rises with the slope for ever.</summary>
    private static bool AreSeparated(ReadOnlySpan<ScoreGroup> groups)
    {
        double lowestPositive = double.MaxValue, highestPositive = double.MinValue;
        double lowestNegative = double.MaxValue, highestNegative = double.MinValue;
        foreach (ref readonly var group in groups)
        {
            if (!double.IsFinite(group.LogOdds)) continue;
            if (group.Positive > 0) (lowestPositive, highestPositive) = (Math.Min(lowestPositive, group.LogOdds), Math.Max(highestPositive, group.LogOdds));
            if (group.Negative > 0) (lowestNegative, highestNegative) = (Math.Min(lowestNegative, group.LogOdds), Math.Max(highestNegative, group.LogOdds));
        }
        return highestNegative <= lowestPositive || highestPositive <= lowestNegative;
    }

    /// <summary>
    /// How far the two score equations can be off because a bin's labels are put at the log-odds of their mean probability: with f the summand as a function of
    /// log-odds and d the width, at most (d^2/8)(|f'| + |f''|) a label, since neither the variance nor the shift of the mean exceeds d^2/4 and d^2/8.
    /// </summary>
    private static (double Of0, double Of1) QuadratureErrors(ReadOnlySpan<ScoreGroup> groups, double intercept, double slope)
    {
        double of0 = 0, of1 = 0;
        foreach (ref readonly var group in groups)
        {
            if (!(group.Width > 0) || !double.IsFinite(group.Width)) continue;
            double z = group.LogOdds, p = Elementary.Sigmoid(intercept + slope * z);
            double first = Math.Abs(slope) * p * (1 - p), second = slope * slope * p * (1 - p) * Math.Abs(1 - 2 * p);
            double share = group.Weight * group.Width * group.Width / 8;
            of0 += share * (first + second);
            of1 += share * (p + Math.Abs(z) * first + 2 * first + Math.Abs(z) * second);
        }
        return (of0, of1);
    }
}
