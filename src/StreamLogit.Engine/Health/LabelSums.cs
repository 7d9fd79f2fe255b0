using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;

namespace StreamLogit.Engine.Health;

/// <summary>
/// Sums over labels of weight w, published probability p, outcome y. Sums of two runs of labels add up to those of both.
/// All are doubles, so that a row of numbers can be looked at as these sums; <see cref="LabelRun"/> adds up those before the alerts four at a time, in this order.
/// </summary>
[StructLayout(LayoutKind.Sequential)]
internal struct LabelSums
{
    public double Count;
    public double Weight;
    public double SquaredWeight;
    public double LogLoss;

    /// <summary>Sum of w^2 loss.</summary>
    public double LogLossBySquaredWeight;

    /// <summary>Sum of w^2 loss^2.</summary>
    public double SquaredLogLoss;

    public double BaseRateLogLoss;

    /// <summary>Sum of w (p - y)^2.</summary>
    public double Brier;

    /// <summary>Sum of w^2 p (1 - p): the variance that the probabilities promise of <see cref="Positive"/>.</summary>
    public double Variance;

    /// <summary>Sum of w (y - p)(1 - 2p).</summary>
    public double SpiegelhalterNumerator;

    /// <summary>Sum of w^2 (1 - 2p)^2 p (1 - p).</summary>
    public double SpiegelhalterVariance;

    /// <summary>Sum of w z over labels 1, z being the log-odds, cut at what the bins tell apart.</summary>
    public double PositiveLogOdds;

    public double Probability;
    public double Positive;

    /// <summary>The same sums over labels whose event was an alert.</summary>
    public double AlertCount;

    public double AlertWeight;
    public double AlertProbability;
    public double AlertPositive;
    public double AlertVariance;

    /// <summary>Sum of w^2 over alerts.</summary>
    public double AlertSquaredWeight;

    /// <summary>How many numbers these are.</summary>
    public static int Numbers => Unsafe.SizeOf<LabelSums>() / sizeof(double);

    /// <summary>The first numbers of a row, looked at as sums.</summary>
    public static ref LabelSums Of(Span<double> numbers) => ref Unsafe.As<double, LabelSums>(ref MemoryMarshal.GetReference(numbers[..Numbers]));

    /// <summary>The sums, looked at as a row of numbers.</summary>
    private static Span<double> NumbersOf(ref LabelSums sums) => MemoryMarshal.Cast<LabelSums, double>(MemoryMarshal.CreateSpan(ref sums, 1));

    /// <summary>Adds a label.</summary>
    /// <param name="logOdds">The log-odds that were published for its event.</param>
    /// <param name="w">Its weight.</param>
    /// <param name="y">0 or 1.</param>
    /// <param name="p">The probability that was published.</param>
    /// <param name="logLoss">-ln of the probability that was published for what happened.</param>
    /// <param name="baseRateLogLoss">-ln of the probability that the base rate gave to it.</param>
    /// <param name="isAlert">Whether the decision was <c>alert</c>.</param>
    public void Add(double logOdds, double w, double y, double p, double logLoss, double baseRateLogLoss, bool isAlert)
    {
        double w2 = w * w, loss = w * logLoss, miss = y - p, lever = 1 - 2 * p, came = w * y;
        double variance = w2 * (p * (1 - p));
        Count += 1;
        Weight += w;
        SquaredWeight += w2;
        LogLoss += loss;
        LogLossBySquaredWeight += w * loss;
        SquaredLogLoss += loss * loss;
        BaseRateLogLoss += w * baseRateLogLoss;
        Brier += w * (miss * miss);
        Probability += w * p;
        Positive += came;
        Variance += variance;
        SpiegelhalterNumerator += w * (miss * lever);
        SpiegelhalterVariance += variance * (lever * lever);
        PositiveLogOdds += came * Math.Min(Math.Max(logOdds, -LogOddsBins.OuterEnd), LogOddsBins.OuterEnd);
        if (isAlert) AddAlert(w, p, y);
    }

    /// <summary>Adds a label whose event was an alert to the sums over alerts.</summary>
    public void AddAlert(double w, double p, double y)
    {
        double w2 = w * w;
        AlertCount += 1;
        AlertWeight += w;
        AlertProbability += w * p;
        AlertPositive += w * y;
        AlertVariance += w2 * (p * (1 - p));
        AlertSquaredWeight += w2;
    }

    /// <summary>Takes sums away.</summary>
    public void Subtract(in LabelSums other)
    {
        var taken = other;
        Span<double> numbers = NumbersOf(ref this), others = NumbersOf(ref taken);
        for (int i = 0; i < numbers.Length; i++) numbers[i] -= others[i];
    }
}
