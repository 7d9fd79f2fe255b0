namespace StreamLogit.Pipeline.Replay.Comparison;

/// <summary>
/// Anytime-valid evidence, label by label, that a variant's log-loss is lower, or higher, than the reference's (Henzi &amp; Ziegel, Biometrika 109, 2022, 647):
/// a bettor stakes on each label that the variant gains on it. If, whenever a label comes, the variant is not expected to gain on it given all that is
/// known then, no way of betting makes the wealth grow.
/// </summary>
/// <remarks>
/// Before a label is known its two possible gains are, one of them below 0, so the stake can be kept so small that no label loses more than half
/// of the wealth; the log-loss needs no other bound. The stake is mean / mean square of the gains before (Waudby-Smith &amp; Ramdas, JRSS B 86, 2024, 1).
/// </remarks>
internal sealed class BettingEvidence
{
    private const double LargestLoss = 0.5;

    // Before that many gains the mean says nothing, and nothing is staked.
    private const int FewestGains = 20;
    private readonly Variant[] _variants;

    public BettingEvidence(int variants)
    {
        _variants = new Variant[variants];
        Array.Fill(_variants, new Variant { Better = Wealth.One, Worse = Wealth.One });
    }

    /// <summary>Takes in a label.</summary>
    /// <param name="variant">The variant.</param>
    /// <param name="gain">What it loses less than the reference, times the weight.</param>
    /// <param name="otherGain">What it would have lost less under the other label.</param>
    /// <param name="timeMicroseconds">When the label became known.</param>
    public void Add(int variant, double gain, double otherGain, long timeMicroseconds)
    {
        if (gain == 0) return;
        ref var v = ref _variants[variant];
        if (v.Count >= FewestGains)
        {
            double stake = v.Sum / v.SumOfSquares;
            if (stake > 0)
            {
                double worst = -Math.Min(gain, otherGain);
                v.Better.Multiply(1 + Math.Min(stake, LargestLoss / worst) * gain, timeMicroseconds);
            }
            else
            {
                double worst = Math.Max(gain, otherGain);
                v.Worse.Multiply(1 - Math.Min(-stake, LargestLoss / worst) * gain, timeMicroseconds);
            }
        }
        v.Count++;
        v.Sum += gain;
        v.SumOfSquares += gain * gain;
    }

    /// <summary>That the variant is better.</summary>
    public Evidence Better(int variant) => _variants[variant].Better.ToEvidence();

    /// <summary>That the variant is worse.</summary>
    public Evidence Worse(int variant) => _variants[variant].Worse.ToEvidence();

    private struct Variant
    {
        public long Count;
        public double Sum;
        public double SumOfSquares;
        public Wealth Better;
        public Wealth Worse;
    }
}
