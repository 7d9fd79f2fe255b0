using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Learning;

/// <summary>
/// The losses of every setting of a bank and the weights of their blend, which follow from them: exponential weights on log-loss with
/// learning rate 1, mixed by fixed share (Herbster &amp; Warmuth, Machine Learning 32, 1998, 151). With the switch rate 0 the log-loss of the
/// blend never exceeds that of the best setting by more than ln(settings), whatever the stream.
/// </summary>
/// <remarks>
/// A label with importance s counts as loss * s: the weight of a setting is multiplied by (its probability for the label)^s. The bound holds
/// for s up to 1; a larger s asks for more trust in one label than a mixture can give.
/// </remarks>
internal abstract class Blend
{
    /// <summary>A blend for so many settings.</summary>
    public static Blend Create(int settingCount, double switchRate, int widestLanes) => settingCount == 1
        ? new SingleSetting(switchRate == 0, widestLanes)
        : RowWidth.Lanes(RowWidth.Padded(settingCount), widestLanes) switch
        {
            8 => new Blend<Lanes8>(settingCount, switchRate),
            4 => new Blend<Lanes4>(settingCount, switchRate),
            2 => new Blend<Lanes2>(settingCount, switchRate),
            _ => new Blend<Lanes1>(settingCount, switchRate),
        };

    /// <summary>What every setting gave, in the last <see cref="Learn"/>, to the label that was not the case; one for every place of the row.</summary>
    public abstract ReadOnlySpan<double> MissProbability { get; }

    /// <summary>The log-odds of the blended probability: always finite.</summary>
    public abstract double LogOdds(ReadOnlySpan<double> settingLogOdds);

    /// <summary>Adds up the losses of what was scored and moves the weights.</summary>
    public abstract void Learn(ReadOnlySpan<double> scoredLogOdds, int label, double weight);

    /// <summary>Takes what a label had added to the totals back out of them. The weights have moved on and stay.</summary>
    public abstract void TakeBack(ReadOnlySpan<double> scoredLogOdds, int label, double weight);

    /// <summary>The weights, which sum to 1.</summary>
    public abstract void Weights(Span<double> weights);

    /// <summary>Whether the weights are kept as losses (switch rate 0), or as they are.</summary>
    public abstract bool KeepsLosses { get; }

    /// <summary>Sets the weights by their logarithms, up to a common summand.</summary>
    public abstract void SetLogWeights(ReadOnlySpan<double> logWeights);

    public abstract double LogLossTotal(int setting);

    public abstract double BrierTotal(int setting);

    public abstract double WeightTotal(int setting);

    /// <summary>Numbers that a setting has in a saved state: its weight or, if losses are kept, its loss above the best setting, then the totals.</summary>
    public const int NumbersPerSetting = 4;

    public abstract void SaveSetting(int setting, Span<double> numbers);

    public abstract void LoadSetting(int setting, ReadOnlySpan<double> numbers);

    /// <summary>ln of the weight in the saved numbers of a setting, up to a common summand.</summary>
    public static double LogWeightOf(ReadOnlySpan<double> numbers, bool keepsLosses) => keepsLosses ? -numbers[0] : Elementary.Log(numbers[0]);
}
