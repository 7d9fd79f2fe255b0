using StreamLogit.Engine.Health.Cohorts;
using StreamLogit.Engine.Health.RollUps;

namespace StreamLogit.Engine.Health;

/// <summary>What changes in sums when a label turns out to be wrong.</summary>
internal sealed class LabelCorrection
{
    private readonly double[] _sums = new double[LabelSums.Numbers];
    private readonly double[] _cell = new double[LogOddsBins.CellWidth];

    /// <param name="wrong">The label as it was counted.</param>
    /// <param name="right">The label as it is.</param>
    /// <param name="baseRate">The probability of label 1 that the base rate gave.</param>
    public LabelCorrection(in CountedLabel wrong, in CountedLabel right, double baseRate)
    {
        var run = new LabelRun();
        run.Add(wrong, baseRate);
        run.Add(right, baseRate);
        run.ComputeBaseRate();
        run.ComputeLosses();
        Bin = LogOddsBins.Of(right.LogOdds);
        LabelSums ofWrong = new(), ofRight = new();
        Tally before = new(LogOddsBins.Count, LogOddsBins.CellWidth), after = new(LogOddsBins.Count, LogOddsBins.CellWidth);
        run.AddTo(0, ref ofWrong, before);
        run.AddTo(1, ref ofRight, after);
        ofRight.Subtract(ofWrong);
        LabelSums.Of(_sums) = ofRight;
        for (int i = 0; i < _cell.Length; i++) _cell[i] = after[Bin][i] - before[Bin][i];
        Right = run.KeptOf(1);
    }

    /// <summary>What is added to the sums.</summary>
    public ReadOnlySpan<double> Sums => _sums;

    /// <summary>What is added to the sums of the events that were scored when its event was.</summary>
    public CohortSums OfCohort
    {
        get
        {
            ref var sums = ref LabelSums.Of(_sums);
            return new CohortSums
            {
                Weight = sums.Weight,
                LogLoss = sums.LogLoss,
                BaseRateLogLoss = sums.BaseRateLogLoss,
                Probability = sums.Probability,
                Positive = sums.Positive,
            };
        }
    }

    /// <summary>The bin of its log-odds.</summary>
    public int Bin { get; }

    /// <summary>What is added to the cell of that bin.</summary>
    public ReadOnlySpan<double> Cell => _cell;

    /// <summary>What the window of the last labels keeps of it now.</summary>
    public LastLabel Right { get; }
}
