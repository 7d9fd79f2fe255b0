using System.Collections.Immutable;
using StreamLogit.Engine.Health.Metrics;

namespace StreamLogit.Engine.Health;

/// <summary>
/// Labels by their published log-odds, in fine bins or as groups of equal probabilities, and what follows from that. Immutable; each figure is computed when it
/// is first read.
/// </summary>
public sealed class ScoreDistribution : IEquatable<ScoreDistribution>
{
    private const int Groups = 10;

    private readonly double _brier;
    private readonly double? _positiveLogOdds;
    private readonly Lazy<RocArea> _rocArea;
    private readonly Lazy<CoxCalibration> _calibration;
    private readonly Lazy<ImmutableArray<CalibrationGroup>> _reliability;

    internal ScoreDistribution(ImmutableArray<ScoreGroup> bins, double brier, double? positiveLogOdds)
    {
        Bins = bins;
        _brier = brier;
        _positiveLogOdds = positiveLogOdds;
        _rocArea = new Lazy<RocArea>(() => RocArea.Of(Bins.AsSpan()), LazyThreadSafetyMode.PublicationOnly);
        _calibration = new Lazy<CoxCalibration>(() => CoxCalibration.Of(Bins.AsSpan(), _positiveLogOdds), LazyThreadSafetyMode.PublicationOnly);
        _reliability = new Lazy<ImmutableArray<CalibrationGroup>>(() => Grouping.EqualCount(Bins.AsSpan(), Groups), LazyThreadSafetyMode.PublicationOnly);
    }

    /// <summary>Of no labels.</summary>
    public static ScoreDistribution Empty { get; } = new([], double.NaN, null);

    /// <summary>The groups or bins that hold labels, from the lowest log-odds to the highest.</summary>
    public ImmutableArray<ScoreGroup> Bins { get; }

    /// <summary>The area under the receiver operating characteristic, with its error bound and intervals.</summary>
    public RocArea RocArea => _rocArea.Value;

    /// <summary>Calibration intercept and slope (Cox 1958), with bounds of their error from binning.</summary>
    public CoxCalibration Calibration => _calibration.Value;

    /// <summary>
    /// The reliability diagram: ten groups of about equal counts, merged from the bins (<see cref="Grouping.EqualCount"/>). Each group's sums are exact.
    /// </summary>
    public ImmutableArray<CalibrationGroup> Reliability => _reliability.Value;

    /// <summary>The distances of the groups of <see cref="Reliability"/> from the diagonal; its expected one is the expected calibration error.</summary>
    public CalibrationError CalibrationError => CalibrationError.Of(Reliability);

    /// <summary>Murphy's decomposition of the Brier score over the groups of <see cref="Reliability"/>.</summary>
    public BrierDecomposition BrierDecomposition => BrierDecomposition.Of(Reliability, _brier);

    /// <summary>The test of Hosmer and Lemeshow over the groups of <see cref="Reliability"/> (rule: equal counts merged from the bins).</summary>
    public HosmerLemeshow HosmerLemeshow => HosmerLemeshow.Of(Reliability);

    /// <summary>A reliability diagram of so many groups that were promised about equally many labels 1 each, which shows more where events are rare.</summary>
    public ImmutableArray<CalibrationGroup> ReliabilityByExpected(int groups) => Grouping.EqualExpected(Bins.AsSpan(), groups);

    /// <summary>A reliability diagram without chosen groups: the blocks of the isotonic fit.</summary>
    public ImmutableArray<CalibrationGroup> IsotonicReliability() => IsotonicFit.Of(Bins.AsSpan());

    /// <summary>The distribution of single predictions, exact.</summary>
    public static ScoreDistribution Of(ReadOnlySpan<double> probabilities, ReadOnlySpan<int> labels, ReadOnlySpan<double> weights = default)
    {
        var groups = ScoreGroups.Of(probabilities, labels, weights);
        double weight = 0, brier = 0;
        foreach (var group in groups)
        {
            double p = group.MeanProbability;
            weight += group.Weight;
            brier += group.Positive * ((1 - p) * (1 - p)) + group.Negative * (p * p);
        }
        return new ScoreDistribution(groups, brier / weight, null);
    }

    /// <summary>Whether both hold the same groups with the same bits.</summary>
    public bool Equals(ScoreDistribution? other) =>
        other is not null && Bins.AsSpan().SequenceEqual(other.Bins.AsSpan()) && _brier.Equals(other._brier) && Nullable.Equals(_positiveLogOdds, other._positiveLogOdds);

    /// <inheritdoc/>
    public override bool Equals(object? obj) => Equals(obj as ScoreDistribution);

    /// <inheritdoc/>
    public override int GetHashCode() => Bins.Length;
}
