using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Features;
using StreamLogit.Engine.Learning;

namespace StreamLogit.Engine.Tests.Learning;

/// <summary>Runs a bank over events whose labels are known at once.</summary>
internal sealed class BankStream
{
    private readonly double[] _logOdds;
    private readonly int[] _slots;

    public BankStream(Bank bank, int featureCount)
    {
        Bank = bank;
        _logOdds = new double[bank.SettingCount];
        _slots = [.. Enumerable.Range(0, featureCount)];
    }

    public Bank Bank { get; }

    /// <summary>What every setting gave for the last event.</summary>
    public IReadOnlyList<double> LogOdds => _logOdds;

    /// <summary>The log-loss of what was published, added up with the weights.</summary>
    public double PublishedLoss { get; private set; }

    public static LearningOptions Options(params SettingOptions[] bank) => new() { Bank = [.. bank], SwitchRate = 0 };

    /// <summary>Scores and learns; slot i holds value i. Returns the published log-odds.</summary>
    public double Next(ReadOnlySpan<double> values, int label, double weight = 1, bool isFresh = true, long timeMicroseconds = 0)
    {
        var x = new EncodedVector(_slots, values);
        double published = Bank.Score(in x, timeMicroseconds, _logOdds);
        PublishedLoss += weight * Loss(published, label);
        Bank.Learn(in x, _logOdds, isFresh, label, weight, timeMicroseconds);
        return published;
    }

    /// <summary>ln(1 + e^-m) for the log-odds m of what happened.</summary>
    public static double Loss(double logOdds, int label)
    {
        double m = label == 1 ? logOdds : -logOdds;
        return Math.Max(0, -m) + Math.Log(1 + Math.Exp(-Math.Abs(m)));
    }
}
