namespace StreamLogit.Engine.Health.Detection;

/// <summary>
/// The two-sided tabular CUSUM (Page, Biometrika 41, 1954, 100; Montgomery &amp; Runger, Applied Statistics and Probability for Engineers, ch. 16):
/// S+ = max(0, x - (target + K) + S+), S- = max(0, (target - K) - x + S-); it signals where one exceeds H.
/// </summary>
/// <param name="target">The mean while nothing is wrong.</param>
/// <param name="allowance">K: half the shift of the mean that is to be found fast, in the unit of the observations.</param>
/// <param name="decisionInterval">H; see <see cref="CusumRunLength"/> for how it sets the average run length.</param>
public sealed class TabularCusum(double target, double allowance, double decisionInterval)
{
    /// <summary>The sum above the target.</summary>
    public double Upper { get; private set; }

    /// <summary>The sum below the target.</summary>
    public double Lower { get; private set; }

    /// <summary>Observations since <see cref="Upper"/> was last 0: where it signals, the shift began about so many ago.</summary>
    public int SinceUpperWasZero { get; private set; }

    /// <summary>Observations since <see cref="Lower"/> was last 0.</summary>
    public int SinceLowerWasZero { get; private set; }

    /// <summary>Takes in an observation.</summary>
    /// <returns>1 where the upper sum signals, -1 where the lower one does, else 0.</returns>
    public int Add(double observation)
    {
        Upper = Math.Max(0, observation - (target + allowance) + Upper);
        Lower = Math.Max(0, target - allowance - observation + Lower);
        SinceUpperWasZero = Upper > 0 ? SinceUpperWasZero + 1 : 0;
        SinceLowerWasZero = Lower > 0 ? SinceLowerWasZero + 1 : 0;
        if (Upper > decisionInterval) return 1;
        return Lower > decisionInterval ? -1 : 0;
    }

    /// <summary>Starts over, as after a signal.</summary>
    public void Reset()
    {
        Upper = Lower = 0;
        SinceUpperWasZero = SinceLowerWasZero = 0;
    }
}
