using StreamLogit.Engine.Fitting;

namespace StreamLogit.Pipeline.Replay.Comparison;

/// <summary>
/// What a cell of time sums up: the count, the weight and the weight of the ones, then for each model, the reference first, log-loss, Brier score, cost
/// and probability, each times the weight.
/// </summary>
internal sealed class LossSums(int models, DecisionCost cost)
{
    private const int Shared = 3;
    private const int PerModel = 4;
    private readonly double[] _probabilities = new double[models];
    private readonly double[] _lossesOfZero = new double[models];
    private readonly double[] _lossesOfOne = new double[models];
    private readonly double[] _terms = new double[Shared + PerModel * models];

    /// <summary>How many sums there are.</summary>
    public int Width => _terms.Length;

    /// <summary>Figures of the variants that <see cref="Differences"/> gives: log-loss, Brier score and cost of each.</summary>
    public int DifferenceCount => 3 * (models - 1);

    /// <summary>Computes what an event adds, or takes away where the weight is below 0.</summary>
    public void Compute(ReadOnlySpan<double> logOdds, int label, double weight)
    {
        VariantLosses.Compute(logOdds, _probabilities, _lossesOfZero, _lossesOfOne);
        (_terms[0], _terms[1], _terms[2]) = (Math.Sign(weight), weight, weight * label);
        var losses = label == 1 ? _lossesOfOne : _lossesOfZero;
        for (int m = 0, place = Shared; m < models; m++, place += PerModel)
        {
            double p = _probabilities[m];
            _terms[place] = weight * losses[m];
            _terms[place + 1] = weight * (p - label) * (p - label);
            _terms[place + 2] = weight * cost.Of(p, label);
            _terms[place + 3] = weight * p;
        }
    }

    /// <summary>Adds what was computed to the sums of a cell.</summary>
    public void AddTo(double[] sums)
    {
        for (int i = 0; i < _terms.Length; i++) sums[i] += _terms[i];
    }

    /// <summary>How much less a variant's log-loss is than the reference's for the event computed last, and how much less it would be under the other label.</summary>
    public (double Gain, double OtherGain) Gain(int variant, int label)
    {
        double ofOne = _lossesOfOne[0] - _lossesOfOne[variant + 1], ofZero = _lossesOfZero[0] - _lossesOfZero[variant + 1];
        return label == 1 ? (ofOne, ofZero) : (ofZero, ofOne);
    }

    public static long Count(ReadOnlySpan<double> sums) => (long)sums[0];

    public static double ObservedRate(ReadOnlySpan<double> sums) => sums[2] / sums[1];

    /// <summary>The figures of a model, the reference being 0.</summary>
    public static ModelFigures Figures(ReadOnlySpan<double> sums, int model)
    {
        var of = sums.Slice(Shared + PerModel * model, PerModel);
        double weight = sums[1];
        return new ModelFigures(of[0] / weight, of[1] / weight, of[2] / weight, of[3] / weight, double.NaN);
    }

    /// <summary>The differences of all variants, three for each.</summary>
    public static void Differences(ReadOnlySpan<double> sums, Span<double> differences)
    {
        for (int d = 0; d < differences.Length; d++)
        {
            int figure = d % 3, variant = d / 3 + 1;
            differences[d] = (sums[Shared + PerModel * variant + figure] - sums[Shared + figure]) / sums[1];
        }
    }

    public static double[] Total(IEnumerable<double[]> cells, int width)
    {
        var total = new double[width];
        foreach (var sums in cells)
            for (int i = 0; i < width; i++) total[i] += sums[i];
        return total;
    }
}
