using StreamLogit.Engine.Health.RollUps;

namespace StreamLogit.Engine.Health.Drift;

/// <summary>How often the features' values fell into their cells, over some events. Immutable once it is made.</summary>
/// <param name="numbers">The sums, laid out as the constants say.</param>
/// <param name="cells">The weight in each cell.</param>
internal sealed class DriftCounts(double[] numbers, double[] cells)
{
    /// <summary>The sum of the weights of the events that were counted: about the number of all events.</summary>
    public const int Weight = 0;
    public const int SquaredWeight = 1;
    public const int FirstFeature = 2;
    public const int PerFeature = 2;

    public double[] Numbers => numbers;

    public double[] Cells => cells;

    /// <summary>The number of events that tell as much as the thinned ones that were counted.</summary>
    public double EffectiveCount => numbers[SquaredWeight] > 0 ? numbers[Weight] * numbers[Weight] / numbers[SquaredWeight] : 0;

    public static int NumbersOf(int features) => FirstFeature + PerFeature * features;

    /// <summary>The weight of the counted events in which a feature's value was missing.</summary>
    public static int Missing(int feature) => FirstFeature + PerFeature * feature;

    /// <summary>The number of events with a value of a feature that no event had before.</summary>
    public static int Unseen(int feature) => FirstFeature + PerFeature * feature + 1;

    public static DriftCounts Of(double[] numbers, Tally tally)
    {
        var cells = new double[tally.Cells];
        for (int cell = tally.NextUsed(0); cell >= 0; cell = tally.NextUsed(cell + 1)) cells[cell] = tally[cell][0];
        return new DriftCounts(numbers, cells);
    }
}
